"""Money as people read it: to the coin, digits in groups, with the sign of its currency."""

from __future__ import annotations

from decimal import Decimal

from core.job.prices import PriceBook
from pwa.text import GAP, MINUS, NOTHING

GROUPED_FROM = 5  # digits: as all numbers of the app are


def money_text(amount: Decimal | None, book: PriceBook, decimal: str = ".") -> str:
    """An amount: "€12 345.60" with a decimal point, "12 345,60 €" with a comma; "–" where there is none."""
    if amount is None:
        return NOTHING
    sign = MINUS if amount < 0 else ""
    figure = plain_number(abs(amount), decimal, book.places)
    if not book.currency:
        return sign + figure
    if decimal == ",":
        return f"{sign}{figure}{GAP}{book.currency}"
    gap = GAP if book.currency.isalpha() else ""
    return f"{sign}{book.currency}{gap}{figure}"


def plain_number(value: Decimal, decimal: str = ".", places: int | None = None) -> str:
    """A decimal number with its digits in groups; needless zeros left out unless `places` are wanted."""
    text = f"{value:f}" if places is None else f"{value:.{places}f}"
    whole, _, part = text.partition(".")
    part = part.rstrip("0") if places is None else part
    grouped = f"{int(whole):,}".replace(",", GAP) if len(whole) >= GROUPED_FROM else whole
    return f"{grouped}{decimal}{part}" if part else grouped


def percent_text(percent: Decimal, decimal: str = ".") -> str:
    """A percentage, "19 %"."""
    return f"{plain_number(percent, decimal)}{GAP}%"
