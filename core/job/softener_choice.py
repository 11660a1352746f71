"""The choice of a softener: what it is asked to do, the search over beds and doses, and what the search recommends.

The two recommendations carry cards of their own, so that working can show what they were chosen for; called alone
they search again and give the same.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import isnan, nan

from core.constants import MOLAR_MASS_KCL, MOLAR_MASS_NACL
from core.treatment.rules import rules_for
from core.treatment.search import ARRANGEMENTS, DOSES, Arrangement, Demand, Limits, Pick, Search, search
from core.treatment.vessel import Bed
from core.working import formula

KINDS = {arrangement.key: arrangement for arrangement in ARRANGEMENTS}
_TAKES = {
    "load": "mol/day",
    "hardness": "mmol/L",
    "peak_flow": "L/min",
    "temperature": "°C",
    "kind": "",
    "shortest": "day",
    "longest": "day",
    "salt_dose": "g/L",
}
LEAST_DOSE = 80.0  # g/L, co-current: below it resin at equilibrium leaks more than 1 gpg from the start of a run
_VALIDITY = (
    "Of the generic sizes of the trade and its capacities, which hold to 10 or 15 %. Peaks up to 8 gpm/ft³ and "
    "20 gpm/ft², 15 psi at the peak."
)


@dataclass(frozen=True, slots=True)
class Task:
    """What the softener is asked to do, and how it is run."""

    load: float  # mol/day
    hardness: float  # mmol/L through the resin, iron and manganese counted in
    peak_flow: float  # L/min through the resin
    temperature: float  # °C
    kind: str  # a key of KINDS
    shortest: float  # days
    longest: float  # days
    salt_dose: float | None = None  # g/L of common salt; None where the search may choose
    salt: str = "nacl"  # "nacl" or "kcl": what it is regenerated with

    @property
    def salt_factor(self) -> float:
        """Mass of the salt used for each kilogram of common salt."""
        return MOLAR_MASS_KCL / MOLAR_MASS_NACL if self.salt == "kcl" else 1.0

    @property
    def arrangement(self) -> Arrangement:
        """How it is built."""
        return KINDS[self.kind]

    def inputs(self) -> dict[str, float | str]:
        """The task as arguments of the formulas below."""
        given = {name: getattr(self, name) for name in _TAKES}
        return {name: value for name, value in given.items() if value is not None}

    def _doses(self) -> tuple[float, ...]:
        if self.salt_dose is not None:
            return (self.salt_dose,)
        return DOSES if self.kind == "counter-current" else tuple(dose for dose in DOSES if dose >= LEAST_DOSE)

    def search(self, bed: Bed | None = None) -> Search:
        """Every candidate, or every dose of one bed."""
        return search(
            Demand(self.load, self.hardness, self.peak_flow, self.temperature),
            Limits(shortest=self.shortest, longest=self.longest),
            beds=None if bed is None else (bed,),
            doses=self._doses(),
            arrangements=(self.arrangement,),
        )


@formula(
    "Recommended resin",
    "the smallest usual bed that carries the peak, lasts long enough and loses little pressure",
    unit="L",
    takes=_TAKES,
    source="common practice, no source",
    validity=_VALIDITY,
)
def recommended_resin(
    load: float,
    hardness: float,
    peak_flow: float,
    temperature: float,
    kind: str,
    shortest: float,
    longest: float,
    salt_dose: float | None = None,
) -> float:
    """Resin of the bed that the search recommends; NaN where none will do. [L]"""
    found = Task(load, hardness, peak_flow, temperature, kind, shortest, longest, salt_dose).search()
    return nan if found.best is None else found.beds[found.best.bed].resin_volume


@formula(
    "Recommended salt setting",
    "the dose at which the bed needs least salt a year and still lasts long enough",
    unit="g/L",
    takes=_TAKES | {"resin_volume": "L", "diameter": "mm"},
    source="common practice, no source",
    validity=_VALIDITY,
)
def recommended_dose(
    load: float,
    hardness: float,
    peak_flow: float,
    temperature: float,
    kind: str,
    shortest: float,
    longest: float,
    resin_volume: float,
    diameter: float,
) -> float:
    """Salt dose that the search recommends for a bed; the highest it knows where none will do. [g/L]"""
    task = Task(load, hardness, peak_flow, temperature, kind, shortest, longest)
    found = task.search(Bed(resin_volume, diameter))
    return float(found.doses[pick_of(found).dose])


def _region(region: str) -> str | None:
    return None if region == "unknown" else region


@formula(
    "Longest interval",
    "the rule of the region, see the note",
    unit="day",
    takes={"region": ""},
    source="definition",
)
def longest_interval(region: str) -> float:
    """Longest time between regenerations that the rules of a region allow; the strictest for "unknown". [day]"""
    return rules_for(_region(region))["interval-longest"].value


@formula(
    "Shortest interval",
    "the rule of the region, see the note",
    unit="day",
    takes={"region": ""},
    source="definition",
)
def shortest_interval(region: str) -> float:
    """Shortest time from one regeneration to the next to size for; 3 days where a region has no rule. [day]"""
    rule = rules_for(_region(region)).get("interval-shortest")
    return Limits().shortest if rule is None else rule.value


def rule_note(topic: str, region: str) -> str:
    """A rule of a region in words with its source; empty where it has none."""
    rule = rules_for(_region(region)).get(topic)
    return "" if rule is None else f"{rule.sentence} [{rule.source}, {rule.status}]"


def pick_of(found: Search) -> Pick:
    """What a search recommends; where none will do, the largest bed at the highest dose whose capacity is known."""
    if found.best is not None:
        return found.best
    bed = len(found.beds) - 1
    known = [dose for dose in range(len(found.doses)) if not isnan(found.capacity[0, bed, dose])]
    return Pick(0, bed, known[-1] if known else len(found.doses) - 1)
