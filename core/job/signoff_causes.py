"""What may be behind a miss: causes ranked by the signs that the readings give, with the arithmetic of each.

A sign is a question that readings answer with a chance between 0 and 1: "was the softened water already hard right
after the regeneration?" The doubts of the readings make the chance. A cause says for each sign whether it expects it.
The weight of a cause is the product, over the signs that were read, of

    chance × expected + (1 − chance) × (1 − expected)

and the weights are shared out so that they add up to 1. A sign that was not read counts for nobody. All groups of
causes start equal. What each cause expects is our judgement of how softeners behave (common practice, no source); the
weights rank the causes named here and are no odds of anything else.

Where two causes stay close, the signs that would part them name the reading to take next.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from core.job.answers import Phrase
from core.job.signoff_known import BLEND_MISSED, GROUPS, SOFT_CHECKS, SOFT_MISSED, Known
from core.job.signoff_readings import Promised, Readings
from core.job.signoff_remedies import remedy
from core.job.signoff_signs import Sign, read_signs
from core.working import Step

CLEAR = 0.9  # weight from which a group of causes is taken as found
SURE = 0.9  # chance from which, or from below 1 minus it, a sign counts as read
PARTS = 0.02  # weighted variance of what causes expect of a sign, from which reading it is worth the walk; a choice
MOST_ASKED = 3  # readings asked for at once


@dataclass(frozen=True, slots=True)
class Cause:
    """One possible cause of a miss."""

    key: str
    group: str
    label: str
    weight: float  # share of all causes here; they add up to 1
    words: Phrase  # what it amounts to
    first: Phrase  # what to check or do first
    steps: tuple[Step, ...]
    speaks_for: tuple[str, ...]  # questions answered as the cause expects
    speaks_against: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Group:
    """Causes that come down to the same: the bed is exhausted, whatever the reason."""

    key: str
    label: str
    weight: float


@dataclass(frozen=True, slots=True)
class Explanation:
    """The causes of a miss, the likeliest first."""

    causes: tuple[Cause, ...]
    groups: tuple[Group, ...]
    signs: tuple[Sign, ...]
    next_readings: tuple[str, ...]  # that would part the causes in front; empty where the cause is clear

    @property
    def clear(self) -> bool:
        """Whether one group of causes stands out."""
        return self.groups[0].weight >= CLEAR


def explain(promised: Promised, readings: Readings, missed: set[str]) -> Explanation | None:
    """Causes of a miss in hardness, ranked; None where no hardness is missed. `missed` are keys of checks."""
    soft = any(key in missed for key in SOFT_CHECKS)
    soft_read = readings.softened_fresh is not None or readings.softened_late is not None
    if not soft and "blend" not in missed:
        return None
    known = dict(SOFT_MISSED) if soft else dict(BLEND_MISSED)
    if not soft and not soft_read:
        known |= SOFT_MISSED
    signs = read_signs(promised, readings)
    weights = _weights(known, signs)
    causes = [_cause(key, known[key], weights[key], signs, promised, readings) for key in known]
    causes.sort(key=lambda cause: -cause.weight)
    groups = _groups(causes)
    asked = () if groups[0].weight >= CLEAR else _next_readings(known, causes, signs)
    return Explanation(tuple(causes), groups, tuple(signs.values()), asked)


def _weights(known: Mapping[str, Known], signs: Mapping[str, Sign]) -> dict[str, float]:
    """Shares of the causes by the product rule. A group starts with the weight of one cause, however many it has."""
    members = {cause.group: sum(other.group == cause.group for other in known.values()) for cause in known.values()}
    weights = {}
    for key, cause in known.items():
        weight = 1.0 / members[cause.group]
        for name, sign in signs.items():
            if sign.chance is not None:
                expected = cause.expects(name)
                weight *= sign.chance * expected + (1.0 - sign.chance) * (1.0 - expected)
        weights[key] = weight
    whole = sum(weights.values())
    return {key: weight / whole for key, weight in weights.items()}


def _cause(
    key: str, known: Known, weight: float, signs: Mapping[str, Sign], promised: Promised, readings: Readings
) -> Cause:
    words, first, steps = remedy(key, promised, readings)
    speaks_for: list[str] = []
    speaks_against: list[str] = []
    for name, expected in known.says.items():
        chance = signs[name].chance
        if chance is not None and not 1.0 - SURE < chance < SURE:
            as_expected = (chance > 0.5) == (expected > 0.5)
            said = f"{signs[name].question} {'Yes' if chance > 0.5 else 'No'}."
            (speaks_for if as_expected else speaks_against).append(said)
    return Cause(key, known.group, known.label, weight, words, first, steps, tuple(speaks_for), tuple(speaks_against))


def _groups(causes: list[Cause]) -> tuple[Group, ...]:
    weights: dict[str, float] = {}
    for cause in causes:
        weights[cause.group] = weights.get(cause.group, 0.0) + cause.weight
    ranked = sorted(weights.items(), key=lambda pair: -pair[1])
    return tuple(Group(key, GROUPS[key], weight) for key, weight in ranked)


def _next_readings(known: Mapping[str, Known], causes: list[Cause], signs: Mapping[str, Sign]) -> tuple[str, ...]:
    """Readings that would part the causes best: by the scatter of what they expect, weighted by their weights now."""
    parting = {}
    for name, sign in signs.items():
        if sign.chance is None or 1.0 - SURE < sign.chance < SURE:
            mean = sum(cause.weight * known[cause.key].expects(name) for cause in causes)
            parting[name] = sum(cause.weight * (known[cause.key].expects(name) - mean) ** 2 for cause in causes)
    wanted = sorted((name for name in parting if parting[name] >= PARTS), key=lambda name: -parting[name])
    return tuple(dict.fromkeys(signs[name].ask for name in wanted))[:MOST_ASKED]
