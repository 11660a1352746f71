"""How sure the answers of a section are, as it is shown, and how much work each section is worth."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from math import isfinite
from typing import TYPE_CHECKING

import flet as ft

from core.job.answers import Amount, Part, Phrase
from core.job.record import Entry, Job

if TYPE_CHECKING:
    from core.job.spread import Spread

MOST_ODDS = 3  # sentences about one section


@dataclass(frozen=True, slots=True)
class Plan:
    """How much is drawn for some sections: fewer cases where one takes long, so that a phone keeps up."""

    sections: tuple[str, ...]
    draws: int
    alone: int  # cases for each entry on its own
    at_once: int  # cases between two looks at the keyboard


# One case takes some 10 ms in a browser on a desk, of the heater's lime ten times that; on a phone longer.
SIZING = Plan(("water", "demand", "softener"), draws=80, alone=6, at_once=1)
PLANS = {
    "water": SIZING,
    "demand": SIZING,
    "softener": SIZING,
    "scale": Plan(("scale",), draws=16, alone=0, at_once=1),
    "blend": Plan(("blend",), draws=80, alone=6, at_once=4),
}


@dataclass(frozen=True, slots=True)
class Next:
    """What to measure next, and the sentence that says why."""

    field: str
    words: Phrase


@ft.observable
@dataclass
class SureState:
    """What is said of a section's sureness; `stale` while it still belongs to what stood there before."""

    key: str
    known: bool = False
    stale: bool = False
    band: tuple[Amount, Amount] | None = None  # of the headline, 8 cases of 10
    odds: tuple[Phrase, ...] = ()
    next: Next | None = None
    tried: bool = False  # whether it was looked for what to measure next

    def take(self, found: Spread) -> None:
        """Take in what the draws say."""
        from core.job.decisions import odds
        from core.job.next_test import measure_next  # they need numpy

        sized = found.plain.get("softener")
        asked = "softener" if sized is not None and sized.headline is not None else self.key
        advice = measure_next(found, asked) if asked in found.plain else None
        said = [item.words for item in odds(found) if item.key.partition(".")[0] == self.key]
        self.band = _band(found.plain[self.key], found)
        self.odds = tuple(said[:MOST_ODDS])
        self.next = Next(advice.field, advice.words) if advice else None
        self.tried = any(found.alone.values())
        self.known, self.stale = bool(found.plain[self.key].answers), False

    def give_up(self) -> None:
        """Say nothing, rather than that it is being worked out."""
        self.band, self.odds, self.next, self.tried = None, (), None, False
        self.known, self.stale = True, False


def _band(part: Part, found: Spread) -> tuple[Amount, Amount] | None:
    headline = part.headline
    band = found.bands.get(f"{part.key}.{headline.key}") if headline else None
    if headline is None or band is None or not (isfinite(band.lowest) and isfinite(band.highest)):
        return None
    low, high = (replace(headline.amount, value=value) for value in (band.lowest, band.highest))
    return low, high


def with_known_bands(part: Part, found: Spread) -> Part:
    """A part with the bands of its answers, where the draws gave any."""
    from core.job.spread import with_bands  # it needs numpy

    banded = with_bands(part, found)
    kept = {
        key: answer if answer.band is None or all(map(isfinite, answer.band)) else replace(answer, band=None)
        for key, answer in banded.answers.items()
    }
    return replace(banded, answers=kept)


def same_to_reckon(job: Job, entries: Mapping[str, Entry], choices: Mapping[str, str]) -> bool:
    """Whether a job still holds the same entries and choices: a new name changes no answer."""
    return job.entries == entries and job.choices == choices
