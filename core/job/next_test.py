"""What to measure next: the entry whose doubt moves the decision most.

    influences(found, "softener") -> tuple[Influence, ...]       the strongest first
    variance_by_entry(found, "blend.sodium") -> {entry: share}
    measure_next(found, "softener") -> Advice | None             "Measure iron: it decides between …"

Two measures stand side by side. The chance that the recommendation changes: the share of cases in which that entry
alone, drawn from its doubt with all others as entered, leads to another one. And the share of the variance of the
headline (of the interval, where a bed was entered) that goes with that entry, its first-order index [SOBOL93], from
the draws at hand: the answer is fitted by a sum of a curve for each entry, which is exact for sums whatever the
number of draws; what is left over belongs to entries that act together.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from core.job.answers import Phrase, say
from core.job.decisions import SIZED, Decision, decision_of, size_amount
from core.job.fields import FIELDS
from core.job.spread import Spread

LEAST_CHANCE = 0.05  # of another recommendation, below which nothing more need be measured; a choice of ours
LEAST_WIDTH = 0.25  # of a headline's band, as a share of the answer, below which it is sure enough; likewise
MOST_OF_IT = 0.5  # of the variance, from where an entry is named as where the doubt comes from
_CASES_PER_COLUMN = 4  # fewer and the curves would fit chance

_HOW = {
    "water.hardness": "Measure the hardness",
    "water.iron": "Measure iron",
    "water.manganese": "Measure manganese",
    "water.ph": "Measure the pH at the tap",
    "water.alkalinity": "Measure the alkalinity",
    "water.temperature": "Measure the temperature at the tap",
    "water.conductivity": "Measure the conductivity",
    "demand.persons": "Read the water meter on two days",
    "demand.per_person": "Read the water meter on two days",
    "demand.softened_share": "Find out what is not softened",
    "demand.daily_volume": "Read the water meter over more days",
    "demand.peak_flow": "Measure the peak flow",
    "softener.resin": "Find out how much resin is in the tank",
    "blend.softened": "Measure the hardness right after the softener",
    "blend.measured": "Measure the blend",
}


@dataclass(frozen=True, slots=True)
class Influence:
    """How much one entry's doubt moves one section."""

    field: str
    changes: float  # chance that the recommendation changes when this entry alone becomes known
    variance: float  # share of the variance of the headline that goes with it
    outcomes: tuple[Decision, ...]  # what it could lead to, each once, the plain one first


@dataclass(frozen=True, slots=True)
class Advice:
    """What to measure next, and why."""

    field: str
    words: Phrase
    changes: float
    variance: float


def influences(found: Spread, section: str = "softener") -> tuple[Influence, ...]:
    """What each doubted entry does to a section, the strongest first.

    Strongest means likeliest to change the recommendation, then by variance. Empty while no case of the second kind
    has been assessed.
    """
    shares = variance_by_entry(found, telling_answer(found, section))
    made = [_influence(found, section, entry, shares.get(entry, 0.0)) for entry in found.alone if found.alone[entry]]
    return tuple(sorted(made, key=lambda item: (-item.changes, -item.variance, item.field)))


def telling_answer(found: Spread, section: str) -> str:
    """Key of the answer whose variance is told apart: the headline, or the interval of a bed that was entered."""
    part = found.plain[section]
    if section == "softener" and SIZED in found.job.entries and "interval" in part.answers:
        return "softener.interval"
    return f"{section}.{part.headline.key}" if part.headline else ""


def measure_next(found: Spread, section: str = "softener") -> Advice | None:
    """The one test that would make a section surer, said in a line; None where none is worth it."""
    known = influences(found, section)
    if not known:
        return None
    best = known[0]
    if best.changes >= LEAST_CHANCE:
        return Advice(best.field, _decides(found, section, best), best.changes, best.variance)
    widest = max(known, key=lambda item: item.variance)
    section_key, _, answer = telling_answer(found, section).partition(".")
    if not answer or widest.variance < MOST_OF_IT or _width(found, section_key, answer) < LEAST_WIDTH:
        return None
    label = found.plain[section].answers[answer].label
    text = f"{_how(found, widest.field)}: most of the doubt about “{label}” comes from it."
    return Advice(widest.field, say(text), widest.changes, widest.variance)


def variance_by_entry(found: Spread, answer: str) -> dict[str, float]:
    """Share of an answer's variance that goes with each entry; all zero where the answer hardly moves."""
    values = found.values.get(answer)
    none = dict.fromkeys(found.doubts, 0.0)
    if values is None:
        return none
    known = ~np.isnan(values)
    values = values[known]
    scale = np.max(np.abs(values), initial=0.0)
    if values.size < 3 or np.ptp(values) <= 1e-9 * scale:
        return none
    moving = {key: column[known] for key, column in found.drawn.items() if np.ptp(column[known]) > 0.0}
    curves = _additive(values - values.mean(), moving)
    total = float(np.var(values))
    return {**none, **{key: min(1.0, float(np.var(curve)) / total) for key, curve in curves.items()}}


def _additive(values: NDArray[np.float64], columns: dict[str, NDArray[np.float64]]) -> dict[str, NDArray[np.float64]]:
    """The curve of each entry in the sum of curves that fits the values best (least squares)."""
    if not columns:
        return {}
    degree = max(1, min(3, values.size // (_CASES_PER_COLUMN * len(columns))))
    scaled = {key: (column - column.mean()) / column.std() for key, column in columns.items()}
    powers = [scaled[key] ** power for key in scaled for power in range(1, degree + 1)]
    matrix = np.stack([power - power.mean() for power in powers], axis=1)
    weights = np.linalg.lstsq(matrix, values, rcond=None)[0]
    return {
        key: matrix[:, at : at + degree] @ weights[at : at + degree]
        for at, key in zip(range(0, degree * len(scaled), degree), scaled, strict=True)
    }


def _influence(found: Spread, section: str, entry: str, variance: float) -> Influence:
    plain = decision_of(found.plain[section], found.job)
    cases = [case[section] for case in found.alone[entry]]
    outcomes = [plain]
    for case in cases:
        if not any(case.same(known) for known in outcomes):
            outcomes.append(case)
    changed = sum(not case.same(plain) for case in cases)
    return Influence(entry, changed / len(cases), variance, tuple(outcomes))


def _decides(found: Spread, section: str, best: Influence) -> Phrase:
    how = _how(found, best.field)
    held = sorted({outcome.size for outcome in best.outcomes if outcome.size is not None})
    if all(outcome.answered for outcome in best.outcomes) and len(held) > 1:
        ends = {"smaller": size_amount(found, section, held[0]), "larger": size_amount(found, section, held[-1])}
        if len(held) == 2:
            return say(f"{how}: it decides between {{smaller}} and {{larger}} of resin.", **ends)
        return say(f"{how}: it decides the size, from {{smaller}} to {{larger}} of resin.", **ends)
    if not all(outcome.answered for outcome in best.outcomes):
        return say(f"{how}: it decides whether there is an answer at all.")
    if section == "softener":
        return say(f"{how}: it decides whether this bed will do.")
    return say(f"{how}: it decides the verdict on “{_moved(found, section, best)}”.")


def _moved(found: Spread, section: str, best: Influence) -> str:
    """Label of the first answer whose verdict differs among the outcomes."""
    plain = dict(best.outcomes[0].verdicts)
    for outcome in best.outcomes[1:]:
        for key, tone in outcome.verdicts:
            if plain.get(key) != tone:
                answer = found.plain[section].answers.get(key)
                return answer.label if answer else FIELDS[best.field].label
    return FIELDS[best.field].label


def _how(found: Spread, key: str) -> str:
    words = _HOW.get(key, f"Make sure of “{FIELDS[key].label}”")
    entry = found.job.entries.get(key)
    again = entry is not None and entry.source == "measured" and words.startswith("Measure")
    return f"{words} more exactly" if again else words


def _width(found: Spread, section: str, answer: str) -> float:
    """Width of an answer's band as a share of the plain answer; 0 where that cannot be said."""
    plain, band = found.plain[section].answers[answer].amount.value, found.bands.get(f"{section}.{answer}")
    return 0.0 if band is None or not plain else (band.highest - band.lowest) / abs(plain)
