"""What an entry and a choice of a job are: words, unit, accepted range, default; the units entries are offered in."""

from __future__ import annotations

from dataclasses import dataclass

COMMON = "common practice, no source"

# The one unit of each quantity inside the core; a role names a kind of quantity that keeps a unit of its own.
CORE_UNITS = {
    "hardness": "mmol/L",
    "alkalinity": "meq/L",
    "flow": "L/min",
    "daily volume": "L/day",
    "water use": "L/person/day",
    "volume": "L",
    "salt dose": "g/L",
    "temperature": "°C",
    "conductivity": "µS/cm",
    "share": "1",
    "time": "day",
    "iron": "mg/L Fe",
    "manganese": "mg/L Mn",
    "sodium": "mg/L Na",
    "calcium": "mmol/L",
    "magnesium": "mmol/L",
    "potassium": "mmol/L",
    "chloride": "mmol/L",
    "sulfate": "mmol/L",
    "nitrate": "mmol/L",
    "fluoride": "mg/L F",
    "ammonium": "mg/L NH4",
    "silica": "mg/L SiO2",
    "mass": "kg",
    "pressure": "kPa",
}


@dataclass(frozen=True, slots=True)
class Default:
    """What is assumed where nothing was entered: always shown, with its reason."""

    value: float
    unit: str
    why: str
    source: str = COMMON


@dataclass(frozen=True, slots=True)
class Field:
    """One entry of a job."""

    key: str
    label: str
    quantity: str  # a quantity of core.units; "" for plain numbers
    units: tuple[str, ...]  # offered, the first unless the user's unit set says otherwise; () for plain numbers
    lowest: float  # accepted range, in the core's unit
    highest: float
    help: str = ""
    default: Default | None = None
    often: bool = True  # shown at once; otherwise behind "more"
    role: str = ""  # "resin", "daily volume": a kind of its quantity with units of its own
    part: str = ""  # the further part of its section that it stands in; "" for the section's own entries
    chosen: bool = False  # decided, not read: no kit measures it, and nothing about it is in doubt

    @property
    def section(self) -> str:
        """The section of the sheet that the entry belongs to."""
        return self.key.partition(".")[0]

    @property
    def usual_source(self) -> str:
        """Where it comes from until the user says otherwise: what the kit reads is measured, the rest is told."""
        if self.section == "signoff" and not self.chosen:
            return "measured"
        if self.section == "water" or self.key in ("blend.softened", "blend.measured") or "jar_" in self.key:
            return "measured"
        return "told"

    @property
    def core_unit(self) -> str:
        """The unit in which the core reckons with it; "" for plain numbers."""
        return CORE_UNITS.get(self.role) or CORE_UNITS[self.quantity] if self.quantity else ""


@dataclass(frozen=True, slots=True)
class Choice:
    """One decision of a job among named options."""

    key: str
    label: str
    options: tuple[tuple[str, str], ...]  # (value kept in the file, words on the screen)
    default: str
    help: str = ""
    often: bool = True

    @property
    def section(self) -> str:
        """The section of the sheet that the choice belongs to."""
        return self.key.partition(".")[0]


HARD = ("gpg", "°dH", "mg/L CaCO3", "mmol/L", "°fH", "°e", "meq/L", "mg/L Ca")
ALKALINITY = ("mg/L CaCO3", "mmol/L K_S4.3", "°dKH", "°fH", "mg/L HCO3", "meq/L")
DAILY = ("L/day", "gpd", "m³/day", "imp gal/day")
FLOW = ("L/min", "gpm", "m³/h", "L/s")


def ion(name: str) -> tuple[str, ...]:
    """The units an ion is offered in."""
    return (f"mg/L {name}", "mmol/L", "meq/L", "mg/L CaCO3")
