"""Later visits: readings over time, whether they drift out of their band, and when salt and service are due.

    found = drift(visits, "blend", low=1.22, high=1.58)        rising, falling, steady, or it cannot be told
    found.leaves                                               dates on which it leaves the band
    salt_due("2031-05-04", salt=40.0, each=3.0, interval=4.2)  the day the tank wants salt
    service_due("2031-05-04", 12)                              the day of the next service

The line is that of `core.job.trend`. Bands hold 8 cases of 10; doubts are standard deviations.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from math import floor, inf, isfinite
from typing import Any

import numpy as np
from numpy.typing import NDArray

from core.errors import InputError, JobFileError
from core.job.answers import Amount, Phrase, say
from core.job.dates import day_number, iso_date, months_later
from core.job.signoff_formulas import BAND
from core.job.signoff_readings import Measured
from core.job.trend import Trend, trend_steps
from core.treatment.broadcast import Number, broadcasts, larger, ratio
from core.working import Step, Working, formula

RISING, FALLING, STEADY, CANNOT_TELL = "rising", "falling", "steady", "cannot tell"
HORIZON = 3650  # days: farther ahead no line is drawn
STEADY_PART = 0.25  # of the band's width: less change than that in a year is steady; a choice
DAYS_PER_YEAR = 365.0
MOST_VISITS = 2000


@dataclass(frozen=True, slots=True)
class Visit:
    """One visit: its date and what was read; units of the core, doubts as standard deviations."""

    date: str  # ISO
    readings: Mapping[str, Measured] = field(default_factory=dict)
    note: str = ""


@dataclass(frozen=True, slots=True)
class Drift:
    """How one reading changes from visit to visit, against its band."""

    verdict: str  # rising | falling | steady | cannot tell
    words: Phrase
    trend: Trend | None  # None with fewer than two visits
    leaves: tuple[str | None, str | None, str | None] = (None, None, None)  # dates: earliest, by the line, latest
    steps: tuple[Step, ...] = ()


@dataclass(frozen=True, slots=True)
class Due:
    """Something that is due on a date."""

    kind: str  # salt | service | reading
    date: str
    words: Phrase
    steps: tuple[Step, ...] = ()


def series(visits: Sequence[Visit], key: str) -> tuple[list[int], list[float], list[float]]:
    """Days, values and doubts of one reading over the visits, in the order of the days."""
    if len(visits) > MOST_VISITS:
        raise InputError("visits", len(visits), f"At most {MOST_VISITS} visits are drawn.")
    found = (
        sorted((day_number(visit.date), visit.readings[key]) for visit in visits if key in visit.readings)
        if all(isinstance(visit, Visit) for visit in visits)
        else []
    )
    return [day for day, _ in found], [read.value for _, read in found], [read.doubt for _, read in found]


def drift(
    visits: Sequence[Visit],
    key: str,
    *,
    low: float = -inf,
    high: float = inf,
    unit: str = "mmol/L",
    quantity: str = "hardness",
) -> Drift:
    """Whether a reading drifts, and when it leaves its band; `low` and `high` are in the unit of the readings."""
    days, values, doubts = series(visits, key)
    if len(set(days)) < 2:
        return Drift(CANNOT_TELL, say("One visit shows no change: read again next time."), None)
    if len(set(days)) == 2 and not any(doubts):
        return Drift(CANNOT_TELL, say("Two readings without a doubt show no change that can be trusted."), None)
    work = Working()
    line = trend_steps(work, days, values, doubts)
    verdict = _verdict(line, low, high)
    leaves = _leaves(line, days[-1], low, high) if verdict in (RISING, FALLING) else (None, None, None)
    a_year = Amount(abs(line.slope) * DAYS_PER_YEAR, unit, quantity)
    width = Amount(BAND * line.slope_doubt * DAYS_PER_YEAR, unit, quantity)
    texts = {
        RISING: "Rises by {change} a year, give or take {width}.",
        FALLING: "Falls by {change} a year, give or take {width}.",
        STEADY: "Holds steady: the change in a year is below {most}.",
        CANNOT_TELL: "The readings do not tell yet: the change in a year may be up to {most}.",
    }
    most = Amount(a_year.value + width.value, unit, quantity)
    amounts = {"change": a_year, "width": width, "most": most}
    text = texts[verdict]
    used = {name: amount for name, amount in amounts.items() if f"{{{name}}}" in text}
    return Drift(verdict, say(text, **used), line, leaves, tuple(work.steps))


def _verdict(line: Trend, low: float, high: float) -> str:
    width = BAND * line.slope_doubt
    if abs(line.slope) > width:
        return RISING if line.slope > 0.0 else FALLING
    band = high - low if isfinite(high - low) else abs(line.level)
    most = (abs(line.slope) + width) * DAYS_PER_YEAR
    return STEADY if most <= STEADY_PART * band else CANNOT_TELL


def _leaves(line: Trend, last: int, low: float, high: float) -> tuple[str | None, str | None, str | None]:
    """Days on which the line, and the ends of its band, reach the limit it drifts to; None beyond ten years."""
    ahead = np.arange(last, last + HORIZON + 1)
    value, doubt = line.at(ahead)
    if line.slope > 0.0:
        limit, sign = high, 1.0
    else:
        limit, sign = low, -1.0
    if not isfinite(limit):
        return None, None, None
    width = BAND * doubt

    def first(reach: NDArray[np.float64]) -> str | None:
        out = np.flatnonzero(sign * (reach - limit) >= 0.0)
        return iso_date(ahead[out[0]]) if out.size else None

    return first(value + sign * width), first(value), first(value - sign * width)


@formula(
    "Days until salt is wanted",
    "days = whole regenerations of (salt − kept back) ÷ salt of one × days between",
    unit="day",
    takes={"salt": "kg", "each": "kg", "interval": "day", "keep": "kg"},
    source="definition",
    validity="On average days. Look earlier in the first months.",
)
@broadcasts
def salt_lasts(salt: Number, each: Number, interval: Number, keep: Number = 0.0) -> Number:
    """Days until the tank is down to what is kept back. [day]"""
    return np.floor(ratio(larger(salt - keep, 0.0), each) + 1e-9) * interval


@formula(
    "Salt used a day",
    "use = (left at first + added − left now) ÷ days",
    unit="kg/day",
    takes={"left_before": "kg", "added": "kg", "left_now": "kg", "days": "day"},
    source="definition",
)
@broadcasts
def salt_use(left_before: Number, added: Number, left_now: Number, days: Number) -> Number:
    """Salt really used between two visits; NaN for two visits on one day. [kg/day]"""
    return ratio(left_before + added - left_now, days)


def salt_due(today: str, *, salt: float, each: float, interval: float, keep: float | None = None) -> Due:
    """The day on which the tank wants salt: `salt` kg are in it today, one regeneration's worth is kept back."""
    work = Working()
    kept = each if keep is None else keep
    days = work.step(salt_lasts, salt=salt, each=each, interval=interval, keep=kept)
    if not isfinite(days):
        raise InputError("salt", each, "The salt of one regeneration and the days between must be above zero.")
    day = day_number(today) + min(floor(days), HORIZON)
    words = say(
        "{salt} in the tank last {days}.",
        salt=Amount(salt, "kg", "mass"),
        days=Amount(float(floor(days)), "day", "time"),
    )
    return Due("salt", iso_date(day), words, tuple(work.steps))


def service_due(last: str, months: int) -> Due:
    """The day of the next service, so many months after the last."""
    if not 1 <= months <= 120:
        raise InputError("months", months, f"The months between services must be from 1 to 120; {months} was given.")
    return Due("service", months_later(last, months), say(f"{months} months after the last service."))


def reading_due(found: Drift) -> Due | None:
    """The day by which to read again: when the band of the drift first reaches its limit; None where it does not."""
    earliest = found.leaves[0]
    return (
        None if earliest is None else Due("reading", earliest, say("It may leave its band from this day."), found.steps)
    )


def upcoming(*dues: Due | None) -> tuple[Due, ...]:
    """What is due, the earliest first."""
    return tuple(sorted((due for due in dues if due is not None), key=lambda due: due.date))


def visits_as_json(visits: Sequence[Visit]) -> list[dict[str, Any]]:
    """Visits for a job file."""
    return [
        {
            "date": visit.date,
            "note": visit.note,
            "readings": {key: [read.value, read.doubt] for key, read in sorted(visit.readings.items())},
        }
        for visit in visits
    ]


def visits_from_json(part: Any) -> tuple[Visit, ...]:
    """Visits from a job file; JobFileError says what of them cannot be used."""
    try:
        if not isinstance(part, list) or len(part) > MOST_VISITS:
            raise InputError("visits", None, f"they are not a list of at most {MOST_VISITS}.")
        return tuple(map(_visit, part))
    except InputError as error:
        raise JobFileError(f"The visits in the job file cannot be used: {error}") from None


def _visit(part: Any) -> Visit:
    held = part if isinstance(part, dict) else {}
    date, note, readings = held.get("date"), held.get("note", ""), held.get("readings", {})
    if not isinstance(date, str) or not isinstance(note, str) or not isinstance(readings, dict):
        raise InputError("visit", None, "a visit has no date, or parts of the wrong kind.")
    day_number(date)
    return Visit(date, {key: _measured(key, pair) for key, pair in readings.items()}, note)


def _measured(key: str, pair: Any) -> Measured:
    numbers = pair if isinstance(pair, list) and len(pair) == 2 else [None, None]
    for number in numbers:
        if isinstance(number, bool) or not isinstance(number, int | float) or not -1e12 <= number <= 1e12:
            raise InputError(key, None, f"the reading “{key[:40]}” is not a pair of value and doubt.")
    value, doubt = map(float, numbers)
    if doubt < 0.0:
        raise InputError(key, doubt, f"the doubt of “{key[:40]}” is below zero.")
    return Measured(value, doubt)
