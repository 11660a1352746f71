"""What is put into the head of the valve for the softener chosen.

valve_settings(search, pick, refill_flow=1.89 [L/min]) -> ValveSettings
"""

from __future__ import annotations

from dataclasses import dataclass

from core.constants import US_GALLON
from core.treatment import hydraulics, regeneration, softener
from core.treatment.search import Pick, Search


@dataclass(frozen=True, slots=True)
class ValveSettings:
    """What is put into the head of the valve."""

    meter: float  # L of softened water
    salt: float  # kg per regeneration
    refill_water: float  # L into the brine tank
    refill_minutes: float
    override: float  # days, the calendar's longest interval
    reserve: float  # mol, already taken off the meter setting
    steps: tuple[regeneration.Step, ...]


def valve_settings(found: Search, pick: Pick, *, refill_flow: float = 0.5 * US_GALLON) -> ValveSettings:
    """Settings of the valve for one candidate; refill_flow [L/min] is the head's own, 0.5 gpm is common practice."""
    figures = found.figures(pick)
    temperature = found.demand.temperature
    refill = regeneration.refill_water(figures["salt"], temperature)
    return ValveSettings(
        meter=softener.meter_setting(figures["usable"], found.demand.hardness),
        salt=figures["salt"],
        refill_water=refill,
        refill_minutes=regeneration.step_minutes(refill, refill_flow),
        override=found.limits.longest,
        reserve=figures["reserve"],
        steps=regeneration.regeneration_steps(
            figures["resin_volume"],
            figures["area"],
            figures["salt"],
            temperature=temperature,
            backwash_velocity=hydraulics.backwash_velocity(temperature),
        ),
    )
