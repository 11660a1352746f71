"""Hardness classes: soft, hard, very hard, in the words of whoever is asked.

    schemes() -> dict[str, Scheme]   USGS, US-TRADE, WHO, US-ARMY, WRMG, DE-OLD, UK-SW, UK-NW, CH
    class_of(hardness, scheme, unit="mg/L CaCO3") -> the name of the class
    class_number(hardness, scheme, unit="mg/L CaCO3") -> 0 for the softest class; NaN for no class

A class is a word for customers, not a result: two bodies call the same water by different names. The table is
`hardness_classes` in core.data. To which class a limit itself belongs is printed in one source only [WRMG]; for
the others it is our choice, marked so. USGS prints whole numbers (121-180): 120.5 is above 120.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache
from itertools import groupby
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from core.data import number, read_table
from core.errors import InputError
from core.units import convert

NO_CLASS = ""  # unknown or negative hardness, or above the last class of the scheme
_ON_THE_LIMIT = 1e-9  # relative: a conversion must not push a value across a limit it lies on


@dataclass(frozen=True, slots=True)
class Scheme:
    """The classes of one body, softest first."""

    key: str
    title: str
    unit: str  # in which the limits are printed
    names: tuple[str, ...]
    uppers: tuple[float, ...]  # upper limit of each class; infinite for an open last one
    upper_belongs: tuple[bool, ...]  # whether the limit itself still belongs to the class
    limits_are_choice: bool  # True where the source leaves open to which class its limits belong
    source: str
    status: str


@cache
def schemes() -> dict[str, Scheme]:
    """Every scheme by its key, as printed; read once."""
    table = read_table("hardness_classes")
    found = {}
    for key, group in groupby(table.rows, key=lambda row: row["scheme"]):
        rows = list(group)
        found[key] = Scheme(
            key=key,
            title=table.notes[key],
            unit=rows[0]["unit"],
            names=tuple(row["class"] for row in rows),
            uppers=tuple(np.inf if row["upper"] == "-" else number(row, "upper") for row in rows),
            upper_belongs=tuple(row["upper_belongs"] != "no" for row in rows),
            limits_are_choice=any(row["rule"] == "choice" for row in rows),
            source=rows[0]["source"],
            status=rows[0]["status"],
        )
    return found


def class_number(hardness: ArrayLike, scheme: str, unit: str = "mg/L CaCO3") -> float | NDArray[np.float64]:
    """Place of the class that a hardness falls in, 0 for the softest; NaN where there is none. [-]"""
    chosen = _scheme(scheme)
    value = np.asarray(convert(hardness, unit, chosen.unit, "hardness"), dtype=float)
    place = np.zeros(value.shape)
    for upper, belongs in zip(chosen.uppers, chosen.upper_belongs, strict=True):
        on_the_limit = np.isclose(value, upper, rtol=_ON_THE_LIMIT, atol=0.0)
        place = place + np.where(on_the_limit, not belongs, value > upper)
    known = (value >= 0.0) & np.isfinite(value) & (place < len(chosen.names))
    place = np.where(known, place, np.nan)
    return place if place.ndim else float(place)


def class_of(hardness: ArrayLike, scheme: str, unit: str = "mg/L CaCO3") -> Any:
    """Name of the class that a hardness falls in: a word for a number, an array of words for an array."""
    place = np.asarray(class_number(hardness, scheme, unit))
    names = np.array([*_scheme(scheme).names, NO_CLASS])
    words = names[np.where(np.isnan(place), -1, place).astype(int)]
    return words if words.ndim else str(words)


def _scheme(key: str) -> Scheme:
    if key not in schemes():
        raise InputError(
            "scheme", key, f"No hardness classes are known under “{key}”; known are {', '.join(schemes())}."
        )
    return schemes()[key]
