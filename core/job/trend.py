"""A straight line through readings over days, each weighted by its doubt; slope with its own doubt.

    fit = trend([0, 90, 180], [1.40, 1.45, 1.52], 0.03)
    fit.slope, fit.slope_doubt           a day, in the unit of the readings
    fit.at(270)                          value of the line and its doubt

Where the readings scatter more than their doubts allow, the doubt of the line is widened by the ratio (the Birge
ratio); two readings cannot show that. A straight line says nothing about a sudden change.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from core.errors import InputError
from core.working import Working, formula


@dataclass(frozen=True, slots=True)
class Trend:
    """A straight line through readings over days."""

    slope: float  # a day
    slope_doubt: float
    middle: float  # day at which level and slope are independent
    level: float  # of the line at that day
    level_doubt: float
    widened: float  # factor by which scatter widened the doubts, 1 or more
    count: int

    def at(self, day: ArrayLike) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
        """Value of the line on a day, and its doubt."""
        away = np.asarray(day, dtype=float) - self.middle
        return (self.level + self.slope * away)[()], np.hypot(self.level_doubt, self.slope_doubt * away)[()]


def _weights(doubts: ArrayLike, values: NDArray[np.float64]) -> NDArray[np.float64]:
    spread = np.broadcast_to(np.asarray(doubts, dtype=float), values.shape)
    known = spread[spread > 0.0]
    floor_ = known.min() if known.size else 1.0  # a doubt of zero counts like the smallest one given
    return 1.0 / np.square(np.maximum(spread, floor_))


@formula(
    "Change from day to day",
    "slope = Σ w (t − t̄) (y − ȳ) ÷ Σ w (t − t̄)², with w = 1 ÷ doubt²",
    unit="of the reading, a day",
    takes={"days": "day", "values": "of the reading", "doubts": "of the reading"},
    source="definition",
    validity="A straight line by weighted least squares.",
)
def slope(days: ArrayLike, values: ArrayLike, doubts: ArrayLike = 0.0) -> float | NDArray[np.float64]:
    """Slope of the straight line through readings, along the last axis. [unit of the readings a day]"""
    t, y, w, middle, level = _centred(days, values, doubts)
    away = t - middle
    with np.errstate(divide="ignore", invalid="ignore"):
        return _plain(np.sum(w * away * (y - level), axis=-1) / np.sum(w * np.square(away), axis=-1))


@formula(
    "Doubt of the change",
    "doubt = f ÷ √Σ w (t − t̄)², with f = √(χ² ÷ (n − 2)), at least 1",
    unit="of the reading, a day",
    takes={"days": "day", "values": "of the reading", "doubts": "of the reading"},
    source="definition",
    validity="f is the Birge ratio: it widens the doubt where the readings scatter more than theirs allow. Without "
    "doubts it is all there is, and needs three readings.",
)
def slope_doubt(days: ArrayLike, values: ArrayLike, doubts: ArrayLike = 0.0) -> float | NDArray[np.float64]:
    """Standard deviation of the slope, along the last axis. [unit of the readings a day]"""
    t, _, w, middle, _ = _centred(days, values, doubts)
    with np.errstate(divide="ignore", invalid="ignore"):
        alone = 1.0 / np.sqrt(np.sum(w * np.square(t - middle), axis=-1))
    return _plain(alone * birge_ratio(days, values, doubts))


def birge_ratio(days: ArrayLike, values: ArrayLike, doubts: ArrayLike = 0.0) -> float | NDArray[np.float64]:
    """How much more readings scatter about their line than their doubts allow; not below 1 where doubts are given.

    NaN for two readings without doubts, which lie on every line; 1 for two with doubts.
    """
    t, y, w, middle, level = _centred(days, values, doubts)
    slope_ = np.expand_dims(np.asarray(slope(days, values, doubts)), -1)
    apart = y - level - slope_ * (t - middle)
    freedom = y.shape[-1] - 2
    known = bool(np.any(np.asarray(doubts, dtype=float) > 0.0))
    if freedom <= 0:
        return _plain(np.sum(0.0 * apart, axis=-1) + (1.0 if known else np.nan))
    found = np.sqrt(np.sum(w * np.square(apart), axis=-1) / freedom)
    return _plain(np.where(np.isnan(found), found, np.maximum(found, 1.0)) if known else found)


def _centred(days: ArrayLike, values: ArrayLike, doubts: ArrayLike) -> tuple[NDArray[np.float64], ...]:
    t, y = np.broadcast_arrays(np.asarray(days, dtype=float), np.asarray(values, dtype=float))
    if y.ndim == 0 or y.shape[-1] < 2:
        raise InputError("visits", y.size, "A line needs two visits at least: read once more.")
    w = _weights(doubts, y)
    whole = np.sum(w, axis=-1, keepdims=True)
    return t, y, w, np.sum(w * t, axis=-1, keepdims=True) / whole, np.sum(w * y, axis=-1, keepdims=True) / whole


def _plain(value: Any) -> float | NDArray[np.float64]:
    return float(value) if np.ndim(value) == 0 else value


def trend(days: Sequence[float], values: Sequence[float], doubts: ArrayLike = 0.0) -> Trend:
    """The straight line through readings of one thing; InputError with fewer than two, or all on one day."""
    return trend_steps(Working(), days, values, doubts)


def trend_steps(work: Working, days: Sequence[float], values: Sequence[float], doubts: ArrayLike) -> Trend:
    """The same, its slope and doubt kept as steps of a working."""
    if len(set(days)) < 2:
        raise InputError("visits", len(days), "A line needs visits on two days at least: read again on another day.")
    inputs: dict[str, Any] = {"days": tuple(days), "values": tuple(values), "doubts": doubts}
    _, y, w, middle, level = _centred(**inputs)
    widened = float(birge_ratio(**inputs))
    return Trend(
        work.step(slope, **inputs),
        work.step(slope_doubt, **inputs),
        float(middle[0]),
        float(level[0]),
        widened / float(np.sqrt(np.sum(w))),
        widened,
        len(y),
    )
