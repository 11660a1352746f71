"""The entries and choices of the sign-off: what is read after commissioning, and who stands for it. Made by rule.

signoff.soft                                the hardness up to which water counts as soft: what is promised
signoff.raw  .softened_fresh  .blend …      what was read; the names are those of `core.job.signoff_readings.Readings`
choices: signoff.name, signoff.date (ISO)
"""

from __future__ import annotations

from core.job.field import FLOW, HARD, Choice, Default, Field

SECTION = "signoff"
VOLUME = ("L", "US gal", "m³", "imp gal")
PRESSURE = ("kPa", "bar", "psi")
MASS = ("kg", "lb")
SETTINGS = ("hardness_set", "meter_set")  # read off the valve head: no doubt


def _hard(name: str, label: str, help_: str, often: bool = True) -> Field:
    return Field(f"{SECTION}.{name}", label, "hardness", HARD, 0.0, 100.0, help_, often=often, chosen=name in SETTINGS)


def _flow(name: str, label: str, help_: str, often: bool = False) -> Field:
    return Field(f"{SECTION}.{name}", label, "flow", FLOW, 0.0, 1e6, help_, often=often)


def _volume(name: str, label: str, help_: str, often: bool = False) -> Field:
    return Field(f"{SECTION}.{name}", label, "volume", VOLUME, 0.0, 1e8, help_, often=often, chosen=name in SETTINGS)


_ROWS = (
    _hard("raw", "Raw water", "Before the softener, on the day."),
    _hard("softened_fresh", "Softened, after a fresh regeneration", "At once after it, blending valve closed."),
    _hard("softened_late", "Softened, now or at the end of the run", "Blending valve closed."),
    _volume(
        "water_since", "Water since the regeneration", "By the meter, when the last reading was taken.", often=True
    ),
    _hard("blend", "Blended, at a tap", "With the blending valve as it is set."),
    _flow("flow", "Flow while reading", "While the softened water was read.", often=True),
    Field(f"{SECTION}.salt_used", "Salt of the last regeneration", "mass", MASS, 0.0, 1e5, "Weighed, or by the brine."),
    _hard("hardness_set", "Hardness set at the valve head", "As the head shows it."),
    _volume("meter_set", "Meter setting at the valve head", "Water between two regenerations.", often=True),
    _hard("closed", "Tap, blending valve closed", "Tells a leaking blending valve from a leaking softener.", False),
    _hard("softened_slow", "Softened at a trickle", "Right before or after the reading at full flow.", False),
    _flow("slow_flow", "Flow at a trickle", ""),
    _hard("softened_fast", "Softened at full flow", "", False),
    _flow("fast_flow", "Full flow", ""),
    _flow("peak_flow", "Most flow at the taps", "With several taps open."),
    Field(
        f"{SECTION}.pressure_loss",
        "Pressure loss",
        "pressure",
        PRESSURE,
        0.0,
        2000.0,
        "Before the softener less behind it.",
        often=False,
    ),
    _flow("pressure_flow", "Flow at the pressure loss", ""),
    _volume("counted", "Counted by the meter", "While the water below was drawn."),
    _volume("drawn", "Drawn, by a bucket or the house meter", ""),
    Field(
        f"{SECTION}.soft",
        "Soft means at most",
        "hardness",
        HARD,
        0.0,
        100.0,
        "What was promised of the softened water.",
        Default(1.0, "gpg", "Below 1 gpg counts as soft in the trade."),
        often=False,
        chosen=True,
    ),
)
SIGNOFF_FIELDS: dict[str, Field] = {field.key: field for field in _ROWS}
READINGS = tuple(key.partition(".")[2] for key in SIGNOFF_FIELDS if key != f"{SECTION}.soft")
SIGNOFF_CHOICES: dict[str, Choice] = {
    f"{SECTION}.name": Choice(f"{SECTION}.name", "Signed off by", (), ""),
    f"{SECTION}.date": Choice(f"{SECTION}.date", "Signed off on", (), ""),
}
