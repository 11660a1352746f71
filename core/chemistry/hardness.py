"""Hardness from its ions, and how alkalinity divides it.

    hardness_of_ions(calcium, magnesium [mg/L]) -> mg/L CaCO3          full factors
    hardness_SM2340B(calcium, magnesium [mg/L]) -> mg/L CaCO3          the rounded factors of the method
    hardness_in_mmol(calcium, magnesium [mg/L]) -> mmol/L
    carbonate_hardness(hardness, alkalinity), non_carbonate_hardness(..), sodium_alkalinity(..) -> mg/L CaCO3
    assign_alkalinity(calcium, magnesium, alkalinity [mg/L CaCO3]) -> Assignment     calcium first
    hydroxide_alkalinity(p, t), carbonate_alkalinity(p, t), bicarbonate_alkalinity(p, t) -> mg/L CaCO3
    titration_split(p, t) -> TitrationSplit
    bicarbonate_of_acid_capacity(acid_capacity [mmol/L]) -> mmol/L

Everything broadcasts: floats in, float out; arrays in, array out; NaN travels. Hardness and alkalinity may be
given in any unit of equivalents as long as it is the same for both; the cards name mg/L CaCO3.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike, NDArray

from core.constants import ATOMIC_WEIGHTS, MOLAR_MASS_CACO3
from core.working import formula

Number = float | NDArray[np.float64]

CACO3_PER_CALCIUM = MOLAR_MASS_CACO3 / ATOMIC_WEIGHTS["Ca"]  # mg CaCO3 per mg Ca [IUPAC21]
CACO3_PER_MAGNESIUM = MOLAR_MASS_CACO3 / ATOMIC_WEIGHTS["Mg"]  # mg CaCO3 per mg Mg [IUPAC21]
END_POINT_CO2 = 0.05  # mmol/L of K_S4.3 that the CO2 at the end point uses up [DIN38409-7]

_PAIR = {"hardness": "mg/L CaCO3", "alkalinity": "mg/L CaCO3"}
_TITRATION = {"p": "mg/L CaCO3", "t": "mg/L CaCO3"}
_SPLIT_RANGE = "Hydroxide, carbonate and bicarbonate alone; NaN where P is above T or either is below zero."


class Assignment(NamedTuple):
    """Hardness by what holds it in solution; mg/L CaCO3 each."""

    carbonate_calcium: Number
    carbonate_magnesium: Number
    non_carbonate_calcium: Number
    non_carbonate_magnesium: Number


class TitrationSplit(NamedTuple):
    """Alkalinity by its ions, from the titration to pH 8.3 and to the end; mg/L CaCO3 each."""

    hydroxide: Number
    carbonate: Number
    bicarbonate: Number


@formula(
    "Total hardness",
    "hardness = 100.086 × (calcium / 40.078 + magnesium / 24.305)",
    unit="mg/L CaCO3",
    takes={"calcium": "mg/L Ca", "magnesium": "mg/L Mg"},
    source="IUPAC21",
    validity="Calcium and magnesium only; a titration also finds iron, zinc, strontium and the like.",
)
def hardness_of_ions(calcium: ArrayLike, magnesium: ArrayLike) -> Number:
    """Total hardness from calcium and magnesium as their own mass, full factors. [mg/L CaCO3]"""
    return _out(CACO3_PER_CALCIUM * _in(calcium) + CACO3_PER_MAGNESIUM * _in(magnesium))


@formula(
    "Total hardness",
    "hardness = 2.497 × calcium + 4.118 × magnesium",
    unit="mg/L CaCO3",
    takes={"calcium": "mg/L Ca", "magnesium": "mg/L Mg"},
    source="SM2340B",
    validity="The factors of the method, rounded; the full ones differ by up to 0.01 %.",
)
def hardness_SM2340B(calcium: ArrayLike, magnesium: ArrayLike) -> Number:
    """Total hardness by the rounded factors of [SM2340B], as a laboratory prints it. [mg/L CaCO3]"""
    return _out(2.497 * _in(calcium) + 4.118 * _in(magnesium))


@formula(
    "Total hardness",
    "hardness = calcium / 40.078 + magnesium / 24.305",
    unit="mmol/L",
    takes={"calcium": "mg/L Ca", "magnesium": "mg/L Mg"},
    source="IUPAC21",
)
def hardness_in_mmol(calcium: ArrayLike, magnesium: ArrayLike) -> Number:
    """Total hardness from calcium and magnesium as their own mass. [mmol/L]"""
    return _out(_in(calcium) / ATOMIC_WEIGHTS["Ca"] + _in(magnesium) / ATOMIC_WEIGHTS["Mg"])


@formula(
    "Carbonate hardness",
    "carbonate hardness = the smaller of hardness and alkalinity",
    unit="mg/L CaCO3",
    takes=_PAIR,
    source="definition",
)
def carbonate_hardness(hardness: ArrayLike, alkalinity: ArrayLike) -> Number:
    """Part of the hardness that alkalinity balances, and that heat or lime can bring down. [mg/L CaCO3]"""
    return _out(np.minimum(_in(hardness), _in(alkalinity)))


@formula(
    "Non-carbonate hardness",
    "non-carbonate hardness = hardness − alkalinity, or 0",
    unit="mg/L CaCO3",
    takes=_PAIR,
    source="definition",
)
def non_carbonate_hardness(hardness: ArrayLike, alkalinity: ArrayLike) -> Number:
    """Part of the hardness held by sulfate, chloride and nitrate; never below zero. [mg/L CaCO3]"""
    return _out(np.maximum(_in(hardness) - _in(alkalinity), 0.0))


@formula(
    "Sodium alkalinity",
    "sodium alkalinity = alkalinity − hardness, or 0",
    unit="mg/L CaCO3",
    takes=_PAIR,
    source="definition",
)
def sodium_alkalinity(hardness: ArrayLike, alkalinity: ArrayLike) -> Number:
    """Alkalinity beyond the hardness, held by sodium or potassium; never below zero. [mg/L CaCO3]"""
    return _out(np.maximum(_in(alkalinity) - _in(hardness), 0.0))


def assign_alkalinity(calcium: ArrayLike, magnesium: ArrayLike, alkalinity: ArrayLike) -> Assignment:
    """Carbonate and non-carbonate hardness of calcium and of magnesium. [mg/L CaCO3]

    Calcium hardness, magnesium hardness and alkalinity, all as CaCO3. Alkalinity is booked to calcium first:
    the convention of lime-soda books (common practice, no source), not a statement about ions in solution.
    """
    ca, mg, alk = _in(calcium), _in(magnesium), _in(alkalinity)
    with_calcium = np.minimum(ca, alk)
    with_magnesium = np.minimum(mg, alk - with_calcium)
    parts = (with_calcium, with_magnesium, ca - with_calcium, mg - with_magnesium)
    return Assignment(*map(_out, np.broadcast_arrays(*parts)))


@formula(
    "Hydroxide alkalinity",
    "hydroxide = 2 P − T, or 0",
    unit="mg/L CaCO3",
    takes=_TITRATION,
    source="SM2320B",
    validity=_SPLIT_RANGE,
)
def hydroxide_alkalinity(p: ArrayLike, t: ArrayLike) -> Number:
    """Hydroxide share of the alkalinity, from P (to pH 8.3) and T (total), after [SM2320B]. [mg/L CaCO3]"""
    return _split_out(p, t, np.maximum(2.0 * _in(p) - _in(t), 0.0))


@formula(
    "Carbonate alkalinity",
    "carbonate = 2 × the smaller of P and T − P",
    unit="mg/L CaCO3",
    takes=_TITRATION,
    source="SM2320B",
    validity=_SPLIT_RANGE,
)
def carbonate_alkalinity(p: ArrayLike, t: ArrayLike) -> Number:
    """Carbonate share of the alkalinity, from P (to pH 8.3) and T (total), after [SM2320B]. [mg/L CaCO3]"""
    return _split_out(p, t, 2.0 * np.minimum(_in(p), _in(t) - _in(p)))


@formula(
    "Bicarbonate alkalinity",
    "bicarbonate = T − 2 P, or 0",
    unit="mg/L CaCO3",
    takes=_TITRATION,
    source="SM2320B",
    validity=_SPLIT_RANGE,
)
def bicarbonate_alkalinity(p: ArrayLike, t: ArrayLike) -> Number:
    """Bicarbonate share of the alkalinity, from P (to pH 8.3) and T (total), after [SM2320B]. [mg/L CaCO3]"""
    return _split_out(p, t, np.maximum(_in(t) - 2.0 * _in(p), 0.0))


def titration_split(p: ArrayLike, t: ArrayLike) -> TitrationSplit:
    """Hydroxide, carbonate and bicarbonate from both end points of a titration [SM2320B]. [mg/L CaCO3]"""
    return TitrationSplit(hydroxide_alkalinity(p, t), carbonate_alkalinity(p, t), bicarbonate_alkalinity(p, t))


@formula(
    "Bicarbonate",
    "bicarbonate = K_S4.3 − 0.05, or 0",
    unit="mmol/L",
    takes={"acid_capacity": "mmol/L"},
    source="DIN38409-7",
    validity="pH 6 to 8.2, where carbonate and hydroxide do not count.",
)
def bicarbonate_of_acid_capacity(acid_capacity: ArrayLike) -> Number:
    """Bicarbonate from the acid capacity to pH 4.3, less what the CO2 at the end point uses. [mmol/L]"""
    return _out(np.maximum(_in(acid_capacity) - END_POINT_CO2, 0.0))


def _in(value: ArrayLike) -> NDArray[np.float64]:
    return np.asarray(value, dtype=float)


def _out(value: NDArray[np.float64]) -> Number:
    return value if np.ndim(value) else float(value)


def _split_out(p: ArrayLike, t: ArrayLike, value: NDArray[np.float64]) -> Number:
    """A part of the titration; NaN where the two end points cannot belong to one sample."""
    possible = (_in(p) >= 0.0) & (_in(t) >= _in(p))
    return _out(np.where(possible, value, np.nan))
