"""Calcium that stays dissolved in contact with calcite when soda ash is added, and why it is not what Ksp alone says.

The textbook rule divides Ksp by the carbonate added. Three things keep more calcium in solution: carbonate turns
partly into bicarbonate (hydrolysis), ions are less active than their concentration (activity), and calcium and
carbonate also stay together as a dissolved pair, in an amount that no soda ash lowers (ion pairs). Plants end far
above even the full equilibrium; that floor of practice is a number apart.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from core.chemistry.columns import Columns, columns, find, with_nan
from core.chemistry.reactions import DATA_SETS, SOLIDS
from core.chemistry.saturation import contact_with
from core.chemistry.solution import Solution, Value, number, within
from core.chemistry.speciation import NO_WATER, Speciation
from core.chemistry.thermodynamics import check_data, log_k
from core.constants import MOLAR_MASS_CACO3
from core.errors import InputError
from core.working import formula

Floats = NDArray[np.float64]

MOST_SODA_ASH = 3.0  # mol/kg; more does not dissolve at room temperature
PRACTICAL_FLOOR = 30.0 / MOLAR_MASS_CACO3 / 1000.0  # mol/kg: 30 mg/L as CaCO3 that plants are left with [LIME-COURSE]
# Two published families of activity models differ four to five times in strong soda, and no measurement decides:
# 0.7 to 9 µmol/kg holds both, for 0.01 to 0.5 mol/kg of soda ash at 5 to 60 °C.
DISPUTED = (0.7e-6, 9e-6)  # mol/kg
DISPUTED_SODA = (0.01, 0.5)  # mol/kg
DISPUTED_TEMP = (5.0, 60.0)  # °C


@formula(
    "Calcium by the product rule",
    "Ca = Ksp / CO₃",
    unit="mol/kg",
    takes={"solubility_product": "(mol/kg)²", "carbonate": "mol/kg"},
    source="definition",
    validity="never in real water: it lacks hydrolysis, activity and ion pairs",
)
def product_rule(solubility_product: ArrayLike, carbonate: ArrayLike) -> Value:
    """Calcium left if all soda ash were free carbonate and no calcite had dissolved: Ksp over carbonate. [mol/kg]

    Infinite without carbonate.
    """
    with np.errstate(divide="ignore"):
        value = np.asarray(solubility_product, dtype=float) / np.asarray(carbonate, dtype=float)
    return float(value) if np.ndim(value) == 0 else value


@formula(
    "Calcium by Ksp alone",
    "Ca × (Ca + CO₃) = Ksp",
    unit="mol/kg",
    takes={"solubility_product": "(mol/kg)²", "carbonate": "mol/kg"},
    source="definition",
    validity="a textbook exercise: it lacks hydrolysis, activity and ion pairs",
)
def ideal_calcium(solubility_product: ArrayLike, carbonate: ArrayLike) -> Value:
    """Calcium left by the solubility product alone, calcite's own carbonate counted; √Ksp without soda ash. [mol/kg]"""
    ksp = np.asarray(solubility_product, dtype=float)
    added = np.asarray(carbonate, dtype=float)
    value = 2.0 * ksp / (added + np.sqrt(added * added + 4.0 * ksp))
    return float(value) if np.ndim(value) == 0 else value


@dataclass(frozen=True, slots=True)
class ResidualCalcium:
    """Calcium left in contact with a solid in a soda ash solution, from the plainest to the fullest view. [mol/kg]

    product_rule: Ksp over carbonate. ideal: Ksp alone, the quadratic. hydrolysed: also carbonate turning into
    bicarbonate. with_activity: also activity coefficients. equilibrium: also ion pairs, which is the answer.
    band: what the published models allow, low and high. practical_floor: what plants are left with, far above
    equilibrium. ph, ionic_strength and ion_pair (the dissolved CaCO3 pair) belong to the equilibrium.
    """

    product_rule: Value
    ideal: Value
    hydrolysed: Value
    with_activity: Value
    equilibrium: Value
    band: tuple[Value, Value]
    practical_floor: float
    ph: Value
    ionic_strength: Value
    ion_pair: Value
    data: str
    why: str | NDArray[np.object_]

    @property
    def contributions(self) -> Mapping[str, Value]:
        """What each reason adds to the ideal value; they sum to equilibrium minus ideal. [mol/kg]"""
        return {
            "hydrolysis": self.hydrolysed - self.ideal,
            "activity": self.with_activity - self.hydrolysed,
            "ion pairs": self.equilibrium - self.with_activity,
        }

    @property
    def ratio(self) -> Value:
        """How many times the ideal value the equilibrium is. [-]"""
        return self.equilibrium / self.ideal


def residual_calcium(
    temp_c: ArrayLike = 25.0,
    soda_ash: ArrayLike = 0.0,
    *,
    solid: str = "calcite",
    data: str = "pb1982",
) -> ResidualCalcium:
    """Calcium left in a soda ash solution in contact with calcite, closed to gas. [mol/kg]

    temp_c in °C, 0 to 90; soda_ash in mol/kg water, 0 to 3, trustworthy to about 0.5; arrays broadcast. For other
    waters than soda ash in pure water use `add` and `to_saturation`.
    """
    check_data(data)
    if solid not in SOLIDS[data] or SOLIDS[data][solid].of != "Ca" or solid == "gypsum":
        raise InputError("solid", solid, f"{solid!r} is not a form of CaCO3; accepted: calcite, aragonite, vaterite.")
    temp = within("temp_c", number("temp_c", temp_c), 0.0, 100.0, "°C")
    soda = within("soda_ash", number("soda_ash", soda_ash), 0.0, MOST_SODA_ASH, "mol/kg")
    made = _soda_solution(temp, soda, data)
    contact = (contact_with(made, solid),)
    full = Speciation(made, find(made, contacts=contact), NO_WATER)
    calcium = made.out(_calcium(made, solid))
    active = made.out(_calcium(made, solid, pairs=False))
    ksp = 10.0 ** np.asarray(log_k(solid, temp, data=data))
    return ResidualCalcium(
        product_rule=product_rule(ksp, soda),
        ideal=ideal_calcium(ksp, soda),
        hydrolysed=made.out(_calcium(made, solid, pairs=False, activity=False)),
        with_activity=active,
        equilibrium=calcium,
        band=_band(temp, soda, solid, calcium),
        practical_floor=PRACTICAL_FLOOR,
        ph=full.ph,
        ionic_strength=full.ionic_strength,
        ion_pair=full.molalities["CaCO3"],
        data=data,
        why=full.why,
    )


def _soda_solution(temp: Value, soda: Value, data: str) -> Columns:
    milli = 1000.0 * soda
    return columns(Solution(temp_c=temp, na=2.0 * milli, dic=milli, alkalinity=2.0 * milli, data=data))


def _calcium(made: Columns, solid: str, *, pairs: bool = True, activity: bool = True) -> Floats:
    """Total calcium in contact with the solid, by a model that leaves out what it is told to. [mol/kg]"""
    state = find(made, contacts=(contact_with(made, solid),), pairs=pairs, activity=activity)
    model = made.model(pairs)
    rows = [i for i, s in enumerate(model.species) if s.of == "Ca"]
    return with_nan(made, state.molality[rows].sum(axis=0))


def _band(temp: Value, soda: Value, solid: str, own: Value) -> tuple[Value, Value]:
    """Low and high of the data sets with their pairs; down to no pair at all, or as published where that is known."""
    sets = [_soda_solution(temp, soda, data) for data in DATA_SETS]
    paired = np.array([own, *(made.out(_calcium(made, solid)) for made in sets)])
    bare = np.array([made.out(_calcium(made, solid, pairs=False)) for made in sets])
    known = (np.asarray(soda) >= DISPUTED_SODA[0]) & (np.asarray(soda) <= DISPUTED_SODA[1])
    known = known & (np.asarray(temp) >= DISPUTED_TEMP[0]) & (np.asarray(temp) <= DISPUTED_TEMP[1])
    low = np.minimum(paired.min(axis=0), np.where(known, DISPUTED[0], bare.min(axis=0)))
    high = np.maximum(paired.max(axis=0), np.where(known, DISPUTED[1], 0.0))
    return (float(low), float(high)) if np.ndim(low) == 0 else (low, high)
