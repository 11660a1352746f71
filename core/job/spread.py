"""How sure the answers are: the job is assessed again and again, each entry drawn from its doubt.

    spread(job, draws=200, seed=1, sections=None, own=()) -> Spread         all at once
    run = SpreadRun(job, ...)                                               or a few cases at a time:
    while run.step(4): ...                                                  True while there is more to do
    run.result()                                                            what is known so far
    with_bands(part, found)                                                 a part of an assessment with its bands

Each case is a whole job put through the very same `assess` that gave the plain answer; there is no second
computation. What was assumed is drawn too. Entries are drawn independently of each other, each from a stream of its
own that depends on the seed and its key alone, in even layers [LHS79]; so the same seed gives the same bands, and a
new entry leaves the draws of the others as they were.

After the draws come the cases in which one entry alone takes the values of its doubt and all others stay as
entered: they say how likely the recommendation is to change once that entry is known (`core.job.next_test`).
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, field, replace
from types import MappingProxyType
from zlib import crc32

import numpy as np
from numpy.typing import NDArray

from core.errors import InputError
from core.job.answers import Part
from core.job.assessment import Assessment, assess
from core.job.decisions import Decision, decision_of
from core.job.doubts import Doubt, doubt
from core.job.fields import FIELDS, SECTIONS
from core.job.kits import Kit
from core.job.record import Entry, Job

LOW, HIGH = 0.1, 0.9  # the band holds 8 cases of 10
DRAWS = 200
ALONE = 20  # cases for each entry on its own
MOST_DRAWS = 100_000
_OVER = object()


@dataclass(frozen=True, slots=True)
class Band:
    """Where an answer lies in 8 cases of 10, in the unit of its amount."""

    lowest: float
    highest: float
    unit: str
    answered: float  # share of the cases that had this answer at all


@dataclass(frozen=True, slots=True, eq=False)
class Spread:
    """What the draws say. Keys of answers are "section.answer", those of decisions the section."""

    job: Job
    plain: Mapping[str, Part]  # the plain answers, by section
    seed: int
    finished: bool
    doubts: Mapping[str, Doubt]  # of each entry that was drawn, assumed ones included
    drawn: Mapping[str, NDArray[np.float64]]  # the values drawn, in the unit of the doubt
    values: Mapping[str, NDArray[np.float64]]  # each answer in each case; NaN where it had none
    tones: Mapping[str, tuple[str, ...]]  # each answer's tone in each case; "" where it had none
    bands: Mapping[str, Band]
    decisions: Mapping[str, tuple[Decision, ...]]  # in each case
    alone: Mapping[str, tuple[Mapping[str, Decision], ...]]  # entry -> section -> decision, that entry alone drawn
    beyond: Mapping[tuple[str, str], float]  # (answer, name of a mark) -> share of cases above it

    @property
    def draws(self) -> int:
        """How many cases were drawn so far."""
        return len(next(iter(self.decisions.values()), ()))


@dataclass(slots=True)
class _Tally:
    """What the cases drawn so far gave."""

    values: dict[str, list[float]] = field(default_factory=dict)
    tones: dict[str, list[str]] = field(default_factory=dict)
    marks: dict[tuple[str, str], list[bool]] = field(default_factory=dict)
    decisions: dict[str, list[Decision]] = field(default_factory=dict)
    cases: int = 0

    def take(self, parts: Mapping[str, Part], job: Job) -> None:
        """Take in one case."""
        for section, part in parts.items():
            self.decisions.setdefault(section, []).append(decision_of(part, job))
            for answer in part.answers.values():
                key, value = f"{section}.{answer.key}", answer.amount.value
                self._put(self.values, key, value, float("nan"))
                self._put(self.tones, key, answer.tone, "")
                for mark in answer.marks:
                    self.marks.setdefault((key, mark.name), []).append(value > mark.at.value)
        self.cases += 1
        for column, missing in ((self.values, float("nan")), (self.tones, "")):
            for held in column.values():
                if len(held) < self.cases:
                    held.append(missing)  # type: ignore[arg-type]

    def _put(self, column: dict, key: str, value: object, missing: object) -> None:
        column.setdefault(key, [missing] * self.cases).append(value)


class SpreadRun:
    """A spread in the making, a few cases at a time, so that it can run between two key presses."""

    def __init__(
        self,
        job: Job,
        draws: int = DRAWS,
        seed: int = 1,
        sections: Sequence[str] | None = None,
        own: tuple[Kit, ...] = (),
        alone: int = ALONE,
    ) -> None:
        """Sections default to all; `own` are the user's kits; InputError where the numbers cannot be."""
        if not 2 <= draws <= MOST_DRAWS:
            raise InputError("draws", draws, f"From 2 to {MOST_DRAWS:,} draws are possible; {draws:,} were asked for.")
        self.job, self.seed = job, seed
        self.sections = tuple(SECTIONS if sections is None else sections)
        self.plain = self._parts(assess(job))
        entries = _doubted(job, self.plain)
        found = {key: doubt(entry, FIELDS[key], own) for key, entry in entries.items()}
        self.doubts = {key: held for key, held in found.items() if not held.is_none}
        self._entries = {key: entries[key] for key in self.doubts}
        self._drawn = {key: np.asarray(held.at(_layers(draws, seed, key))) for key, held in self.doubts.items()}
        self._plain_numbers = _numbers(self.plain)
        self._plain_decisions = {section: decision_of(part, job) for section, part in self.plain.items()}
        self._tally = _Tally()
        self._alone: dict[str, list[dict[str, Decision]]] = {key: [] for key in self.doubts}
        self._total = draws + alone * len(self.doubts)
        self._done = 0
        self._work = self._all_cases(draws, alone)

    @property
    def finished(self) -> bool:
        """Whether all cases have been assessed."""
        return self._done == self._total

    @property
    def share_done(self) -> float:
        """How far it is, 0 to 1."""
        return self._done / self._total

    def step(self, cases: int = 4) -> bool:
        """Assess a few more cases; True while there is more to do."""
        for _ in range(cases):
            if next(self._work, _OVER) is _OVER:
                self._done = self._total
                return False
        return not self.finished

    def result(self) -> Spread:
        """What the cases assessed so far say."""
        tally = self._tally
        values = {key: np.array(held) for key, held in tally.values.items()}
        units = {f"{s}.{a.key}": a.amount.unit for s, part in self.plain.items() for a in part.answers.values()}
        return Spread(
            job=self.job,
            plain=MappingProxyType(self.plain),
            seed=self.seed,
            finished=self.finished,
            doubts=MappingProxyType(self.doubts),
            drawn=MappingProxyType({key: held[: tally.cases] for key, held in self._drawn.items()}),
            values=MappingProxyType(values),
            tones=MappingProxyType({key: tuple(held) for key, held in tally.tones.items()}),
            bands=MappingProxyType({key: _band(values[key], units[key]) for key in units if key in values}),
            decisions=MappingProxyType({key: tuple(held) for key, held in tally.decisions.items()}),
            alone=MappingProxyType({key: tuple(held) for key, held in self._alone.items()}),
            beyond=MappingProxyType({key: sum(above) / tally.cases for key, above in tally.marks.items()}),
        )

    def _all_cases(self, draws: int, alone: int) -> Iterator[None]:
        """One assessment at each step: first all entries drawn at once, then each alone at even quantiles."""
        for case in range(draws):
            changed = self._with({key: float(values[case]) for key, values in self._drawn.items()})
            self._tally.take(self._parts(assess(changed)), changed)
            self._done += 1
            yield
        for key in self.doubts:
            yield from self._alone_cases(key, alone)

    def _alone_cases(self, key: str, alone: int) -> Iterator[None]:
        """One entry at even quantiles, the outermost first; where those move nothing, the rest is not tried."""
        shares = (np.arange(alone) + 0.5) / alone
        order = sorted(range(alone), key=lambda at: -abs(shares[at] - 0.5))
        moved = False
        for tried, at in enumerate(order):
            if tried == 2 and not moved:
                self._total -= alone - tried
                self._alone[key] += [self._plain_decisions] * (alone - tried)
                return
            changed = self._with({key: float(self.doubts[key].at(shares[at]))})
            parts = self._parts(assess(changed))
            moved = moved or _numbers(parts) != self._plain_numbers
            self._alone[key].append({section: decision_of(part, changed) for section, part in parts.items()})
            self._done += 1
            yield

    def _with(self, values: Mapping[str, float]) -> Job:
        """The job with some entries at other values."""
        drawn = {key: replace(self._entries[key], value=value) for key, value in values.items()}
        return replace(self.job, entries={**self.job.entries, **drawn})

    def _parts(self, assessment: Assessment) -> dict[str, Part]:
        return {section: getattr(assessment, section) for section in self.sections}


def spread(
    job: Job,
    *,
    draws: int = DRAWS,
    seed: int = 1,
    sections: Sequence[str] | None = None,
    own: tuple[Kit, ...] = (),
    alone: int = ALONE,
) -> Spread:
    """Bands, odds and what moves them, for the sections asked for; all at once."""
    run = SpreadRun(job, draws, seed, sections, own, alone)
    while run.step(draws):
        pass
    return run.result()


def with_bands(part: Part, found: Spread) -> Part:
    """The same part, each answer with the band that holds 8 cases of 10; a band it had already is widened by it."""
    held = {}
    for key, answer in part.answers.items():
        band = found.bands.get(f"{part.key}.{key}")
        ends = [] if band is None else [band.lowest, band.highest]
        ends += answer.band or ()
        if ends:
            held[key] = (min(ends), max(ends))
    answers = {key: replace(answer, band=held.get(key)) for key, answer in part.answers.items()}
    return replace(part, answers=answers, spread=held)


def _numbers(parts: Mapping[str, Part]) -> dict[str, float]:
    """All answers as plain numbers."""
    return {
        f"{key}.{answer.key}": answer.amount.value for key, part in parts.items() for answer in part.answers.values()
    }


def _doubted(job: Job, parts: Mapping[str, Part]) -> dict[str, Entry]:
    """The entries of a job, and what its assessment assumed for want of one."""
    assumed = {
        assumption.field: Entry(assumption.amount.value, assumption.amount.unit, "assumed")
        for part in parts.values()
        for assumption in part.assumptions
        if assumption.field in FIELDS and assumption.amount is not None
    }
    known = {key: entry for key, entry in job.entries.items() if key in FIELDS}
    return {**assumed, **known}


def _layers(draws: int, seed: int, key: str) -> NDArray[np.float64]:
    """Shares from 0 to 1, one in each of as many even layers, in random order."""
    random = np.random.default_rng([seed, crc32(key.encode())])
    order = np.argsort(random.random(draws))
    return (order + random.random(draws)) / draws


def _band(values: NDArray[np.float64], unit: str) -> Band:
    known = values[~np.isnan(values)]
    if not known.size:
        return Band(float("nan"), float("nan"), unit, 0.0)
    lowest, highest = np.quantile(known, (LOW, HIGH)).tolist()
    return Band(lowest, highest, unit, known.size / values.size)
