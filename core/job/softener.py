"""The softener of a job: which size, which salt setting, how long it lasts, what it costs in salt and water."""

from __future__ import annotations

from dataclasses import dataclass
from math import isnan

from core.job.answers import Amount, Answer, Assumption, Mark, Missing, Part, Problem, say
from core.job.blend import sodium_answers
from core.job.cautions import softener_cautions
from core.job.demand import Demand
from core.job.ledger import Ledger
from core.job.record import Job
from core.job.softener_choice import (
    Task,
    longest_interval,
    pick_of,
    recommended_dose,
    recommended_resin,
    rule_note,
    shortest_interval,
)
from core.job.softener_running import running_answers
from core.treatment import resin, softener, vessel
from core.treatment.search import Pick, Search, counter_current_capacity
from core.treatment.vessel import Bed
from core.working import Step

SALT_NAMES = {"nacl": "Common salt", "kcl": "Potassium chloride"}
FAR_TOO_LONG = 3.0  # times the longest interval, from which a bed is called far too large; our choice


@dataclass(frozen=True, slots=True)
class Softener:
    """What is known of the softener: the task, the bed, its salt dose, the search behind it; and its part."""

    part: Part
    task: Task | None = None
    bed: Bed | None = None
    salt_dose: float | None = None
    search: Search | None = None
    pick: Pick | None = None
    ledger: Ledger | None = None


def assess_softener(job: Job, demand: Demand) -> Softener:
    """Size, salt setting and running of the softener with their working."""
    ledger = Ledger(job)
    ledger.take(demand.ledger, demand.volume, demand.peak)
    cautions = softener_cautions(ledger.choice("softener.salt"), ledger.read("water.iron"))
    task = _task(ledger, demand)
    found = _found(ledger, task) if task is not None else None
    if task is None or found is None:
        return Softener(ledger.part("softener", [], cautions))
    search, pick, bed, entered = found
    dose = _dose(ledger, task, search, pick, bed)
    answers = [
        _headline(ledger, task, search, pick, bed, dose, entered),
        *_capacity_answers(ledger, task, search, pick, bed, dose),
    ]
    part = ledger.part("softener", [a for a in answers if not isnan(a.amount.value)], cautions)
    return Softener(part, task, bed, dose, search, pick, ledger)


def _task(ledger: Ledger, demand: Demand) -> Task | None:
    hardness = _counted_hardness(ledger)
    blended = "blend.target" in ledger.job.entries
    target, temperature = ledger.read("blend.target"), ledger.read("water.temperature")
    shortest, longest = _intervals(ledger)
    salt_dose, dose_entered = ledger.read("softener.salt_dose"), "softener.salt_dose" in ledger.job.entries
    salt = ledger.choice("softener.salt")
    if salt == "kcl" and salt_dose is not None:
        salt_dose = ledger.working.step(resin.common_salt_dose, potassium_chloride=salt_dose)
    why_not = "" if salt_dose is None else resin.why_no_capacity(salt_dose)
    if why_not:
        ledger.problems["softener.salt_dose"] = Problem("softener.salt_dose", "error", why_not)
        return None
    needed = (hardness, demand.volume, demand.peak, temperature, shortest, longest)
    if None in needed or (blended and target is None) or (dose_entered and salt_dose is None):
        return None
    step = ledger.working.step
    removed = {"target": target} if blended else {}
    load = step(softener.daily_load, volume=demand.volume, hardness=hardness, **removed)
    if not load > 0.0:
        ledger.missing["softener.load"] = Missing("softener.load", _why_no_load(hardness, demand.volume, target))
        return None
    if shortest > longest:
        text = "The shortest interval is longer than the longest: no softener can keep both."
        ledger.problems["softener.shortest"] = Problem("softener.shortest", "error", text)
        ledger.missing["softener.shortest"] = Missing("softener.shortest", text)
        return None
    kind = ledger.choice("softener.kind")
    return Task(load, hardness, demand.peak, temperature, kind, shortest, longest, salt_dose, salt)


def _why_no_load(hardness: float, volume: float, target: float | None) -> str:
    if not volume > 0.0:
        return "No water is softened here: enter persons or a metered use above zero."
    if target is not None and hardness > 0.0:
        return "The hardness wanted at the taps is not below that of the raw water: nothing is left to remove."
    return "There is no hardness to remove here: no softener is needed for it."


def _counted_hardness(ledger: Ledger) -> float | None:
    hardness = ledger.need("water.hardness", "Enter the hardness of the water.")
    iron, manganese = ledger.read("water.iron"), ledger.read("water.manganese")
    if hardness is None or iron is None or manganese is None:
        return None
    step = ledger.working.step
    rule = ledger.choice("softener.iron_rule")
    if rule == "true":
        return step(softener.true_hardness, hardness=hardness, iron=iron, manganese=manganese)
    return step(softener.compensated_hardness, hardness=hardness, iron=iron, manganese=manganese, rule=rule)


def _intervals(ledger: Ledger) -> tuple[float | None, float | None]:
    """The shortest and the longest interval: as entered, else by the rules of the region."""
    region = ledger.choice("softener.region")
    found = []
    for name, rule in (("shortest", shortest_interval), ("longest", longest_interval)):
        key = f"softener.{name}"
        if key in ledger.job.entries:
            found.append(ledger.read(key))
            continue
        note = rule_note(f"interval-{name}", region)
        days = ledger.working.step(rule, note=note, region=region)
        ledger.assumptions[key] = Assumption(key, Amount(days, "day", "time"), note, "common practice, no source")
        found.append(days)
    return found[0], found[1]


def _found(ledger: Ledger, task: Task) -> tuple[Search, Pick, Bed, bool] | None:
    entered = ledger.read("softener.resin")
    if entered is None and "softener.resin" in ledger.job.entries:
        return None
    if entered is not None:
        bed = Bed(entered, ledger.working.step(vessel.usual_diameter, resin_volume=entered))
        search = task.search(bed)
        return search, pick_of(search), bed, True
    search = task.search()
    if search.best is None:
        largest = " ".join(search.reasons(pick_of(search)))
        ledger.problems["softener.resin"] = Problem(
            "softener.resin", "error", f"No usual bed will do. The largest one: {largest}"
        )
        return None
    volume = search.beds[search.best.bed].resin_volume
    volume = ledger.working.add(Step(recommended_resin.card, recommended_resin, task.inputs(), volume))
    bed = Bed(volume, ledger.working.step(vessel.usual_diameter, resin_volume=volume))
    return search, search.best, bed, False


def _dose(ledger: Ledger, task: Task, search: Search, pick: Pick, bed: Bed) -> float:
    if task.salt_dose is not None:
        return task.salt_dose
    inputs = task.inputs() | {"resin_volume": bed.resin_volume, "diameter": bed.diameter}
    dose = float(search.doses[pick.dose])
    return ledger.working.add(Step(recommended_dose.card, recommended_dose, inputs, dose))


def _headline(ledger: Ledger, task: Task, search: Search, pick: Pick, bed: Bed, dose: float, entered: bool) -> Answer:
    amount = Amount(bed.resin_volume, "L", "volume", "resin")
    days = Amount(float(search.interval[pick]), "day", "time")
    salt = Amount(dose * task.salt_factor, "g/L", "salt dose")
    reasons = " ".join(search.reasons(pick))
    if reasons:
        words, tone = say(f"This bed falls short. {reasons}"), "bad"
    elif entered and float(search.interval_full[pick]) > FAR_TOO_LONG * search.limits.longest:
        words = say(
            "Far more resin than this load needs: the calendar regenerates it every {days} long before it is used up, "
            "and most of the salt is wasted.",
            days=days,
        )
        tone = "watch"
    elif entered:
        words, tone = say("Will do: at {dose} of salt it regenerates every {days}.", dose=salt, days=days), "good"
    else:
        words = say("Fit this much resin; at {dose} of salt it regenerates every {days}.", dose=salt, days=days)
        tone = "plain"
    marks = () if entered else _neighbours(search, pick)
    steps = ledger.working.leading_to(bed.resin_volume, bed.diameter, dose)
    return Answer("resin", "Resin", amount, words, steps, marks, tone=tone)


def _neighbours(search: Search, pick: Pick) -> tuple[Mark, ...]:
    volumes = sorted({bed.resin_volume for bed in search.beds})
    at = volumes.index(search.beds[pick.bed].resin_volume)
    beside = (("next smaller", at - 1), ("next larger", at + 1))
    return tuple(
        Mark(name, Amount(volumes[index], "L", "volume", "resin"))
        for name, index in beside
        if 0 <= index < len(volumes)
    )


def _capacity_answers(ledger: Ledger, task: Task, search: Search, pick: Pick, bed: Bed, dose: float) -> list[Answer]:
    w = ledger.working
    if task.kind == "counter-current":
        per_litre = w.step(counter_current_capacity, salt_dose=dose)
    else:
        per_litre = w.step(resin.trade_capacity, salt_dose=dose)
    capacity = w.step(softener.bed_capacity, resin_volume=bed.resin_volume, capacity=per_litre)
    used = w.step(resin.potassium_chloride_dose, salt_dose=dose) if task.salt == "kcl" else dose
    salt = w.step(softener.salt_per_regeneration, resin_volume=bed.resin_volume, salt_dose=used)
    reserve = _reserve(ledger, task, capacity)
    usable = w.step(softener.usable_capacity, capacity=capacity, reserve=reserve)
    interval = w.step(softener.days_between, usable=usable, load=task.load, longest=task.longest)
    meter = w.step(softener.meter_setting, usable=usable, hardness=task.hardness)
    raw, target = ledger.read("water.hardness"), ledger.read("blend.target")
    if target is None and "blend.softened" in ledger.job.entries:
        target = ledger.read("blend.softened")
    return [
        Answer(
            "salt",
            "Salt per regeneration",
            Amount(salt, "kg", "mass"),
            say(f"{SALT_NAMES[task.salt]}, {{dose}} of resin.", dose=Amount(used, "g/L", "salt dose")),
            w.leading_to(salt),
        ),
        _interval(ledger, task, search, pick, interval),
        Answer(
            "hardness",
            "Hardness to set",
            Amount(task.hardness, "mmol/L", "hardness"),
            say(_counted_words(ledger)),
            w.leading_to(task.hardness),
        ),
        Answer(
            "meter",
            "Water between regenerations",
            Amount(meter, "L", "volume"),
            say("For a meter that counts the water through the resin; the reserve is taken off."),
            w.leading_to(meter),
        ),
        Answer(
            "reserve",
            "Reserve",
            Amount(reserve, "mol", "exchanged amount"),
            say("Kept back until the regeneration: {days} of average use.", days=_days_of(reserve, task)),
            w.leading_to(reserve),
        ),
        Answer(
            "capacity",
            "Capacity of the bed",
            Amount(capacity, "mol", "exchanged amount"),
            say("At this salt setting, by the trade's table; such figures hold to about 10 to 15 %."),
            w.leading_to(capacity),
        ),
        *running_answers(ledger, task, bed, salt, interval),
        *([] if raw is None else sodium_answers(ledger, raw, target)),
    ]


def _counted_words(ledger: Ledger) -> str:
    if ledger.read("water.iron") or ledger.read("water.manganese"):
        return "For the valve head: iron and manganese are counted in."
    return "For the valve head: the hardness of the water; no iron or manganese is counted."


def _reserve(ledger: Ledger, task: Task, capacity: float) -> float:
    step = ledger.working.step
    if task.arrangement.reserve_share:
        return step(softener.reserve_of_share, capacity=capacity, share=step(softener.reserve_share, kind=task.kind))
    return step(softener.reserve_of_days, load=task.load, days=step(softener.reserve_days, kind=task.kind))


def _days_of(reserve: float, task: Task) -> Amount:
    return Amount(reserve / task.load, "day", "time")


def _interval(ledger: Ledger, task: Task, search: Search, pick: Pick, interval: float) -> Answer:
    amount = Amount(interval, "day", "time")
    kind = task.arrangement
    shortest = task.shortest if kind.shortest is None else kind.shortest
    marks = (
        Mark("shortest", Amount(shortest, "day", "time"), "US-DISTRICT"),
        Mark("longest", Amount(task.longest, "day", "time"), "TRADE-SIZING"),
    )
    if interval < shortest:
        words, tone = "Shorter than wanted: much of the salt and water goes into rinsing.", "watch"
    elif float(search.interval_full[pick]) > task.longest:
        words, tone = "The calendar calls for it before the bed is used up.", "plain"
    else:
        words, tone = "On average days.", "plain"
    steps = ledger.working.leading_to(interval)
    return Answer("interval", "Days between regenerations", amount, say(words), steps, marks, tone=tone)
