"""Designs side by side: what each takes in a year, costs over the years, and saves against another.

    compare(offer).columns[0].over_years    Decimal; None while a price is missing
    compare(offer).savings                  against the option that costs most to run

Running costs are at today's prices, without interest and without a rise. What is saved is said only where it can be
defended: against another design that takes out the same hardness, from the same computation, and by more than the
doubt of the capacity figures that both rest on.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from decimal import ROUND_HALF_UP, Decimal
from math import isclose

from core.job.offer import Design, Offer, Option, Total, total
from core.job.prices import ARITHMETIC, PriceBook, UnitPrice
from core.job.proposal import three_digits
from core.units import convert

DEFENSIBLE = 0.10  # a gain below this share is within the 10 to 15 % doubt of capacity tables [TRADE-SIZING]

WITHIN_DOUBT = "The difference is within the doubt of the capacity figures."
LEFT_OUT = (
    "Not counted as a saving: energy, heaters, appliances, soap and clothes. The figures in circulation for them are "
    "contested or come from the trade itself."
)


@dataclass(frozen=True, slots=True)
class Running:
    """What a design takes in a year, in the units of the price book; money is None while its price is missing."""

    salt: Decimal
    salt_unit: str
    water: Decimal
    water_unit: str
    salt_cost: Decimal | None
    water_cost: Decimal | None
    service_cost: Decimal
    missing: tuple[str, ...]  # sentences

    @property
    def year(self) -> Decimal | None:
        """Money a year."""
        if self.salt_cost is None or self.water_cost is None:
            return None
        return self.salt_cost + self.water_cost + self.service_cost


@dataclass(frozen=True, slots=True)
class Column:
    """One option in the comparison."""

    option: Option
    total: Total
    running: Running | None  # None without a design
    over_years: Decimal | None


@dataclass(frozen=True, slots=True)
class Saving:
    """What one option saves a year against another, as far as it can be defended."""

    option: int
    against: int
    salt: float  # kg/year, 0 where the difference is within the doubt
    water: float  # L/year
    money: Decimal | None  # a year; None while a price is missing
    extra: Decimal  # what it costs more now
    payback: Decimal | None  # years, one decimal; None where it costs no more, or never pays back
    why_not: str = ""  # a sentence, where nothing is said to be saved


@dataclass(frozen=True, slots=True)
class Comparison:
    """An offer reckoned: a column for each option, and savings against the one that costs most to run."""

    columns: tuple[Column, ...]
    savings: tuple[Saving, ...]


def running(design: Design, book: PriceBook) -> Running:
    """What a design takes in a year. Quantities are rounded to three digits that count, whole ones kept, before they
    are priced, so that the sheet can be checked by hand.
    """
    salt_price, water_price = book.salt_price(design.salt), book.water
    salt, salt_unit = _yearly(design.salt_year, "kg", salt_price, "mass")
    water, water_unit = _yearly(design.water_year / 1000.0, "m³", water_price, "volume")
    lacking = (("salt", salt_price), ("water", water_price))
    return Running(
        salt,
        salt_unit,
        water,
        water_unit,
        _cost(salt, salt_price, book),
        _cost(water, water_price, book),
        book.round(book.service_year or Decimal(0)),
        tuple(f"The price of {name} is missing in the price book." for name, price in lacking if price is None),
    )


def _yearly(value: float, unit: str, price: UnitPrice | None, quantity: str) -> tuple[Decimal, str]:
    wanted = price.unit if price else unit
    return three_digits(convert(value, unit, wanted, quantity=quantity)), wanted


def _cost(quantity: Decimal, price: UnitPrice | None, book: PriceBook) -> Decimal | None:
    if price is None:
        return None
    return book.round(ARITHMETIC.divide(ARITHMETIC.multiply(quantity, price.price), price.per))


def compare(offer: Offer) -> Comparison:
    """All options side by side, and the savings of each against the one that costs most to run."""
    columns = tuple(_column(option, offer) for option in offer.options)
    with_design = [at for at, column in enumerate(columns) if column.option.design]
    if not with_design:
        return Comparison(columns, ())
    dearest = max(with_design, key=lambda at: (_to_run(columns[at]), -at))
    return Comparison(columns, tuple(saving(at, dearest, columns) for at in with_design if at != dearest))


def _column(option: Option, offer: Offer) -> Column:
    reckoned = total(option, offer.book)
    costs = running(option.design, offer.book) if option.design else None
    year = costs.year if costs else None
    return Column(option, reckoned, costs, None if year is None else reckoned.gross + offer.years * year)


def _to_run(column: Column) -> tuple[Decimal, float]:
    """What makes an option dear to run: money a year, or while that is not known the salt."""
    costs, design = column.running, column.option.design
    return ((costs.year if costs else None) or Decimal(0), design.salt_year if design else 0.0)


def saving(option: int, against: int, columns: Sequence[Column]) -> Saving:
    """What one option saves against another in salt, water and money a year, as far as it can be defended.

    A gain within the doubt counts as none, a loss always counts; so money is never promised too high.
    """
    one, other = columns[option], columns[against]
    extra = one.total.gross - other.total.gross
    mine, theirs = one.option.design, other.option.design
    if mine is None or theirs is None:
        return Saving(option, against, 0.0, 0.0, None, extra, None, "Without a design there is nothing to compare.")
    if not isclose(mine.load, theirs.load, rel_tol=1e-6):
        text = "The two designs take different amounts of hardness out, so their use cannot be compared."
        return Saving(option, against, 0.0, 0.0, None, extra, None, text)
    same_salt = mine.salt == theirs.salt
    salt = _defended(theirs.salt_year, mine.salt_year) if same_salt else 0.0
    water = _defended(theirs.water_year, mine.water_year)
    money = _money_saved(one.running, other.running, salt, water, same_salt)
    why_not = "" if salt or water or (money and not same_salt) else WITHIN_DOUBT
    return Saving(option, against, salt, water, money, extra, _payback(extra, money), why_not)


def _defended(other: float, mine: float) -> float:
    difference = other - mine
    return 0.0 if 0.0 <= difference < DEFENSIBLE * other else difference


def _money_saved(
    mine: Running | None, theirs: Running | None, salt: float, water: float, same_salt: bool
) -> Decimal | None:
    if mine is None or theirs is None:
        return None
    costs = (mine.salt_cost, theirs.salt_cost, mine.water_cost, theirs.water_cost)
    if any(cost is None for cost in costs):
        return None
    my_salt, their_salt, my_water, their_water = (cost or Decimal(0) for cost in costs)
    by_salt = their_salt - my_salt
    if not salt and (same_salt or 0 <= by_salt < Decimal(str(DEFENSIBLE)) * their_salt):
        by_salt = Decimal(0)
    by_water = their_water - my_water if water else Decimal(0)
    return by_salt + by_water + theirs.service_cost - mine.service_cost


def _payback(extra: Decimal, money: Decimal | None) -> Decimal | None:
    if money is None or money <= 0 or extra <= 0:
        return None
    return ARITHMETIC.divide(extra, money).quantize(Decimal("0.1"), ROUND_HALF_UP, ARITHMETIC)
