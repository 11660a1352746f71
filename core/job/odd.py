"""One thing that a check found odd, and the units that would explain it."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass

from core.job.known import Known, amount

AGREES = 0.05  # share by which two readings may differ beyond their doubts; common practice, no source


@dataclass(frozen=True, slots=True)
class Odd:
    """What does not fit, by which entry it is said, and what to do next."""

    field: str
    what: str
    next_step: str
    source: str = ""  # where it is not that of the rule


def differ(one: float, other: float, *sides: float) -> bool:
    """Whether two values differ by more than their doubts and 5 % of the larger."""
    allowed = AGREES * max(abs(one), abs(other)) + sum(side**2 for side in sides) ** 0.5
    return abs(one - other) > allowed


def other_units(known: Known, key: str, units: Iterable[str], fits: Callable[[float], bool]) -> list[str]:
    """Units in which the figure of an entry would fit, its own left out."""
    own = known[key]
    return [
        unit
        for unit in units
        if unit != known.unit(key) and known.as_unit(key, unit) != own and fits(known.as_unit(key, unit))
    ]


def did_you_mean(known: Known, key: str, units: list[str], otherwise: str) -> str:
    """The question that units which would fit lead to; `otherwise` what to do where there are none."""
    if not units:
        return otherwise
    value = known.job.entries[key].value or 0.0
    named = " or ".join(amount(value, unit) for unit in units[:2])
    back = known.in_unit_of(key, known.as_unit(key, units[0]))
    return f"{amount(value, units[0])} would be {back}: did you mean {named}?"
