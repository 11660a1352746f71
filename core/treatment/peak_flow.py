"""Peak flow: the most that is drawn at once, by fixture units or by DIN 1988-300.

    fixture_loads() -> dict[str, FixtureLoad]                      .cold .hot .total in fixture units (WSFU)
    fixture_units(counts) -> WSFU                                  counts = {"bath-group-tank": 2, ...}
    household_fixture_units(bathrooms, half_baths=0, kitchens=1, dishwashers=1, washing_machines=1,
    flushing="tank") peak_flow_fixture_units(fixture_units, code="ipc", flushing="tank") -> L/min
    code: "ipc" or "nspc" demand_curve(code, flushing) -> DemandCurve                    points, source,
    status of each point why_no_peak_flow(fixture_units, code, flushing) -> str         "" where the curve
    answers din_building_types() -> dict[str, BuildingType]; din_fixture_flows() -> dict[str, FixtureFlow]
    household_flow_sum(bathrooms, kitchens=1, dishwashers=1, washing_machines=1) -> L/min
    peak_flow_din(flow_sum [L/min], building="dwelling", largest=0 [L/min]) -> L/min

The two codes' curves differ by a factor of two in a small house. They are never mixed: a flow names its code.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from math import isnan

import numpy as np

from core.constants import US_GALLON
from core.data import number, read_table
from core.errors import InputError
from core.treatment.broadcast import (
    Number,
    broadcasts,
    either,
    interpolate,
    larger,
    only_where,
    power,
    smaller,
)
from core.working import formula

CODES = {"ipc": "International Plumbing Code", "nspc": "National Standard Plumbing Code"}
FLUSHING = ("tank", "valve")
SECONDS_PER_MINUTE = 60.0
DIN_LEAST, DIN_MOST = 0.2, 500.0  # L/s, range of the formula [DIN1988-300], from memory


@dataclass(frozen=True, slots=True)
class FixtureLoad:
    """Fixture units of one fixture: cold, hot, and both together (less than their sum)."""

    key: str
    words: str
    cold: float
    hot: float
    total: float
    source: str
    status: str


@dataclass(frozen=True, slots=True)
class DemandCurve:
    """Probable demand against fixture units by one code, for flush tanks or for flush valves."""

    code: str
    flushing: str
    fixture_units: tuple[float, ...]
    flow: tuple[float, ...]  # L/min
    status: tuple[str, ...]  # of each point
    source: str


@dataclass(frozen=True, slots=True)
class BuildingType:
    """Constants of the peak-flow formula of DIN 1988-300 for one kind of building (flows in L/s)."""

    key: str
    words: str
    a: float
    b: float
    c: float
    source: str
    status: str


@dataclass(frozen=True, slots=True)
class FixtureFlow:
    """Design flow of one draw-off point."""

    key: str
    words: str
    flow: float  # L/min
    source: str
    status: str


@cache
def fixture_loads() -> dict[str, FixtureLoad]:
    """Fixture units (WSFU) of each fixture [IPC2018-E]."""
    return {
        row["key"]: FixtureLoad(
            row["key"],
            row["words"],
            number(row, "cold"),
            number(row, "hot"),
            number(row, "total"),
            row["source"],
            row["status"],
        )
        for row in read_table("fixture_loads").rows
    }


def fixture_units(counts: Mapping[str, Number]) -> Number:
    """Sum of the fixture units (WSFU, total) of counted fixtures; raises InputError for one not in the
    table.
    """
    loads = fixture_loads()
    total: Number = 0.0
    for key, count in counts.items():
        if key not in loads:
            raise InputError("fixture", key, f"No fixture is called {key}. Known are: {', '.join(loads)}.")
        total = total + np.multiply(count, loads[key].total)
    return float(total) if np.ndim(total) == 0 else total


@formula(
    "Fixture units of a home",
    "WSFU = bathrooms × bath group + half baths × (basin + toilet) + kitchen sinks + dishwashers + washing machines",
    unit="WSFU",
    takes={
        "bathrooms": "",
        "half_baths": "",
        "kitchens": "",
        "dishwashers": "",
        "washing_machines": "",
        "flushing": "",
    },
    source="IPC2018-E",
    validity="Assumes one bath group a bathroom and one of each kitchen fixture; count the fixtures where you can.",
)
@broadcasts
def household_fixture_units(
    bathrooms: Number,
    half_baths: Number = 0.0,
    kitchens: Number = 1.0,
    dishwashers: Number = 1.0,
    washing_machines: Number = 1.0,
    flushing: str = "tank",
) -> Number:
    """Fixture units (WSFU) of a home known only by its bathrooms [IPC2018-E]. A stated assumption, not a
    count.
    """
    _require(flushing, FLUSHING, "flushing")
    load = {key: fixture.total for key, fixture in fixture_loads().items()}
    return (
        bathrooms * load[f"bath-group-{flushing}"]
        + half_baths * (load["lavatory"] + load[f"toilet-{flushing}"])
        + kitchens * load["kitchen-sink"]
        + dishwashers * load["dishwasher"]
        + washing_machines * load["washing-machine"]
    )


@cache
def demand_curve(code: str = "ipc", flushing: str = "tank") -> DemandCurve:
    """Curve of probable demand [L/min] against fixture units by [IPC2018-E] or [NSPC-B54], status point by
    point.
    """
    _require(code, tuple(CODES), "code")
    _require(flushing, FLUSHING, "flushing")
    rows = [row for row in read_table(f"demand_{code}").rows if row[f"{flushing}_gpm"] != "-"]
    return DemandCurve(
        code,
        flushing,
        tuple(number(row, "fixture_units") for row in rows),
        tuple(number(row, f"{flushing}_gpm") * US_GALLON for row in rows),
        tuple(row[f"{flushing}_status"] for row in rows),
        rows[0]["source"],
    )


@formula(
    "Peak flow by fixture units",
    "straight lines between the points of the code's curve",
    unit="L/min",
    takes={"fixture_units": "WSFU", "code": "", "flushing": ""},
    source="IPC2018-E",
    validity="Hunter's method of 1940: it aims at the busiest 1 % of the time with thirsty fixtures, and "
    "oversizes modern buildings. The curve of the other code gives about half in a small house.",
)
@broadcasts
def peak_flow_fixture_units(fixture_units: Number, code: str = "ipc", flushing: str = "tank") -> Number:
    """Probable peak demand [L/min] by one code's curve; NaN outside it, never extrapolated."""
    curve = demand_curve(code, flushing)
    return interpolate(fixture_units, curve.fixture_units, curve.flow)


def why_no_peak_flow(fixture_units: float, code: str = "ipc", flushing: str = "tank") -> str:
    """Why the curve gives no flow for these fixture units, in a sentence; empty where it does."""
    curve = demand_curve(code, flushing)
    least, most = curve.fixture_units[0], curve.fixture_units[-1]
    if least <= fixture_units <= most:
        return ""
    if isnan(fixture_units):
        return "The fixture units are missing."
    side, end = ("below", least) if fixture_units < least else ("above", most)
    return (
        f"{fixture_units:g} fixture units lie {side} the curve of the {CODES[code]} for flush {flushing}s, "
        f"which {'starts' if side == 'below' else 'ends'} at {end:g}. Enter the peak flow yourself."
    )


@cache
def din_building_types() -> dict[str, BuildingType]:
    """Kinds of building of DIN 1988-300 with their constants [DIN1988-300]."""
    return {
        row["key"]: BuildingType(
            row["key"],
            row["words"],
            *(number(row, name) for name in "abc"),
            source=row["source"],
            status=row["status"],
        )
        for row in read_table("din1988_300").rows
    }


@cache
def din_fixture_flows() -> dict[str, FixtureFlow]:
    """Design flows of draw-off points [L/min], from [DE-TRADE-MONTHLY] and [DIN1988-300]."""
    return {
        row["key"]: FixtureFlow(
            row["key"],
            row["words"],
            number(row, "flow_l_s") * SECONDS_PER_MINUTE,
            row["source"],
            row["status"],
        )
        for row in read_table("din_fixture_flows").rows
    }


@formula(
    "Sum of the design flows of a home",
    "sum = bathrooms × (toilet + basin + shower + bath) + kitchen sinks + dishwashers + washing machines",
    unit="L/min",
    takes={"bathrooms": "", "kitchens": "", "dishwashers": "", "washing_machines": ""},
    source="DIN1988-300",
    validity="Assumes each bathroom has one of each; count the draw-off points where you can.",
)
@broadcasts
def household_flow_sum(
    bathrooms: Number, kitchens: Number = 1.0, dishwashers: Number = 1.0, washing_machines: Number = 1.0
) -> Number:
    """Sum of the design flows of a home known only by its bathrooms [L/min]. A stated assumption, not a
    count.
    """
    flow = {key: fixture.flow for key, fixture in din_fixture_flows().items()}
    bathroom = flow["toilet"] + flow["basin"] + flow["shower"] + flow["bath"]
    return (
        bathrooms * bathroom
        + kitchens * flow["kitchen-sink"]
        + dishwashers * flow["dishwasher"]
        + washing_machines * flow["washing-machine"]
    )


@formula(
    "Peak flow by DIN 1988-300",
    "V = a·(ΣV)^b − c, flows in L/s; not above ΣV, not below the largest single draw-off",
    unit="L/min",
    takes={"flow_sum": "L/min", "building": "", "largest": "L/min"},
    source="DIN1988-300",
    validity="ΣV from 0.2 to 500 L/s (12 to 30 000 L/min). Below that everything may run at once: the sum itself.",
)
@broadcasts
def peak_flow_din(flow_sum: Number, building: str = "dwelling", largest: Number = 0.0) -> Number:
    """Peak flow of a building by the formula of [DIN1988-300] [L/min]; the sum itself below its range, NaN
    above.
    """
    _require(building, tuple(din_building_types()), "building")
    kind = din_building_types()[building]
    total = flow_sum / SECONDS_PER_MINUTE
    peak = smaller(larger(kind.a * power(total, kind.b) - kind.c, largest / SECONDS_PER_MINUTE), total)
    return SECONDS_PER_MINUTE * only_where(total <= DIN_MOST, either(total < DIN_LEAST, total, peak))


def _require(value: str, known: tuple[str, ...], field: str) -> None:
    if value not in known:
        raise InputError(field, value, f"{field} is {value}; accepted are: {', '.join(known)}.")
