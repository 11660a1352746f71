"""Scale that heating can throw out of a water, as a band over what is known and not known."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from types import MappingProxyType

import numpy as np
from numpy.typing import ArrayLike, NDArray

from core.chemistry.reactions import DATA_SETS
from core.chemistry.saturation import precipitation_potential
from core.chemistry.solution import Solution, Value, number, within
from core.chemistry.speciation import at_temperature
from core.chemistry.thermodynamics import check_data
from core.working import formula

FORMS = ("calcite", "aragonite")  # which of the two grows on a hot wall is not known beforehand
DAYS_PER_YEAR = 365.0


@dataclass(frozen=True, slots=True)
class ScalePotential:
    """Calcium carbonate that can fall out of a water warmed without loss of CO2. [mg/kg CaCO3, which is g/m³]

    temps: temperatures, along the first axes of each result; the axes of the water follow.
    plain: calcite by the water's own data set. low, high: over both data sets, calcite and aragonite. None of the
    three is below zero: a water that still dissolves scale throws none out. views: (data set, form) -> the
    precipitation potential with its sign. It is an upper bound: slow growth and inhibitors leave less.
    """

    temps: Value
    plain: Value
    low: Value
    high: Value
    views: Mapping[tuple[str, str], Value]
    data: str


def scale_potential(solution: Solution, temps: ArrayLike, *, data: str | None = None) -> ScalePotential:
    """Scale potential of a water at each temperature, closed to gas, as a band. [mg/kg CaCO3]

    temps in °C, 0 to 100; the constants hold to 90. The band spans the two data sets and calcite or aragonite.
    """
    own = check_data(data) if data else solution.data
    hot = within("temps", number("temps", temps), 0.0, 100.0, "°C")
    spread = hot if isinstance(hot, float) else hot.reshape(hot.shape + (1,) * len(solution.shape))
    views: dict[tuple[str, str], Value] = {}
    for name in DATA_SETS:
        warm = at_temperature(solution, spread, data=name)
        for form in FORMS:
            views[name, form] = precipitation_potential(warm, form)
    stacked = np.array(list(views.values()))
    return ScalePotential(
        hot,
        _thrown_out(views[own, "calcite"]),
        _thrown_out(stacked.min(axis=0)),
        _thrown_out(stacked.max(axis=0)),
        MappingProxyType(views),
        own,
    )


def _thrown_out(potential: Value) -> Value:
    value: NDArray[np.float64] = np.maximum(potential, 0.0)
    return float(value) if np.ndim(value) == 0 else value


@formula(
    "Scale in a year, at most",
    "scale = potential × volume × 365 / 10⁶",
    unit="kg/year",
    takes={"potential": "mg/kg CaCO3", "volume": "L/day"},
    source="definition",
    validity="an upper bound: all the water reaches the temperature and all that can fall out does; 1 L taken as 1 kg",
)
def scale_per_year(potential: ArrayLike, volume: ArrayLike) -> Value:
    """Calcium carbonate that a daily volume of heated water can leave in a year. [kg/year]"""
    value = np.asarray(potential, dtype=float) * np.asarray(volume, dtype=float) * DAYS_PER_YEAR / 1e6
    return float(value) if np.ndim(value) == 0 else value
