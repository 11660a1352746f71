"""A whole cycle of a softener column with its figures: capacity, leakage, salt efficiency, waste.

    run_column(water, salt_dose [g/L], end_point=0.171 [mmol/L], ...) -> ColumnRun
        one case per dose, end point and water, broadcast together; scalars in, floats out
    ColumnRun.breakthrough(fraction) -> BV at which the effluent reaches this fraction of the feed's hardness
    ColumnRun.hardness_at(bed_volumes) -> mmol/L

    capacity_roads(water, salt_doses, table=None) -> Roads      trade's table, equilibrium ceiling, ceiling in practice

The figures are an equilibrium ceiling; `resin.practice_capacity` leads from there to what beds do.
"""

from __future__ import annotations

from copy import deepcopy
from dataclasses import dataclass, replace
from typing import Any, NamedTuple

import numpy as np
from numpy.typing import ArrayLike

from core.constants import ATOMIC_WEIGHTS, GRAIN, MOLAR_MASS_CACO3, US_GALLON
from core.treatment.column import (
    CELLS,
    STANDARD_RESIN,
    STEPS,
    Column,
    Curve,
    FeedWater,
    Resin,
    Waste,
    exhausted,
    regenerate,
    salt_of,
    serve,
)
from core.treatment.exchange import Floats
from core.treatment.resin import CapacityTable, practice_capacity, trade_capacity

_EXHAUSTED = 0.95  # of the feed's hardness
_MOST_STRETCHES = 4
END_POINT = GRAIN / MOLAR_MASS_CACO3 / US_GALLON  # mmol/L, one grain per gallon [NSF44]


@dataclass(frozen=True, slots=True)
class ColumnRun:
    """One regeneration and the service run after it; arrays have the shape of the cases (none: plain
    floats).
    """

    salt_dose: Any  # g/L
    bed_volumes: Any  # BV of softened water to the end point; 0 if the first water is beyond it
    capacity: Any  # eq/L taken up in service to the end point
    efficiency: Any  # mol/kg of salt
    leakage: Any  # mmol/L, mean of the service run
    leakage_least: Any  # mmol/L, the lowest
    waste_volume: Any  # BV of brine and rinse
    waste_hardness: Any  # mmol/L, mean
    waste_hardness_peak: Any  # mmol/L
    waste_chloride: Any  # mg/L, mean
    feed_hardness: Any  # mmol/L
    resin: Floats  # equivalent fractions after the regeneration, axes (case..., cell, ion)
    volume: Floats  # BV fed, axes (case..., step)
    hardness: Floats  # mmol/L that leaves, axes (case..., step)
    sodium: Floats  # mmol/L that leaves, axes (case..., step)
    balance: float  # largest share of an ion lost or made on the way; rounding only

    def breakthrough(self, fraction: float) -> Any:
        """Bed volumes at which the effluent reaches this fraction of the feed's hardness; NaN if it never
        does.
        """
        shape = self.volume.shape[:-1]
        level = fraction * np.broadcast_to(np.asarray(self.feed_hardness, dtype=float), shape).reshape(-1)
        return _shaped(_crossing(_rows(self.volume), _rows(self.hardness), level, after_least=True), shape)

    def hardness_at(self, bed_volumes: float) -> Any:
        """Hardness that leaves after so many bed volumes; NaN beyond the run. [mmol/L]"""
        pairs = zip(_rows(self.volume), _rows(self.hardness), strict=True)
        found = [np.interp(bed_volumes, volume, hardness, right=np.nan) for volume, hardness in pairs]
        return _shaped(np.array(found), self.volume.shape[:-1])


def run_column(
    water: FeedWater,
    salt_dose: ArrayLike,
    *,
    end_point: ArrayLike = END_POINT,
    start: Column | None = None,
    cells: int = CELLS,
    steps: int = STEPS,
    resin: Resin = STANDARD_RESIN,
    **regeneration: Any,
) -> ColumnRun:
    """Regenerate a column with so much salt [g/L of bed], then soften water to an end point [mmol/L].

    It starts from resin exhausted by the water, unless a start is given (as many cases). regeneration: the
    keywords of `column.regenerate`. A case with a number missing, no salt or no hardness gives NaN for that
    case alone.
    """
    ions = (water.calcium, water.magnesium, water.sodium, water.potassium, water.chloride)
    shape = np.broadcast_shapes(*map(np.shape, (salt_dose, end_point, *ions)))
    cases = [
        np.broadcast_to(np.asarray(value, dtype=float), shape).reshape(-1) for value in (salt_dose, end_point, *ions)
    ]
    known = np.isfinite(sum(cases)) & (cases[0] > 0.0) & (cases[2] + cases[3] > 0.0)
    # A case without an answer still takes its place in the arrays; a harmless one keeps the others
    # undisturbed.
    dose, ends, *flat = (np.where(known, case, 1.0) for case in cases)
    pairing = water.pairing
    if pairing is not None:
        pairing = np.where(known, np.broadcast_to(pairing, (*pairing.shape[:2], len(known))), 1.0)
    feed = replace(
        water,
        pairing=pairing,
        **dict(zip(("calcium", "magnesium", "sodium", "potassium", "chloride"), flat, strict=True)),
    )
    column = deepcopy(start) or exhausted(feed, cells=cells, resin=resin)
    before = _contents(column)
    waste = regenerate(column, feed, dose, **regeneration)
    fractions = column.fractions
    curve = _to_exhaustion(column, feed, resin, steps)
    after = _contents(column)
    fed = waste.fed + feed.equivalents() * curve.volume[:, -1]
    left = waste.ions + (curve.ions * curve.volume[:, :1]).sum(-1)
    lost = np.abs(before + fed - left - after).max() / np.abs(before + fed).max()
    return _report(_Cycle(feed, dose, ends, waste, fractions, curve), known, shape, float(lost), regeneration)


class Roads(NamedTuple):
    """The two roads to capacity side by side, one element a salt dose."""

    salt_dose: Floats  # g/L
    trade: Floats  # eq/L by the trade's or the user's table, NaN outside it
    ceiling: Floats  # eq/L by the column at equilibrium
    practice: Floats  # eq/L, the ceiling times the practice factor
    run: ColumnRun


def capacity_roads(
    water: FeedWater, salt_doses: ArrayLike, table: CapacityTable | None = None, **settings: Any
) -> Roads:
    """Capacity against salt dose [g/L] on both roads; settings are those of `run_column`."""
    run = run_column(water, salt_doses, **settings)
    doses = np.asarray(salt_doses, dtype=float)
    return Roads(doses, trade_capacity(doses, table), run.capacity, practice_capacity(run.capacity), run)


@dataclass(frozen=True, slots=True)
class _Cycle:
    """What one cycle left behind, cases in a row."""

    water: FeedWater
    dose: Floats
    ends: Floats
    waste: Waste
    resin: Floats
    curve: Curve


def _contents(column: Column) -> Floats:
    """Ions in the column, resin and voids together. [eq per L of bed, axes (ion, case)]"""
    return (column.resin + column.pore).mean(-1)


def _to_exhaustion(column: Column, water: FeedWater, resin: Resin, steps: int) -> Curve:
    """Serve until what leaves is as hard as what comes in, or the patience for very salty water is at its end.

    Each stretch is a quarter more than the free capacity can hold, which is enough wherever the front is sharp.
    """
    feed = water.equivalents()
    full = exhausted(water, cells=1, resin=resin)
    free = full.resin[:2].sum(0)[:, 0] - column.resin[:2].sum(0).mean(-1)
    stretch = 1.25 * np.maximum(free, 0.02) / (feed[0] + feed[1])
    curves = []
    for _ in range(_MOST_STRETCHES):
        curves.append(serve(column, water, stretch, steps))
        if np.all(curves[-1].hardness[:, -1] > _EXHAUSTED * 500.0 * (feed[0] + feed[1])):
            break
    volume = [curve.volume + number * stretch[:, None] for number, curve in enumerate(curves)]
    return Curve(np.concatenate(volume, axis=1), np.concatenate([curve.ions for curve in curves], axis=2))


def _report(
    cycle: _Cycle, known: Floats, shape: tuple[int, ...], lost: float, regeneration: dict[str, Any]
) -> ColumnRun:
    water, waste, curve = cycle.water, cycle.waste, cycle.curve
    feed_hardness = np.asarray(water.calcium + water.magnesium)
    end = _crossing(curve.volume, curve.hardness, cycle.ends)
    passed = np.diff(np.minimum(curve.volume, end[:, None]), axis=1, prepend=0.0)
    leaked = (passed * curve.hardness).sum(1)
    taken = (feed_hardness * end - leaked) / 1000.0  # mol/L
    _, molar_mass = salt_of(regeneration.get("salt", "NaCl"))
    chloride = cycle.dose / molar_mass + water.chloride / 1000.0 * (waste.volume - waste.brine)  # mol/L of bed
    with np.errstate(invalid="ignore", divide="ignore"):
        leakage = np.where(end > 0.0, leaked / end, curve.hardness[:, 0])

    def give(values: Floats) -> Any:
        blank = known.reshape(known.shape + (1,) * (values.ndim - 1))
        return _shaped(np.where(blank, values, np.nan), shape)

    return ColumnRun(
        salt_dose=give(cycle.dose),
        bed_volumes=give(end),
        capacity=give(2.0 * taken),
        efficiency=give(1000.0 * taken / cycle.dose),
        leakage=give(leakage),
        leakage_least=give(curve.hardness.min(1)),
        waste_volume=give(waste.volume),
        waste_hardness=give(500.0 * waste.ions[:2].sum(0) / waste.volume),
        waste_hardness_peak=give(waste.peak),
        waste_chloride=give(1000.0 * ATOMIC_WEIGHTS["Cl"] * chloride / waste.volume),
        feed_hardness=give(feed_hardness),
        resin=give(np.moveaxis(cycle.resin, 0, -1)),
        volume=give(curve.volume),
        hardness=give(curve.hardness),
        sodium=give(1000.0 * curve.ions[2]),
        balance=lost,
    )


def _rows(values: Floats) -> Floats:
    return values.reshape(-1, values.shape[-1])


def _shaped(values: Floats, shape: tuple[int, ...]) -> Any:
    shaped = values.reshape(shape + values.shape[1:])
    return float(shaped) if shaped.ndim == 0 else shaped


def _crossing(volume: Floats, hardness: Floats, level: Floats, *, after_least: bool = False) -> Floats:
    """Volume at which each row rises above its level, by straight lines; NaN where it never does."""
    above = hardness > level[:, None]
    if after_least:
        above &= np.arange(hardness.shape[1]) > hardness.argmin(1)[:, None]
    first, rows = above.argmax(1), np.arange(len(level))
    before = np.maximum(first - 1, 0)
    low, high = hardness[rows, before], hardness[rows, first]
    share = np.clip((level - low) / np.where(high > low, high - low, 1.0), 0.0, 1.0)
    at = volume[rows, before] + share * (volume[rows, first] - volume[rows, before])
    return np.where(above.any(1), np.where(first == 0, 0.0, at), np.nan)
