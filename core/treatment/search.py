"""The search for a softener: every usual bed, a row of salt doses, single, twin and counter-current.

    Demand(load [mol/day], hardness [mmol/L], peak_flow [L/min], temperature=12 [°C])
    Limits(shortest, longest, specific_peak, surface_peak, pressure_loss, least_efficiency, ...)
    search(demand, limits, prices=None, ...) -> Search
    Search.best, .smaller, .larger -> Pick | None                 the recommendation and its neighbours
    Search.figures(pick) -> dict[str, float];  Search.reasons(pick) -> tuple[str, ...]
    Search.trade_off(pick) -> dict[str, array]                     the same bed at every dose, to draw

What is put into the head of the valve for a pick: `valve.valve_settings`.
All figures are arrays of shape (arrangement, bed, dose); the axes are `Search.arrangements`, `.beds` and `.doses`.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field, fields, replace
from functools import cache
from typing import Any, NamedTuple

import numpy as np
from numpy.typing import NDArray

from core.data import read_table
from core.treatment import cost, hydraulics, regeneration, resin, softener, vessel
from core.treatment.resin import CapacityTable, capacity_table
from core.treatment.vessel import SPECIFIC_PEAK, SURFACE_PEAK, Bed
from core.working import formula

Floats = NDArray[np.float64]

DOSES = tuple(
    pounds * resin.POUND_PER_CUBIC_FOOT for pounds in (4.0, 4.5, 5.0, 5.5, 6.0, 7.0, 8.0, 9.0, 10.0, 12.0, 15.0)
)  # g/L
PRESSURE_LOSS = 103.4  # kPa, 15 psi at rated flow [NSF44]
TWIN_RESERVE = 0.03  # share of the capacity; common practice, no source


@dataclass(frozen=True, slots=True)
class Arrangement:
    """A way to build a softener."""

    key: str
    words: str
    tanks: int
    reserve_days: float  # days of average load kept back
    reserve_share: float  # share of the capacity kept back
    shortest: float | None  # days; None takes the limit given


ARRANGEMENTS = (
    Arrangement("single", "one tank, regenerates at night", 1, 1.0, 0.0, None),
    Arrangement("twin", "two tanks in turn", 2, 0.0, TWIN_RESERVE, 0.5),
    Arrangement("counter-current", "one tank, regenerated from below", 1, 1.0, 0.0, None),
)


@dataclass(frozen=True, slots=True)
class Demand:
    """What is asked of the softener."""

    load: float  # mol/day
    hardness: float  # mmol/L of the water that passes the resin, iron compensated
    peak_flow: float  # L/min through the resin
    temperature: float = 12.0  # °C, the coldest water


@dataclass(frozen=True, slots=True)
class Limits:
    """What a candidate must keep; each may be replaced by the rules of the place or the user's own."""

    shortest: float = 3.0  # days between regenerations [US-DISTRICT]
    longest: float = 14.0  # days; the calendar regenerates at the latest then [TRADE-SIZING]
    specific_peak: float = SPECIFIC_PEAK  # BV/h
    surface_peak: float = SURFACE_PEAK  # m/h
    pressure_loss: float = PRESSURE_LOSS  # kPa at the peak, bed and fittings
    least_depth: float = 0.0  # m; 0.61 in general [OPERATOR-TEXT], 0.91 in public works [VAC590-900]
    least_efficiency: float = 0.0  # mol/kg, the whole capacity used; where the law asks for it


class Pick(NamedTuple):
    """One candidate: its place on the three axes."""

    arrangement: int
    bed: int
    dose: int


@dataclass(frozen=True, slots=True)
class Search:
    """All candidates with their figures, axes (arrangement, bed, dose)."""

    demand: Demand
    limits: Limits
    arrangements: tuple[Arrangement, ...]
    beds: tuple[Bed, ...]
    doses: Floats  # g/L
    area: Floats  # m²
    depth: Floats  # m
    capacity: Floats  # mol per tank
    salt: Floats  # kg per regeneration
    reserve: Floats  # mol
    usable: Floats  # mol
    interval_full: Floats  # days until the usable capacity is spent
    interval: Floats  # days, the calendar counted
    salt_per_year: Floats  # kg
    water: Floats  # L per regeneration
    water_per_year: Floats  # L
    rated_efficiency: Floats  # mol/kg, the whole capacity used
    efficiency: Floats  # mol/kg, the reserve thrown away counted
    rated_water: Floats  # L/mol, the whole capacity used
    specific_flow: Floats  # BV/h at the peak
    surface_loading: Floats  # m/h at the peak
    margin: Floats  # share of the peak to spare
    pressure_loss: Floats  # kPa at the peak
    cost: Floats  # money over the years, NaN without prices
    faults: dict[str, NDArray[np.bool_]]  # what rules a candidate out, by kind
    fits: NDArray[np.bool_]
    best: Pick | None = field(default=None)

    @property
    def smaller(self) -> Pick | None:
        """The best candidate of the same arrangement with the next smaller bed that fits; None without one."""
        return self._neighbour(-1)

    @property
    def larger(self) -> Pick | None:
        """The best candidate of the same arrangement with the next larger bed that fits; None without one."""
        return self._neighbour(1)

    def _neighbour(self, way: int) -> Pick | None:
        if self.best is None:
            return None
        volume = self.beds[self.best.bed].resin_volume
        bed = self.best.bed + way
        while 0 <= bed < len(self.beds):
            other = self.beds[bed].resin_volume != volume
            if other and self.fits[self.best.arrangement, bed].any():
                return _cheapest(self, arrangement=self.best.arrangement, bed=bed)
            bed += way
        return None

    def figures(self, pick: Pick) -> dict[str, Any]:
        """Every figure of one candidate by name, as plain floats."""
        return {
            f.name: float(getattr(self, f.name)[pick])
            for f in fields(self)
            if isinstance(getattr(self, f.name), np.ndarray) and f.name not in ("doses", "fits")
        } | {
            "salt_dose": float(self.doses[pick.dose]),
            "resin_volume": self.beds[pick.bed].resin_volume,
            "diameter": self.beds[pick.bed].diameter,
        }

    def reasons(self, pick: Pick) -> tuple[str, ...]:
        """What rules a candidate out, in words; empty where it fits."""
        return tuple(_FAULTS[kind](self, pick) for kind, found in self.faults.items() if found[pick])

    def trade_off(self, pick: Pick) -> dict[str, Floats]:
        """The same bed and arrangement at every dose: what more salt buys. NaN where nothing is known."""
        row = (pick.arrangement, pick.bed)
        names = ("interval", "salt_per_year", "water_per_year", "rated_efficiency", "efficiency", "cost")
        return {"salt_dose": self.doses, "fits": self.fits[row]} | {name: getattr(self, name)[row] for name in names}


@cache
def counter_current_table() -> CapacityTable:
    """Capacity [eq/L] against salt dose [g/L] in counter-current; handbooks' usual range, from memory."""
    table = read_table("counter_current_capacity")
    return capacity_table(table.column("salt_g_l"), table.column("capacity_eq_l"), "counter-current table")


@formula(
    "Capacity of the resin, regenerated from below",
    "straight lines between the rows of the table",
    unit="eq/L",
    takes={"salt_dose": "g/L"},
    source="common practice, no source",
    validity="Handbooks' usual range, from memory; a packed or held-down bed.",
)
def counter_current_capacity(salt_dose: float) -> float:
    """Capacity of resin regenerated in counter-current at a salt dose; NaN outside the table. [eq/L]"""
    return resin.trade_capacity(salt_dose, counter_current_table())


def search(
    demand: Demand,
    limits: Limits | None = None,
    prices: cost.Prices | None = None,
    *,
    beds: Sequence[Bed] | None = None,
    doses: Sequence[float] = DOSES,
    arrangements: Sequence[Arrangement] = ARRANGEMENTS,
    table: CapacityTable | None = None,
    reserve: float | None = None,
    fittings: tuple[float, float] | None = None,
) -> Search:
    """Every candidate with its figures, what rules it out, and the one to recommend.

    table replaces the trade's capacities of the co-current arrangements; reserve [mol] replaces the one day kept back
    by single tanks; fittings is one point of the maker's curve, (flow [L/min], loss [kPa]). The recommendation is the
    cheapest over the years among the arrangements whose price is known. Without prices it is the first arrangement
    that can do it, the smallest bed of it, and the dose that needs least salt a year.
    """
    limits = limits or Limits()
    beds = tuple(beds or vessel.trade_beds())
    arrangements = tuple(arrangements)
    every_dose = np.asarray(doses, dtype=float)
    shape = (len(arrangements), len(beds), len(every_dose))
    volume = np.array([bed.resin_volume for bed in beds])[:, None]
    area = vessel.bed_area(np.array([bed.diameter for bed in beds]))[:, None]
    per_litre = np.stack([_capacities(kind, every_dose, table) for kind in arrangements])[:, None, :]
    capacity = softener.bed_capacity(volume, per_litre)
    salt = softener.salt_per_regeneration(volume, every_dose)
    kept = _reserve(arrangements, demand.load, capacity, reserve)
    usable = softener.usable_capacity(capacity, kept)
    full = softener.days_between(usable, demand.load)
    interval = softener.days_between(usable, demand.load, limits.longest)
    water = regeneration.regeneration_water(
        regeneration.regeneration_steps(
            volume,
            area,
            salt,
            temperature=demand.temperature,
            backwash_velocity=hydraulics.backwash_velocity(demand.temperature),
        )
    )
    flow = demand.peak_flow
    depth, loading = vessel.bed_depth(volume, area), vessel.surface_loading(flow, area)
    loss = hydraulics.bed_pressure_loss(loading, depth, demand.temperature)
    if fittings is not None:
        loss = loss + hydraulics.fitting_loss(flow, *fittings)
    allowed = vessel.largest_peak_flow(volume, area, limits.specific_peak, limits.surface_peak)
    values = {
        "area": area,
        "depth": depth,
        "capacity": capacity,
        "salt": salt,
        "reserve": kept,
        "usable": usable,
        "interval_full": full,
        "interval": interval,
        "salt_per_year": softener.salt_per_year(salt, interval),
        "water": water,
        "water_per_year": softener.water_per_year(water, interval),
        "rated_efficiency": resin.salt_efficiency(per_litre, every_dose),
        "efficiency": softener.effective_efficiency(interval, demand.load, salt),
        "rated_water": softener.regeneration_water_per_mol(water, 1.0, capacity),
        "specific_flow": vessel.specific_flow(flow, volume),
        "surface_loading": loading,
        "margin": vessel.peak_flow_margin(allowed, flow),
        "pressure_loss": loss,
    }
    values = {name: np.broadcast_to(value, shape) for name, value in values.items()}
    values["cost"] = _costs(arrangements, volume, values, prices)
    faults = _judge(values, limits, arrangements)
    found = Search(demand, limits, arrangements, beds, every_dose, **values, faults=faults, fits=~_any(faults))
    return _with_best(found)


def _capacities(kind: Arrangement, doses: Floats, table: CapacityTable | None) -> Floats:
    if kind.key == "counter-current":
        return resin.trade_capacity(doses, counter_current_table())
    return resin.trade_capacity(doses, table)


def _reserve(kinds: tuple[Arrangement, ...], load: float, capacity: Floats, reserve: float | None) -> Floats:
    days = np.array([kind.reserve_days for kind in kinds])[:, None, None]
    share = np.array([kind.reserve_share for kind in kinds])[:, None, None]
    of_days = softener.reserve_of_days(load, days) if reserve is None else np.where(days > 0.0, reserve, 0.0)
    return of_days + softener.reserve_of_share(capacity, share)


def _costs(
    kinds: tuple[Arrangement, ...], volume: Floats, values: dict[str, Floats], prices: cost.Prices | None
) -> Floats:
    if prices is None:
        return np.full(values["interval"].shape, np.nan)
    tanks = np.array([kind.tanks for kind in kinds])[:, None, None]
    extras = {"twin": prices.second_tank, "counter-current": prices.counter_current}
    # An arrangement whose extra price is not known has no cost, and so is not ranked against the others.
    extra = np.array([extras.get(kind.key, 0.0) for kind in kinds], dtype=float)[:, None, None]
    bought = cost.purchase(volume, tanks, prices.valve, prices.vessel, prices.resin, extra)
    running = cost.running_cost(
        values["salt_per_year"], values["water_per_year"], prices.salt, prices.water, prices.service
    )
    return cost.total_cost(bought, running, prices.years)


def _shortest(kind: Arrangement, limits: Limits) -> float:
    return limits.shortest if kind.shortest is None else kind.shortest


def _judge(values: dict[str, Floats], limits: Limits, kinds: tuple[Arrangement, ...]) -> dict[str, NDArray[np.bool_]]:
    shortest = np.array([_shortest(kind, limits) for kind in kinds])[:, None, None]
    unknown = np.isnan(values["capacity"])
    return {
        "dose": unknown,
        "flow": ~(values["specific_flow"] <= limits.specific_peak),
        "narrow": ~(values["surface_loading"] <= limits.surface_peak),
        "short": ~unknown & ~(values["interval_full"] >= shortest),
        "pressure": ~(values["pressure_loss"] <= limits.pressure_loss),
        "shallow": ~(values["depth"] >= limits.least_depth),
        "wasteful": ~unknown & ~(values["rated_efficiency"] >= limits.least_efficiency * (1.0 - 1e-9)),
    }


def _any(faults: dict[str, NDArray[np.bool_]]) -> NDArray[np.bool_]:
    return np.logical_or.reduce(list(faults.values()))


def _lasting(found: Search, pick: Pick) -> str:
    days, shortest = found.interval_full[pick], _shortest(found.arrangements[pick.arrangement], found.limits)
    if np.isnan(days):
        return "How long it lasts cannot be said: the load is missing or zero."
    if days <= 0.0:
        return "It cannot carry one day's load beside its reserve."
    return f"It would regenerate every {days:.1f} days; at least {shortest:g} are wanted."


_FAULTS = {
    "dose": lambda found, pick: "No capacity is known for this salt dose.",
    "flow": lambda found, pick: "Too little resin for the peak flow.",
    "narrow": lambda found, pick: "The vessel is too narrow for the peak flow.",
    "short": _lasting,
    "pressure": lambda found, pick: "It loses more pressure at the peak flow than is allowed.",
    "shallow": lambda found, pick: "The bed is shallower than is allowed.",
    "wasteful": lambda found, pick: "It uses more salt for the hardness than the efficiency rule of the place allows.",
}


def _with_best(found: Search) -> Search:
    return replace(found, best=_cheapest(found))


def _cheapest(found: Search, arrangement: int | None = None, bed: int | None = None) -> Pick | None:
    """The candidate that fits and costs least; without prices first arrangement, least resin, least salt a year."""
    open_ = found.fits.copy()
    if arrangement is not None:
        open_[np.arange(len(found.arrangements)) != arrangement] = False
    if bed is not None:
        open_[:, np.arange(len(found.beds)) != bed] = False
    if not open_.any():
        return None
    priced = open_ & np.isfinite(found.cost)
    open_ = priced if priced.any() else open_
    picks = np.argwhere(open_)
    volume = np.array([b.resin_volume for b in found.beds])[picks[:, 1]]
    least_salt = found.salt_per_year[open_]
    keys = (found.cost[open_],) if priced.any() else (least_salt, volume, picks[:, 0])
    return Pick(*map(int, picks[np.lexsort(keys)[0]]))
