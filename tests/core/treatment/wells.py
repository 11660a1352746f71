"""Invented wells that several tests blend: hard, with nitrate, soft and dear."""

from core.treatment.limits import PARAMETERS
from core.treatment.sources import Source
from core.units import convert


def analysis(**printed):
    """An analysis in the core's units from mg/L (as Ca, Mg, Cl, SO4, NO3); the rest as the core has it."""
    units = {"calcium": "mg/L Ca", "magnesium": "mg/L Mg", "chloride": "mg/L Cl", "sulfate": "mg/L SO4"}
    units["nitrate"] = "mg/L NO3"
    return {
        name: convert(value, units[name], PARAMETERS[name].unit, name) if name in units else value
        for name, value in printed.items()
    }


HARD = Source(
    "hard well",
    analysis(
        calcium=140.0, magnesium=30.0, sodium=15.0, nitrate=20.0, chloride=30.0, sulfate=60.0,
        alkalinity=7.0, ph=7.1, temperature=11.0,
    ),
    most=1000.0,
    cost=0.10,
)  # fmt: skip
FIELD = Source(
    "field well",
    analysis(
        calcium=80.0, magnesium=12.0, sodium=25.0, nitrate=95.0, chloride=60.0, sulfate=40.0,
        alkalinity=3.2, ph=7.4, temperature=11.0,
    ),
    most=800.0,
    cost=0.07,
)  # fmt: skip
SOFT = Source(
    "soft well",
    analysis(
        calcium=12.0, magnesium=2.0, sodium=60.0, nitrate=5.0, chloride=45.0, sulfate=20.0,
        alkalinity=1.4, ph=7.6, temperature=9.0,
    ),
    most=600.0,
    cost=0.45,
)  # fmt: skip
WELLS = (HARD, FIELD, SOFT)
