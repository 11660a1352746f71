"""The chemistry of a water: what is dissolved in it, what it throws out, what that does.

A `Solution` is a water per kilogram of water. `speciate` says what it really is, `at_temperature` warms it,
`to_saturation` lets it settle with a solid, `add` doses it, `mix` blends it. Every field is a number or an array;
arrays broadcast, a single water gives plain floats, NaN stays where it was. Every call takes `data`: "pb1982" (the
default of a Solution) or "usgs2024", and its result names the one used.

Names are loaded when first asked for: a phone waits for every module.
"""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from core.chemistry.field import FieldWater, complete
    from core.chemistry.index_report import Stability, stability
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

_HOMES = {
    "field": ("FieldWater", "complete"),
    "index_report": ("Stability", "stability"),
    "mixing": ("mix",),
    "reagents": ("REAGENTS", "Reagent", "add"),
    "residual": ("ResidualCalcium", "residual_calcium"),
    "saturation": (
        "Saturated",
        "dissolution_capacity",
        "ph_at_saturation",
        "precipitation_potential",
        "to_saturation",
    ),
    "scale": ("ScalePotential", "scale_per_year", "scale_potential"),
    "solution": ("Solution",),
    "speciation": ("Speciation", "at_temperature", "speciate"),
}
_HOME_OF = {name: home for home, names in _HOMES.items() for name in names}

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


def __getattr__(name: str) -> Any:
    """A public name, loaded from its module."""
    if name not in _HOME_OF:
        raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
    value = getattr(import_module(f"{__name__}.{_HOME_OF[name]}"), name)
    globals()[name] = value
    return value


def __dir__() -> list[str]:
    """The public names."""
    return __all__
