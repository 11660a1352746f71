"""Does a job make sense as a whole? Every rule that does not hold, all at once, each with what to do next.

    check_job(job, own=()) -> tuple[Finding, ...]         in the order of the entries
    RULES                                                  every rule with its name and its source

Formulas do not judge; this does. Nothing here stops an answer: entries that cannot be used at all are refused where
they are read (`core.job.ledger`). What two readings may differ by is their doubts together with 5 %.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass

from core.job import checks_analysis, checks_house, checks_water
from core.job.answers import Problem
from core.job.fields import FIELDS
from core.job.kits import Kit
from core.job.known import Known
from core.job.odd import Odd
from core.job.record import Job

COMMON = "common practice, no source"


@dataclass(frozen=True, slots=True)
class Finding(Problem):
    """Something odd about a job: which rule says so, and what to do next (both are in the text too)."""

    rule: str = ""
    next_step: str = ""


@dataclass(frozen=True, slots=True)
class Rule:
    """One rule of plausibility."""

    name: str
    source: str
    find: Callable[[Known], Iterator[Odd]]


RULES: tuple[Rule, ...] = (
    Rule("hardness against calcium and magnesium", "SM2340B", checks_water.hardness_against_ions),
    Rule("one ion above the hardness", "SM2340B", checks_water.ion_above_hardness),
    Rule("magnesium above calcium", COMMON, checks_water.magnesium_above_calcium),
    Rule("a sample from behind a softener", COMMON, checks_water.sample_softened),
    Rule("alkalinity above the hardness", "definition", checks_water.alkalinity_above_hardness),
    Rule("alkalinity against pH", "DIN38409-7", checks_water.alkalinity_without_buffer),
    Rule("carbon dioxide against pH", COMMON, checks_water.too_much_carbon_dioxide),
    Rule("conductivity against hardness", "SM1030E", checks_water.conductivity_against_hardness),
    Rule("charge balance and conductivity of an analysis", "SM1030E", checks_analysis.analysis),
    Rule("pH of drinking water", "EU2020-2184", checks_water.ph_out_of_range),
    Rule("temperature at the tap", COMMON, checks_water.warm_tap),
    Rule("extremely hard", COMMON, checks_water.extremely_hard),
    Rule("metals that stain", "EPA-DWR", checks_water.metals),
    Rule("limits of drinking water", "EU2020-2184", checks_water.over_limits),
    Rule("use per person", COMMON, checks_house.use_per_person),
    Rule("bathrooms against persons", COMMON, checks_house.bathrooms_against_persons),
    Rule("peak flow against the daily volume", "definition", checks_house.peak_below_average),
    Rule("shortest against longest interval", "definition", checks_house.intervals_crossed),
    Rule("hardness wanted against the raw water", "definition", checks_house.blend_out_of_order),
)


def check_job(job: Job, own: tuple[Kit, ...] = ()) -> tuple[Finding, ...]:
    """All that is odd about a job, in the order of its entries; `own` are the user's own kits."""
    known = Known(job, own)
    found = [
        Finding(
            odd.field, "warning", f"{odd.what} {odd.next_step}", odd.source or rule.source, rule.name, odd.next_step
        )
        for rule in RULES
        for odd in rule.find(known)
    ]
    order = {key: index for index, key in enumerate(FIELDS)}
    return tuple(sorted(found, key=lambda finding: order.get(finding.field, len(order))))
