"""Checks of the house, the softener and the blend; see `core.job.checks`."""

from __future__ import annotations

from collections.abc import Iterator

from core.job.known import Known, amount
from core.job.odd import Odd, did_you_mean, other_units

VOLUME, PERSONS, BATHROOMS = "demand.daily_volume", "demand.persons", "demand.bathrooms"
LEAST_USE, MOST_USE = 50.0, 500.0  # L a person and day; published averages lie between 121 and 310
USUAL_USE = (80.0, 350.0)
MOST_PER_BATHROOM = 8.0  # persons
SPARE_BATHROOMS = 3.0  # beyond one for each person
MINUTES = 1440.0  # in a day


def use_per_person(known: Known) -> Iterator[Odd]:
    """What a person uses a day lies within a factor of a few everywhere."""
    entered = known["demand.per_person"]
    if entered is not None and not LEAST_USE <= entered <= MOST_USE:
        units = ("L/person/day", "US gal/person/day")
        units = other_units(known, "demand.per_person", units, lambda use: USUAL_USE[0] <= use <= USUAL_USE[1])
        what = f"{known.shown('demand.per_person')} is an unusual use; averages lie between 120 and 310 L."
        yield Odd("demand.per_person", what, did_you_mean(known, "demand.per_person", units, "Read the water meter."))
    values = known.all(VOLUME, PERSONS)
    if values is None or values[1] <= 0.0:
        return
    volume, persons = values
    if LEAST_USE <= volume / persons <= MOST_USE:
        return
    units = other_units(
        known,
        VOLUME,
        ("L/day", "gpd", "m³/day", "imp gal/day"),
        lambda day: USUAL_USE[0] <= day / persons <= USUAL_USE[1],
    )
    each = amount(volume / persons, "L")
    what = f"{known.shown(VOLUME)} for {persons:g} persons is {each} each a day; averages lie between 120 and 310 L."
    if volume / persons > MOST_USE:
        step = "Is there a leak, a garden, a business, or is it the figure of a month?"
    else:
        step = "Was the house empty for a while, or is there a second source?"
    yield Odd(VOLUME, what, did_you_mean(known, VOLUME, units, step))


def bathrooms_against_persons(known: Known) -> Iterator[Odd]:
    """Bathrooms and persons go together."""
    values = known.all(PERSONS, BATHROOMS)
    if values is None or not values[0] > 0.0:
        return
    persons, bathrooms = values
    if bathrooms > persons + SPARE_BATHROOMS:
        what = f"{bathrooms:g} bathrooms for {persons:g} persons are many, and they set the peak flow."
        yield Odd(BATHROOMS, what, "Count those in use at the same time, or enter the guests too.")
    elif bathrooms > 0.0 and persons / bathrooms > MOST_PER_BATHROOM:
        what = f"{persons:g} persons share {bathrooms:g} {'bathroom' if bathrooms == 1 else 'bathrooms'}."
        yield Odd(BATHROOMS, what, "Count again: the peak flow follows from it.")


def peak_below_average(known: Known) -> Iterator[Odd]:
    """A peak is above the average."""
    values = known.all("demand.peak_flow", VOLUME)
    if values is not None and values[0] * MINUTES < values[1]:
        average = known.in_unit_of("demand.peak_flow", values[1] / MINUTES)
        what = f"The peak flow of {known.shown('demand.peak_flow')} is below the average of the day, {average}."
        yield Odd("demand.peak_flow", what, "Look at the unit of both.")


def intervals_crossed(known: Known) -> Iterator[Odd]:
    """The shortest interval is not above the longest."""
    values = known.all("softener.shortest", "softener.longest")
    if values is not None and values[0] > values[1]:
        what = f"The shortest interval, {values[0]:g} days, is longer than the longest, {values[1]:g} days."
        yield Odd("softener.shortest", what, "Are the two swapped?")


def blend_out_of_order(known: Known) -> Iterator[Odd]:
    """Softened, blended and raw water are each harder than the one before."""
    raw, softened = known["water.hardness"], known["blend.softened"]
    if raw is None:
        return
    if softened is not None and softened >= raw > 0.0:
        what = f"After the softener {known.shown('blend.softened')} is no softer than the raw water."
        yield Odd("blend.softened", what, "Are the two samples swapped, or is the bed exhausted?")
    for key, words in (("blend.target", "wanted"), ("blend.measured", "measured in the blend")):
        value = known[key]
        if value is None:
            continue
        if value > raw:
            what = f"The hardness {words}, {known.shown(key)}, is above the raw water's {known.in_unit_of(key, raw)}."
            yield Odd(key, what, "Look at the unit of both.")
        elif softened is not None and value < softened < raw:
            what = f"The hardness {words}, {known.shown(key)}, is below that after the softener."
            yield Odd(key, what, "Look at the unit of both, or soften better.")
