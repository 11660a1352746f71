"""The chemistry of a water: what is dissolved in it, what it throws out, what that does.

A `Solution` is a water per kilogram of water. `speciate` says what it really is, `at_temperature` warms it,
`to_saturation` lets it settle with a solid, `add` doses it, `mix` blends it. Every field is a number or an array;
arrays broadcast, a single water gives plain floats, NaN stays where it was. Every call takes `data`: "pb1982"
(default) or "usgs2024", and its result names the one used.
"""

from core.chemistry.field import FieldWater, complete
from core.chemistry.mixing import mix
from core.chemistry.reagents import REAGENTS, Reagent, add
from core.chemistry.residual import ResidualCalcium, residual_calcium
from core.chemistry.saturation import (
    Saturated,
    dissolution_capacity,
    ph_at_saturation,
    precipitation_potential,
    to_saturation,
)
from core.chemistry.scale import ScalePotential, scale_per_year, scale_potential
from core.chemistry.solution import Solution
from core.chemistry.speciation import Speciation, at_temperature, speciate
from core.chemistry.stability import Stability, stability

__all__ = [
    "REAGENTS",
    "FieldWater",
    "Reagent",
    "ResidualCalcium",
    "Saturated",
    "ScalePotential",
    "Solution",
    "Speciation",
    "Stability",
    "add",
    "at_temperature",
    "complete",
    "dissolution_capacity",
    "mix",
    "ph_at_saturation",
    "precipitation_potential",
    "residual_calcium",
    "scale_per_year",
    "scale_potential",
    "speciate",
    "stability",
    "to_saturation",
]
