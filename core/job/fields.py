"""The entries and choices a job may hold: what each is called, what it measures, what is accepted.

The form on the screen, the checks, the assumptions and the file all read this one table, so that an entry is added
by adding a row here and using it in the assessment.
"""

from __future__ import annotations

from dataclasses import dataclass

from core.treatment.regions import REGIONS

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

    @property
    def section(self) -> str:
        """The section of the sheet that the entry belongs to."""
        return self.key.partition(".")[0]

    @property
    def usual_source(self) -> str:
        """Where it comes from until the user says otherwise: what the kit reads is measured, the rest is told."""
        return "measured" if self.section == "water" or self.key in ("blend.softened", "blend.measured") else "told"

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


_HARD = ("gpg", "°dH", "mg/L CaCO3", "mmol/L", "°fH", "°e", "meq/L", "mg/L Ca")
_ALKALINITY = ("mg/L CaCO3", "mmol/L K_S4.3", "°dKH", "°fH", "mg/L HCO3", "meq/L")
_DAILY = ("L/day", "gpd", "m³/day", "imp gal/day")
_FLOW = ("L/min", "gpm", "m³/h", "L/s")


def _ion(name: str) -> tuple[str, ...]:
    return (f"mg/L {name}", "mmol/L", "meq/L", "mg/L CaCO3")


_WATER = (
    Field(
        "water.hardness",
        "Total hardness",
        "hardness",
        _HARD,
        0.0,
        100.0,
        "Calcium and magnesium together, as the kit or the report gives it.",
    ),
    Field(
        "water.iron",
        "Dissolved iron",
        "iron",
        ("mg/L Fe", "µg/L Fe"),
        0.0,
        100.0,
        "Clear water that turns brown on standing holds dissolved iron.",
        Default(0.0, "mg/L Fe", "No iron was entered, so none is counted. Iron fouls resin: test for it."),
    ),
    Field(
        "water.manganese",
        "Manganese",
        "manganese",
        ("mg/L Mn", "µg/L Mn"),
        0.0,
        30.0,
        "Black specks or slime point to manganese.",
        Default(0.0, "mg/L Mn", "No manganese was entered, so none is counted."),
        often=False,
    ),
    Field("water.ph", "pH", "", (), 0.0, 14.0, "Read it on site: it drifts in the bottle."),
    Field(
        "water.alkalinity",
        "Alkalinity",
        "alkalinity",
        _ALKALINITY,
        0.0,
        200.0,
        "Total alkalinity, carbonate hardness, acid capacity to pH 4.3: what lets lime drop out when heated.",
    ),
    Field(
        "water.temperature",
        "Temperature at the tap",
        "temperature",
        ("°C", "°F"),
        0.0,
        60.0,
        "Cold water that has run for a while.",
        Default(12.0, "°C", "No temperature was entered: usual for groundwater in a temperate climate."),
        often=False,
    ),
    Field(
        "water.conductivity",
        "Conductivity at 25 °C",
        "conductivity",
        ("µS/cm", "mS/cm"),
        0.0,
        200_000.0,
        often=False,
    ),
    Field("water.calcium", "Calcium", "calcium", _ion("Ca"), 0.0, 100.0, often=False),
    Field("water.magnesium", "Magnesium", "magnesium", _ion("Mg"), 0.0, 100.0, often=False),
    Field(
        "water.sodium",
        "Sodium in the raw water",
        "sodium",
        ("mg/L Na", "mmol/L"),
        0.0,
        30_000.0,
        "Softening adds to it.",
        often=False,
    ),
    Field("water.potassium", "Potassium", "potassium", ("mg/L K", "mmol/L"), 0.0, 100.0, often=False),
    Field("water.chloride", "Chloride", "chloride", ("mg/L Cl", "mmol/L"), 0.0, 1000.0, often=False),
    Field("water.sulfate", "Sulfate", "sulfate", ("mg/L SO4", "mmol/L"), 0.0, 500.0, often=False),
    Field(
        "water.nitrate",
        "Nitrate",
        "nitrate",
        ("mg/L NO3", "mg/L NO3-N", "mmol/L"),
        0.0,
        100.0,
        "As NO3 or as N: look at the report.",
        often=False,
    ),
)

_DEMAND = (
    Field("demand.persons", "Persons", "", (), 0.0, 100_000.0, "Who lives or works there on an average day."),
    Field(
        "demand.bathrooms",
        "Bathrooms",
        "",
        (),
        0.0,
        10_000.0,
        "Each with a WC, a basin and a bath or shower. Sets the peak flow.",
    ),
    Field(
        "demand.daily_volume",
        "Use by the meter",
        "flow",
        _DAILY,
        0.0,
        1e9,
        "From the water meter or the bill, a day. It beats any figure per person.",
        role="daily volume",
    ),
    Field(
        "demand.per_person",
        "Use per person",
        "water use",
        ("L/person/day", "US gal/person/day"),
        1.0,
        5000.0,
        "Leave empty for the figure chosen below.",
        often=False,
    ),
    Field(
        "demand.peak_flow",
        "Peak flow",
        "flow",
        _FLOW,
        0.0,
        1e7,
        "Where it is known; it beats the count of bathrooms.",
        often=False,
    ),
    Field(
        "demand.softened_share",
        "Share that is softened",
        "share",
        ("%",),
        0.0,
        1.0,
        "Outside taps, and often WCs, stay on raw water.",
        Default(100.0, "%", "Nothing was entered, so all use is softened.", "definition"),
        often=False,
    ),
)

_SCALE = (
    Field(
        "scale.heater_temperature",
        "Heater setting",
        "temperature",
        ("°C", "°F"),
        20.0,
        90.0,
        "The hotter, the more lime.",
        Default(60.0, "°C", "A usual setting for storage heaters, against legionella."),
    ),
    Field(
        "scale.hot_share",
        "Share that is heated",
        "share",
        ("%",),
        0.0,
        1.0,
        "Of all the water used.",
        Default(35.0, "%", "Hot water is 30 to 40 % of indoor use."),
    ),
)

_SOFTENER = (
    Field(
        "softener.resin",
        "Resin in the tank",
        "volume",
        ("L", "ft³"),
        0.1,
        1e6,
        "Leave empty for a recommendation. Enter it to check a softener that is there.",
        role="resin",
    ),
    Field(
        "softener.salt_dose",
        "Salt setting",
        "salt dose",
        ("g/L", "lb/ft³"),
        1.0,
        2000.0,
        "Salt for each regeneration per volume of resin. Leave empty for a recommendation.",
    ),
    Field(
        "softener.shortest",
        "Shortest interval",
        "time",
        ("day",),
        0.0,
        365.0,
        "From one regeneration to the next. Leave empty for the rule of the region.",
        often=False,
    ),
    Field(
        "softener.longest",
        "Longest interval",
        "time",
        ("day",),
        0.1,
        365.0,
        "Standing resin grows germs. Leave empty for the rule of the region; the maker may ask for less.",
        often=False,
    ),
)

_BLEND = (
    Field(
        "blend.target",
        "Hardness wanted at the taps",
        "hardness",
        _HARD,
        0.0,
        100.0,
        "After raw water is mixed back in. Leave empty for fully softened water.",
    ),
    Field(
        "blend.softened",
        "Hardness after the softener",
        "hardness",
        _HARD,
        0.0,
        100.0,
        "What the softener alone lets through.",
        Default(
            0.0,
            "mmol/L",
            "Nothing was entered: the softener is taken to let none through. A real one leaks a little.",
            "definition",
        ),
    ),
    Field(
        "blend.measured",
        "Hardness measured in the blend",
        "hardness",
        _HARD,
        0.0,
        100.0,
        "At a tap after the valve was set: tells what the valve really does.",
    ),
)

FIELDS: dict[str, Field] = {entry.key: entry for entry in (*_WATER, *_SCALE, *_DEMAND, *_SOFTENER, *_BLEND)}

CHOICES: dict[str, Choice] = {
    choice.key: choice
    for choice in (
        Choice(
            "demand.use",
            "Use per person",
            (
                ("us-indoor", "United States, indoors"),
                ("us-trade", "United States, older trade figure"),
                ("de", "Germany"),
                ("uk", "England and Wales"),
            ),
            "us-indoor",
            "A starting point where no meter was read. Until you choose, the larger figure is used.",
        ),
        Choice(
            "demand.peak_rule",
            "Peak flow by",
            (("nspc", "fixture units, NSPC"), ("ipc", "fixture units, IPC"), ("din", "DIN 1988-300")),
            "nspc",
            "Codes differ by a factor of two in a small house and are never mixed. Use the one in force.",
        ),
        Choice(
            "softener.kind",
            "Kind",
            (("single", "single tank"), ("twin", "twin tanks in turn"), ("counter-current", "single, from below")),
            "single",
            "A single tank keeps a day's water in reserve and regenerates at night; twins use each to its end; from "
            "below means counter-current: less salt and less leakage, in a packed bed.",
        ),
        Choice(
            "softener.region",
            "Rules of",
            (("unknown", "not chosen"), *REGIONS.items()),
            "unknown",
            "Until you choose, the stricter rule of all regions is used.",
        ),
        Choice(
            "softener.iron_rule",
            "Iron is counted as",
            (
                ("iron-3", "3 gpg per mg/L"),
                ("iron-4", "4 gpg per mg/L"),
                ("iron-5", "5 gpg per mg/L"),
                ("true", "its true equivalent"),
            ),
            "iron-4",
            "The trade adds 3 to 5 grains per mg/L, far above the true 0.1, to allow for fouling.",
        ),
        Choice(
            "softener.salt",
            "Regenerated with",
            (("nacl", "sodium chloride"), ("kcl", "potassium chloride")),
            "nacl",
            often=False,
        ),
    )
}

# The parts of the assessment that a section shows after its own: each made when there is time for it.
FURTHER_PARTS: dict[str, tuple[str, ...]] = {"softener": ("options", "run_out", "column")}
PART_TITLES = {
    "options": "Other ways to do it",
    "run_out": "How often it runs out",
    "column": "The same by a column model",
}
ON_DEMAND = {"column": "Work it out for this very water"}  # parts that take a second or more, and their button

SECTIONS: dict[str, str] = {
    "water": "Water",
    "demand": "Demand",
    "scale": "Scale",
    "softener": "Softener",
    "blend": "Blend",
}
