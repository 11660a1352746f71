"""Blending two streams: raw water past the softener, and what the exchange adds.

raw_share(raw, softened, target [mmol/L]) -> share  also the real share of a measured blend; NaN if impossible
blend(raw, softened, share) -> same unit  hardness and every conserved quantity, NaN outside 0-1
check_blend(raw, softened, target)                           raises InputError with a sentence
check_share(share)                                           raises InputError with a sentence
stream_flow(flow [L/min], share) -> L/min
hardness_removed(raw, target=0 [mmol/L]) -> mmol/L
sodium_added(removed [mmol/L]) -> mg/L;  potassium_added(removed) -> mg/L
sodium_after(sodium [mg/L], removed [mmol/L]) -> mg/L
largest_removal(sodium, limit [mg/L]) -> mmol/L
daily_sodium(sodium [mg/L], litres=2) -> mg/day
sodium_limits() -> tuple[SodiumLimit, ...];  sodium_limits_exceeded(sodium) -> tuple[SodiumLimit, ...]
CONSERVED, NOT_CONSERVED                                     what mixes by share, what does not
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache
from typing import Any

import numpy as np

from core.constants import ATOMIC_WEIGHTS
from core.data import number, read_table
from core.errors import InputError
from core.treatment.broadcast import Number, broadcasts, larger, only_where, ratio, smaller
from core.working import formula

CONSERVED = (
    "calcium",
    "magnesium",
    "sodium",
    "potassium",
    "chloride",
    "sulfate",
    "nitrate",
    "alkalinity",
    "inorganic carbon",
)
NOT_CONSERVED = ("pH", "carbon dioxide", "carbonate", "saturation index")


@dataclass(frozen=True, slots=True)
class SodiumLimit:
    """A limit or an advice for sodium in drinking water."""

    key: str
    region: str
    words: str
    value: float  # mg/L
    kind: str
    source: str
    status: str


@formula(
    "Share of raw water",
    "raw share = (blend − softened) ÷ (raw − softened)",
    unit="",
    takes={"raw": "mmol/L", "softened": "mmol/L", "target": "mmol/L"},
    source="definition",
    validity="The blend must lie between its two parts. With a measured blend it is the share really set.",
)
@broadcasts
def raw_share(raw: Number, softened: Number, target: Number) -> Number:
    """Part of the blend that is raw water; NaN where the target does not lie between the two streams."""
    possible = (target >= smaller(raw, softened)) & (target <= larger(raw, softened))
    return only_where(possible, ratio(target - softened, raw - softened))


@formula(
    "Blend",
    "blend = share × raw + (1 − share) × softened",
    unit="as its parts",
    takes={"raw": "as the blend", "softened": "as the blend", "share": ""},
    source="definition",
    validity="Hardness, ions, alkalinity and inorganic carbon mix by share. pH and saturation do not: "
    "compute them anew.",
)
@broadcasts
def blend(raw: Number, softened: Number, share: Number) -> Number:
    """Concentration of a conserved quantity in the blend, in the unit of its parts; NaN for a share outside
    0 to 1.
    """
    return only_where((share >= 0.0) & (share <= 1.0), share * raw + (1.0 - share) * softened)


def check_blend(raw: Any, softened: Any, target: Any) -> None:
    """Refuse a target that two streams cannot give: InputError says what is wrong and what to enter."""
    for name, value in (("raw hardness", raw), ("softened hardness", softened), ("target", target)):
        if not np.all(np.asarray(value, dtype=float) >= 0.0):
            raise InputError(name, value, f"The {name} is missing or below zero. Enter a hardness of zero or more.")
    if np.any(np.equal(raw, softened)):
        raise InputError("softened hardness", softened, "Both streams are equally hard: no share changes the blend.")
    if np.any(np.less(raw, softened)):
        raise InputError(
            "softened hardness",
            softened,
            "The softened water is harder than the raw water. Check which is which.",
        )
    if np.any(np.greater(target, raw)):
        raise InputError(
            "target",
            target,
            "The target is harder than the raw water. Enter one between the softened and the raw water.",
        )
    if np.any(np.less(target, softened)):
        raise InputError(
            "target",
            target,
            "The target is softer than the softened water. Enter one between the two, or soften better.",
        )


def check_share(share: Any) -> None:
    """Refuse a share outside 0 to 1: raises InputError."""
    values = np.asarray(share, dtype=float)
    if not np.all((values >= 0.0) & (values <= 1.0)):
        raise InputError("raw share", share, "The share of raw water must lie between 0 and 100 %.")


@formula(
    "Flow of one stream",
    "stream = flow × share",
    unit="L/min",
    takes={"flow": "L/min", "share": ""},
    source="definition",
)
@broadcasts
def stream_flow(flow: Number, share: Number) -> Number:
    """Flow of the stream that makes up this share of the blend. [L/min]"""
    return flow * share


@formula(
    "Hardness removed",
    "removed = raw − target",
    unit="mmol/L",
    takes={"raw": "mmol/L", "target": "mmol/L"},
    source="definition",
)
@broadcasts
def hardness_removed(raw: Number, target: Number = 0.0) -> Number:
    """Hardness taken out of the water on the way to the taps [mmol/L]; none where the target is above the raw
    water.
    """
    return larger(raw - target, 0.0)


@formula(
    "Sodium added",
    "sodium = 2 × 22.990 × hardness removed",
    unit="mg/L",
    takes={"removed": "mmol/L"},
    source="IUPAC21",
    validity="Two sodium ions for each calcium or magnesium ion, salt used: sodium chloride.",
)
@broadcasts
def sodium_added(removed: Number) -> Number:
    """Sodium the exchange adds to the water, resin regenerated with common salt. [mg/L]"""
    return removed * (2.0 * ATOMIC_WEIGHTS["Na"])


@formula(
    "Potassium added",
    "potassium = 2 × 39.098 × hardness removed",
    unit="mg/L",
    takes={"removed": "mmol/L"},
    source="IUPAC21",
    validity="Salt used: potassium chloride. People with kidney disease ask their physician.",
)
@broadcasts
def potassium_added(removed: Number) -> Number:
    """Potassium the exchange adds to the water, resin regenerated with potassium chloride. [mg/L]"""
    return removed * (2.0 * ATOMIC_WEIGHTS["K"])


@formula(
    "Sodium at the tap",
    "sodium = sodium in the raw water + 2 × 22.990 × hardness removed",
    unit="mg/L",
    takes={"sodium": "mg/L", "removed": "mmol/L"},
    source="IUPAC21",
)
@broadcasts
def sodium_after(sodium: Number, removed: Number) -> Number:
    """Sodium in the water after so much hardness was removed with common salt. [mg/L]"""
    return sodium + removed * (2.0 * ATOMIC_WEIGHTS["Na"])


@formula(
    "Most hardness that may be removed",
    "removed = (limit − sodium in the raw water) ÷ (2 × 22.990)",
    unit="mmol/L",
    takes={"sodium": "mg/L", "limit": "mg/L"},
    source="IUPAC21",
)
@broadcasts
def largest_removal(sodium: Number, limit: Number) -> Number:
    """Hardness that can be removed before sodium reaches a limit [mmol/L]; none where it is there already."""
    return larger(limit - sodium, 0.0) / (2.0 * ATOMIC_WEIGHTS["Na"])


@formula(
    "Sodium drunk in a day",
    "sodium a day = sodium × litres",
    unit="mg/day",
    takes={"sodium": "mg/L", "litres": "L/day"},
    source="EPA-SODIUM",
    validity="2 L a day is the figure the US EPA reckons with.",
)
@broadcasts
def daily_sodium(sodium: Number, litres: Number = 2.0) -> Number:
    """Sodium taken up in a day with the drinking water. [mg/day]"""
    return sodium * litres


@cache
def sodium_limits() -> tuple[SodiumLimit, ...]:
    """Limits and advice for sodium [mg/L]: [EU2020-2184], [TRINKWV2023], [WHO-GDWQ], [EPA-SODIUM]."""
    return tuple(
        SodiumLimit(
            row["key"],
            row["region"],
            row["words"],
            number(row, "value"),
            row["kind"],
            row["source"],
            row["status"],
        )
        for row in read_table("sodium_limits").rows
    )


def sodium_limits_exceeded(sodium: float) -> tuple[SodiumLimit, ...]:
    """Limits and advice that this much sodium [mg/L] exceeds, in the order of the table."""
    return tuple(limit for limit in sodium_limits() if sodium > limit.value)
