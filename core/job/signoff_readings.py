"""What a sign-off compares: the figures promised, and the readings taken on site.

Everything is in the units of the core (mmol/L, L, L/min, kPa, kg, mol). A doubt is a standard deviation.
`promised_of` takes the promise from the softener part of an assessment.
"""

from __future__ import annotations

from dataclasses import dataclass, fields
from math import isfinite

from core.errors import InputError
from core.job.answers import Part
from core.treatment.vessel import least_flow

CAPACITY_DOUBT = 0.10  # of a capacity by the trade's table, as a standard deviation: "holds to about 10 to 15 %"
BLEND_WITHIN = 0.18  # mmol/L, 1 °dH: how near a blending valve can be set; common practice, no source
RAW_WITHIN = 0.05  # part by which the raw water may differ from the one designed for; a choice
LARGEST = 1e9


@dataclass(frozen=True, slots=True)
class Measured:
    """A number that was read, and its doubt."""

    value: float
    doubt: float = 0.0  # standard deviation


@dataclass(frozen=True, slots=True)
class Promised:
    """What was promised; None where nothing was."""

    raw: Measured | None = None  # mmol/L: hardness of the raw water that the design rests on
    raw_within: float = RAW_WITHIN
    softened: float | None = None  # mmol/L: at most this after the softener
    blend: float | None = None  # mmol/L at the taps
    blend_within: float = BLEND_WITHIN  # mmol/L either way
    capacity: Measured | None = None  # mol the bed takes up between two regenerations, run to its end
    hardness_set: float | None = None  # mmol/L to set at the valve head, iron counted in
    meter: float | None = None  # L between two regenerations
    salt: float | None = None  # kg for one regeneration
    peak: float | None = None  # L/min at the taps
    largest_flow: float | None = None  # L/min the bed carries for a short time
    least_flow: float | None = None  # L/min below which water may find channels through the bed
    pressure_loss: float | None = None  # kPa at most, at `pressure_flow`
    pressure_flow: float | None = None  # L/min

    def check(self) -> None:
        """InputError where a number cannot be."""
        _check(self)


@dataclass(frozen=True, slots=True)
class Readings:
    """What was read after commissioning; None where nothing was."""

    raw: Measured | None = None  # mmol/L
    softened_fresh: Measured | None = None  # mmol/L, right after a regeneration, blending valve closed
    softened_late: Measured | None = None  # mmol/L, at the end of the run, or now
    flow: Measured | None = None  # L/min while these two were taken
    softened_slow: Measured | None = None  # mmol/L at `slow_flow`, within one hour of the next
    softened_fast: Measured | None = None  # mmol/L at `fast_flow`
    slow_flow: Measured | None = None  # L/min
    fast_flow: Measured | None = None  # L/min
    closed: Measured | None = None  # mmol/L at a tap, with the blending valve closed
    blend: Measured | None = None  # mmol/L at a tap, with the blending valve as set
    water_since: Measured | None = None  # L through the resin since the regeneration, when `softened_late` was read
    hardness_set: Measured | None = None  # mmol/L at the valve head
    meter_set: Measured | None = None  # L at the valve head
    salt_used: Measured | None = None  # kg in the last regeneration
    peak_flow: Measured | None = None  # L/min
    pressure_loss: Measured | None = None  # kPa, at `pressure_flow`
    pressure_flow: Measured | None = None  # L/min
    counted: Measured | None = None  # L the meter counted while `drawn` was drawn
    drawn: Measured | None = None  # L

    def check(self) -> None:
        """InputError where a number cannot be."""
        _check(self)


def _check(held: Promised | Readings) -> None:
    for column in fields(held):
        value = getattr(held, column.name)
        parts = (value.value, value.doubt) if isinstance(value, Measured) else (value,)
        for part in parts:
            if part is not None and not (isfinite(part) and 0.0 <= part <= LARGEST):
                name = column.name.replace("_", " ")
                raise InputError(column.name, part, f"The {name} is {part}; it must be a number of zero or more.")


def promised_of(
    softener: Part, *, softened: float | None = None, raw: Measured | None = None, blend: float | None = None
) -> Promised:
    """What the softener part of an assessment promises; what it does not answer is left open.

    `softened` [mmol/L] is the hardness that counts as soft, `raw` the hardness of the raw water with its doubt, `blend`
    the hardness wanted at the taps.
    """

    def answer(key: str) -> float | None:
        found = softener.answers.get(key)
        return None if found is None else found.amount.value

    capacity = answer("capacity")
    resin, flow = answer("resin"), softener.answers.get("flow")
    peaks = [mark.at.value for mark in flow.marks if mark.name == "peak"] if flow else []
    return Promised(
        raw=raw,
        softened=softened,
        blend=blend,
        capacity=None if capacity is None else Measured(capacity, CAPACITY_DOUBT * capacity),
        hardness_set=answer("hardness"),
        meter=answer("meter"),
        salt=answer("salt"),
        peak=peaks[0] if peaks else None,
        largest_flow=answer("flow"),
        least_flow=None if resin is None else least_flow(resin),
    )
