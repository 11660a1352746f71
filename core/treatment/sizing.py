"""A first recommendation: the smallest usual bed that carries the peak and lasts long enough.

    size_beds(load [mol/day], peak_flow [L/min], salt_dose [g/L], ...) -> Sizing  one column per candidate bed
    choose_size(load, peak_flow, salt_dose=96.1, ...) -> Choice  .best .smaller .larger .reasons

`Sizing` holds arrays, one element a candidate; all inputs broadcast, so `resin_volume` and `salt_dose` may
span a grid.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import inf, nan

import numpy as np

from core.treatment import regeneration, resin, softener, vessel
from core.treatment.broadcast import Number
from core.treatment.vessel import SPECIFIC_PEAK, SURFACE_PEAK, Bed
from core.working import formula

ECONOMICAL_DOSE = 6.0 * resin.POUND_PER_CUBIC_FOOT  # g/L, the lowest dose two sizing pages agree on [TRADE-SIZING]
SHORTEST_INTERVAL = 3.0  # days [US-DISTRICT]
LONGEST_INTERVAL = 14.0  # days [TRADE-SIZING]; hygiene rules of a region may be far stricter


@dataclass(frozen=True, slots=True)
class Sizing:
    """What beds of these sizes do at these salt doses; every field broadcasts to one shape."""

    resin_volume: Number  # L
    diameter: Number  # mm
    area: Number  # m²
    depth: Number  # m
    salt_dose: Number  # g/L
    capacity: Number  # mol
    salt: Number  # kg per regeneration
    reserve: Number  # mol
    usable: Number  # mol
    interval_full: Number  # days until the usable capacity is spent
    interval: Number  # days, the longest interval allowed counted
    salt_per_year: Number  # kg
    water: Number  # L per regeneration
    water_per_year: Number  # L
    efficiency: Number  # mol/kg, reserve thrown away counted
    specific_flow: Number  # BV/h at the peak
    surface_loading: Number  # m/h at the peak
    largest_peak_flow: Number  # L/min
    margin: Number  # share of the peak to spare
    carries_peak: Number  # bool
    lasts: Number  # bool: the shortest interval is met


@dataclass(frozen=True, slots=True)
class Choice:
    """The bed recommended, its neighbours, and why each candidate is out."""

    beds: tuple[Bed, ...]
    sizing: Sizing  # arrays, one element a bed
    best: int | None  # index of the recommended bed; None where no usual bed will do
    reasons: tuple[str, ...]  # one a bed, empty for those that will do

    @property
    def smaller(self) -> int | None:
        """Index of the next smaller bed, None where there is none."""
        return self.best - 1 if self.best else None

    @property
    def larger(self) -> int | None:
        """Index of the next larger bed, None where there is none."""
        return self.best + 1 if self.best is not None and self.best + 1 < len(self.beds) else None


def size_beds(
    load: Number,
    peak_flow: Number,
    resin_volume: Number,
    diameter: Number,
    salt_dose: Number = ECONOMICAL_DOSE,
    *,
    table: resin.CapacityTable | None = None,
    reserve_days: Number = 1.0,
    shortest: Number = SHORTEST_INTERVAL,
    longest: Number = LONGEST_INTERVAL,
    specific_limit: Number = SPECIFIC_PEAK,
    surface_limit: Number = SURFACE_PEAK,
    temperature: Number = 15.6,
) -> Sizing:
    """Figures of beds [L, mm] at salt doses [g/L] for a load [mol/day] and a peak flow [L/min].

    reserve_days is the reserve in days of average load; shortest and longest bound the days between
    regenerations; the limits for the peak are in BV/h and m/h; the temperature [°C] sets the refill water.
    NaN where the table has no capacity for the dose.
    """
    area = vessel.bed_area(diameter)
    capacity = softener.bed_capacity(resin_volume, resin.trade_capacity(salt_dose, table))
    salt = softener.salt_per_regeneration(resin_volume, salt_dose)
    reserve = softener.reserve_of_days(load, reserve_days)
    usable = softener.usable_capacity(capacity, reserve)
    full = softener.days_between(usable, load)
    interval = softener.days_between(usable, load, longest)
    water = regeneration.regeneration_water(
        regeneration.regeneration_steps(resin_volume, area, salt, temperature=temperature)
    )
    allowed = vessel.largest_peak_flow(resin_volume, area, specific_limit, surface_limit)
    return Sizing(
        resin_volume=resin_volume,
        diameter=diameter,
        area=area,
        depth=vessel.bed_depth(resin_volume, area),
        salt_dose=salt_dose,
        capacity=capacity,
        salt=salt,
        reserve=reserve,
        usable=usable,
        interval_full=full,
        interval=interval,
        salt_per_year=softener.salt_per_year(salt, interval),
        water=water,
        water_per_year=softener.water_per_year(water, interval),
        efficiency=softener.effective_efficiency(interval, load, salt),
        specific_flow=vessel.specific_flow(peak_flow, resin_volume),
        surface_loading=vessel.surface_loading(peak_flow, area),
        largest_peak_flow=allowed,
        margin=vessel.peak_flow_margin(allowed, peak_flow),
        carries_peak=np.greater_equal(allowed, peak_flow),
        lasts=np.greater_equal(full, shortest),
    )


def choose_size(
    load: float,
    peak_flow: float,
    salt_dose: float = ECONOMICAL_DOSE,
    *,
    beds: Sequence[Bed] | None = None,
    **settings: Number,
) -> Choice:
    """Smallest usual bed that carries the peak [L/min] and lasts the shortest interval at this load
    [mol/day].

    beds default to the usual ones, settings are those of `size_beds`. Where no bed will do, `best` is None
    and each reason says why.
    """
    beds = tuple(beds or vessel.trade_beds())
    sizing = size_beds(
        load,
        peak_flow,
        np.array([bed.resin_volume for bed in beds]),
        np.array([bed.diameter for bed in beds]),
        salt_dose,
        **settings,
    )
    fits = np.flatnonzero(sizing.carries_peak & sizing.lasts)
    shortest = settings.get("shortest", SHORTEST_INTERVAL)
    return Choice(beds, sizing, int(fits[0]) if fits.size else None, _reasons(sizing, salt_dose, shortest, settings))


@formula(
    "Recommended resin",
    "the smallest usual bed that carries the peak and lasts the shortest interval",
    unit="L",
    takes={
        "load": "mol/day",
        "peak_flow": "L/min",
        "salt_dose": "g/L",
        "reserve_days": "day",
        "shortest": "day",
        "longest": "day",
    },
    source="common practice, no source",
    validity="Of the generic sizes of the trade; peaks up to 8 gpm/ft³ and 20 gpm/ft².",
)
def recommended_resin(
    load: float,
    peak_flow: float,
    salt_dose: float,
    reserve_days: float = 1.0,
    shortest: float = SHORTEST_INTERVAL,
    longest: float = LONGEST_INTERVAL,
) -> float:
    """Resin of the bed that `choose_size` recommends; NaN where none will do. [L]"""
    choice = choose_size(load, peak_flow, salt_dose, reserve_days=reserve_days, shortest=shortest, longest=longest)
    return nan if choice.best is None else choice.beds[choice.best].resin_volume


def _reasons(sizing: Sizing, salt_dose: float, shortest: Number, settings: dict[str, Number]) -> tuple[str, ...]:
    missing = resin.why_no_capacity(salt_dose, settings.get("table"))
    specific = sizing.specific_flow > settings.get("specific_limit", SPECIFIC_PEAK)
    surface = sizing.surface_loading > settings.get("surface_limit", SURFACE_PEAK)
    texts = []
    for index in range(len(sizing.resin_volume)):
        words = [missing] if missing else []
        if specific[index]:
            words.append("Too little resin for the peak flow.")
        if surface[index]:
            words.append("The vessel is too narrow for the peak flow.")
        if not missing and not sizing.lasts[index]:
            words.append(_lasting(sizing.interval_full[index], shortest))
        texts.append(" ".join(words))
    return tuple(texts)


def _lasting(days: float, shortest: Number) -> str:
    if not -inf < days < inf:
        return "How long it lasts cannot be said: the load is missing or zero."
    if days <= 0.0:
        return "It cannot carry one day's load beside its reserve."
    return f"It would regenerate every {days:.1f} days; the shortest interval set is {shortest:g} days."
