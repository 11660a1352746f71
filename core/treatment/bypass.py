"""A bypass set once and left: what it lets past the resin when more or less water is drawn.

    softened_path(resin_volume [L], area [m²], temperature [°C], rated_flow [L/min], rated_loss [kPa], ...) -> Path
    path_loss(flow [L/min], linear, square) -> kPa
    bypass_opening(flow [L/min], share, linear, square) -> L/min/√kPa         from the share found at one flow
    bypass_share(flow [L/min], opening, linear, square) -> share              the same setting at another flow
    swing(path, set_flow, share, flows, raw, softened [mmol/L]) -> Swing      share, hardness and loss at each flow
    ASSUMPTIONS                                                               what all this takes for granted

Both ways round lose the same pressure. Past the resin the water passes an opening, whose loss goes with the square of
the flow; through the bed, whose loss goes more nearly with the flow itself. So at low flow the bypass takes a larger
share and the taps get harder water; at high flow the other way about. Losses of valve and distributor go with the
square too and steady the blend: a unit whose fittings lose more than its bed hardly swings. A valve that mixes by
hardness or by pressure, not by a fixed opening, is another matter.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

from core.treatment import hydraulics
from core.treatment.blending import blend
from core.treatment.broadcast import Number, broadcasts, larger, only_where, power, ratio
from core.treatment.vessel import bed_depth, surface_loading
from core.working import formula

ASSUMPTIONS = (
    "The opening of the bypass stays as it is set, and the pressure it loses goes with the square of its flow.",
    "Bypass and softener begin and end at the same points, with nothing else between them.",
    "The softened water stays as hard as it is at every flow; at very low and very high flow it gets harder.",
)


@dataclass(frozen=True, slots=True)
class Path:
    """How the way through the softener loses pressure: linear × flow + square × flow²."""

    linear: Number  # kPa/(L/min)
    square: Number  # kPa/(L/min)²


@dataclass(frozen=True, slots=True)
class Swing:
    """What a bypass set at one flow does at others."""

    flows: Number  # L/min, both ways together
    share: Number  # of raw water
    hardness: Number  # mmol/L, of the blend
    loss: Number  # kPa across softener and bypass
    opening: Number  # L/min/√kPa


def softened_path(
    resin_volume: Number,
    area: Number,
    temperature: Number,
    rated_flow: Number = 30.0,
    rated_loss: Number = 0.0,
    *,
    bead: Number = hydraulics.BEAD,
    voids: Number = hydraulics.VOIDS,
) -> Path:
    """Pressure loss of bed and fittings as a function of the flow through them.

    resin_volume in L, area of the bed in m², water temperature in °C. rated_loss [kPa]: what valve and distributor
    lose at rated_flow [L/min], as their maker says; the bed comes on top. Left at zero the bed is alone, which is the
    case that swings most. The bed by [ERGUN52], which is exactly linear plus square.
    """
    depth = bed_depth(resin_volume, area)
    one, two = (
        hydraulics.bed_pressure_loss(surface_loading(flow, area), depth, temperature, bead, voids)
        for flow in (1.0, 2.0)
    )
    square = two / 2.0 - one
    return Path(one - square, square + hydraulics.fitting_loss(1.0, rated_flow, rated_loss))


_PATH = {"linear": "kPa/(L/min)", "square": "kPa/(L/min)²"}


@formula(
    "Pressure loss of the softener",
    "loss = linear × flow + square × flow²",
    unit="kPa",
    takes={"flow": "L/min", **_PATH},
    source="ERGUN52",
    validity="The linear part is the bed's, the square part bed, valve and distributor.",
)
@broadcasts
def path_loss(flow: Number, linear: Number, square: Number) -> Number:
    """Pressure that softener and bypass lose together when so much passes the resin. [kPa]"""
    return flow * (linear + square * flow)


@formula(
    "Opening of the bypass",
    "opening = flow × share ÷ √(loss of the softener at flow × (1 − share))",
    unit="L/min/√kPa",
    takes={"flow": "L/min", "share": "", **_PATH},
    source="definition",
    validity="A fixed opening; × 0.6 it is the Kv of a valve, in m³/h at 1 bar. NaN for a share outside 0 to below 1.",
)
@broadcasts
def bypass_opening(flow: Number, share: Number, linear: Number, square: Number) -> Number:
    """Opening that lets this share of this flow past the resin. [L/min/√kPa]"""
    known = only_where((share >= 0.0) & (share < 1.0), share)
    loss = path_loss(flow * (1.0 - known), linear, square)
    return ratio(flow * known, power(loss, 0.5))


@formula(
    "Share that passes a fixed bypass",
    "share × flow = opening × √(loss of the softener at (1 − share) × flow), solved for the share",
    unit="",
    takes={"flow": "L/min", "opening": "L/min/√kPa", **_PATH},
    source="definition",
    validity="Square-root law for the opening; the same pressure is lost both ways.",
)
@broadcasts
def bypass_share(flow: Number, opening: Number, linear: Number, square: Number) -> Number:
    """Part of the flow that a bypass with this opening lets past the resin; it rises as the flow falls."""
    rate = linear + square * flow
    root = power(larger(opening * linear * opening * linear + 4.0 * flow * rate, 0.0), 0.5)
    return ratio(2.0 * opening * rate, opening * (rate + square * flow) + root)


def swing(
    path: Path, set_flow: float, share: float, flows: Sequence[float] | Any, raw: float, softened: float
) -> Swing:
    """The blend at each of the flows [L/min], with the bypass set to a share at set_flow.

    share: of raw water, as set or as a measured blend betrays it (`blending.raw_share`). raw, softened in mmol/L.
    """
    opening = bypass_opening(set_flow, share, path.linear, path.square)
    shares = bypass_share(flows, opening, path.linear, path.square)
    parts = _softened_flow(flows, shares)
    return Swing(flows, shares, blend(raw, softened, shares), path_loss(parts, path.linear, path.square), opening)


@broadcasts
def _softened_flow(flow: Number, share: Number) -> Number:
    return flow * (1.0 - share)
