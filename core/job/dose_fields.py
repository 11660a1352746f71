"""The entries and choices of the Dose section: what is fed, what is wanted, with which pump, and the jars."""

from __future__ import annotations

from dataclasses import replace

from core.job.field import COMMON, DAILY, FLOW, HARD, Choice, Default, Field

JARS = 6

_MAIN = (
    Field(
        "dose.target",
        "Hardness wanted after dosing",
        "hardness",
        HARD,
        0.0,
        100.0,
        "What is to be left in the water, calcium and magnesium together.",
    ),
    Field(
        "dose.flow",
        "Flow while dosing",
        "flow",
        FLOW,
        0.0,
        1e7,
        "Through the point where the chemical goes in: sets the pump.",
    ),
    Field(
        "dose.volume",
        "Water dosed a day",
        "flow",
        DAILY,
        0.0,
        1e9,
        "For kilograms a day and days from a bag.",
        role="daily volume",
    ),
    Field(
        "dose.tank",
        "Tank dosed at once",
        "volume",
        ("L", "m³", "US gal", "imp gal"),
        0.0,
        1e9,
        "Where a tank is filled and dosed by hand: how much to weigh in.",
        role="tank",
    ),
)

_WATER = (
    Field(
        "dose.magnesium",
        "Magnesium to be left",
        "hardness",
        HARD,
        0.0,
        100.0,
        "For lime in excess or caustic. Leave empty to take out what the process can.",
        often=False,
    ),
    Field(
        "dose.excess",
        "Lime beyond the equivalents",
        "hardness",
        HARD,
        0.0,
        10.0,
        "Lifts the pH until magnesium falls out; cold water needs more.",
        Default(62.5, "mg/L CaCO3", "Usual where magnesium is to fall out, and only then fed.", "LIME-COURSE"),
        often=False,
    ),
    Field(
        "dose.ph_after",
        "pH wanted after CO₂",
        "",
        (),
        6.0,
        10.5,
        "",
        Default(8.5, "", "Usual after softening by lime, where CO₂ is fed.", COMMON),
        often=False,
    ),
)

_FEED = (
    Field(
        "dose.soda_strength",
        "Strength of the soda ash solution",
        "share",
        ("%",),
        0.0,
        1.0,
        "By weight. Leave empty for one that stays clear at the temperature below.",
        often=False,
    ),
    Field(
        "dose.lime_strength",
        "Strength of the lime slurry",
        "share",
        ("%",),
        0.0,
        1.0,
        "By weight of hydrated lime. Leave empty for 5 %.",
        often=False,
    ),
    Field(
        "dose.caustic_strength",
        "Strength of the caustic as fed",
        "share",
        ("%",),
        0.0,
        1.0,
        "By weight. Leave empty to feed a liquid as it comes.",
        often=False,
    ),
    Field(
        "dose.solution_temperature",
        "Coldest the solution gets",
        "temperature",
        ("°C", "°F"),
        0.0,
        60.0,
        "Soda ash drops out of a cold solution and clogs the pump.",
        Default(10.0, "°C", "No temperature was entered: a cool store room."),
        often=False,
    ),
    Field(
        "dose.soda_purity",
        "Purity of the soda ash",
        "share",
        ("%",),
        0.5,
        1.0,
        "From the bag. Leave empty for the usual.",
        often=False,
    ),
    Field(
        "dose.lime_purity",
        "Purity of the lime",
        "share",
        ("%",),
        0.3,
        1.0,
        "From the bag. Leave empty for the usual; old lime has taken up CO₂ and is weaker.",
        often=False,
    ),
    Field(
        "dose.pump_capacity",
        "Pump at full stroke, mL/min",
        "",
        (),
        0.01,
        1e6,
        "As measured at the pressure of the line. Where two chemicals are fed both pumps count as alike.",
        often=False,
    ),
    Field(
        "dose.stroke",
        "One stroke of the pump, mL",
        "",
        (),
        0.001,
        1e4,
        "As set: draw from a graduated cylinder, divide by the strokes.",
        often=False,
    ),
    Field(
        "dose.batch",
        "Solution mixed at a time",
        "volume",
        ("L", "m³", "US gal", "imp gal"),
        0.1,
        1e6,
        "What the solution tank holds.",
        often=False,
        role="tank",
    ),
    Field("dose.bag", "Weight of a bag", "mass", ("kg", "lb"), 0.01, 2000.0, "Leave empty for 25 kg.", often=False),
)

_JARS = (
    Field(
        "dose.jar_size",
        "Water in each jar",
        "volume",
        ("L", "mL"),
        0.1,
        100.0,
        "",
        Default(1.0, "L", "A usual jar."),
        role="jar",
        part="jars",
    ),
    Field(
        "dose.stock",
        "Stock solution, g of product in 1 L",
        "",
        (),
        0.1,
        300.0,
        "Lime as a slurry, shaken before each draw.",
        Default(10.0, "", "1 mL in a litre is then 10 mg/L of product."),
        part="jars",
    ),
    *(
        Field(
            f"dose.jar_{number}",
            f"Hardness seen in jar {number}",
            "hardness",
            HARD,
            0.0,
            100.0,
            "" if number > 1 else "After settling, of the clear water on top, filtered. Leave out jars not measured.",
            part="jars",
        )
        for number in range(1, JARS + 1)
    ),
)

_READ = ("dose.solution_temperature", "dose.soda_purity", "dose.lime_purity")  # the rest is decided, but for the jars
DOSE_FIELDS: tuple[Field, ...] = (
    *(replace(field, chosen=field.key not in _READ) for field in (*_MAIN, *_WATER, *_FEED)),
    *(replace(field, chosen="jar_" not in field.key or field.key == "dose.jar_size") for field in _JARS),
)

DOSE_CHOICES: tuple[Choice, ...] = (
    Choice(
        "dose.process",
        "Chemical",
        (
            ("soda", "soda ash"),
            ("lime", "lime"),
            ("lime-soda", "lime and soda ash"),
            ("excess-lime-soda", "excess lime and soda ash"),
            ("caustic", "caustic soda"),
            ("caustic-soda", "caustic and soda ash"),
        ),
        "soda",
        "Soda ash takes calcium of any kind and leaves its sodium. Lime takes bicarbonate hardness and leaves nothing. "
        "Magnesium falls out only with lime in excess, or caustic.",
    ),
    Choice(
        "dose.lime",
        "Lime is",
        (("hydrated-lime", "hydrated lime"), ("quicklime", "quicklime, slaked on site")),
        "hydrated-lime",
        often=False,
    ),
    Choice(
        "dose.caustic",
        "Caustic is",
        (("caustic-50", "liquid, 50 %"), ("caustic-25", "liquid, 25 %"), ("caustic-beads", "beads")),
        "caustic-25",
        often=False,
    ),
    Choice(
        "dose.stages",
        "CO₂ afterwards",
        (("0", "none"), ("1", "one stage"), ("2", "two stages, settling between")),
        "0",
        "Brings the pH down and keeps what is left from coating filters and pipes.",
        often=False,
    ),
)
