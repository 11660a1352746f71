"""The words of reports: names of what is measured, units, limits, and what may stand between.

names() -> Trie                                  all names that are known, by their words
unit_form(text) -> str                           the plain form of a unit a water report may hold, or ""
unit_of(text, field, name) -> str                its symbol; AmbiguousUnit or UnitError as core.units
words("limit"), role_of("Grenzwert")             see core/data/report_words.tsv
"""

from __future__ import annotations

import unicodedata
from collections.abc import Iterator
from dataclasses import dataclass
from functools import cache, lru_cache

from core.data import read_table
from core.errors import AmbiguousUnit
from core.job.fields import FIELDS
from core.job.readings.cutting import cut, fold, words_of
from core.units import find_unit
from core.units.lookup import REGISTRY
from core.units.typed import plain

LONGEST_UNIT = 40  # characters
_LANGUAGES = ("en", "de", "fr")
_UMLAUTS = str.maketrans({"ä": "ae", "ö": "oe", "ü": "ue", "Ä": "Ae", "Ö": "Oe", "Ü": "Ue"})
_GERMAN_ENDS = ("gehalt", "konzentration", "wert", "gehaltes")
_QUANTITIES = tuple(dict.fromkeys(field.quantity for field in FIELDS.values() if field.quantity))
_WITH_DEGREE = ("°", "deg", "grad")
_ALONE = ("gpg", "ppm", "ppb", "grain", "dh", "dgh", "dkh", "fh", "clark", "mval", "mmol", "meq", "ms/", "us/", "%")
_LOOKED_AT = 64  # letters of one word


@dataclass(frozen=True, slots=True)
class Name:
    """A name of something measured."""

    field: str  # key of an entry; "" where there is none for it; "basis:…", "absent:", "harmless:" are no entries
    plain: str = ""  # the unit that a bare mg/L means
    asks: tuple[str, ...] = ()  # what a bare mg/L could mean
    note: str = ""


@lru_cache(maxsize=8192)
def normal(word: str) -> str:
    """A word without case, accents and underscores; numbers with a point."""
    folded = unicodedata.normalize("NFKD", word[:_LOOKED_AT].casefold())
    letters = "".join(sign for sign in folded if not unicodedata.combining(sign))
    return letters.replace("_", "").replace(",", ".")


class Trie:
    """Names by their words; each step is the normal form of a word, or "=" and the word itself for symbols."""

    __slots__ = ("name", "steps")

    def __init__(self) -> None:
        self.steps: dict[str, Trie] = {}
        self.name: Name | None = None

    def add(self, keys: list[str], name: Name) -> None:
        """Put a name at the end of its words, unless there is one already."""
        node = self
        for key in keys:
            node = node.steps.setdefault(key, Trie())
        node.name = node.name or name


def _spelled(name: str, language: str) -> Iterator[str]:
    """A name in the ways it is written; German makes one word of "Calcium" and "Gehalt"."""
    ends = ("", *_GERMAN_ENDS) if language == "de" and name.isalpha() else ("",)
    for end in ends:
        for spelled in dict.fromkeys((name, name.translate(_UMLAUTS))):
            yield spelled + end


@cache
def names() -> Trie:
    """All names that are known: those of reports, and keys and labels of the entries."""
    root = Trie()
    for row in read_table("report_names").rows:
        field = row["field"] if ":" in row["field"] or row["field"] in FIELDS else ""
        name = Name(field, row["plain"], tuple(filter(None, row["asks"].split("|"))), row["note"])
        for symbol in filter(None, row["symbols"].split("|")):
            root.add([f"={word}" for word in words_of(symbol)], name)
        for language in _LANGUAGES:
            for written in filter(None, row[language].split("|")):
                for spelled in _spelled(written, language):
                    root.add([normal(word) for word in words_of(spelled)], name)
    for key, field in FIELDS.items():
        for written in (key, field.label):
            root.add([normal(word) for word in words_of(written)], Name(key))
    return root


@cache
def words(kind: str) -> frozenset[str]:
    """Normal forms of the single words of one kind."""
    rows = (row for row in read_table("report_words").rows if row["kind"] == kind)
    return frozenset(normal(word) for row in rows for word in row["words"].split("|"))


@cache
def _roles() -> dict[str, str]:
    order = ("limit", "method", "other", "unit", "value", "name")
    return {word: role for role in reversed(order) for word in words(f"role:{role}")}


def role_of(heading: str) -> str:
    """What a column with this word in its heading holds: limit, method, other, unit, value, name; "" if unknown."""
    return _roles().get(normal(heading), "")


@cache
def _own_units() -> dict[str, tuple[str, bool]]:
    """Ways to write a unit that only reports use: plain form -> symbol, and whether a sign for degrees is needed."""
    rows = (row for row in read_table("report_words").rows if row["kind"].startswith("unit:"))
    return {
        plain(text): (row["kind"].removeprefix("unit:"), text.startswith("°"))
        for row in rows
        for text in row["words"].split("|")
    }


def _symbol(text: str) -> str:
    return _own_units().get(plain(text), (text, False))[0]


@cache
def unit_forms() -> dict[str, bool]:
    """Plain forms of all units that a report may hold; True where they only count with a sign for degrees."""
    forms: dict[str, bool] = {}
    for quantity in _QUANTITIES:
        for unit in REGISTRY[quantity]:
            for text in (unit.symbol, *unit.aliases):
                form = plain(text)
                if "/" in form or form.startswith(_ALONE) or ("deg" in form and not form.startswith("deg")):
                    forms[form] = False
                elif text.startswith(_WITH_DEGREE):
                    forms.setdefault(form, True)
    forms.update(dict.fromkeys(("mg/l", "ppm", "ug/l", "ppb", "g/m3", "mmol/l"), False))
    for form, (_, needs_degree) in _own_units().items():
        forms.setdefault(form, needs_degree)
    forms.pop("", None)
    return forms


@cache
def _unit_starts() -> frozenset[str]:
    """Plain forms of the first words of all units that count."""
    texts = [text for quantity in _QUANTITIES for unit in REGISTRY[quantity] for text in (unit.symbol, *unit.aliases)]
    for row in read_table("report_words").rows:
        texts += row["words"].split("|") if row["kind"].startswith("unit:") else []
    return frozenset(plain(cut(fold(text))[0].text) for text in texts if text.strip() and unit_form(text)) - {""}


@lru_cache(maxsize=8192)
def begins_unit(word: str) -> bool:
    """Whether a unit can begin with this word or sign; a cheap first look."""
    return word in ("°", "%") or plain(word) in _unit_starts()


@lru_cache(maxsize=8192)
def unit_form(text: str) -> str:
    """The plain form of a text, if it is a unit that a water report may hold; "" otherwise."""
    if len(text) > LONGEST_UNIT:
        return ""
    form = plain(text)
    needs_degree = unit_forms().get(form)
    if needs_degree is None:
        return ""
    return form if not needs_degree or text.casefold().startswith(_WITH_DEGREE) else ""


def unit_of(text: str, field: str, name: Name) -> str:
    """Symbol of the unit that a text means for this entry; "" for a plain number.

    Raises AmbiguousUnit with its choices, or UnitError where it does not measure what the entry holds.
    """
    quantity = FIELDS[field].quantity
    if not quantity:
        return ""
    symbol = _symbol(text)
    form = plain(symbol)
    if name.asks and form in ("mg/l", "ppm", "g/m3"):
        raise AmbiguousUnit(f"“{text}” can mean {' or '.join(name.asks)}: say which.", name.asks)
    if name.plain and (form in ("mg/l", "g/m3") or (form == "ppm" and quantity != "alkalinity")):
        return name.plain
    if quantity == "alkalinity" and symbol == "°dH":
        symbol = "°dKH"
    return find_unit(symbol, quantity).symbol


def measures(text: str, quantity: str) -> bool:
    """Whether a text can be a unit of this quantity."""
    try:
        find_unit(_symbol(text), quantity)
    except AmbiguousUnit:
        return True
    except ValueError:
        return False
    return True
