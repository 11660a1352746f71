"""The softener of a job: which size, which salt setting, how long it lasts, what it costs in salt and water."""

from __future__ import annotations

from dataclasses import dataclass
from math import isnan

from core.job.answers import Amount, Answer, Mark, Part, Problem, say
from core.job.blend import sodium_answers
from core.job.cautions import softener_cautions
from core.job.demand import Demand
from core.job.ledger import Ledger
from core.job.record import Job
from core.treatment import regeneration, resin, sizing, softener, vessel
from core.treatment.sizing import Choice
from core.treatment.vessel import Bed
from core.working import Step, Working


@dataclass(frozen=True, slots=True)
class Setting:
    """All that decides how a bed fares: what it has to do, and how it is run."""

    hardness: float  # mmol/L, iron and manganese counted in
    target: float | None  # mmol/L at the taps; None where no raw water is mixed back in
    load: float  # mol/day
    peak: float  # L/min
    salt_dose: float  # g/L
    reserve_days: float
    shortest: float  # days
    longest: float  # days


@dataclass(frozen=True, slots=True)
class Bedding:
    """The bed the answers speak of, and how it was come by."""

    bed: Bed
    choice: Choice
    entered: bool
    reason: str  # why it will not do; empty where it does


def assess_softener(job: Job, demand: Demand) -> Part:
    """Size, salt setting and running of the softener with their working."""
    ledger = Ledger(job)
    ledger.take(demand.ledger, demand.volume, demand.peak)
    setting = _setting(ledger, demand)
    bedding = _bedding(ledger, setting) if setting is not None else None
    cautions = softener_cautions(ledger.choice("softener.salt"), ledger.read("water.iron"))
    if setting is None or bedding is None:
        return ledger.part("softener", [], cautions)
    return ledger.part("softener", _answers(ledger, setting, bedding), cautions)


def _setting(ledger: Ledger, demand: Demand) -> Setting | None:
    hardness = _counted_hardness(ledger)
    salt_dose = _salt_dose(ledger)
    shortest, longest = ledger.read("softener.shortest"), ledger.read("softener.longest")
    blended = "blend.target" in ledger.job.entries
    target = ledger.read("blend.target")
    numbers = (hardness, demand.volume, demand.peak, salt_dose, shortest, longest)
    if any(number is None for number in numbers) or (blended and target is None):
        return None
    step = ledger.working.step
    removed = {"target": target} if blended else {}
    load = step(softener.daily_load, volume=demand.volume, hardness=hardness, **removed)
    if not load > 0.0:
        ledger.problems["water.hardness"] = Problem(
            "water.hardness", "warning", "There is no hardness to remove here: no softener is needed for it."
        )
        return None
    days = step(softener.reserve_days, kind=ledger.choice("softener.kind"))
    return Setting(hardness, target, load, demand.peak, salt_dose, days, shortest, longest)


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


def _salt_dose(ledger: Ledger) -> float | None:
    dose = ledger.read("softener.salt_dose")
    why_not = "" if dose is None else resin.why_no_capacity(dose)
    if why_not:
        ledger.problems["softener.salt_dose"] = Problem("softener.salt_dose", "error", why_not)
        return None
    return dose


def _bedding(ledger: Ledger, setting: Setting) -> Bedding | None:
    entered = ledger.read("softener.resin")
    if entered is None and "softener.resin" in ledger.job.entries:
        return None
    inputs = {
        "load": setting.load,
        "peak_flow": setting.peak,
        "salt_dose": setting.salt_dose,
        "reserve_days": setting.reserve_days,
        "shortest": setting.shortest,
        "longest": setting.longest,
    }
    if entered is not None:
        bed = Bed(entered, ledger.working.step(vessel.usual_diameter, resin_volume=entered))
        choice = sizing.choose_size(**inputs, beds=(bed,))
        return Bedding(bed, choice, True, choice.reasons[0])
    choice = sizing.choose_size(**inputs)
    if choice.best is None:
        ledger.problems["softener.resin"] = Problem(
            "softener.resin", "error", f"No usual bed will do. The largest: {choice.reasons[-1]}"
        )
        return None
    best = choice.beds[choice.best]
    recommend = sizing.recommended_resin
    ledger.working.add(Step(recommend.card, recommend, inputs, best.resin_volume))
    diameter = ledger.working.step(vessel.usual_diameter, resin_volume=best.resin_volume)
    return Bedding(Bed(best.resin_volume, diameter), choice, False, "")


def _answers(ledger: Ledger, setting: Setting, bedding: Bedding) -> list[Answer]:
    w, bed = ledger.working, bedding.bed
    per_litre = w.step(resin.trade_capacity, salt_dose=setting.salt_dose)
    capacity = w.step(softener.bed_capacity, resin_volume=bed.resin_volume, capacity=per_litre)
    salt = w.step(softener.salt_per_regeneration, resin_volume=bed.resin_volume, salt_dose=setting.salt_dose)
    reserve = w.step(softener.reserve_of_days, load=setting.load, days=setting.reserve_days)
    usable = w.step(softener.usable_capacity, capacity=capacity, reserve=reserve)
    interval = w.step(softener.days_between, usable=usable, load=setting.load, longest=setting.longest)
    meter = w.step(softener.meter_setting, usable=usable, hardness=setting.hardness)
    area = w.step(vessel.bed_area, diameter=bed.diameter)
    answers = [
        _headline(w, setting, bedding, interval),
        Answer(
            "salt",
            "Salt per regeneration",
            Amount(salt, "kg", "mass"),
            say("Salt setting {dose} of resin.", dose=Amount(setting.salt_dose, "g/L", "salt dose")),
            w.leading_to(salt),
        ),
        _interval(w, setting, interval),
        Answer(
            "hardness",
            "Hardness to set",
            Amount(setting.hardness, "mmol/L", "hardness"),
            say("For the valve head: iron and manganese are counted in."),
            w.leading_to(setting.hardness),
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
            say(
                "{days} of average use, kept back until the night.",
                days=Amount(setting.reserve_days, "day", "time"),
            ),
            w.leading_to(reserve),
        ),
        Answer(
            "capacity",
            "Capacity of the bed",
            Amount(capacity, "mol", "exchanged amount"),
            say("At this salt setting, by the trade's table; such figures hold to about 10 to 15 %."),
            w.leading_to(capacity),
        ),
        *_flow_answers(w, setting, bed, area),
        *_yearly(w, setting, bed, area, salt, interval),
        *_sodium(ledger, setting),
    ]
    return [answer for answer in answers if not isnan(answer.amount.value)]


def _headline(w: Working, setting: Setting, bedding: Bedding, interval: float) -> Answer:
    amount = Amount(bedding.bed.resin_volume, "L", "volume", "resin")
    days = Amount(interval, "day", "time")
    dose = Amount(setting.salt_dose, "g/L", "salt dose")
    if isnan(interval) or interval <= 0.0:
        words, tone = say(f"This bed will not do. {bedding.reason}"), "bad"
    elif bedding.reason:
        words = say(f"This bed falls short. {bedding.reason}")
        tone = "bad"
    elif bedding.entered:
        words, tone = (
            say("Will do: at {dose} of salt it regenerates every {days}.", dose=dose, days=days),
            "good",
        )
    else:
        words, tone = (
            say("Fit this much resin; at {dose} of salt it regenerates every {days}.", dose=dose, days=days),
            "plain",
        )
    marks = tuple(
        Mark(name, Amount(bedding.choice.beds[at].resin_volume, "L", "volume", "resin"))
        for name, at in (("next smaller", bedding.choice.smaller), ("next larger", bedding.choice.larger))
        if at is not None and not bedding.entered
    )
    return Answer("resin", "Resin", amount, words, w.leading_to(interval), marks, tone=tone)


def _interval(w: Working, setting: Setting, interval: float) -> Answer:
    amount = Amount(interval, "day", "time")
    marks = (
        Mark("shortest", Amount(setting.shortest, "day", "time"), "US-DISTRICT"),
        Mark("longest", Amount(setting.longest, "day", "time"), "TRADE-SIZING"),
    )
    short = interval < setting.shortest
    words = "Shorter than the shortest interval set." if short else "On average days."
    return Answer(
        "interval",
        "Days between regenerations",
        amount,
        say(words),
        w.leading_to(interval),
        marks,
        tone="watch" if short else "plain",
    )


def _flow_answers(w: Working, setting: Setting, bed: Bed, area: float) -> list[Answer]:
    allowed = w.step(vessel.largest_peak_flow, resin_volume=bed.resin_volume, area=area)
    depth = w.step(vessel.bed_depth, resin_volume=bed.resin_volume, area=area)
    loading = w.step(vessel.surface_loading, flow=setting.peak, area=area)
    fits = allowed >= setting.peak
    peak = Amount(setting.peak, "L/min", "flow")
    words = "Carries the peak of {peak}." if fits else "The peak of {peak} is more: hardness slips through."
    return [
        Answer(
            "flow",
            "Largest short flow",
            Amount(allowed, "L/min", "flow"),
            say(words, peak=peak),
            w.leading_to(allowed, setting.peak),
            (Mark("peak", peak),),
            tone="good" if fits else "bad",
        ),
        Answer(
            "vessel",
            "Vessel diameter",
            Amount(bed.diameter, "mm", "length"),
            say(
                "A usual size; the bed is {depth} deep, {loading} at the peak.",
                depth=Amount(depth, "m", "length", "depth"),
                loading=Amount(loading, "m/h", "surface loading"),
            ),
            w.leading_to(area, depth, loading),
        ),
    ]


def _yearly(w: Working, setting: Setting, bed: Bed, area: float, salt: float, interval: float) -> list[Answer]:
    water = w.step(regeneration.water_per_regeneration, resin_volume=bed.resin_volume, area=area, salt=salt)
    salt_year = w.step(softener.salt_per_year, salt=salt, interval=interval)
    water_year = w.step(softener.water_per_year, water=water, interval=interval)
    efficiency = w.step(softener.effective_efficiency, interval=interval, load=setting.load, salt=salt)
    return [
        Answer(
            "salt_year",
            "Salt a year",
            Amount(salt_year, "kg", "mass"),
            say("On average days, the reserve thrown away each time counted in."),
            w.leading_to(salt_year),
        ),
        Answer(
            "water_year",
            "Regeneration water a year",
            Amount(water_year, "L", "volume", "large volume"),
            say("{water} to the drain each time.", water=Amount(water, "L", "volume")),
            w.leading_to(water_year),
        ),
        Answer(
            "efficiency",
            "Hardness removed per salt",
            Amount(efficiency, "mol/kg", "salt efficiency"),
            say("Really used, with the reserve thrown away."),
            w.leading_to(efficiency),
        ),
    ]


def _sodium(ledger: Ledger, setting: Setting) -> list[Answer]:
    raw = ledger.read("water.hardness")
    return [] if raw is None else sodium_answers(ledger, raw, setting.target)
