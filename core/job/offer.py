"""The offer: options with their lines, and totals to the cent.

    option = Option("Saving", propose(design, book), design=design)      `core.job.proposal`
    offer = Offer((option,), book, years=10)
    total(option, book).gross             Decimal, the sum of what is printed
    compare(offer).columns[0].over_years  `core.job.comparison`: price now and the running cost of the years

Rules, all stated on the sheet: a line is quantity × price less its discount, rounded to the coin. A discount on the
whole is a percentage of the sum of the lines that are above zero, rounded once, and split over those lines in whole
coins by largest remainder. Tax is reckoned per line or once per rate, as the price book says.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from decimal import ROUND_FLOOR, Decimal

from core.errors import InputError
from core.job.prices import ARITHMETIC, LARGEST, PriceBook

MOST_OPTIONS = 3  # side by side on a phone and on a page
MOST_YEARS = 40
MOST_LINES = 200  # of one option


@dataclass(frozen=True, slots=True)
class Design:
    """A softener as an offer sees it: what is built, and what it takes to run."""

    name: str
    resin: float  # L
    kind: str  # single | twin
    salt: str  # nacl | kcl
    salt_dose: float  # g/L
    salt_each: float  # kg for one regeneration
    salt_year: float  # kg/year
    water_year: float  # L/year
    load: float  # mol/day taken out
    blended: bool = False  # raw water is mixed back in


@dataclass(frozen=True, slots=True)
class Line:
    """One line of an offer, freely edited."""

    name: str
    unit: str
    quantity: Decimal
    price: Decimal  # for one unit, without tax
    discount: Decimal = Decimal(0)  # percent
    tax: str = ""  # name of a rate of the price book
    key: str = ""  # of the item it came from


@dataclass(frozen=True, slots=True)
class Option:
    """One of the designs a customer chooses between."""

    name: str
    lines: tuple[Line, ...] = ()
    discount: Decimal = Decimal(0)  # percent of the whole
    design: Design | None = None


@dataclass(frozen=True, slots=True)
class Offer:
    """Up to three options, and the years the customer cares about."""

    options: tuple[Option, ...]
    book: PriceBook = field(default_factory=PriceBook)
    years: int = 10

    def __post_init__(self) -> None:
        if len(self.options) > MOST_OPTIONS:
            text = f"An offer holds at most {MOST_OPTIONS} designs side by side; {len(self.options)} were given."
            raise InputError("options", len(self.options), text)
        if not 1 <= self.years <= MOST_YEARS:
            raise InputError("years", self.years, f"The years must be from 1 to {MOST_YEARS}; {self.years} was given.")


@dataclass(frozen=True, slots=True)
class LineTotal:
    """One line reckoned: amounts are rounded, and add up as they are printed."""

    line: Line
    amount: Decimal  # quantity × price less the line's own discount
    share: Decimal  # its part of the discount on the whole
    tax: Decimal | None  # where tax is reckoned per line

    @property
    def net(self) -> Decimal:
        """What is left of the line, without tax."""
        return self.amount - self.share


@dataclass(frozen=True, slots=True)
class TaxTotal:
    """The tax of one rate."""

    name: str
    percent: Decimal
    base: Decimal
    amount: Decimal


@dataclass(frozen=True, slots=True)
class Total:
    """An option reckoned."""

    lines: tuple[LineTotal, ...]
    subtotal: Decimal
    discount: Decimal
    taxes: tuple[TaxTotal, ...]

    @property
    def net(self) -> Decimal:
        """Without tax."""
        return self.subtotal - self.discount

    @property
    def tax(self) -> Decimal:
        """All tax."""
        return sum((tax.amount for tax in self.taxes), Decimal(0))

    @property
    def gross(self) -> Decimal:
        """What the customer pays."""
        return self.net + self.tax


def total(option: Option, book: PriceBook) -> Total:
    """An option reckoned to the coin; InputError where a number of it cannot be."""
    if len(option.lines) > MOST_LINES:
        raise InputError("lines", len(option.lines), f"An option holds at most {MOST_LINES} lines.")
    amounts = [_amount(line, book) for line in option.lines]
    _check("discount", option.discount, Decimal(0), Decimal(100))
    charged = sum((amount for amount in amounts if amount > 0), Decimal(0))
    discount = book.round(ARITHMETIC.divide(charged * option.discount, Decimal(100)))
    shares = split(discount, [max(amount, Decimal(0)) for amount in amounts], book.coin)
    rows = tuple(
        _line_total(line, amount, share, book)
        for line, amount, share in zip(option.lines, amounts, shares, strict=True)
    )
    return Total(rows, sum(amounts, book.round(Decimal(0))), discount, _tax_totals(rows, book))


def _line_total(line: Line, amount: Decimal, share: Decimal, book: PriceBook) -> LineTotal:
    per_line = book.tax_rule == "per line"
    return LineTotal(line, amount, share, _tax(amount - share, book.percent_of(line.tax), book) if per_line else None)


def _amount(line: Line, book: PriceBook) -> Decimal:
    _check("quantity", line.quantity, Decimal(0), LARGEST)
    _check("price", line.price, -LARGEST, LARGEST)
    _check("discount", line.discount, Decimal(0), Decimal(100))
    full = ARITHMETIC.multiply(line.quantity, line.price)
    left = ARITHMETIC.multiply(full, 100 - line.discount)
    return book.round(ARITHMETIC.divide(left, Decimal(100)))


def _check(name: str, value: Decimal, lowest: Decimal, highest: Decimal) -> None:
    if not (value.is_finite() and lowest <= value <= highest):
        raise InputError(name, value, f"The {name} is {value}; accepted is {lowest:f} to {highest:f}.")


def split(amount: Decimal, weights: Sequence[Decimal], coin: Decimal) -> list[Decimal]:
    """An amount parted by weights in whole coins, so that the parts add up to it: largest remainder, first of equals.

    `amount` is a whole number of coins, zero or more; no weight is below zero.
    """
    whole = sum(weights, Decimal(0))
    if not whole or not amount:
        return [Decimal(0) * coin for _ in weights]
    exact = [ARITHMETIC.divide(ARITHMETIC.multiply(amount, weight), whole) for weight in weights]
    parts = [part.quantize(coin, ROUND_FLOOR, ARITHMETIC) for part in exact]
    left = int((amount - sum(parts)) / coin)
    by_remainder = sorted(range(len(parts)), key=lambda at: parts[at] - exact[at])
    for at in by_remainder[:left]:
        parts[at] += coin
    return parts


def _tax(base: Decimal, percent: Decimal, book: PriceBook) -> Decimal:
    return book.round(ARITHMETIC.divide(ARITHMETIC.multiply(base, percent), Decimal(100)))


def _tax_totals(rows: Sequence[LineTotal], book: PriceBook) -> tuple[TaxTotal, ...]:
    bases: dict[str, Decimal] = {}
    by_line: dict[str, Decimal] = {}
    for row in rows:
        if row.line.tax in book.tax_rates:
            bases[row.line.tax] = bases.get(row.line.tax, Decimal(0)) + row.net
            by_line[row.line.tax] = by_line.get(row.line.tax, Decimal(0)) + (row.tax or Decimal(0))
    return tuple(
        TaxTotal(
            name,
            percent := book.percent_of(name),
            base,
            by_line[name] if book.tax_rule == "per line" else _tax(base, percent, book),
        )
        for name, base in bases.items()
    )
