"""How amounts are shown to this user: units by quantity, decimal sign."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass, field

from core.job.answers import Amount, Phrase
from core.units import convert
from pwa.state.unit_sets import UNIT_SETS
from pwa.text import GAP, format_number, format_quantity

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
        by_role = self.own.get(amount.role) or units.get(amount.role)
        return by_role or self.own.get(amount.quantity) or units.get(amount.quantity, amount.unit)

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
