"""What a softener costs over the years, from the user's own prices.

    Prices(salt, water, vessel, resin, valve, service=0, years=10)      one currency, the user's
    purchase(resin_volume [L], tanks, prices) -> money
    running_cost(salt_per_year [kg], water_per_year [L], prices) -> money/year
    total_cost(purchase, running, years) -> money

No interest and no price rise: the sum of what is paid at today's prices.
"""

from __future__ import annotations

from dataclasses import dataclass

from core.treatment.broadcast import Number, broadcasts
from core.working import formula


@dataclass(frozen=True, slots=True)
class Prices:
    """Prices in the user's currency."""

    salt: float  # per kg
    water: float  # per m³, sewage included
    vessel: float = 0.0  # per L of resin that the vessel is made for
    resin: float = 0.0  # per L
    valve: float = 0.0  # per softener, with brine tank and fitting
    second_tank: float | None = None  # what a twin costs more than its second vessel and resin; None: not known
    counter_current: float | None = None  # what a counter-current softener costs more; None: not known
    service: float = 0.0  # per year
    years: float = 10.0


@formula(
    "Purchase",
    "purchase = valve + tanks × resin × (price of vessel + price of resin) + extra",
    unit="money",
    takes={
        "resin_volume": "L",
        "tanks": "",
        "valve": "money",
        "vessel": "money/L",
        "resin": "money/L",
        "extra": "money",
    },
    source="definition",
)
@broadcasts
def purchase(
    resin_volume: Number,
    tanks: Number = 1.0,
    valve: Number = 0.0,
    vessel: Number = 0.0,
    resin: Number = 0.0,
    extra: Number = 0.0,
) -> Number:
    """What the softener costs to buy and fit. [money]"""
    return valve + tanks * resin_volume * (vessel + resin) + extra


@formula(
    "Running cost",
    "cost a year = salt × price + water ÷ 1000 × price + service",
    unit="money/year",
    takes={
        "salt_per_year": "kg/year",
        "water_per_year": "L/year",
        "salt": "money/kg",
        "water": "money/m³",
        "service": "money/year",
    },
    source="definition",
)
@broadcasts
def running_cost(
    salt_per_year: Number, water_per_year: Number, salt: Number, water: Number, service: Number = 0.0
) -> Number:
    """What salt, regeneration water and service cost in a year. [money/year]"""
    return salt_per_year * salt + water_per_year / 1000.0 * water + service


@formula(
    "Cost over the years",
    "total = purchase + years × cost a year",
    unit="money",
    takes={"bought": "money", "running": "money/year", "years": "year"},
    source="definition",
    validity="At today's prices, without interest.",
)
@broadcasts
def total_cost(bought: Number, running: Number, years: Number = 10.0) -> Number:
    """Everything that is paid for a softener over these years. [money]"""
    return bought + years * running
