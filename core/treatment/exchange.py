"""Ion exchange at equilibrium: calcium, magnesium, sodium and potassium between water and sulfonic resin.

    exchange_constants(capacity=2.0 [eq/L]) -> array of 4  Gaines-Thomas, molal, NaX = 1, in the order of IONS
    equilibrate(totals, capacity, water, constants, log_x) -> Equilibrium

The law [GAINES-THOMAS53]: Ca²⁺ + 2 NaX = CaX₂ + 2 Na⁺ with K = (y_Ca / y_Na²) · (a_Na² / a_Ca), y the
equivalent fractions on the resin. The activity coefficient of an ion on the resin is taken equal to that in
the water, so both cancel and what counts is the free ion's molality; ions bound in pairs (CaSO₄, CaHCO₃⁺)
enter as a factor on the constants. The selectivities [BONNER-SMITH57] are ratios on the equivalent scale; K
for the molal scale of a two-valent ion is 2 Q S_Ca / S_Na, Q the capacity in eq per litre of bed.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike, NDArray

from core.data import number, read_table

Floats = NDArray[np.float64]

IONS = ("Ca", "Mg", "Na", "K")
CHARGE = np.array([2.0, 2.0, 1.0, 1.0])
RESIN_CAPACITY = 2.0  # eq/L, new 8 % DVB gel resin in sodium form, settled bed: 1.9 to 2.0; from memory
_CLOSE = 1e-4  # the error is cubed at each step: the one after this is beyond the last bits
_MOST_STEPS = 60


class Equilibrium(NamedTuple):
    """Where the ions are: on the resin, in the water, and the logarithm the next guess starts from."""

    resin: Floats  # eq, as totals
    molality: Floats  # mol/kg water
    log_x: Floats  # ln of the activity of the bare exchanger, one per cell


def selectivity() -> dict[str, float]:
    """Selectivity of sulfonic resin for each ion, lithium = 1 [BONNER-SMITH57]."""
    return {row["ion"]: number(row, "relative_to_li") for row in read_table("selectivity").rows}


def exchange_constants(capacity: float = RESIN_CAPACITY) -> Floats:
    """Gaines-Thomas constants of Ca, Mg, Na and K on the molal scale, NaX = 1. [kg/mol for Ca and Mg]"""
    ratios = selectivity()
    relative = np.array([ratios[ion] / ratios["Na"] for ion in IONS])
    return np.where(CHARGE == 2.0, 2.0 * capacity * relative, relative)


def equilibrate(totals: Floats, capacity: ArrayLike, water: ArrayLike, constants: Floats, log_x: Floats) -> Equilibrium:
    """Share the ions of each cell between its resin and its water.

    totals (4, ...) in eq, first axis in the order of IONS; capacity of the resin [eq]; water [kg];
    constants (4, ...) as `exchange_constants`; log_x the first guess, shape (...). Any amount basis will do
    if it is the same for all. The amounts of each ion are kept exactly; the fractions on the resin add up
    to one within rounding.
    """
    charge = CHARGE.reshape(4, *([1] * (totals.ndim - 1)))
    water = charge * water
    in_water = water / constants
    share = totals / capacity
    for _ in range(_MOST_STEPS):
        stays = _stays(capacity, in_water, log_x)
        fractions = share * (1.0 - stays)
        filled = fractions.sum(0)
        # Halley's step on ln(sum of fractions) against ln(x): nearly straight, so a poor guess does no harm.
        fractions *= stays
        slope = (2.0 * (fractions[0] + fractions[1]) + fractions[2] + fractions[3]) / filled
        stays += stays - 1.0
        fractions *= stays
        bend = (4.0 * (fractions[0] + fractions[1]) + fractions[2] + fractions[3]) / filled - slope * slope
        error = np.log(filled)
        step = error * slope / (slope * slope - 0.5 * error * bend)
        np.minimum(np.maximum(step, -3.0, out=step), 3.0, out=step)
        log_x = log_x - step
        if max(step.max(initial=0.0), -step.min(initial=0.0)) < _CLOSE:
            break
    stays = _stays(capacity, in_water, log_x)
    stays *= totals  # what the water keeps, eq
    return Equilibrium(totals - stays, stays / water, log_x)


def _stays(capacity: ArrayLike, in_water: Floats, log_x: Floats) -> Floats:
    """Part of each ion that stays in the water for a trial ln(x)."""
    on_resin = np.empty((4, *np.shape(log_x)))
    on_resin[2:] = capacity * np.exp(log_x)
    on_resin[:2] = on_resin[2] * on_resin[2] / capacity
    on_resin += in_water
    return np.divide(in_water, on_resin, out=on_resin)
