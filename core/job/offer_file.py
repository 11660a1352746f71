"""An offer as it is kept in a job file: its lines, its designs, and the terms it was made on.

The terms are a copy of the price book without its items: prices that change later do not change an offer that was made.
"""

from __future__ import annotations

from dataclasses import asdict, fields, replace
from decimal import Decimal
from typing import Any

from core.errors import InputError, JobFileError, UnitError
from core.job.offer import Design, Line, Offer, Option
from core.job.prices import LARGEST, book_of, read_decimal, table_of, text_of, written

_WORDS = {"kind": ("single", "twin"), "salt": ("nacl", "kcl")}


def offer_as_json(offer: Offer) -> dict[str, Any]:
    """An offer for a job file; money stands as text."""
    return {
        "years": offer.years,
        "terms": replace(offer.book, items=()).as_json(),
        "options": [_option_json(option) for option in offer.options],
    }


def offer_from_json(part: Any) -> Offer:
    """An offer from a job file; JobFileError says what of it cannot be used."""
    try:
        held = table_of(part, "offer")
        years, options = held.get("years", 10), held.get("options", [])
        if not isinstance(years, int) or isinstance(years, bool) or not isinstance(options, list):
            raise InputError("offer", None, "its years or its options are of the wrong kind.")
        return Offer(tuple(map(_option, options)), book_of(table_of(held.get("terms", {}), "terms")), years)
    except (InputError, UnitError) as error:
        raise JobFileError(f"The offer in the job file cannot be used: {error}") from None


def _option_json(option: Option) -> dict[str, Any]:
    return {
        "name": option.name,
        "discount": written(option.discount),
        "design": None if option.design is None else asdict(option.design),
        "lines": [_line_json(line) for line in option.lines],
    }


def _line_json(line: Line) -> dict[str, str]:
    held = {column.name: getattr(line, column.name) for column in fields(Line)}
    return {name: written(value) if isinstance(value, Decimal) else value for name, value in held.items()}


def _option(part: Any) -> Option:
    held = table_of(part, "option")
    lines, design = held.get("lines", []), held.get("design")
    if not isinstance(lines, list):
        raise InputError("lines", None, "the lines of an option are not a list.")
    return Option(
        text_of(held, "name", ""),
        tuple(map(_line, lines)),
        read_decimal(text_of(held, "discount", "0"), "discount", highest=Decimal(100)),
        None if design is None else _design(table_of(design, "design")),
    )


def _line(part: Any) -> Line:
    held = table_of(part, "line")
    return Line(
        name=text_of(held, "name", ""),
        unit=text_of(held, "unit", ""),
        quantity=read_decimal(text_of(held, "quantity", "1"), "quantity"),
        price=read_decimal(text_of(held, "price", "0"), "price", -LARGEST),
        discount=read_decimal(text_of(held, "discount", "0"), "discount", highest=Decimal(100)),
        tax=text_of(held, "tax", ""),
        key=text_of(held, "key", ""),
    )


def _design(held: dict[str, Any]) -> Design:
    parts: dict[str, Any] = {"name": text_of(held, "name", ""), "blended": held.get("blended") is True}
    for name, accepted in _WORDS.items():
        parts[name] = text_of(held, name, accepted[0])
        if parts[name] not in accepted:
            raise InputError(name, parts[name], f"“{parts[name][:40]}” is not one of {', '.join(accepted)}.")
    for column in fields(Design):
        if column.name not in parts:
            parts[column.name] = _number(held.get(column.name), column.name)
    return Design(**parts)


def _number(value: Any, name: str) -> float:
    if isinstance(value, bool) or not isinstance(value, int | float) or not 0 <= value <= 1e12:
        raise InputError(name, value, f"“{name}” of a design is not a number of zero or more.")
    return float(value)
