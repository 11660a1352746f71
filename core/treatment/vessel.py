"""The vessel: generic sizes, the depth of a bed, how fast water may pass.

vessel_sizes() -> tuple[VesselSize, ...]                     .diameter mm, .heights mm, .resin L
trade_beds() -> tuple[Bed, ...]                              .resin_volume L, .diameter mm
usual_diameter(resin_volume [L]) -> mm
service_limits() -> dict[str, ServiceLimit]                  .value in BV/h or m/h, with source and status
bed_area(diameter [mm], wall_share=0) -> m²
bed_depth(resin_volume [L], area [m²]) -> m
specific_flow(flow [L/min], resin_volume [L]) -> BV/h
surface_loading(flow [L/min], area [m²]) -> m/h
largest_peak_flow(resin_volume, area, specific_limit=64.2 [BV/h], surface_limit=48.9 [m/h]) -> L/min
least_flow(resin_volume, specific_least=8.02 [BV/h]) -> L/min
peak_flow_margin(allowed, peak_flow [L/min]) -> share          0.2 = 20 % to spare, negative = too small
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache
from math import pi

from core.constants import CUBIC_FOOT, INCH, US_GALLON
from core.data import number, read_table
from core.treatment.broadcast import Number, broadcasts, ratio, smaller
from core.working import formula

GPM_PER_CUBIC_FOOT = 60.0 * US_GALLON / CUBIC_FOOT  # BV/h
GPM_PER_SQUARE_FOOT = 60.0 * US_GALLON / 1000.0 / (12.0 * INCH / 1000.0) ** 2  # m/h
_LIMIT_UNITS = {"gpm/ft3": (GPM_PER_CUBIC_FOOT, "BV/h"), "gpm/ft2": (GPM_PER_SQUARE_FOOT, "m/h")}


@dataclass(frozen=True, slots=True)
class VesselSize:
    """A generic vessel and the resin it usually holds."""

    diameter: float  # mm, nominal, outside
    heights: tuple[float, float]  # mm, lowest and highest in use
    resin: tuple[float, float]  # L, least and most in use
    source: str
    status: str


@dataclass(frozen=True, slots=True)
class Bed:
    """A usual bed: so much resin in a vessel of that diameter."""

    resin_volume: float  # L
    diameter: float  # mm


@dataclass(frozen=True, slots=True)
class ServiceLimit:
    """A limit for flow through a bed, with where it comes from."""

    key: str
    words: str
    value: float
    unit: str  # BV/h or m/h
    kind: str
    source: str
    status: str


@cache
def vessel_sizes() -> tuple[VesselSize, ...]:
    """Generic vessels, smallest first; common practice, no source."""
    return tuple(
        VesselSize(
            number(row, "diameter_in") * INCH,
            (number(row, "height_low_in") * INCH, number(row, "height_high_in") * INCH),
            (number(row, "resin_low_ft3") * CUBIC_FOOT, number(row, "resin_high_ft3") * CUBIC_FOOT),
            row["source"],
            row["status"],
        )
        for row in read_table("vessel_sizes").rows
    )


@cache
def trade_beds() -> tuple[Bed, ...]:
    """The usual beds, least resin first: the least and the most resin each generic vessel holds."""
    beds = {Bed(volume, size.diameter) for size in vessel_sizes() for volume in size.resin}
    return tuple(sorted(beds, key=lambda bed: (bed.resin_volume, bed.diameter)))


@formula(
    "Usual vessel",
    "the narrowest usual vessel that holds so much resin",
    unit="mm",
    takes={"resin_volume": "L"},
    source="common practice, no source",
    validity="Nominal diameter of the generic sizes; above the largest the largest is named.",
)
def usual_diameter(resin_volume: float) -> float:
    """Diameter of the vessel that so much resin usually sits in. [mm]"""
    usual = trade_beds()
    fitting = (bed.diameter for bed in usual if bed.resin_volume >= resin_volume * (1.0 - 1e-6))
    return next(fitting, usual[-1].diameter)


@cache
def service_limits() -> dict[str, ServiceLimit]:
    """Limits for flow through a bed: [TRADE-PRESS], [OPERATOR-TEXT], [VAC590-900], common practice."""
    limits = {}
    for row in read_table("service_limits").rows:
        factor, unit = _LIMIT_UNITS[row["unit"]]
        value = number(row, "value") * factor
        limits[row["key"]] = ServiceLimit(
            row["key"], row["words"], value, unit, row["kind"], row["source"], row["status"]
        )
    return limits


SPECIFIC_PEAK = 8.0 * GPM_PER_CUBIC_FOOT  # BV/h, short peaks; common practice, no source (8 to 10 gpm/ft³)
SPECIFIC_LEAST = 1.0 * GPM_PER_CUBIC_FOOT  # BV/h, below it the water channels [TRADE-PRESS]
SURFACE_PEAK = 20.0 * GPM_PER_SQUARE_FOOT  # m/h, short peaks; common practice, no source


@formula(
    "Area of the bed",
    "area = π ÷ 4 × diameter² × (1 − wall share)",
    unit="m²",
    takes={"diameter": "mm", "wall_share": ""},
    source="definition",
    validity="The nominal diameter is outside; the wall takes 3 to 5 % off the area (common practice).",
)
@broadcasts
def bed_area(diameter: Number, wall_share: Number = 0.0) -> Number:
    """Cross-section of the bed. [m²]"""
    return pi / 4.0e6 * diameter * diameter * (1.0 - wall_share)


@formula(
    "Depth of the bed",
    "depth = resin ÷ 1000 ÷ area",
    unit="m",
    takes={"resin_volume": "L", "area": "m²"},
    source="definition",
    validity="At least 0.61 m in general [OPERATOR-TEXT], 0.91 m in public works [VAC590-900].",
)
@broadcasts
def bed_depth(resin_volume: Number, area: Number) -> Number:
    """Depth of the settled bed. [m]"""
    return ratio(resin_volume / 1000.0, area)


@formula(
    "Specific flow",
    "specific flow = flow × 60 ÷ resin",
    unit="BV/h",
    takes={"flow": "L/min", "resin_volume": "L"},
    source="definition",
)
@broadcasts
def specific_flow(flow: Number, resin_volume: Number) -> Number:
    """Bed volumes of water that pass in an hour at this flow. [BV/h]"""
    return ratio(60.0 * flow, resin_volume)


@formula(
    "Surface loading",
    "velocity = flow × 60 ÷ 1000 ÷ area",
    unit="m/h",
    takes={"flow": "L/min", "area": "m²"},
    source="definition",
)
@broadcasts
def surface_loading(flow: Number, area: Number) -> Number:
    """Velocity of the water above the bed at this flow. [m/h]"""
    return ratio(0.06 * flow, area)


@formula(
    "Largest peak flow",
    "the smaller of: resin × specific limit ÷ 60, and area × velocity limit × 1000 ÷ 60",
    unit="L/min",
    takes={"resin_volume": "L", "area": "m²", "specific_limit": "BV/h", "surface_limit": "m/h"},
    source="common practice, no source",
    validity="Short peaks. Above it hardness slips through before the resin can take it up.",
)
@broadcasts
def largest_peak_flow(
    resin_volume: Number,
    area: Number,
    specific_limit: Number = SPECIFIC_PEAK,
    surface_limit: Number = SURFACE_PEAK,
) -> Number:
    """Highest short flow the bed still softens, by the trade's limits. [L/min]"""
    return smaller(resin_volume * specific_limit / 60.0, area * surface_limit / 0.06)


@formula(
    "Least flow",
    "least = resin × 8.02 ÷ 60",
    unit="L/min",
    takes={"resin_volume": "L", "specific_least": "BV/h"},
    source="TRADE-PRESS",
    validity="Below it the water finds channels and hardness slips through; a dripping tap always does.",
)
@broadcasts
def least_flow(resin_volume: Number, specific_least: Number = SPECIFIC_LEAST) -> Number:
    """Flow below which water channels through the bed. [L/min]"""
    return resin_volume * specific_least / 60.0


@formula(
    "Margin on the peak flow",
    "margin = largest peak flow ÷ peak flow − 1",
    unit="",
    takes={"allowed": "L/min", "peak_flow": "L/min"},
    source="definition",
)
@broadcasts
def peak_flow_margin(allowed: Number, peak_flow: Number) -> Number:
    """What the bed has to spare at the peak, as a share of the peak; negative where it is too small."""
    return ratio(allowed, peak_flow) - 1.0
