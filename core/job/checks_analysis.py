"""Checks of a full analysis by the chemistry: charge balance and conductivity; see `core.job.checks`."""

from __future__ import annotations

from collections.abc import Iterator, Mapping

from core.chemistry.quality import Check, check_analysis
from core.errors import InputError
from core.job.fields import FIELDS
from core.job.known import Known, amount
from core.job.odd import Odd
from core.job.scale_water import WHOLE, sodium_in_mmol, water_from_analysis

MORE = ("potassium", "nitrate")
ROUTINE = 5.0  # % of charge that monitoring reports accept; below it a method's stricter limit is not held against them
SLIPS = (  # entry, the other unit that is often meant
    ("alkalinity", "mg/L CaCO3"),
    ("alkalinity", "mg/L HCO3"),
    ("alkalinity", "°dKH"),
    ("alkalinity", "°fH"),
    ("calcium", "mg/L CaCO3"),
    ("calcium", "mg/L Ca"),
    ("magnesium", "mg/L CaCO3"),
    ("magnesium", "mg/L Mg"),
    ("nitrate", "mg/L NO3-N"),
    ("nitrate", "mg/L NO3"),
)
_USUAL_TEMPERATURE = 12.0  # °C, where none was entered; it does not move the charges


def analysis(known: Known) -> Iterator[Odd]:
    """Charges must balance, and the conductivity must fit the ions."""
    needed = known.all("water.ph", *(f"water.{name}" for name in (*WHOLE, "alkalinity")))
    if needed is None:
        return
    values = dict(zip(("ph", *WHOLE, "alkalinity"), needed, strict=True))
    values |= {name: known[f"water.{name}"] or 0.0 for name in MORE}
    values["sodium"] = sodium_in_mmol(values["sodium"])
    temperature = known["water.temperature"]
    values["temp_c"] = _USUAL_TEMPERATURE if temperature is None else temperature
    try:
        water = water_from_analysis(**values)
        checks = check_analysis(water, conductivity=known["water.conductivity"])
    except InputError as error:
        yield Odd("water.ph", str(error), "Look at the values and units of the analysis.")
        return
    balance = checks[0]
    if abs(balance.value) > max(ROUTINE, balance.high):
        yield _charge(known, balance, values)
    else:
        yield from _conductivity(known, checks[1:])


def _charge(known: Known, balance: Check, values: Mapping[str, float]) -> Odd:
    """The charge balance does not close: which unit would close it, else on which side something lacks."""
    slips = [(name, unit) for name, unit in SLIPS if _closes(known, name, unit, values)]
    lacking = "An anion is too low or missing" if balance.value > 0.0 else "A cation is too low or missing"
    field = "water.chloride" if balance.value > 0.0 else "water.sodium"
    if not slips:
        return Odd(
            field, f"The analysis does not balance. {balance.words}", f"{lacking}, or one of the others too high."
        )
    name, unit = slips[0]
    key = f"water.{name}"
    value = amount(known.job.entries[key].value or 0.0, unit)
    step = f"With {FIELDS[key].label.lower()} of {value} it would balance: did you mean {unit}?"
    return Odd(key, f"The analysis does not balance. {balance.words}", step)


def _closes(known: Known, name: str, unit: str, values: Mapping[str, float]) -> bool:
    """Whether the balance closes with one entry read in another unit."""
    key = f"water.{name}"
    if known[key] is None or known.unit(key) == unit:
        return False
    changed = {**values, name: known.as_unit(key, unit)}
    return check_analysis(water_from_analysis(**changed))[0].passed is True


def _conductivity(known: Known, checks: tuple[Check, ...]) -> Iterator[Odd]:
    """The conductivity where it fits neither relation: each alone has its exceptions."""
    if len(checks) == 2 and all(check.passed is False and not check.note for check in checks):
        what = f"The conductivity of {known.shown('water.conductivity')} does not fit the ions. {checks[1].words}"
        yield Odd("water.conductivity", what, "Look at its unit, and at the temperature it is given for.")
