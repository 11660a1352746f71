"""How amounts are shown to this user: units by quantity, decimal sign."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass, field

from core.job.answers import Amount, Phrase
from core.units import convert
from pwa.text import GAP, format_number, format_quantity

# The unit of a quantity, or of a role (a kind of a quantity: resin among volumes), in each set. What is not named
# keeps the unit it was computed in.
UNIT_SETS: dict[str, dict[str, str]] = {
    "metric": {
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
    },
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
}
UNIT_SET_NAMES = {"auto": "By the hardness unit", "metric": "Metric", "us": "US"}


def unit_set_for(chosen: str, hardness_unit: str = "") -> str:
    """The unit set that a choice means: "auto" is US where the hardness was read in grains per gallon."""
    if chosen in UNIT_SETS:
        return chosen
    return "us" if hardness_unit == "gpg" else "metric"


_WHOLE = ("°C", "°F")  # read in whole degrees, shown so where they are whole
_SUBSCRIPTS = str.maketrans("0123456789", "₀₁₂₃₄₅₆₇₈₉")
_FORMULA = re.compile(r"(?<=[A-Za-z)])\d+")


def unit_shown(symbol: str) -> str:
    """A unit as the trade writes it: the figures of a chemical formula below the line."""
    if "_S4.3" in symbol or not _FORMULA.search(symbol):
        return symbol
    return _FORMULA.sub(lambda digits: digits[0].translate(_SUBSCRIPTS), symbol)


_COMPOUND = re.compile(r"\b(?:CaCO|HCO|CO|SO|NO|NH|SiO)\d\b")


def formulas_shown(text: str) -> str:
    """A sentence with the chemical formulas in it as the trade writes them: "mg/L CaCO₃"."""
    return _COMPOUND.sub(lambda found: found[0].translate(_SUBSCRIPTS), text)


@dataclass(frozen=True, slots=True)
class Display:
    """The units, the decimal sign and the text size in which a user reads answers."""

    unit_set: str = "metric"
    decimal: str = "."
    text_scale: float = 1.0
    own: Mapping[str, str] = field(default_factory=dict)  # quantity -> unit, before the unit set

    def unit_of(self, amount: Amount) -> str:
        """The unit an amount is shown in."""
        units = UNIT_SETS[self.unit_set]
        if amount.role in units:
            return units[amount.role]
        return self.own.get(amount.quantity) or units.get(amount.quantity, amount.unit)

    def figure(self, amount: Amount) -> tuple[str, str]:
        """The number and the unit of an amount, as texts."""
        value, unit = self._turned(amount)
        return format_number(value, unit=unit or None, decimal=self.decimal), unit_shown(unit)

    def show(self, amount: Amount) -> str:
        """An amount in words: its number, and its unit where it has one."""
        value, unit = self._turned(amount)
        if not unit:
            return format_number(value, decimal=self.decimal)
        if unit == "day":
            number = format_number(value, unit=unit, decimal=self.decimal).removesuffix(f"{self.decimal}0")
            return f"{number} {'day' if number == '1' else 'days'}"
        if unit in _WHOLE and value == round(value):
            value = round(value)
            return f"{value:d}{GAP}{unit}"
        return unit_shown(format_quantity(value, unit, self.decimal))

    def say(self, phrase: Phrase) -> str:
        """A phrase with its amounts in this user's units."""
        return phrase.render(self.show)

    def between(self, lowest: Amount, highest: Amount) -> str:
        """Two amounts in words: "20.5 to 23.5 gpg"."""
        unit = unit_shown(self._turned(lowest)[1])
        return f"{self.show(lowest).removesuffix(f'{GAP}{unit}')} to {self.show(highest)}"

    def say_as_read(self, phrase: Phrase) -> str:
        """A phrase with its amounts in the units they were read in."""
        said = phrase.render(lambda amount: format_quantity(amount.value, amount.unit, self.decimal))
        for unit in {amount.unit for amount in phrase.amounts.values()}:
            said = said.replace(f"{GAP}{unit} to ", " to ")  # "20.5 to 23.5 gpg"
        return unit_shown(said)

    def _turned(self, amount: Amount) -> tuple[float, str]:
        unit = self.unit_of(amount)
        if unit == amount.unit or not amount.quantity:
            return amount.value, amount.unit
        return convert(amount.value, amount.unit, unit, quantity=amount.quantity), unit
