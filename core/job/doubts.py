"""The doubt of an entry: what the truth may be, given what was read and how.

    doubt(entry, field, own=()) -> Doubt
    doubt.at(0.1)        the value that 1 case in 10 stays below; takes arrays
    doubt.words          a phrase: "{lowest} to {highest}: drop count, 1 gpg a drop."
    half_width(value, resolution, relative, absolute)       the ± of a reading, with its card

Everything is in the unit of the entry. No value outside what the field accepts is ever drawn, so none below zero.
A doubt of ± means two standard deviations where it is normal, and the outermost values where it has edges, as
[GUM] reads statements that give no more than that.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from math import hypot, sqrt
from statistics import NormalDist

import numpy as np
from numpy.typing import ArrayLike, NDArray

from core.errors import TapwrightError
from core.job.answers import Amount, Phrase, say
from core.job.fields import Field
from core.job.kits import HowRead, Kit, way_of
from core.job.record import Entry
from core.units import convert
from core.working import formula

COVERAGE = 2.0  # standard deviations in the ± of a normal doubt [GUM]
_NORMAL = NormalDist()
_LESS = re.compile(r"\s*[<≤]")
_MORE = re.compile(r"\s*[>≥]")
_ON_A_STEP = 0.02  # share of a step: a pad read in another unit, and rounded there, is still that pad
_AT_LEAST_FACTOR = 2.0  # "> 425" is taken to mean up to twice that; a choice of ours, and said so


@formula(
    "Doubt of a reading",
    "± = √(resolution² + the larger of absolute and relative × reading, squared)",
    unit="as the reading",
    takes={"value": "as the reading", "resolution": "as the reading", "relative": "", "absolute": "as the reading"},
    source="GUM",
    validity="Independent parts; the resolution of a mean is divided by the root of the number of readings.",
)
def half_width(value: float, resolution: float = 0.0, relative: float = 0.0, absolute: float = 0.0) -> float:
    """How far the truth may lie from a reading, either way. [unit of the reading]"""
    return hypot(resolution, max(absolute, relative * abs(value)))


@dataclass(frozen=True, slots=True)
class Doubt:
    """What the truth may be: the reading, how far below and above it, and how likely in between."""

    kind: str  # none · normal · triangular (the reading is likeliest) · uniform
    value: float
    below: float
    above: float
    unit: str
    words: Phrase
    source: str = ""
    least: float = 0.0  # what is possible at all, in the unit of the entry
    most: float = float("inf")

    @property
    def is_none(self) -> bool:
        """Whether the value is taken as it stands."""
        return self.kind == "none"

    @property
    def sd(self) -> float:
        """Standard deviation, before what is impossible is cut off."""
        if self.kind == "normal":
            return self.above / COVERAGE
        if self.kind == "triangular":  # mode at the reading
            return sqrt((self.below**2 + self.above**2 + self.below * self.above) / 18.0)
        return (self.below + self.above) / sqrt(12.0)

    def at(self, share: ArrayLike) -> NDArray[np.float64] | float:
        """The value below which this share of cases lies (0 to 1); within what is possible."""
        shares = np.asarray(share, dtype=float)
        if self.is_none:
            values = np.full(shares.shape, self.value)
        else:
            low, high = self._share_below(self.least), self._share_below(self.most)
            values = np.clip(self._inverse(low + shares * (high - low)), self.least, self.most)
        return values if values.ndim else float(values)

    def _share_below(self, value: float) -> float:
        away = value - self.value
        if self.kind == "normal":
            return _NORMAL.cdf(away / self.sd)
        width = self.below + self.above
        if away <= -self.below:
            return 0.0
        if away >= self.above:
            return 1.0
        if self.kind == "uniform":
            return (away + self.below) / width
        if away < 0.0:
            return (away + self.below) ** 2 / (width * self.below)
        return 1.0 - (self.above - away) ** 2 / (width * self.above)

    def _inverse(self, shares: NDArray[np.float64]) -> NDArray[np.float64]:
        if self.kind == "normal":
            inside = np.clip(shares, 1e-9, 1.0 - 1e-9)
            scores = np.reshape([_NORMAL.inv_cdf(p) for p in inside.ravel().tolist()], inside.shape)
            return self.value + self.sd * scores
        width = self.below + self.above
        if self.kind == "uniform":
            return self.value - self.below + shares * width
        low = self.value - self.below + np.sqrt(np.maximum(shares, 0.0) * width * self.below)
        high = self.value + self.above - np.sqrt(np.maximum(1.0 - shares, 0.0) * width * self.above)
        return np.where(shares * width < self.below, low, high)


def doubt(entry: Entry, field: Field, own: tuple[Kit, ...] = ()) -> Doubt:
    """The doubt of an entry, from its kit or its source; of kind "none" where there is none to count.

    `own` are the user's own kits. An entry without a value, outside the accepted range, or in a unit that is not
    known has no doubt: nothing is computed from it.
    """
    try:
        least, most = _possible(field, entry.unit)
    except TapwrightError:
        return _none(entry, field, "Nothing is computed from this entry.")
    if entry.value is None or not least <= entry.value <= most:
        return _none(entry, field, "Nothing is computed from this entry.")
    way = way_of(entry, field, own)
    if _LESS.match(entry.typed):
        return _made("uniform", entry, field, (entry.value, 0.0), (least, most), _WORDS["less"], "definition")
    if way is None:
        return _none(entry, field, "Taken as it stands: no doubt is counted.")
    if way.shape == "none":
        return _none(entry, field, f"Taken as it stands: {_escaped(way.words)}.")
    return _by_way(entry, field, way, (least, most))


_WORDS = {
    "less": "Below {value}, so anything from nothing up to that.",
    "least": "At least {value}, perhaps much more: up to {highest} is allowed for. Dilute the sample and read again.",
    "end": "At least {value}, where the strip ends: up to {highest} is allowed for. Dilute the sample and read again.",
    "faint": "Too little for this test to tell: anything up to {highest}. How: ",
    "upward": "From {value} up to {highest}: ",
    "normal": "{lowest} to {highest} in 19 of 20 cases: ",
    "triangular": "{lowest} to {highest}, likeliest {value}: ",
    "uniform": "{lowest} to {highest}: ",
}


def _by_way(entry: Entry, field: Field, way: Kit, possible: tuple[float, float]) -> Doubt:
    value = entry.value or 0.0
    how = HowRead.of(entry.kit) if entry.source == "measured" else HowRead("")
    try:
        scale = _scale(way, field, entry.unit) * how.dilution
    except TapwrightError:
        return _none(entry, field, "Taken as it stands: the kit and the entry do not measure the same.")
    words = _escaped(entry.kit or way.words) + "."
    if _MORE.match(entry.typed):
        above = _beyond(way, value, scale)
        sentence = _WORDS["end" if way.shape == "step" else "least"]
        return _made("uniform", entry, field, (0.0, above), possible, sentence, way.source)
    if value < way.lowest * scale:
        sides = (value, way.lowest * scale - value)
        return _made("uniform", entry, field, sides, possible, _WORDS["faint"] + words, way.source)
    if way.shape == "step":
        sides = _between_steps(value, [step * scale for step in way.steps], way.absolute * scale)
        return _made("uniform", entry, field, sides, possible, _WORDS["uniform"] + words, way.source)
    random = max(way.resolution * scale / sqrt(how.readings), COVERAGE * how.standard_error)
    side = half_width(value, random, way.relative, way.absolute * scale)
    kind = "normal" if way.shape == "normal" else "triangular"
    sides = (0.0 if way.shape == "upward" else side, side)
    return _made(kind, entry, field, sides, possible, _WORDS[way.shape] + words, way.source)


def _scale(way: Kit, field: Field, unit: str) -> float:
    """How many units of the entry one unit of the kit is; differences count, so zeros do not."""
    if not field.quantity or not way.unit:
        return 1.0
    one, zero = (convert(value, way.unit, unit, quantity=field.quantity) for value in (1.0, 0.0))
    return one - zero


def _between_steps(value: float, steps: list[float], least: float) -> tuple[float, float]:
    """How far below and above a reading on a strip the truth may lie: half way to the next steps, or the steps."""
    at = [abs(step - value) <= _ON_A_STEP * step for step in steps]
    if any(at):
        index = at.index(True)
        low = (steps[index - 1] + steps[index]) / 2.0 if index else 0.0
        last = index + 1 == len(steps)
        high = 2.0 * steps[-1] - steps[-2] if last else (steps[index] + steps[index + 1]) / 2.0
    else:
        low = max((step for step in steps if step < value), default=0.0)
        high = min((step for step in steps if step > value), default=value + steps[-1] - steps[-2])
    return max(value - low, least), max(high - value, least)


def _beyond(way: Kit, value: float, scale: float) -> float:
    """How much more than "at least" the truth is taken to be: one more step of a strip, else as much again."""
    if way.shape == "step":
        return (way.steps[-1] - way.steps[-2]) * scale
    return (_AT_LEAST_FACTOR - 1.0) * value


def _possible(field: Field, unit: str) -> tuple[float, float]:
    ends = (field.lowest, field.highest)
    if not field.quantity:
        return ends
    return tuple(convert(end, field.core_unit, unit, quantity=field.quantity) for end in ends)  # type: ignore[return-value]


def _made(
    kind: str,
    entry: Entry,
    field: Field,
    sides: tuple[float, float],
    possible: tuple[float, float],
    words: str,
    source: str,
) -> Doubt:
    value, (below, above), (least, most) = entry.value or 0.0, sides, possible
    if below + above <= 0.0:
        return _none(entry, field, "Taken as it stands: its doubt is nothing.")
    amounts = {
        "lowest": Amount(max(value - below, least), entry.unit, field.quantity, field.role),
        "highest": Amount(min(value + above, most), entry.unit, field.quantity, field.role),
        "value": Amount(value, entry.unit, field.quantity, field.role),
    }
    phrase = say(words, **{name: amount for name, amount in amounts.items() if f"{{{name}}}" in words})
    return Doubt(kind, value, below, above, entry.unit, phrase, source, least, most)


def _none(entry: Entry, field: Field, words: str) -> Doubt:
    return Doubt("none", entry.value if entry.value is not None else float("nan"), 0.0, 0.0, entry.unit, say(words))


def _escaped(text: str) -> str:
    return text.replace("{", "{{").replace("}", "}}")
