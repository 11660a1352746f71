"""Softening by lime, soda ash and caustic, as the water answers: equilibrium with calcite and brucite.

    settle(water, dose) -> Settled                       .water .calcite .brucite .dry_sludge; doses may be arrays
    equilibrium_dose(process, water, goal) -> EquilibriumDose      the smallest dose that reaches the goal
    left_in_practice(water, calcium, magnesium) -> Solution        with what does not settle in a plant
    recarbonate(water, ph=8.5 | saturation=...) -> Recarbonated    CO2 in one stage, nothing settles
    to_least_calcium(water) -> Recarbonated              CO2 that takes up excess lime, settled: the first of two stages
    lime_when_heated(water, temperature=60) -> mg/L CaCO3

Closed to gas, 1 L as 1 kg. Equilibrium is the floor: plants end above it, as crystals take longer to grow than the
water stays, and more so in the cold. Nothing here dissolves solids that the water itself has not thrown out.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from typing import Any

import numpy as np
from numpy.typing import NDArray

from core.chemistry import Solution, add, at_temperature, precipitation_potential, speciate, to_saturation
from core.constants import MOLAR_MASS_CACO3
from core.errors import InputError
from core.treatment.precipitation import (
    EXCESS_LIME,
    MOLAR_MASS_BRUCITE,
    MOLAR_MASS_CO2,
    PRACTICAL_CALCIUM,
    PRACTICAL_MAGNESIUM,
    PROCESSES,
    Dose,
    Goal,
    RawWater,
    book_dose,
    sodium_from,
    targets,
)

Floats = NDArray[np.float64]
Value = float | Floats

GRID = 17  # doses looked at in one round
ROUNDS = 3  # each sixteen times finer than the last; then a straight line
HARDLY = 0.01  # mmol/L, 1 mg/L as CaCO3: a dose that gains less than this is more than enough
_BASE = {
    "soda": "",
    "lime": "lime",
    "lime-soda": "lime",
    "excess-lime-soda": "lime",
    "caustic": "caustic",
    "caustic-soda": "caustic",
}
TURNS = 6  # of finding lime for magnesium and soda for calcium in turn
CLOSE = 1e-4  # mmol/L: two doses this near are the same
MOST_CO2 = 60.0  # mmol/L


@dataclass(frozen=True, slots=True)
class Settled:
    """A water after a dose, in balance with what it threw out."""

    dose: Dose
    dosed: Solution  # before anything fell out
    water: Solution  # after
    calcite: Value  # mmol/L that fell out
    brucite: Value
    saturation: Value  # index of calcite before anything fell out: how hard it is driven
    sodium_added: Value  # mg/L
    dry_sludge: Value  # mg/L
    why: Any  # why there is no answer, else empty

    @property
    def hardness(self) -> Value:
        """Calcium and magnesium left. [mmol/L]"""
        return self.water.ca + self.water.mg


@dataclass(frozen=True, slots=True)
class EquilibriumDose:
    """The smallest dose at whose equilibrium the goal is reached, or the best there is."""

    settled: Settled
    reached: bool

    @property
    def dose(self) -> Dose:
        """The dose."""
        return self.settled.dose


@dataclass(frozen=True, slots=True)
class Recarbonated:
    """A water after CO2."""

    co2: float  # mmol/L
    water: Solution
    saturation: float  # index of calcite
    calcite: float  # mmol/L that settled after it
    reached: bool  # whether the pH or the index asked for was met

    @property
    def mg_l(self) -> float:
        """CO2 fed. [mg/L]"""
        return self.co2 * MOLAR_MASS_CO2


def raw_water(water: Solution) -> RawWater:
    """What the books ask of a water: calcium, magnesium, alkalinity, CO2."""
    species = speciate(water)
    return RawWater(water.ca, water.mg, max(species.alkalinity, 0.0), species.co2)  # type: ignore[arg-type]


def settle(water: Solution, dose: Dose) -> Settled:
    """A water after a dose, once all that it is oversaturated with has fallen out as calcite and brucite."""
    dosed = add(water, soda_ash=dose.soda_ash, lime=dose.lime, caustic=dose.caustic)
    found = to_saturation(dosed, "calcite", "brucite", may_dissolve=False)
    calcite, brucite = found.by_solid["calcite"], found.by_solid["brucite"]
    return Settled(
        dose,
        dosed,
        found.solution,
        calcite,
        brucite,
        speciate(dosed).si_calcite,
        sodium_from(dose.soda_ash, dose.caustic),
        MOLAR_MASS_CACO3 * calcite + MOLAR_MASS_BRUCITE * brucite,
        found.why,
    )


def equilibrium_dose(
    process: str, water: Solution, goal: Goal | None = None, excess: float = EXCESS_LIME
) -> EquilibriumDose:
    """The smallest dose at whose equilibrium the goal is met; what it leaves open is taken from practice.

    That is 30 mg/L of calcium and, where the process lowers it, 10 mg/L of magnesium, as CaCO3.

    One chemical is varied, the others follow the books; for calcium and magnesium together lime is found for
    magnesium and soda ash for calcium, in turn. The number of waters computed is bounded. Where the goal is out of
    reach the dose is given beyond which more does not help, and `reached` is False.
    """
    if process not in PROCESSES:
        raise InputError("process", process, f"No process is called “{process}”; known are {', '.join(PROCESSES)}.")
    raw = raw_water(water)
    calcium, magnesium = targets(process, raw, goal or Goal())
    asked = goal or Goal()
    if asked == Goal():
        calcium = min(PRACTICAL_CALCIUM[0], raw.calcium)
    if asked.magnesium is None:
        magnesium = min(max(magnesium, PRACTICAL_MAGNESIUM), raw.magnesium)
    book = book_dose(process, raw, goal, excess).dose
    solved = speciate(water).solution
    if magnesium < raw.magnesium:
        dose, reached = _for_both(process, solved, raw, book, calcium, magnesium)
    else:
        dose, reached = _for_calcium(process, solved, raw, book, calcium)
    return EquilibriumDose(settle(solved, dose), reached)


def _left(water: Solution, ion: str, held: Dose, chemical: str) -> Callable[[Floats], Value]:
    """Calcium or magnesium left, as a function of the dose of one chemical while the others are held."""
    others = {name: getattr(held, name) for name in ("soda_ash", "lime", "caustic") if name != chemical}

    def left(amounts: Floats) -> Value:
        dosed = add(water, **others, **{chemical: amounts})
        return getattr(to_saturation(dosed, "calcite", "brucite", may_dissolve=False).solution, ion)

    return left


def _for_calcium(process: str, water: Solution, raw: RawWater, book: Dose, calcium: float) -> tuple[Dose, bool]:
    """Dose that leaves so much calcium: the base first, and soda ash where the base alone is not enough."""
    if calcium >= raw.calcium:
        return Dose(), True
    base, dose, reached = _BASE[process], Dose(), False
    with_soda = process.endswith("soda")
    if base:
        most = getattr(book, base) if with_soda else 2.0 * (raw.co2 + raw.alkalinity) + 1.0
        amount, reached = _smallest(_left(water, "ca", dose, base), calcium, most)
        dose = replace(dose, **{base: amount})
    if not reached and with_soda:
        dose = replace(Dose(), **{base: getattr(book, base)}) if base else Dose()
        most = 2.0 * raw.calcium + raw.co2 + raw.alkalinity + 2.0
        amount, reached = _smallest(_left(water, "ca", dose, "soda_ash"), calcium, most)
        dose = replace(dose, soda_ash=amount)
    return dose, reached


def _for_both(
    process: str, water: Solution, raw: RawWater, book: Dose, calcium: float, magnesium: float
) -> tuple[Dose, bool]:
    """Lime (or caustic) for magnesium and soda ash for calcium, in turn until neither moves."""
    base = _BASE[process]
    most = 2.0 * (raw.co2 + raw.alkalinity + 2.0 * raw.magnesium) + 4.0
    most_soda = 2.0 * (raw.calcium + raw.magnesium) + 4.0
    dose, reached = book, False
    for _ in range(TURNS):
        before = dose
        amount, reached = _smallest(_left(water, "mg", dose, base), magnesium, most)
        dose = replace(dose, **{base: amount})
        if process == "caustic":
            left = _left(water, "ca", dose, base)(np.array([amount]))
            return dose, reached and bool(np.all(np.asarray(left) <= calcium + CLOSE))
        amount, soft = _smallest(_left(water, "ca", dose, "soda_ash"), calcium, most_soda)
        dose = replace(dose, soda_ash=amount)
        reached = reached and soft
        if max(abs(dose.soda_ash - before.soda_ash), abs(getattr(dose, base) - getattr(before, base))) < CLOSE:
            break
    return dose, reached


def _smallest(left: Callable[[Floats], Value], wanted: float, most: float) -> tuple[float, bool]:
    """The smallest dose up to `most` that leaves no more than is wanted, and whether there is one.

    If there is none: the smallest that leaves hardly more than the least there can be.
    """
    doses = np.linspace(0.0, most, GRID)
    values = np.asarray(left(doses))
    if np.all(np.isnan(values)):
        return float("nan"), False
    goal = wanted
    if np.nanmin(values) > wanted:
        enough, least = _least(left, doses, values)
        goal = wanted if least <= wanted else least + HARDLY
        doses = np.linspace(0.0, enough, GRID)
        values = np.asarray(left(doses))
    for _ in range(ROUNDS - 1):
        first = int(np.flatnonzero(values <= goal)[0])
        if first == 0:
            return 0.0, goal <= wanted
        doses = np.linspace(doses[first - 1], doses[first], GRID)
        values = np.asarray(left(doses))
    first = int(np.flatnonzero(values <= goal)[0])
    if first == 0:
        return float(doses[0]), goal <= wanted
    share = (values[first - 1] - goal) / (values[first - 1] - values[first])
    return float(doses[first - 1] + share * (doses[first] - doses[first - 1])), goal <= wanted


def _least(left: Callable[[Floats], Value], doses: Floats, values: Floats) -> tuple[float, float]:
    """The dose that leaves least, narrowed down around the best of those known; and what it leaves."""
    for _ in range(ROUNDS):
        best = int(np.nanargmin(values))
        inner = np.linspace(doses[max(best - 1, 0)], doses[min(best + 1, GRID - 1)], GRID)
        doses, values = inner, np.asarray(left(inner))
    best = int(np.nanargmin(values))
    return float(doses[best]), float(values[best])


def left_in_practice(water: Solution, calcium: float, magnesium: float) -> Solution:
    """The water of a plant: so much calcium and magnesium [mmol/L] left where equilibrium leaves less.

    What did not settle stays as carbonate and hydroxide in the water, so that pH and alkalinity come out with it.
    """
    lime = np.maximum(calcium - np.asarray(water.ca), 0.0)
    magnesia = np.maximum(magnesium - np.asarray(water.mg), 0.0)
    return speciate(
        Solution(
            **{
                **dict(water.items()),
                "temp_c": water.temp_c,
                "data": water.data,
                "ca": water.ca + lime,
                "mg": water.mg + magnesia,
                "alkalinity": water.alkalinity + 2.0 * (lime + magnesia),
                "dic": water.dic + lime,
            }
        )
    ).solution


def recarbonate(water: Solution, *, ph: float | None = 8.5, saturation: float | None = None) -> Recarbonated:
    """CO2 that brings one water down to a pH, or to a saturation index of calcite; nothing settles meanwhile.

    The index can rise before it falls, as CO2 turns hydroxide to carbonate: the smallest CO2 counts after which it
    stays below.
    """
    if saturation is not None:
        wanted, name = saturation, "si_calcite"
    elif ph is not None:
        wanted, name = ph, "ph"
    else:
        raise InputError("pH", None, "Enter the pH or the saturation index that CO2 is to bring the water to.")

    def value(co2: Floats) -> Value:
        return getattr(speciate(add(water, co2=co2)), name)

    # Up to the alkalinity CO2 turns hydroxide and carbonate to bicarbonate, and the curve bends; beyond, it is smooth.
    bend = min(max(float(np.asarray(speciate(water).alkalinity)), 0.1), MOST_CO2 / 2.0)
    first = np.concatenate([np.linspace(0.0, bend, 2 * GRID), np.geomspace(bend, MOST_CO2, GRID)[1:]])
    amount, reached = _last_above(value, wanted, first)
    done = speciate(add(water, co2=amount))
    return Recarbonated(amount, done.solution, done.si_calcite, 0.0, reached)  # type: ignore[arg-type]


def _last_above(value: Callable[[Floats], Value], wanted: float, amounts: Floats) -> tuple[float, bool]:
    """The smallest amount from which on the value stays at or below what is wanted."""
    for _ in range(ROUNDS + 1):
        above = np.flatnonzero(~(np.asarray(value(amounts)) <= wanted))
        if not above.size:
            return float(amounts[0]), True
        last = int(above[-1])
        if last == len(amounts) - 1:
            return float(amounts[-1]), False
        amounts = np.linspace(amounts[last], amounts[last + 1], GRID)
    return float(amounts[-1]), True


def to_least_calcium(water: Solution) -> Recarbonated:
    """CO2 that turns excess lime to carbonate and leaves least calcium, once that has settled as calcite."""
    low, high = 0.0, max(float(np.asarray(water.alkalinity)), 0.1)
    best = 0.0
    for _ in range(ROUNDS):
        amounts = np.linspace(low, high, GRID)
        left = np.asarray(to_saturation(add(water, co2=amounts), may_dissolve=False).solution.ca)
        least = int(np.nanargmin(left))
        best = float(amounts[least])
        low, high = amounts[max(least - 1, 0)], amounts[min(least + 1, GRID - 1)]
    settled = to_saturation(add(water, co2=best), may_dissolve=False)
    return Recarbonated(best, settled.solution, settled.speciation.si_calcite, settled.precipitated, True)  # type: ignore[arg-type]


def lime_when_heated(water: Solution, temperature: float = 60.0) -> Value:
    """Calcium carbonate that the treated water can still throw out when heated [mg/L CaCO3]; none below zero."""
    potential = precipitation_potential(at_temperature(water, temperature))
    return np.maximum(potential, 0.0) if np.ndim(potential) else max(potential, 0.0)  # type: ignore[return-value, call-overload]
