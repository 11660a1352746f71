"""One regeneration: brine, water and time, step by step.

salt_solubility(temperature [°C]) -> share by weight                  saturated brine, 0 to 37.8 °C
refill_water(salt [kg], temperature=15.6) -> L
step_water(flow [L/min], minutes) -> L;  step_minutes(water [L], flow) -> min
diluted_brine(salt [kg], strength=0.10) -> L                          brine as it meets the resin
backwash_flow(area [m²], velocity=12.22 [m/h]) -> L/min
regeneration_steps(resin_volume [L], area [m²], salt [kg], ...) -> steps  .water L, .flow L/min, .minutes
water_per_regeneration(resin_volume [L], area [m²], salt [kg], temperature=15.6, backwash_velocity=12.22) -> L
regeneration_water(steps) -> L;  regeneration_minutes(steps) -> min
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

from core.data import read_table
from core.treatment.broadcast import Number, broadcasts, interpolate, larger, ratio
from core.treatment.vessel import GPM_PER_SQUARE_FOOT
from core.working import formula

BACKWASH_VELOCITY = 5.0 * GPM_PER_SQUARE_FOOT  # m/h, at 10 °C [TRADE-BACKWASH]
# Density of brine at 20 °C by strength; from memory of handbook tables, the 10 % figure stands in several
# of them.
_BRINE_STRENGTH = (0.0, 0.05, 0.10, 0.15, 0.20, 0.26)
_BRINE_DENSITY = (0.9982, 1.0340, 1.0707, 1.1085, 1.1478, 1.1972)  # kg/L


@dataclass(frozen=True, slots=True)
class Step:
    """One step of a regeneration."""

    name: str
    water: Number  # L drawn from the main
    flow: Number  # L/min to the drain (to the brine tank for the refill)
    minutes: Number


@formula(
    "Salt in saturated brine",
    "straight line between the rows of the table",
    unit="",
    takes={"temperature": "°C"},
    source="SALT-INSTITUTE",
    validity="0 to 37.8 °C.",
)
@broadcasts
def salt_solubility(temperature: Number) -> Number:
    """Share by weight of sodium chloride in saturated brine [SALT-INSTITUTE]; NaN outside 0 to 37.8 °C."""
    table = read_table("salt_solubility")
    return interpolate(temperature, table.column("temperature_c"), table.column("salt_percent")) / 100.0


@formula(
    "Refill water",
    "water = salt × (1 − w) ÷ w, with w the share of salt in saturated brine",
    unit="L",
    takes={"salt": "kg", "temperature": "°C"},
    source="SALT-INSTITUTE",
    validity="Saturation takes up to three hours, longer in the cold. 1 kg of water counts as 1 L.",
)
@broadcasts
def refill_water(salt: Number, temperature: Number = 15.6) -> Number:
    """Water that has to flow into the brine tank to dissolve the salt of one regeneration. [L]"""
    share = salt_solubility(temperature)
    return salt * ratio(1.0 - share, share)


@formula(
    "Water of a step",
    "water = flow × minutes",
    unit="L",
    takes={"flow": "L/min", "minutes": "min"},
    source="definition",
)
@broadcasts
def step_water(flow: Number, minutes: Number) -> Number:
    """Water a step of the regeneration takes. [L]"""
    return flow * minutes


@formula(
    "Time of a step",
    "minutes = water ÷ flow",
    unit="min",
    takes={"water": "L", "flow": "L/min"},
    source="definition",
)
@broadcasts
def step_minutes(water: Number, flow: Number) -> Number:
    """Time a step of the regeneration takes. [min]"""
    return ratio(water, flow)


@formula(
    "Diluted brine",
    "brine = salt ÷ (strength × density)",
    unit="L",
    takes={"salt": "kg", "strength": ""},
    source="OPERATOR-TEXT",
    validity="Strength by weight, 8 to 12 % is usual; density at 20 °C.",
)
@broadcasts
def diluted_brine(salt: Number, strength: Number = 0.10) -> Number:
    """Volume of brine as it meets the resin; NaN where the strength is outside 0 to 26 %. [L]"""
    return ratio(salt, strength * interpolate(strength, _BRINE_STRENGTH, _BRINE_DENSITY))


@formula(
    "Backwash flow",
    "flow = area × velocity × 1000 ÷ 60",
    unit="L/min",
    takes={"area": "m²", "velocity": "m/h"},
    source="TRADE-BACKWASH",
    validity="12.2 m/h (5 gpm/ft²) lifts usual resin by half its depth at 10 °C; colder water needs less, warmer more.",
)
@broadcasts
def backwash_flow(area: Number, velocity: Number = BACKWASH_VELOCITY) -> Number:
    """Flow that loosens and washes the bed; the drain must take it. [L/min]"""
    return area * velocity / 0.06


def regeneration_steps(
    resin_volume: Number,
    area: Number,
    salt: Number,
    *,
    temperature: Number = 15.6,
    backwash_velocity: Number = BACKWASH_VELOCITY,
    backwash_minutes: Number = 10.0,
    brine_strength: Number = 0.10,
    brine_flow: Number = 4.0,
    slow_rinse: Number = 1.5,
    fast_rinse: Number = 2.0,
    fast_rinse_flow: Number = 15.0,
) -> tuple[Step, ...]:
    """Steps of a regeneration with their water [L], flow [L/min] and time [min].

    Arguments: resin [L], area [m²], salt [kg], water temperature [°C], backwash velocity [m/h] and time
    [min], brine strength by weight, flow of brine and slow rinse [BV/h], slow and fast rinse [BV], fast
    rinse flow [BV/h]. Defaults: backwash of at least 10 min and brine of about 10 % [OPERATOR-TEXT], slow
    rinse of 1-3 BV and fast rinse of 12-16 BV/h [UFC3-240], all rinsing together 2.7-4.7 BV [OPERATOR-
    TEXT], brine at 4-8 BV/h (common practice). The brine draws its own water besides what the tank was
    filled with, so no litre is counted twice.
    """
    refill = refill_water(salt, temperature)
    brine = diluted_brine(salt, brine_strength)
    brine_rate = step_water(resin_volume, brine_flow / 60.0)
    fast_rate = step_water(resin_volume, fast_rinse_flow / 60.0)
    wash = backwash_flow(area, backwash_velocity)
    slow, fast = step_water(resin_volume, slow_rinse), step_water(resin_volume, fast_rinse)
    return (
        Step("backwash", step_water(wash, backwash_minutes), wash, backwash_minutes),
        Step("brine", _dilution(salt, brine_strength, refill), brine_rate, step_minutes(brine, brine_rate)),
        Step("slow rinse", slow, brine_rate, step_minutes(slow, brine_rate)),
        Step("fast rinse", fast, fast_rate, step_minutes(fast, fast_rate)),
        Step("refill", refill, fast_rate, step_minutes(refill, fast_rate)),
    )


@broadcasts
def _dilution(salt: Number, strength: Number, refill: Number) -> Number:
    """Water the injector adds to saturated brine to reach the strength. [L]"""
    return ratio(salt, strength) - salt - refill


@formula(
    "Water per regeneration",
    "water = backwash + brine + slow rinse + fast rinse + refill",
    unit="L",
    takes={"resin_volume": "L", "area": "m²", "salt": "kg", "temperature": "°C", "backwash_velocity": "m/h"},
    source="OPERATOR-TEXT",
    validity="Usual times and rates of each step, the valve's own settings know better: backwash 10 min at "
    "the velocity given, slow rinse 1.5 and fast rinse 2 bed volumes, brine of 10 %.",
)
def water_per_regeneration(
    resin_volume: Number,
    area: Number,
    salt: Number,
    temperature: Number = 15.6,
    backwash_velocity: Number = BACKWASH_VELOCITY,
) -> Number:
    """Water that one regeneration with the usual steps takes from the main. [L]"""
    return regeneration_water(
        regeneration_steps(resin_volume, area, salt, temperature=temperature, backwash_velocity=backwash_velocity)
    )


def regeneration_water(steps: Iterable[Step]) -> Number:
    """Water all steps take from the main. [L]"""
    return sum(step.water for step in steps)


def regeneration_minutes(steps: Iterable[Step]) -> Number:
    """Time all steps take. [min]"""
    return sum(step.minutes for step in steps)


def drain_flow(steps: Iterable[Step]) -> Number:
    """Highest flow the drain has to take during a regeneration. [L/min]"""
    flows = [step.flow for step in steps if step.name != "refill"]
    highest = flows[0]
    for flow in flows[1:]:
        highest = larger(highest, flow)
    return highest


@formula(
    "Salt in store",
    "store = salt a year × weeks ÷ 52.14",
    unit="kg",
    takes={"salt_per_year": "kg/year", "weeks": "weeks"},
    source="common practice, no source",
    validity="4 to 12 weeks between fillings are usual.",
)
@broadcasts
def salt_storage(salt_per_year: Number, weeks: Number = 8.0) -> Number:
    """Salt the brine tank should hold to be filled only every so many weeks. [kg]"""
    return salt_per_year * weeks * 7.0 / 365.0


@formula(
    "Brine tank",
    "volume = salt in store ÷ bulk density + refill water",
    unit="L",
    takes={"storage": "kg", "refill": "L", "bulk_density": "kg/L"},
    source="common practice, no source",
    validity="Pellets and tablets weigh 1.0 to 1.1 kg for each litre they take up.",
)
@broadcasts
def brine_tank_volume(storage: Number, refill: Number, bulk_density: Number = 1.05) -> Number:
    """Volume of a brine tank that holds this much salt [kg] and the refill water [L]. [L]"""
    return ratio(storage, bulk_density) + refill
