"""The entries and choices of the Sources section. A job holds up to twelve sources, so most are made by rule.

sources.demand                                     the flow that is needed
sources.3.flow_high  .flow_low  .cost              what the third source can give, and at what cost
sources.3.nitrate                                  its analysis: any parameter of `PARAMETERS`
sources.high.nitrate  sources.low.hardness  sources.target.hardness     limits and targets for the blend
choices: sources.aim, sources.rules, sources.parameters (what is looked at, by name, with blanks between),
sources.3.name, sources.3.on, sources.3.may_stop
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import replace
from functools import cache

from core.job.field import FLOW, Choice, Field, ion
from core.job.water_fields import WATER_FIELDS

MOST = 12
USUAL_PARAMETERS = ("hardness", "sodium", "nitrate")
CHEMISTRY = ("ph", "alkalinity", "temperature", "calcium", "magnesium")  # for pH and lime of the blend
RARE = ("fluoride", "ammonium", "nitrite", "arsenic", "boron", "uranium", "tds")
# What can be looked at beside the usual, in the order of the menu.
MORE_PARAMETERS = ("iron", "manganese", "chloride", "sulfate", "alkalinity", "potassium", "conductivity", *RARE)
LIMITED_BY_CHEMISTRY = ("ph", "saturation")

SOURCE_FIELDS: tuple[Field, ...] = (
    Field(
        "sources.demand",
        "Flow needed",
        "flow",
        FLOW,
        0.0,
        1e7,
        "By all sources together, at the hour that counts.",
        chosen=True,
    ),
)
SOURCE_CHOICES: tuple[Choice, ...] = (
    Choice(
        "sources.aim",
        "Blend for",
        (
            ("cost", "the least cost"),
            ("target", "what is wanted, then cost"),
            ("margin", "the most margin to the limits"),
        ),
        "cost",
        "Every limit is kept whichever is chosen.",
    ),
    Choice(
        "sources.rules",
        "Limits of",
        (
            ("none", "only those typed"),
            ("WHO", "WHO guidelines"),
            ("EU", "European Union"),
            ("DE", "Germany"),
            ("US", "United States"),
        ),
        "none",
        "A limit that was typed goes before the one of the rules. The text in force comes first.",
    ),
)

_PLAIN = {
    "nitrite": ("Nitrite, mg/L NO₂", 1000.0),
    "arsenic": ("Arsenic, mg/L As", 100.0),
    "boron": ("Boron, mg/L B", 1000.0),
    "uranium": ("Uranium, mg/L U", 100.0),
    "tds": ("Dissolved solids, mg/L", 1e6),
    "saturation": ("Saturation index", 5.0),
}
_OF_WATER = {entry.key: entry for entry in WATER_FIELDS}
_OF_ION = {"fluoride": "F", "ammonium": "NH4", "silica": "SiO2"}
_SIDES = {"high": "at most", "low": "at least", "target": "wanted"}


def parameter_label(parameter: str) -> str:
    """What a parameter is called: "Nitrate", "Arsenic"."""
    return {"hardness": "Hardness", "sodium": "Sodium", "iron": "Iron", "temperature": "Temperature"}.get(
        parameter
    ) or _template(parameter).label.partition(",")[0].partition(" at ")[0]


def source_field(key: str) -> Field | None:
    """The entry of a source, a limit or a target; None where the name follows no rule."""
    section, _, rest = key.partition(".")
    place, _, name = rest.partition(".")
    if section != "sources" or not name:
        return None
    if place.isascii() and place.isdigit() and str(int(place)) == place and 1 <= int(place) <= MOST:
        return _of_source(key, name)
    return _of_blend(key, place, name) if place in _SIDES else None


@cache
def _of_source(key: str, name: str) -> Field | None:
    if name == "flow_high":
        return Field(key, "Gives at most", "flow", FLOW, 0.0, 1e7, "What the pump or the aquifer can keep up.")
    if name == "flow_low":
        text = "If it runs at all. Leave empty for none."
        return Field(key, "Gives at least", "flow", FLOW, 0.0, 1e7, text, often=False)
    if name == "cost":
        return Field(key, "Cost of a m³", "", (), -1e6, 1e6, "Power, chemicals, fees: in your money.")
    found = _template(name)
    return None if found is None or name == "saturation" else replace(found, key=key, label=_short(found.label))


@cache
def _of_blend(key: str, side: str, name: str) -> Field | None:
    found = _template(name)
    if found is None or (side == "target" and name in LIMITED_BY_CHEMISTRY):
        return None
    unit = found.label.partition(",")[2] if not found.quantity and "," in found.label else ""
    label = f"{parameter_label(name)}, {_SIDES[side]}" + (f",{unit}" if unit else "")
    lowest = -found.highest if name == "saturation" else found.lowest
    return replace(found, key=key, label=label, lowest=lowest, help="", chosen=True)


def _short(label: str) -> str:
    return {"Sodium in the raw water": "Sodium", "Dissolved iron": "Iron", "Temperature at the tap": "Temperature"}.get(
        label, label
    )


@cache
def _template(parameter: str) -> Field | None:
    """The entry of the Water section for a parameter, without its default; or one of our own."""
    known = _OF_WATER.get(f"water.{parameter}")
    if known is not None:
        return replace(known, default=None, often=True, help="")
    if parameter in _OF_ION:
        formula = _OF_ION[parameter]
        return Field(f"water.{parameter}", parameter.capitalize(), parameter, ion(formula)[:1], 0.0, 10_000.0)
    if parameter in _PLAIN:
        label, highest = _PLAIN[parameter]
        return Field(f"water.{parameter}", label, "", (), 0.0, highest)
    return None


def source_choice(key: str) -> Choice | None:
    """The choice of a source, or what is looked at; None where the name follows no rule."""
    section, _, rest = key.partition(".")
    if section != "sources":
        return None
    if rest == "parameters":
        return Choice(key, "What is looked at", (), " ".join(USUAL_PARAMETERS))
    place, _, name = rest.partition(".")
    if not (place.isascii() and place.isdigit() and 1 <= int(place) <= MOST):
        return None
    return {
        "name": Choice(key, "Name", (), f"Source {place}"),
        "on": Choice(key, "Running", (("on", "on"), ("off", "off")), "on"),
        "may_stop": Choice(
            key,
            "When it is not wanted",
            (("yes", "it may stand still"), ("no", "it runs at its least")),
            "yes",
            often=False,
        ),
    }.get(name)


def source_numbers(keys: Iterable[str]) -> tuple[int, ...]:
    """The sources that a job holds, by the names of its entries and choices."""
    places = {key.split(".")[1] for key in keys if key.startswith("sources.") and key.count(".") == 2}
    return tuple(sorted(int(place) for place in places if place.isascii() and place.isdigit() and int(place) <= MOST))


def parameters_of(choices: Mapping[str, str], entries: Iterable[str]) -> tuple[str, ...]:
    """What is looked at in a job: chosen, or the usual, and whatever a limit or an analysis names."""
    chosen = choices.get("sources.parameters", "").split() or USUAL_PARAMETERS
    parts = [key.split(".") for key in entries if key.startswith("sources.") and key.count(".") == 2]
    named = [name for _, place, name in parts if place in _SIDES]
    known = (*USUAL_PARAMETERS, *MORE_PARAMETERS, *LIMITED_BY_CHEMISTRY)
    return tuple(name for name in known if name in chosen or name in named)
