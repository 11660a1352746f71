"""What a water really is: free ions and pairs, pH, CO2, ionic strength, saturation with each solid."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from core.chemistry.columns import (
    LN10,
    MILLI,
    Columns,
    as_solution,
    carbon,
    columns,
    find,
    find_open,
    flat,
    ln_gas,
    mark_unknown,
    settle,
    with_nan,
)
from core.chemistry.equilibrium import State
from core.chemistry.model import C, H, S
from core.chemistry.reactions import SOLIDS
from core.chemistry.solution import Solution, Value, number, within
from core.chemistry.thermodynamics import FIT_RANGE, check_data, evaluate

HIGHEST_STRENGTH = 0.5  # mol/kg; beyond it the activity coefficients are only indicative
HIGHEST_PRESSURE = 10.0  # atm of CO2


NO_WATER = Solution(temp_c=25.0, alkalinity=0.0, dic=0.0)  # for a state that no one asks the totals of


class Speciation:
    """The species of a water in equilibrium; every quantity in the shape of the water, a float for one water.

    Where a water has no answer its quantities are NaN and `why` says the reason in words.
    """

    def __init__(self, cols: Columns, state: State, given: Solution) -> None:
        self._cols = cols
        self._state = state
        self._given = given
        self.data = cols.data

    def __repr__(self) -> str:
        return (
            f"<Speciation ph={self.ph} ionic_strength={self.ionic_strength} si_calcite={self.si_calcite} {self.data}>"
        )

    def _out(self, flat_values: NDArray[np.float64]) -> Value:
        return self._cols.out(with_nan(self._cols, flat_values))

    @property
    def why(self) -> str | NDArray[np.object_]:
        """Why a water has no answer; empty where it has one."""
        return self._cols.reasons()

    @cached_property
    def solution(self) -> Solution:
        """The water, holding pH, alkalinity and dissolved carbon alike."""
        return as_solution(self._cols, self._state, self._given)

    @property
    def temp_c(self) -> Value:
        """Temperature. [°C]"""
        return self._given.temp_c

    @cached_property
    def ph(self) -> Value:
        """The pH: minus log10 of the activity of H+. [-]"""
        return self._out(-self._state.x[H] / LN10)

    @cached_property
    def ionic_strength(self) -> Value:
        """Half the sum of molality times charge squared, over all species. [mol/kg]"""
        return self._out(self._state.strength)

    @cached_property
    def alkalinity(self) -> Value:
        """Alkalinity. [meq/kg]"""
        return self._out((2.0 * self._state.sums[C] - self._state.sums[H]) / MILLI)

    @cached_property
    def dic(self) -> Value:
        """All dissolved carbonate and CO2. [mmol/kg]"""
        return self._out(carbon(self._state) / MILLI)

    @cached_property
    def co2(self) -> Value:
        """Dissolved CO2, the hydrated part included. [mmol/kg]"""
        return self.molalities["CO2"] / MILLI

    @cached_property
    def p_co2(self) -> Value:
        """Pressure of the CO2 gas that this water would be in balance with. [atm]"""
        x = self._state.x
        return self._out(np.exp(x[C] + 2.0 * x[H] - self._state.ln_water - ln_gas(self._cols, 1.0)))

    @cached_property
    def water_activity(self) -> Value:
        """Activity of water. [-]"""
        return self._out(np.exp(self._state.ln_water))

    @cached_property
    def charge_balance(self) -> Value:
        """Charge of all species together; zero in a complete analysis. [meq/kg]"""
        model = self._cols.model()
        return self._out(model.charge @ self._state.molality / MILLI)

    @cached_property
    def molalities(self) -> Mapping[str, Value]:
        """Molality of each species by name, such as "Ca+2" (or "Ca"), "CaHCO3+", "HCO3-". [mol/kg]"""
        return _BySpecies(self, activities=False)

    @cached_property
    def activities(self) -> Mapping[str, Value]:
        """Activity of each species by name. [-]"""
        return _BySpecies(self, activities=True)

    def si(self, solid: str) -> Value:
        """Saturation index log10(IAP/K) of a solid; above zero it can form. -inf where an ion of it is missing. [-]"""
        return self._out(self.flat_si(solid))

    def flat_si(self, solid: str) -> NDArray[np.float64]:
        """Saturation index as a flat column, whatever the shape of the water. [-]"""
        record = SOLIDS[self.data][solid]
        if record.of not in self._cols.components:
            return np.full(self._cols.temp_c.shape, -np.inf)
        made = np.array(record.made[:3], dtype=float)
        held = made @ self._state.x + record.made[3] * self._state.ln_water
        ion = self._state.ion[self._cols.components.index(record.of)]
        with np.errstate(divide="ignore"):
            index = (np.log(ion) - held) / LN10 - evaluate(record.log_k, self._cols.temp_c)
        return np.where(self._lacks(record.made), -np.inf, index)

    def _lacks(self, made: tuple[int, int, int, int]) -> NDArray[np.bool_]:
        least = 1e-20  # mol/kg; below it the balance was only given something to take the logarithm of
        none = np.zeros(self._cols.temp_c.shape, dtype=bool)
        return (
            none | ((self._state.sums[C] < least) & (made[1] != 0)) | ((self._state.sums[S] < least) & (made[2] != 0))
        )

    @cached_property
    def si_calcite(self) -> Value:
        """Saturation index of calcite. [-]"""
        return self.si("calcite")

    @cached_property
    def si_aragonite(self) -> Value:
        """Saturation index of aragonite. [-]"""
        return self.si("aragonite")

    @cached_property
    def si_vaterite(self) -> Value:
        """Saturation index of vaterite. [-]"""
        return self.si("vaterite")

    @cached_property
    def si_brucite(self) -> Value:
        """Saturation index of brucite, Mg(OH)2. [-]"""
        return self.si("brucite")

    @cached_property
    def si_gypsum(self) -> Value:
        """Saturation index of gypsum. [-]"""
        return self.si("gypsum")

    @cached_property
    def si_siderite(self) -> Value:
        """Saturation index of siderite, FeCO3; a warning only, as iron is seldom at equilibrium. [-]"""
        return self.si("siderite")

    @cached_property
    def si_rhodochrosite(self) -> Value:
        """Saturation index of rhodochrosite, MnCO3; a warning only. [-]"""
        return self.si("rhodochrosite")

    @cached_property
    def notes(self) -> tuple[str, ...]:
        """Where these waters leave the range the constants or the activity coefficients hold in."""
        low, high = FIT_RANGE
        notes = []
        if np.any((self._cols.temp_c < low) | (self._cols.temp_c > high)):
            notes.append(f"The constants are fitted from {low:g} to {high:g} °C; beyond, they are carried on.")
        if np.any(self._state.strength > HIGHEST_STRENGTH):
            notes.append(
                f"Ionic strength passes {HIGHEST_STRENGTH:g} mol/kg: activity coefficients are only indicative there."
            )
        return tuple(notes)


class _BySpecies(Mapping[str, Value]):
    """Molalities or activities looked up by species name; computed when asked for."""

    def __init__(self, of: Speciation, *, activities: bool) -> None:
        self._of = of
        self._activities = activities

    def __getitem__(self, name: str) -> Value:
        cols, state = self._of._cols, self._of._state
        model = cols.model()
        row = model.index(name)
        values = state.molality[row]
        if self._activities:
            values = values * np.exp(model.ln_gamma(row, cols.temp_c, state.strength))
        return self._of._out(values)

    def __iter__(self) -> Iterator[str]:
        return iter(self._of._cols.model().names)

    def __len__(self) -> int:
        return len(self._of._cols.model().names)


def speciate(solution: Solution, *, p_co2: ArrayLike | None = None, data: str | None = None) -> Speciation:
    """The species of a water in equilibrium, closed to gas, or open to CO2 at `p_co2` atm.

    Closed, pH, alkalinity and dissolved carbon are those of the water. Open, alkalinity stays and dissolved carbon
    follows the gas (air holds about 4.2e-4 atm). Constants 0 to 90 °C; activity coefficients to I about 0.5 mol/kg;
    `notes` says when a water leaves that range. `data` is the set of the water unless another is named. Where pH
    leaves alkalinity no room for carbonate, by up to 1 %, there is none, and alkalinity is what the pH says.
    """
    gas = None if p_co2 is None else pressure(p_co2)
    cols = columns(solution, data and check_data(data), *(() if gas is None else (gas,)))
    state = settle(cols, solution)
    if gas is not None:
        mark_unknown(cols, gas)
        state = find_open(cols, gas)
    elif state is None:
        state = find(cols)
    return Speciation(cols, state, solution)


def at_temperature(solution: Solution, temp_c: ArrayLike, *, data: str | None = None) -> Solution:
    """The same water warmed or cooled with no loss of CO2: totals stay, pH and saturation move.

    temp_c in °C, 0 to 100; arrays broadcast with the water.
    """
    temp = within("temp_c", number("temp_c", temp_c), 0.0, 100.0, "°C")
    cols = columns(solution, data and check_data(data), temp)
    settle(cols, solution)
    warm = flat(temp, cols.shape)
    cols.temp_c = np.where(np.isnan(warm), cols.temp_c, warm)
    mark_unknown(cols, temp)
    return as_solution(cols, find(cols), solution, temp_c=temp)


def pressure(p_co2: ArrayLike) -> Value:
    """A partial pressure of CO2, checked. [atm]"""
    return within("p_co2", number("p_co2", p_co2), 1e-9, HIGHEST_PRESSURE, "atm")
