"""One unit: what it measures, how it turns into the base unit of its quantity, how people write it."""

from __future__ import annotations

from dataclasses import dataclass

HOURS_PER_DAY = 24
DAYS_PER_YEAR = 365  # a year of use, not a calendar: common practice, no source


@dataclass(frozen=True, slots=True)
class Unit:
    """A unit of one quantity. value in the base unit = (value - offset) * factor."""

    symbol: str  # as shown, unique within the quantity
    quantity: str  # what it measures: "hardness", "flow", "sodium", ...
    factor: float  # base units in one of these
    offset: float = 0.0  # what this unit reads where the base unit reads zero
    decimals: int = 0  # what a reading usually carries: a hint for showing it, never used in computing
    aliases: tuple[str, ...] = ()  # other ways to write it, accepted when the quantity is known

    def __str__(self) -> str:
        return self.symbol


Row = tuple[str, float, int, str]  # symbol, factor, decimals, aliases parted by "|"


def units(quantity: str, *rows: Row) -> tuple[Unit, ...]:
    """Units of one quantity from rows of a table, in the order in which they are offered."""
    return tuple(
        Unit(symbol, quantity, factor, decimals=decimals, aliases=tuple(filter(None, aliases.split("|"))))
        for symbol, factor, decimals, aliases in rows
    )
