"""The units people are used to, by country, and which of them each user wants otherwise."""

from __future__ import annotations

import json
from collections.abc import Mapping
from functools import cache

from core.errors import TapwrightError
from core.job.field import ALKALINITY, DAILY, FLOW, HARD
from core.units import convert

_METRIC = {
    "hardness": "°dH",
    "alkalinity": "mmol/L K_S4.3",
    "resin": "L",
    "volume": "L",
    "large volume": "m³",
    "daily volume": "L/day",
    "flow": "L/min",
    "water use": "L/person/day",
    "specific flow": "BV/h",
    "surface loading": "m/h",
    "salt dose": "g/L",
    "mass": "kg",
    "mass flow": "kg/day",
    "tank": "L",
    "exchanged amount": "mol",
    "load": "mol/day",
    "salt efficiency": "mol/kg",
    "temperature": "°C",
    "length": "mm",
    "depth": "cm",
    "pressure": "kPa",
    "share": "%",
}
# The unit of a quantity, or of a role (a kind of a quantity: resin among volumes), in each set. What is not named
# keeps the unit it was computed in. Which country uses which: common practice, no source.
UNIT_SETS: dict[str, dict[str, str]] = {
    "metric": _METRIC,
    "us": {
        "hardness": "gpg",
        "alkalinity": "mg/L CaCO3",
        "resin": "ft³",
        "volume": "US gal",
        "large volume": "US gal",
        "daily volume": "gpd",
        "flow": "gpm",
        "water use": "US gal/person/day",
        "specific flow": "gpm/ft³",
        "surface loading": "gpm/ft²",
        "salt dose": "lb/ft³",
        "mass": "lb",
        "mass flow": "lb/day",
        "tank": "US gal",
        "exchanged amount": "grain",
        "load": "grain/day",
        "salt efficiency": "grain/lb",
        "temperature": "°F",
        "length": "in",
        "depth": "in",
        "pressure": "psi",
        "share": "%",
    },
    "fr": _METRIC | {"hardness": "°fH", "alkalinity": "°fH", "pressure": "bar"},
    "uk": _METRIC | {"hardness": "mg/L CaCO3", "alkalinity": "mg/L CaCO3", "pressure": "bar"},
    "si": _METRIC | {"hardness": "mmol/L", "alkalinity": "meq/L"},
}
UNIT_SET_NAMES = {
    "auto": "By the hardness unit",
    "metric": "German",
    "fr": "French",
    "uk": "UK",
    "us": "US",
    "si": "SI",
}
_BY_HARDNESS = {"gpg": "us", "°fH": "fr", "°e": "uk", "mmol/L": "si"}


def unit_set_for(chosen: str, hardness_unit: str = "") -> str:
    """The unit set that a choice means: "auto" is that of the country whose hardness unit was read."""
    return chosen if chosen in UNIT_SETS else _BY_HARDNESS.get(hardness_unit, "metric")


# What can be chosen one by one: its name, the quantity, and units beside those of the sets.
CHOOSABLE: dict[str, tuple[str, str, tuple[str, ...]]] = {
    "hardness": ("Hardness", "hardness", HARD),
    "alkalinity": ("Alkalinity", "alkalinity", ALKALINITY),
    "flow": ("Flow", "flow", FLOW),
    "daily volume": ("Use a day", "flow", DAILY),
    "resin": ("Resin", "volume", ()),
    "volume": ("Volumes", "volume", ("imp gal",)),
    "large volume": ("Water of a year", "volume", ("imp gal",)),
    "salt dose": ("Salt setting", "salt dose", ()),
    "mass": ("Salt, weights", "mass", ()),
    "pressure": ("Pressure", "pressure", ("bar", "kPa", "psi")),
    "temperature": ("Temperature", "temperature", ()),
    "length": ("Widths", "length", ("mm", "in")),
    "depth": ("Depths", "length", ("cm", "m", "in", "ft")),
}


@cache
def units_to_choose(name: str) -> tuple[str, ...]:
    """The units that one quantity or role can be shown in."""
    _, quantity, more = CHOOSABLE[name]
    units = dict.fromkeys([*(known[name] for known in UNIT_SETS.values()), *more])
    return tuple(unit for unit in units if _measures(unit, quantity))


def own_units(text: str) -> Mapping[str, str]:
    """The units a user wants otherwise, out of the text in which they are kept; what is not known is left out."""
    try:
        held = json.loads(text or "{}")
    except json.JSONDecodeError:
        return {}
    if not isinstance(held, dict):
        return {}
    return {name: unit for name, unit in held.items() if name in CHOOSABLE and unit in units_to_choose(name)}


def with_own_unit(text: str, name: str, unit: str) -> str:
    """The text to keep once one quantity is to be shown in a unit; "" goes back to the set."""
    kept = {held: known for held, known in own_units(text).items() if held != name}
    return json.dumps(kept | ({name: unit} if unit else {}), ensure_ascii=False)


def _measures(unit: str, quantity: str) -> bool:
    try:
        convert(1.0, unit, unit, quantity=quantity)
    except TapwrightError:
        return False
    return True
