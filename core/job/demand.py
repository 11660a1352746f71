"""The demand of a job: how much water a day, and how fast at the most."""

from __future__ import annotations

from dataclasses import dataclass
from math import isnan

from core.job.answers import Amount, Answer, Assumption, Part, Problem, say
from core.job.ledger import Ledger
from core.job.record import Job
from core.treatment import demand, peak_flow
from core.treatment.peak_flow import household_fixture_units, household_flow_sum

RULE_NAMES = {"nspc": "NSPC", "ipc": "IPC", "din": "DIN 1988-300"}


@dataclass(frozen=True, slots=True)
class Demand:
    """What later parts need of the demand; None where an entry is missing."""

    ledger: Ledger
    total: float | None  # L/day in all
    volume: float | None  # L/day that is softened
    peak: float | None  # L/min
    part: Part


def assess_demand(job: Job) -> Demand:
    """Daily volume and peak flow with their working."""
    ledger = Ledger(job)
    answers = []
    total = _total(ledger)
    volume = _softened(ledger, total)
    if volume is not None:
        answers.append(_volume_answer(ledger, volume))
    peak, rule = _peak(ledger)
    if peak is not None:
        answers.append(_peak_answer(ledger, peak, rule))
        answers += _other_rules(ledger, rule)
    if volume is not None:
        year = ledger.working.step(demand.yearly_volume, volume=volume)
        answers.append(
            Answer(
                "year",
                "Softened water a year",
                Amount(year * 1000.0, "L", "volume", "large volume"),
                say("For the yearly figures of salt and water."),
                ledger.working.leading_to(year),
            )
        )
    return Demand(ledger, total, volume, peak, ledger.part("demand", answers))


def _total(ledger: Ledger) -> float | None:
    metered = ledger.read("demand.daily_volume")
    if metered is not None:
        return metered
    persons = ledger.need("demand.persons", "Enter the persons, or the use by the meter, for the daily volume.")
    per_person = _per_person(ledger)
    if persons is None or per_person is None:
        return None
    return ledger.working.step(demand.daily_volume, persons=persons, per_person=per_person)


def _softened(ledger: Ledger, total: float | None) -> float | None:
    share = ledger.read("demand.softened_share")
    if total is None or share is None:
        return None
    return ledger.working.step(demand.softened_volume, volume=total, softened_share=share)


def _per_person(ledger: Ledger) -> float | None:
    entered = ledger.read("demand.per_person")
    if entered is not None or "demand.per_person" in ledger.job.entries:
        return entered
    figure = demand.use_figure(ledger.choice("demand.use"))
    why = f"{figure.words}, {figure.year}; a starting point, the meter knows better."
    amount = Amount(figure.per_person, "L/person/day", "water use")
    ledger.assumptions["demand.per_person"] = Assumption("demand.per_person", amount, why, figure.source)
    return ledger.working.step(demand.use_per_person, note=why, figure=figure.key)


def _peak(ledger: Ledger) -> tuple[float | None, str]:
    rule = ledger.choice("demand.peak_rule")
    entered = ledger.read("demand.peak_flow")
    if entered is not None or "demand.peak_flow" in ledger.job.entries:
        return entered, "entered"
    bathrooms = ledger.need(
        "demand.bathrooms", "Enter the bathrooms, or the peak flow, to check that the softener carries it."
    )
    if bathrooms is None:
        return None, rule
    peak = _peak_by(ledger, rule, bathrooms)
    if isnan(peak):
        units = household_fixture_units(bathrooms)
        text = peak_flow.why_no_peak_flow(units, rule) if rule != "din" else "The formula does not reach so far."
        ledger.problems["demand.bathrooms"] = Problem("demand.bathrooms", "error", text)
        return None, rule
    return peak, rule


def _peak_by(ledger: Ledger, rule: str, bathrooms: float) -> float:
    step = ledger.working.step
    if rule == "din":
        return step(peak_flow.peak_flow_din, flow_sum=step(household_flow_sum, bathrooms=bathrooms))
    units = step(household_fixture_units, bathrooms=bathrooms)
    return step(peak_flow.peak_flow_fixture_units, fixture_units=units, code=rule)


def _volume_answer(ledger: Ledger, volume: float) -> Answer:
    amount = Amount(volume, "L/day", "flow", "daily volume")
    return Answer(
        "volume",
        "Softened water a day",
        amount,
        say("{volume} of softened water on an average day.", volume=amount),
        ledger.working.leading_to(volume),
    )


def _peak_answer(ledger: Ledger, peak: float, rule: str) -> Answer:
    amount = Amount(peak, "L/min", "flow")
    by = "as entered" if rule == "entered" else f"by {RULE_NAMES[rule]}"
    return Answer(
        "peak",
        "Peak flow",
        amount,
        say(f"Up to {{peak}} at once, {by}.", peak=amount),
        ledger.working.leading_to(peak),
    )


def _other_rules(ledger: Ledger, rule: str) -> list[Answer]:
    """The same house by the other codes, so that nobody takes one for the other."""
    bathrooms = ledger.read("demand.bathrooms")
    if rule == "entered" or bathrooms is None:
        return []
    answers = []
    for other, name in RULE_NAMES.items():
        if other == rule:
            continue
        flow = _peak_by(ledger, other, bathrooms)
        if isnan(flow):
            continue
        answers.append(
            Answer(
                f"peak_{other}",
                f"The same by {name}",
                Amount(flow, "L/min", "flow"),
                say("For comparison only."),
                ledger.working.leading_to(flow),
            )
        )
    return answers
