"""The price book: what the user charges, what salt and water cost, and how amounts are rounded.

Money is decimal, never a float. Every amount is rounded to the smallest coin by one stated rule, and sums are sums of
rounded amounts, so that a customer who adds up the sheet gets its total to the cent.

    book = PriceBook(currency="€", items=(Item("resin", "Resin", "L", Decimal("6.50")),))
    book.round(Decimal("2.345"))       Decimal("2.35")
    read_decimal("1.234,50", "price")  Decimal("1234.50"); InputError with a sentence where it is no number
    PriceBook.from_text(book.to_text()) == book

The prices of salt, water and yearly service are what the customer pays, tax included; prices of items are without tax.
Import and export as CSV stand in `core.job.price_csv`.
"""

from __future__ import annotations

import json
import re
from collections.abc import Mapping
from dataclasses import dataclass, field
from decimal import ROUND_HALF_EVEN, ROUND_HALF_UP, Context, Decimal
from typing import Any

from core.errors import InputError, JobFileError, UnitError
from core.units import find_unit

FORMAT = "tapwright prices"
VERSION = 1
LARGEST_FILE = 2_000_000  # characters

ROUNDINGS = {"half up": ROUND_HALF_UP, "half even": ROUND_HALF_EVEN}
TAX_RULES = ("per line", "per total")
KINDS = ("material", "labour", "other")
USES = {
    "by hand": "put in by hand",
    "every offer": "in every offer",
    "softener": "the softener itself: the smallest with enough resin, of the right kind",
    "resin": "the resin, by the litre",
    "first salt": "the first salt, by the kilogram",
    "blending": "where raw water is mixed back in",
}

ARITHMETIC = Context(prec=80)  # digits: products of the largest numbers are exact
LARGEST = Decimal(1_000_000_000)  # of any number in a price book or an offer
MOST_PLACES = 6  # digits after the decimal sign that a price or a quantity may have
_SHAPE = re.compile(r"[+-]?\d[\d.,' ]*|[+-]?[.,]\d+", re.ASCII)
_PLAIN = re.compile(r"[+-]?\d*(?:[.,]\d+)?", re.ASCII)
_GROUPED = re.compile(r"[+-]?\d{1,3}(?:([.,' ])\d{3})+(?:([.,])\d+)?", re.ASCII)
_EITHER_WAY = re.compile(r"[+-]?[1-9]\d{0,2}[.,]\d{3}", re.ASCII)
_SPACES = dict.fromkeys(map(ord, "\u00a0\u2007\u2009\u202f"), " ")


@dataclass(frozen=True, slots=True)
class Item:
    """One thing or service the user sells."""

    key: str  # the user's own number or word for it, unique in the book
    name: str
    unit: str = "each"
    price: Decimal = Decimal(0)  # for one unit, without tax; below zero for a credit
    kind: str = "material"
    tax: str = ""  # name of a tax rate of the book; "" is free of tax
    use: str = "by hand"  # when it is proposed
    quantity: Decimal = Decimal(1)  # proposed, where the design does not give it
    size: Decimal | None = None  # litres of resin in it, for a softener
    fits: str = ""  # "single" or "twin", for a softener; "" is any


@dataclass(frozen=True, slots=True)
class UnitPrice:
    """What so much of something costs, tax included: 8.90 for 25 kg."""

    price: Decimal
    per: Decimal
    unit: str


@dataclass(frozen=True, slots=True)
class PriceBook:
    """All prices of a user, and the rules by which they are added up."""

    currency: str = ""
    places: int = 2  # digits of the smallest coin
    rounding: str = "half up"
    tax_rule: str = "per total"
    tax_rates: Mapping[str, Decimal] = field(default_factory=dict)  # name -> percent
    items: tuple[Item, ...] = ()
    salt: UnitPrice | None = None
    potassium_salt: UnitPrice | None = None
    water: UnitPrice | None = None  # with the charge for waste water
    service_year: Decimal | None = None
    unknown: Mapping[str, Any] = field(default_factory=dict)  # keys of a later writer, kept as they are

    @property
    def coin(self) -> Decimal:
        """The smallest amount there is."""
        return Decimal(1).scaleb(-self.places)

    def round(self, amount: Decimal) -> Decimal:
        """An amount in whole coins."""
        return amount.quantize(self.coin, ROUNDINGS[self.rounding], ARITHMETIC) + 0  # no minus before a zero

    def percent_of(self, tax: str) -> Decimal:
        """The percentage of a tax by its name; none for a name that is not known or empty."""
        return self.tax_rates.get(tax, Decimal(0))

    def salt_price(self, salt: str) -> UnitPrice | None:
        """What the salt costs that a softener takes, "nacl" or "kcl"."""
        return self.potassium_salt if salt == "kcl" else self.salt

    def rule(self) -> str:
        """How amounts are rounded and taxed, in words for the customer."""
        ties = "a half goes up" if self.rounding == "half up" else "a half goes to the even digit"
        coin = f"{self.places} decimals" if self.places else "whole units"
        taxed = "on each line" if self.tax_rule == "per line" else "once on the sum of each rate"
        return f"Each line is rounded to {coin} ({ties}); tax is reckoned and rounded {taxed}."

    def as_json(self) -> dict[str, Any]:
        """The price book for a file; numbers stand as texts, so that no digit is lost."""
        return {
            "currency": self.currency,
            "places": self.places,
            "rounding": self.rounding,
            "tax_rule": self.tax_rule,
            "tax_rates": {name: written(rate) for name, rate in self.tax_rates.items()},
            "salt": _unit_price_json(self.salt),
            "potassium_salt": _unit_price_json(self.potassium_salt),
            "water": _unit_price_json(self.water),
            "service_year": None if self.service_year is None else written(self.service_year),
            "items": [item_json(item) for item in self.items],
            **self.unknown,
        }

    def to_text(self) -> str:
        """The price book as a readable file."""
        document = {"format": FORMAT, "version": VERSION, **self.as_json()}
        return json.dumps(document, ensure_ascii=False, indent=1)

    @classmethod
    def from_text(cls, text: str) -> PriceBook:
        """Read a price book; JobFileError says why it cannot be read."""
        document = parse_json(text, "a price book", FORMAT, VERSION)
        del document["format"], document["version"]
        try:
            return book_of(document)
        except (InputError, UnitError) as error:
            raise JobFileError(f"The price book cannot be used: {error}") from None


def read_decimal(
    text: str, name: str, lowest: Decimal = Decimal(0), highest: Decimal = LARGEST, places: int = MOST_PLACES
) -> Decimal:
    """The number in a text, "12,5", "1 234.50" or "1.234,50"; InputError with a sentence otherwise.

    "1.234" can be read two ways and is refused: money must not be guessed.
    """
    typed = text.strip().translate(_SPACES).replace("’", "'").replace("−", "-")
    plain = _plain_digits(typed, name)
    if plain is None:
        raise InputError(name, text, f"The {name} “{text[:40]}” is not a number. Write it such as 12.50 or 12,50.")
    value = Decimal(plain)
    if not lowest <= value <= highest:
        raise InputError(
            name, text, f"The {name} is {text.strip()[:40]}; accepted is {written(lowest)} to {written(highest)}."
        )
    if -int(value.as_tuple().exponent) > places:
        raise InputError(name, text, f"The {name} {text.strip()[:40]} has more than {places} decimals. Round it.")
    return value + 0


def _plain_digits(typed: str, name: str) -> str | None:
    """Digits as decimal reads them; None where they make no number."""
    if len(typed) > 40 or not _SHAPE.fullmatch(typed):
        return None
    if _EITHER_WAY.fullmatch(typed):
        whole, part = re.split("[.,]", typed)
        text = f"The {name} “{typed}” can be read two ways. Write {whole}{part} or {whole}.{part}0."
        raise InputError(name, typed, text)
    if _PLAIN.fullmatch(typed):
        return typed.replace(",", ".")
    grouped = _GROUPED.fullmatch(typed)
    if not grouped or grouped[1] == grouped[2]:
        return None
    whole, sign, part = typed.rpartition(grouped[2]) if grouped[2] else (typed, "", "")
    groups = re.split(r"[.,' ]", whole)
    if len(set(re.findall(r"[.,' ]", whole))) != 1 or not all(len(group) == 3 for group in groups[1:]):
        return None
    return "".join(groups) + ("." + part if sign else "")


def written(value: Decimal) -> str:
    """A number for a file, with a point; never in a form that `read_decimal` could take for another number."""
    text = f"{value:f}"
    return f"{text}0" if _EITHER_WAY.fullmatch(text) else text


def check_item(item: Item, tax_rates: Mapping[str, Decimal]) -> Item:
    """The item itself; InputError with a sentence where it cannot be used."""
    if not item.key.strip():
        raise InputError("key", item.key, "The key is missing: give each item a number or word of its own.")
    if not item.name.strip():
        raise InputError("name", item.name, f"The name of “{item.key}” is missing.")
    for name, value, accepted in (("kind", item.kind, KINDS), ("use", item.use, tuple(USES))):
        if value not in accepted:
            raise InputError(name, value, f"The {name} “{value}” is not known; accepted are {', '.join(accepted)}.")
    if item.fits not in ("", "single", "twin"):
        raise InputError("fits", item.fits, f"“{item.fits}” is no kind of softener; accepted: single, twin, nothing.")
    if item.tax and item.tax not in tax_rates:
        known = ", ".join(tax_rates) or "none yet"
        raise InputError("tax", item.tax, f"The tax rate “{item.tax}” is not in the price book; known are: {known}.")
    if item.use == "softener" and item.size is None:
        raise InputError("size", None, f"“{item.key}” is a softener: its size in litres of resin is missing.")
    return item


def check_items(items: tuple[Item, ...], tax_rates: Mapping[str, Decimal]) -> tuple[Item, ...]:
    """The items themselves; InputError where one cannot be used or a key occurs twice."""
    seen: set[str] = set()
    for item in items:
        check_item(item, tax_rates)
        if item.key in seen:
            raise InputError("key", item.key, f"The key “{item.key}” occurs twice.")
        seen.add(item.key)
    return items


def item_json(item: Item) -> dict[str, Any]:
    """An item for a file, its numbers as texts."""
    return {
        "key": item.key,
        "name": item.name,
        "unit": item.unit,
        "price": written(item.price),
        "kind": item.kind,
        "tax": item.tax,
        "use": item.use,
        "quantity": written(item.quantity),
        "size": None if item.size is None else written(item.size),
        "fits": item.fits,
    }


def item_of(part: Any) -> Item:
    """An item from a file; InputError where a part of it is of the wrong kind."""
    held = table_of(part, "item")
    size = held.get("size")
    return Item(
        key=text_of(held, "key"),
        name=text_of(held, "name"),
        unit=text_of(held, "unit", "each"),
        price=read_decimal(text_of(held, "price"), "price", -LARGEST),
        kind=text_of(held, "kind", "material"),
        tax=text_of(held, "tax", ""),
        use=text_of(held, "use", "by hand"),
        quantity=read_decimal(text_of(held, "quantity", "1"), "quantity"),
        size=None if size is None else read_decimal(text_of(held, "size"), "size"),
        fits=text_of(held, "fits", ""),
    )


def table_of(part: Any, name: str) -> dict[str, Any]:
    """A table of names and values; InputError for anything else."""
    if not isinstance(part, dict):
        raise InputError(name, part, f"An entry for “{name}” is not a table of names and values.")
    return part


def text_of(held: Mapping[str, Any], key: str, otherwise: str | None = None) -> str:
    """A text by its name; InputError where it is missing or no text."""
    value = held.get(key, otherwise)
    if not isinstance(value, str):
        raise InputError(key, value, f"“{key}” is missing, or it is not a text.")
    return value


def _unit_price_json(price: UnitPrice | None) -> dict[str, str] | None:
    if price is None:
        return None
    return {"price": written(price.price), "per": written(price.per), "unit": price.unit}


def _unit_price(part: Any, name: str, quantity: str) -> UnitPrice | None:
    if part is None:
        return None
    held = table_of(part, name)
    unit = find_unit(text_of(held, "unit"), quantity).symbol
    per = read_decimal(text_of(held, "per", "1"), f"quantity of {name}", Decimal("0.001"))
    return UnitPrice(read_decimal(text_of(held, "price"), f"price of {name}"), per, unit)


def parse_json(text: str, what: str, form: str, version: int) -> dict[str, Any]:
    """The table in a JSON file of ours; JobFileError says why there is none."""
    if len(text) > LARGEST_FILE:
        raise JobFileError(f"The file holds {len(text):,} characters; {what} holds at most {LARGEST_FILE:,}.")
    try:
        document = json.loads(text)
    except (ValueError, RecursionError):
        raise JobFileError(f"This is not {what}: it cannot be read as JSON.") from None
    if not isinstance(document, dict) or document.get("format") != form:
        raise JobFileError(f"This is not {what}: its “format” is not “{form}”.")
    found = document.get("version")
    if not isinstance(found, int) or isinstance(found, bool) or not 1 <= found <= version:
        raise JobFileError(f"The file gives version “{str(found)[:20]}”; this app reads {version}. Update the app.")
    return document


def book_of(document: dict[str, Any]) -> PriceBook:
    """A price book from its part of a file; InputError or UnitError where it cannot be used."""
    known = {"currency", "places", "rounding", "tax_rule", "tax_rates", "items"}
    known |= {"salt", "potassium_salt", "water", "service_year"}
    places, rounding = document.get("places", 2), document.get("rounding", "half up")
    if not isinstance(places, int) or isinstance(places, bool) or not 0 <= places <= 4:
        raise InputError("places", places, "The decimals of the currency must be a whole number from 0 to 4.")
    if rounding not in ROUNDINGS:
        raise InputError("rounding", rounding, f"The rounding must be one of {', '.join(ROUNDINGS)}.")
    tax_rule = document.get("tax_rule", "per total")
    if tax_rule not in TAX_RULES:
        raise InputError("tax_rule", tax_rule, f"The tax rule must be one of {', '.join(TAX_RULES)}.")
    held = table_of(document.get("tax_rates", {}), "tax_rates")
    rates = {name: read_decimal(text_of(held, name), f"tax rate {name}", highest=Decimal(100)) for name in held}
    items = document.get("items", [])
    if not isinstance(items, list):
        raise InputError("items", None, "“items” is not a list.")
    service = document.get("service_year")
    return PriceBook(
        currency=text_of(document, "currency", ""),
        places=places,
        rounding=rounding,
        tax_rule=tax_rule,
        tax_rates=rates,
        items=check_items(tuple(map(item_of, items)), rates),
        salt=_unit_price(document.get("salt"), "salt", "mass"),
        potassium_salt=_unit_price(document.get("potassium_salt"), "potassium salt", "mass"),
        water=_unit_price(document.get("water"), "water", "volume"),
        service_year=None if service is None else read_decimal(text_of(document, "service_year"), "yearly service"),
        unknown={key: part for key, part in document.items() if key not in known},
    )
