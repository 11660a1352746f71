"""Chemicals added to a water, per mole of the pure chemical: what each puts in, and how the water answers."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from types import MappingProxyType

import numpy as np
from numpy.typing import ArrayLike

from core.chemistry.columns import conserved, resolved
from core.chemistry.solution import HIGHEST, TOTALS, Solution, Value, common_shape, number, within
from core.chemistry.thermodynamics import check_data
from core.constants import molar_mass
from core.errors import InputError


@dataclass(frozen=True, slots=True)
class Reagent:
    """A pure chemical: its formula, its molar mass in g/mol, and what one mole of it adds to a water. [mol, eq]"""

    name: str
    formula: str
    molar_mass: float
    adds: Mapping[str, int]


def _reagent(name: str, formula: str, atoms: Mapping[str, int], **adds: int) -> tuple[str, Reagent]:
    return name, Reagent(name, formula, molar_mass(**atoms), MappingProxyType(adds))


REAGENTS: Mapping[str, Reagent] = MappingProxyType(
    dict(
        (
            _reagent("soda_ash", "Na2CO3", {"Na": 2, "C": 1, "O": 3}, na=2, dic=1, alkalinity=2),
            _reagent("lime", "Ca(OH)2", {"Ca": 1, "O": 2, "H": 2}, ca=1, alkalinity=2),
            _reagent("quicklime", "CaO", {"Ca": 1, "O": 1}, ca=1, alkalinity=2),
            _reagent("caustic", "NaOH", {"Na": 1, "O": 1, "H": 1}, na=1, alkalinity=1),
            _reagent("co2", "CO2", {"C": 1, "O": 2}, dic=1),
            _reagent("hcl", "HCl", {"H": 1, "Cl": 1}, cl=1, alkalinity=-1),
            _reagent("h2so4", "H2SO4", {"H": 2, "S": 1, "O": 4}, so4=1, alkalinity=-2),
            _reagent("gypsum", "CaSO4·2H2O", {"Ca": 1, "S": 1, "O": 6, "H": 4}, ca=1, so4=1),
            _reagent("calcium_chloride", "CaCl2", {"Ca": 1, "Cl": 2}, ca=1, cl=2),
            _reagent("bicarbonate", "NaHCO3", {"Na": 1, "H": 1, "C": 1, "O": 3}, na=1, dic=1, alkalinity=1),
        )
    )
)


def add(solution: Solution, *, data: str | None = None, **amounts: ArrayLike) -> Solution:
    """A water after chemicals are dissolved in it, closed to gas and before anything precipitates.

    Amounts in mmol of pure chemical per kg water, zero or more, numbers or arrays: soda_ash, lime (hydrated),
    quicklime, caustic, co2, hcl, h2so4, gypsum, calcium_chloride, bicarbonate (of sodium). What then falls out is
    for `to_saturation`. The heat of dissolving is left out.
    """
    chosen = check_data(data) if data else solution.data
    alkalinity, dic, why = conserved(solution, chosen)
    fields: dict[str, Value] = {name: getattr(solution, name) for name in TOTALS}
    fields.update(alkalinity=alkalinity, dic=dic)
    for name, amount in amounts.items():
        if name not in REAGENTS:
            raise InputError(name, amount, f"{name!r} is not a chemical known here; accepted: {', '.join(REAGENTS)}.")
        dose = within(name, number(name, amount), 0.0, HIGHEST, "mmol/kg")
        common_shape(np.empty(solution.shape), *fields.values(), dose)
        for field, moles in REAGENTS[name].adds.items():
            fields[field] = fields[field] + moles * dose
    return resolved(Solution(temp_c=solution.temp_c, data=chosen, why=why, **fields))
