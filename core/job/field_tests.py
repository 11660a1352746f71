"""Tests as people do them in the field: drops, titrant, dilution, repeats.

    drops(count, per_drop, dilution=1) -> in the unit of a drop
    titration(titrant_ml, titrant_molarity, sample_ml, dilution=1) -> mmol/L
    repeat(readings, resolution=0) -> Repeat    mean, standard error, the outlier if there is one
    mean_reading(readings), standard_error(readings), grubbs_distance(readings)
    by_drops(kit, counts, field, unit, dilution=1) -> FieldReading       the entry made from it, with its working
    by_titration(kit, titrant_ml, titrant_molarity, sample_ml, field, unit, dilution=1) -> FieldReading

An outlier is pointed out, never removed: whether to leave it out is for the one who read it. The test is Grubbs'
for one outlier, two-sided at 5 %, with the critical values of [ISO5725-2]; readings no further off than the
resolution of the kit are never called outliers, however evenly the others agree.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cache
from math import fsum, isfinite, nan, sqrt

from core.data import number, read_table
from core.errors import InputError
from core.job.fields import Field
from core.job.kits import HowRead, Kit
from core.job.record import Entry
from core.units import convert
from core.working import Working, formula

MOST_READINGS = 20  # as far as the table of critical values goes


@formula(
    "Reading by drops",
    "reading = drops × value of a drop × dilution",
    unit="as a drop",
    takes={"count": "drops", "per_drop": "as a drop", "dilution": ""},
    source="definition",
    validity="Count the drop that completes the change of colour; hold the bottle upright.",
)
def drops(count: float, per_drop: float, dilution: float = 1.0) -> float:
    """What a count of drops reads, the sample diluted to `dilution` times its volume. [unit of a drop]

    Raises InputError for a count below zero, a drop worth nothing, a dilution below 1.
    """
    _refuse_unless(count >= 0.0, "drops", count, "The number of drops must be zero or more.")
    _refuse_unless(per_drop > 0.0, "value of a drop", per_drop, "A drop must be worth more than nothing: see the kit.")
    _check_dilution(dilution)
    return count * per_drop * dilution


@formula(
    "Reading by titration",
    "reading = titrant × its strength × 1000 ÷ sample × dilution",
    unit="mmol/L",
    takes={"titrant_ml": "mL", "titrant_molarity": "mol/L", "sample_ml": "mL", "dilution": ""},
    source="SM2340C",
    validity="Hardness by EDTA at pH 10, finished within 5 minutes; or alkalinity by acid, its strength in mol/L of "
    "protons, the result then in meq/L.",
)
def titration(titrant_ml: float, titrant_molarity: float, sample_ml: float, dilution: float = 1.0) -> float:
    """Hardness by EDTA, or alkalinity by acid, from what was used of the titrant. [mmol/L; meq/L for alkalinity]

    Raises InputError for volumes or strengths that cannot be.
    """
    _refuse_unless(titrant_ml >= 0.0, "titrant", titrant_ml, "The titrant used must be zero mL or more.")
    _refuse_unless(
        0.0 < titrant_molarity <= 10.0, "strength", titrant_molarity, "Enter the titrant's strength in mol/L."
    )
    _refuse_unless(sample_ml > 0.0, "sample", sample_ml, "Enter the volume of the sample in mL.")
    _check_dilution(dilution)
    return titrant_ml * titrant_molarity * 1000.0 / sample_ml * dilution


@formula(
    "Mean of the readings",
    "mean = sum of the readings ÷ their number",
    unit="as read",
    takes={"readings": "as read"},
    source="definition",
)
def mean_reading(readings: Sequence[float]) -> float:
    """Mean of repeated readings; NaN of none. [as read]"""
    return fsum(readings) / len(readings) if readings else nan


@formula(
    "Standard error of the mean",
    "standard error = standard deviation of the readings ÷ √(their number)",
    unit="as read",
    takes={"readings": "as read"},
    source="GUM",
    validity="Two readings or more; with two or three it is itself only a guess.",
)
def standard_error(readings: Sequence[float]) -> float:
    """How far the mean of repeated readings may stray by chance, one standard deviation; NaN below two. [as read]"""
    return _standard_deviation(readings) / sqrt(len(readings)) if len(readings) > 1 else nan


@formula(
    "Distance of the farthest reading",
    "distance = largest distance from the mean ÷ standard deviation",
    unit="",
    takes={"readings": "as read"},
    source="ISO5725-2",
    validity="Three readings or more.",
)
def grubbs_distance(readings: Sequence[float]) -> float:
    """Grubbs' statistic of the reading farthest from the mean; NaN where all agree or there are under three."""
    spread = _standard_deviation(readings) if len(readings) > 2 else 0.0
    mean = mean_reading(readings)
    return max(abs(reading - mean) for reading in readings) / spread if spread > 0.0 else nan


@dataclass(frozen=True, slots=True)
class Repeat:
    """Repeated readings of one sample."""

    readings: tuple[float, ...]
    mean: float
    standard_error: float  # NaN for a single reading
    outlier: int | None  # index of the reading that does not belong with the others
    mean_without: float  # of the others; the mean of all where there is no outlier
    words: str  # a sentence on the outlier and how it was found; "" where there is none


def repeat(readings: Sequence[float], resolution: float = 0.0) -> Repeat:
    """Mean and standard error of repeated readings, and the one that does not belong with the others.

    `resolution` is what two honest readings may differ by (one drop). Raises InputError for none, for more than
    20, or for a reading that is no number.
    """
    held = tuple(map(float, readings))
    if not held or len(held) > MOST_READINGS:
        raise InputError("readings", len(held), f"Enter from 1 to {MOST_READINGS} readings.")
    if not all(map(isfinite, held)):
        raise InputError("readings", held, "Each reading must be a number.")
    mean, error = mean_reading(held), standard_error(held)
    outlier = _outlier(held, resolution)
    if outlier is None:
        return Repeat(held, mean, error, None, mean, "")
    others = [reading for index, reading in enumerate(held) if index != outlier]
    words = (
        f"Reading {outlier + 1} ({held[outlier]:g}) does not belong with the others (Grubbs' test at 5 %). Read once "
        "more; leave it out only if you know what went wrong."
    )
    return Repeat(held, mean, error, outlier, mean_reading(others), words)


@dataclass(frozen=True, slots=True)
class FieldReading:
    """A test done in the field: the entry it makes, its repeats, and the steps that led to it."""

    entry: Entry
    repeat: Repeat
    working: Working


def by_drops(kit: Kit, counts: Sequence[float], field: Field, unit: str = "", dilution: float = 1.0) -> FieldReading:
    """The entry that counts of drops make; the kit's resolution is the value of a drop. InputError as `drops`."""
    working = Working()
    readings = tuple(working.step(drops, count=c, per_drop=kit.resolution, dilution=dilution) for c in counts)
    return _entry(kit, readings, kit.unit, kit.resolution * dilution, field, unit, dilution, working)


def by_titration(
    kit: Kit,
    titrant_ml: Sequence[float],
    titrant_molarity: float,
    sample_ml: float,
    field: Field,
    unit: str = "",
    dilution: float = 1.0,
) -> FieldReading:
    """The entry that volumes of titrant make. InputError as `titration`."""
    working = Working()
    readings = tuple(
        working.step(
            titration, titrant_ml=used, titrant_molarity=titrant_molarity, sample_ml=sample_ml, dilution=dilution
        )
        for used in titrant_ml
    )
    return _entry(kit, readings, "mmol/L", 0.0, field, unit, dilution, working)


def _entry(
    kit: Kit,
    readings: tuple[float, ...],
    read_in: str,
    resolution: float,
    field: Field,
    unit: str,
    dilution: float,
    working: Working,
) -> FieldReading:
    unit = unit or read_in
    factor = convert(1.0, read_in, unit, quantity=field.quantity)
    repeated = repeat(readings, resolution)
    mean = working.step(mean_reading, readings=repeated.readings)
    error = repeated.standard_error * factor if len(readings) > 1 else 0.0
    how = HowRead(kit.words, dilution, len(readings), error)
    return FieldReading(Entry(mean * factor, unit, "measured", how.text), repeated, working)


@cache
def _critical() -> dict[int, float]:
    return {int(number(row, "readings")): number(row, "critical") for row in read_table("kits_outlier").rows}


def _outlier(readings: Sequence[float], resolution: float) -> int | None:
    distance = grubbs_distance(readings)
    if not distance > _critical().get(len(readings), nan):
        return None
    mean = mean_reading(readings)
    index = max(range(len(readings)), key=lambda at: abs(readings[at] - mean))
    others = [reading for at, reading in enumerate(readings) if at != index]
    gap = min(abs(readings[index] - other) for other in others)
    return index if gap > resolution * (1.0 + 1e-9) else None


def _standard_deviation(readings: Sequence[float]) -> float:
    mean = mean_reading(readings)
    return sqrt(fsum((reading - mean) ** 2 for reading in readings) / (len(readings) - 1))


def _check_dilution(dilution: float) -> None:
    _refuse_unless(
        1.0 <= dilution <= 1000.0,
        "dilution",
        dilution,
        "The dilution says to how many times its volume the sample was filled up: 1 for none, 2 for half and half.",
    )


def _refuse_unless(holds: bool, field: str, value: float, text: str) -> None:
    if not holds:
        raise InputError(field, value, f"{text} {value:g} was entered.")
