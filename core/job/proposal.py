"""From an assessed design to the lines of an offer.

design = design_of("Saving", job, assess(job).softener)     None while the softener has no answer
propose(design, book)                                       lines, to be edited
"""

from __future__ import annotations

from collections.abc import Iterable
from decimal import ROUND_HALF_UP, Decimal
from math import isfinite

from core.job.answers import Part
from core.job.fields import CHOICES
from core.job.offer import Design, Line
from core.job.prices import ARITHMETIC, Item, PriceBook
from core.job.record import Job

DAYS_PER_YEAR = 365.0
FIRST_SALT = Decimal(25)  # kg, where the book gives no quantity: a bag; common practice, no source
SAME_SIZE = 0.999  # of the resin wanted: a softener of 28.3 L is one of a cubic foot


def design_of(name: str, job: Job, softener: Part) -> Design | None:
    """The design behind the softener part of an assessment; None while it has no answer.

    The load follows from what each kilogram of salt removes and from the salt of a year.
    """
    wanted = ("resin", "salt", "salt_year", "water_year", "efficiency")
    if not all(key in softener.answers for key in wanted):
        return None
    resin, each, salt_year, water_year, efficiency = (softener.answers[key].amount.value for key in wanted)
    if not all(map(isfinite, (resin, each, salt_year, water_year, efficiency))) or resin <= 0.0:
        return None
    return Design(
        name=name,
        resin=resin,
        kind=_choice(job, "softener.kind"),
        salt=_choice(job, "softener.salt"),
        salt_dose=1000.0 * each / resin,
        salt_each=each,
        salt_year=salt_year,
        water_year=water_year,
        load=efficiency * salt_year / DAYS_PER_YEAR,
        blended="blend.target" in job.entries,
    )


def _choice(job: Job, key: str) -> str:
    chosen, choice = job.choices.get(key), CHOICES[key]
    return chosen if chosen in dict(choice.options) else choice.default


def propose(design: Design, book: PriceBook) -> tuple[Line, ...]:
    """Lines for a design from the price book, in its order; to be edited."""
    softener = _softener_for(design, book.items)
    proposed = []
    for item in book.items:
        quantity = _quantity(design, item, item is softener)
        if quantity is not None:
            proposed.append(line_of(item, quantity))
    return tuple(proposed)


def why_no_softener(design: Design, book: PriceBook) -> str:
    """A sentence where the price book has no softener for a design; empty where it has one."""
    if _softener_for(design, book.items) is not None:
        return ""
    return (
        f"The price book has no {design.kind} softener with {design.resin:.3g} L of resin or more: add a line by hand."
    )


def line_of(item: Item, quantity: Decimal | None = None) -> Line:
    """A line for an item of the price book."""
    wanted = item.quantity if quantity is None else quantity
    return Line(item.name, item.unit, wanted, item.price, tax=item.tax, key=item.key)


def _softener_for(design: Design, items: Iterable[Item]) -> Item | None:
    fitting = [
        item
        for item in items
        if item.use == "softener"
        and item.fits in ("", design.kind)
        and float(item.size or 0) >= design.resin * SAME_SIZE
    ]
    return min(fitting, key=lambda item: (item.fits != design.kind, item.size, item.price), default=None)


def _quantity(design: Design, item: Item, is_softener: bool) -> Decimal | None:
    if item.use == "every offer" or (item.use == "softener" and is_softener):
        return item.quantity
    if item.use == "resin":
        return three_digits(design.resin * (2 if design.kind == "twin" else 1))
    if item.use == "first salt":
        return item.quantity if item.quantity > 1 else FIRST_SALT
    return item.quantity if item.use == "blending" and design.blended else None


def three_digits(value: float) -> Decimal:
    """A number to three digits that count; whole digits are never rounded away."""
    exact = Decimal(repr(float(value)))
    places = max(0, 2 - exact.adjusted()) if exact else 0
    return exact.quantize(Decimal(1).scaleb(-places), ROUND_HALF_UP, ARITHMETIC)
