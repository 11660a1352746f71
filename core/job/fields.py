"""The entries and choices a job may hold: what each is called, what it measures, what is accepted.

The form on the screen, the checks, the assumptions and the file all read these tables, so that an entry is added
by adding a row here and using it in the assessment. Entries of which a job holds any number ("sources.3.nitrate")
are made by rule: `field_for` and `choice_for` know both kinds.
"""

from __future__ import annotations

from collections.abc import Mapping

from core.job.dose_fields import DOSE_CHOICES, DOSE_FIELDS
from core.job.field import DAILY, FLOW, HARD, Choice, Default, Field
from core.job.signoff_fields import SIGNOFF_CHOICES, SIGNOFF_FIELDS
from core.job.source_fields import SOURCE_CHOICES, SOURCE_FIELDS, source_choice, source_field
from core.job.water_fields import WATER_FIELDS
from core.treatment.regions import REGIONS

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
        DAILY,
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
        FLOW,
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
        HARD,
        0.0,
        100.0,
        "After raw water is mixed back in. Leave empty for fully softened water.",
    ),
    Field(
        "blend.softened",
        "Hardness after the softener",
        "hardness",
        HARD,
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
        HARD,
        0.0,
        100.0,
        "At a tap after the valve was set: tells what the valve really does.",
    ),
    Field(
        "blend.set_flow",
        "Flow when the valve was set",
        "flow",
        FLOW,
        0.01,
        1e6,
        "A fixed bypass gives harder water when less is drawn. Leave empty for half the peak flow.",
        often=False,
        chosen=True,
    ),
)

FIELDS: dict[str, Field] = {
    entry.key: entry for entry in (*WATER_FIELDS, *_SCALE, *_DEMAND, *_SOFTENER, *_BLEND, *DOSE_FIELDS, *SOURCE_FIELDS)
}

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
        *DOSE_CHOICES,
        *SOURCE_CHOICES,
    )
}


def field_for(key: str) -> Field | None:
    """The entry of that name, of the tables or made by rule; None where there is none."""
    return FIELDS.get(key) or SIGNOFF_FIELDS.get(key) or source_field(key)


def choice_for(key: str) -> Choice | None:
    """The choice of that name, of the tables or made by rule; None where there is none."""
    if key == SECTION_CHOICE:
        return Choice(key, "Sections", (), " ".join(USUAL_SECTIONS))
    return CHOICES.get(key) or SIGNOFF_CHOICES.get(key) or source_choice(key)


# The parts of the assessment that a section shows after its own: each made when there is time for it.
FURTHER_PARTS: dict[str, tuple[str, ...]] = {
    "softener": ("options", "run_out", "column"),
    "blend": ("blend_water",),
    "dose": ("dose_water", "jars"),
    "sources": ("turns",),
}
PART_TITLES = {
    "options": "Other ways to do it",
    "run_out": "How often it runs out",
    "column": "The same by a column model",
    "blend_water": "The blend as a water, and at other flows",
    "dose_water": "What it does to the water",
    "jars": "Jar test",
    "turns": "One card for each case",
}
ON_DEMAND = {"column": "Work it out for this very water"}  # parts that take a second or more, and their button

SECTIONS: dict[str, str] = {
    "water": "Water",
    "demand": "Demand",
    "scale": "Scale",
    "softener": "Softener",
    "blend": "Blend",
    "dose": "Dose",
    "sources": "Sources",
}
SECTION_WORDS = {
    "water": "What the kit or the report says",
    "demand": "How much water, how fast",
    "scale": "Lime in the heater, balance at the tap",
    "softener": "Size, salt setting, running",
    "blend": "Raw water back into softened",
    "dose": "Soda ash, lime or caustic, and the pump",
    "sources": "Several wells to one demand, within limits",
}
USUAL_SECTIONS = ("water", "demand", "scale", "softener", "blend")  # of a sheet until somebody adds or removes one
SECTION_CHOICE = "job.sections"  # the choice of the file that holds them, by name, with blanks between


def sections_of(choices: Mapping[str, str]) -> tuple[str, ...]:
    """The sections on the sheet of a job, in the order of the visit."""
    chosen = choices.get(SECTION_CHOICE, "").split()
    return tuple(key for key in SECTIONS if key in chosen) or USUAL_SECTIONS
