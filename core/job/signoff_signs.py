"""Signs: questions that the readings of a sign-off answer, each with a chance between 0 and 1.

A sign compares two readings, or a reading with what was promised; their doubts, taken as independent and normal, make
the chance. A comparison of two readings of the same thing asks whether one is more than twice the other, so that it
means something for clear readings and for rough ones.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import hypot

from core.job.signoff_formulas import chance_above, hardness_met
from core.job.signoff_readings import Measured, Promised, Readings

ENTERED_WITHIN = 0.05  # part by which the raw water may differ from the hardness at the valve head; a choice
LITTLE = 0.5  # of the salt set: less than that is a failed regeneration; a choice
NEARLY_RAW = 0.7  # of the raw hardness; a choice
SHORT_COUNT = 0.9  # of the water drawn; a choice


@dataclass(frozen=True, slots=True)
class Sign:
    """One question, and the chance that its answer is yes."""

    key: str
    question: str
    chance: float | None  # None where it was not read
    ask: str  # the reading that answers it


def read_signs(promised: Promised, readings: Readings) -> dict[str, Sign]:
    """Every sign with its chance by the readings; None where a reading for it is missing."""
    found = {**_soft_signs(promised, readings), **_run_signs(promised, readings), **_flow_signs(promised, readings)}
    found |= _blend_signs(promised, readings)
    return {key: Sign(key, question, chance, ask) for key, (question, chance, ask) in found.items()}


_Found = dict[str, tuple[str, float | None, str]]
_FRESH = "Regenerate by hand, then read the softened water at once, with the blending valve closed."
_LATE = "Read the softened water just before the next regeneration, with the blending valve closed."
_TWO_FLOWS = "Read the softened water at a trickle and at full flow, one after the other."


def _soft_signs(promised: Promised, readings: Readings) -> _Found:
    fresh, late, raw = readings.softened_fresh, readings.softened_late, readings.raw
    limit = _exact(promised.softened)
    return {
        "fresh_hard": ("Hard right after the regeneration?", _above(fresh, limit), _FRESH),
        "late_hard": ("Hard at the end of the run?", _above(late, limit), _LATE),
        "grows": (
            "Did most of the hardness come during the run?",
            _both(_above(late, limit), _above(_scaled(late, 0.5), fresh)),
            _FRESH if fresh is None else _LATE,
        ),
        "nearly_raw": (
            "Nearly as hard as the raw water, right after?",
            _above(fresh, _scaled(raw, NEARLY_RAW)),
            _FRESH,
        ),
        "closed_hard": (
            "Hard at the tap with the blending valve closed?",
            _above(readings.closed, limit),
            "Close the blending valve, let the tap run for five minutes, and read it.",
        ),
    }


def _run_signs(promised: Promised, readings: Readings) -> _Found:
    raw, water, capacity = readings.raw or promised.raw, readings.water_since, promised.capacity
    meter = readings.meter_set or _exact(promised.meter)
    entered = readings.hardness_set or _exact(promised.hardness_set)
    since = "Read on the meter how much water has run since the last regeneration."
    head = "Read hardness and meter setting at the valve head, and the raw water again."
    salt = _scaled(_exact(promised.salt), LITTLE)
    brine = "Start a regeneration, and watch how far the brine falls, or weigh the salt it takes."
    return {
        "ran_out": ("Did more hardness come than the bed holds?", _above(_met(water, raw), capacity), since),
        "overdue": ("Has more water run than the meter allows?", _above(water, meter), since),
        "outlasts": ("Is the meter set for longer than the bed lasts?", _above(_met(meter, raw), capacity), head),
        "entered_low": (
            "Is the raw water harder than what is set?",
            _above(readings.raw, _scaled(entered, 1.0 + ENTERED_WITHIN)),
            head,
        ),
        "little_salt": ("Was far less salt used than set?", _above(salt, readings.salt_used), brine),
        "short_count": (
            "Does the meter count too little?",
            _above(_scaled(readings.drawn, SHORT_COUNT), readings.counted),
            "Draw a known amount, and read what the meter counts.",
        ),
    }


def _flow_signs(promised: Promised, readings: Readings) -> _Found:
    slow, fast, limit = readings.softened_slow, readings.softened_fast, _exact(promised.softened)
    flow = readings.flow
    carries = "Read the flow while the softened water is sampled."
    return {
        "fast_harder": (
            "Much harder at full flow?",
            _both(_above(fast, limit), _above(_scaled(fast, 0.5), slow)),
            _TWO_FLOWS,
        ),
        "slow_harder": (
            "Much harder at a trickle?",
            _both(_above(slow, limit), _above(_scaled(slow, 0.5), fast)),
            _TWO_FLOWS,
        ),
        "flow_high": (
            "Is the flow above what the bed carries?",
            _above(flow if fast is None else readings.fast_flow, _exact(promised.largest_flow)),
            carries,
        ),
        "flow_low": (
            "Is the flow below what spreads it over the bed?",
            _above(_exact(promised.least_flow), flow if slow is None else readings.slow_flow),
            carries,
        ),
    }


def _blend_signs(promised: Promised, readings: Readings) -> _Found:
    ask = "Read raw, softened and blended water with the same kit."
    found: _Found = {
        "share_off": ("Does the valve let through another share than wanted?", _share_off(promised, readings), ask)
    }
    raw, wanted = readings.raw, promised.raw
    differs = None
    if raw is not None and wanted is not None:
        width = promised.raw_within * wanted.value
        doubt = hypot(raw.doubt, wanted.doubt)
        above, below = raw.value - wanted.value - width, wanted.value - width - raw.value
        differs = chance_above(above, 0.0, doubt) + chance_above(below, 0.0, doubt)
    found["raw_differs"] = ("Is the raw water another than entered?", differs, "Read the raw water again.")
    return found


def _share_off(promised: Promised, readings: Readings) -> float | None:
    """Chance that the blend, at the raw hardness read, is not what the share wanted would give."""
    raw, blend, wanted = readings.raw, readings.blend, promised.raw
    if raw is None or blend is None or wanted is None or promised.blend is None or not wanted.value:
        return None
    share = promised.blend / wanted.value
    apart, doubt = blend.value - share * raw.value, hypot(blend.doubt, share * raw.doubt)
    width = promised.blend_within
    return chance_above(apart, width, doubt) + chance_above(-apart, width, doubt)


def _exact(value: float | None) -> Measured | None:
    return None if value is None else Measured(value)


def _scaled(reading: Measured | None, factor: float) -> Measured | None:
    return None if reading is None else Measured(factor * reading.value, factor * reading.doubt)


def _above(one: Measured | None, other: Measured | None) -> float | None:
    if one is None or other is None:
        return None
    return chance_above(one.value, other.value, hypot(one.doubt, other.doubt))


def _both(one: float | None, other: float | None) -> float | None:
    return None if one is None or other is None else one * other


def _met(water: Measured | None, raw: Measured | None) -> Measured | None:
    """Hardness met, with the doubts of water and hardness joined."""
    if water is None or raw is None:
        return None
    doubt = hypot(hardness_met(water.doubt, raw.value), hardness_met(water.value, raw.doubt))
    return Measured(hardness_met(water.value, raw.value), doubt)
