"""Finding the unit that a text means, and asking back when it means several."""

from __future__ import annotations

import re
from functools import cache, lru_cache

from core.errors import AmbiguousUnit, UnitError
from core.units import plant, water
from core.units.typed import LONGEST, plain
from core.units.unit import Unit

REGISTRY: dict[str, tuple[Unit, ...]] = {
    "hardness": water.HARDNESS,
    "alkalinity": water.ALKALINITY,
    **water.IONS,
    **plant.PLANT,
}
QUANTITIES: tuple[str, ...] = tuple(REGISTRY)

_AMBIGUOUS = {**water.AMBIGUOUS, **plant.AMBIGUOUS}
_DISSOLVED = frozenset({"hardness", "alkalinity", *water.IONS})
_TYPED_EXACTLY = {"°f": "°fH", "°d": "°dH"}  # the small letter after the sign is hardness, never temperature
_ASK = frozenset(map(plain, ("mg/L", "°F", "grain")))  # symbols that mean something else on the next sheet
_SHOWN = 40  # characters of a text that are quoted back

Found = Unit | tuple[str, ...] | None  # the unit, the choices, or nothing


def units_of(quantity: str) -> tuple[str, ...]:
    """Symbols of the units of a quantity, in the order in which they are offered; the usual one first."""
    return tuple(unit.symbol for unit in REGISTRY[quantity_named(quantity)])


def quantity_named(name: str) -> str:
    """The quantity a name means: "sodium" for "sodium", "Sodium" or "Na"; UnitError when there is none."""
    if name in REGISTRY:
        return name
    wanted = str(name).strip().casefold()
    wanted = water.ION_NAMES.get(wanted, wanted)
    if wanted in REGISTRY:
        return wanted
    raise UnitError(f"“{_short(name)}” is not a quantity known here; known are {', '.join(QUANTITIES)}.")


def find_unit(text: str | Unit, quantity: str | None = None) -> Unit:
    """The unit that a text means, however it is written: "gr/gal", "cu ft", "°d", "mg/l as CaCO3".

    Without a quantity a symbol of hardness ("mmol/L") is read as hardness; what commonly means something else
    too ("mg/L", "ppm", "°F", "gal", "grains") is asked back.
    A quantity in round brackets settles it: "°F (temperature)".

    Raises AmbiguousUnit, with `.choices` that this function accepts, or UnitError.
    """
    if isinstance(text, Unit):
        if quantity is not None and text.quantity != quantity_named(quantity):
            raise UnitError(_wrong_quantity(text.symbol, text, quantity_named(quantity)))
        return text
    name = None if quantity is None else quantity_named(quantity)
    typed = str(text)[: LONGEST + 1]
    found = meaning(typed, name) if name else _meaning_alone(typed)
    if isinstance(found, Unit):
        return found
    if found:
        raise AmbiguousUnit(f"“{_short(typed)}” can mean {_either(found)}: say which.", found)
    raise UnitError(_unknown(typed, name))


def possible_units(text: str) -> tuple[Unit, ...]:
    """Every unit that a text can be, at most one for each quantity, hardness first; empty if there is none."""
    typed = str(text)[: LONGEST + 1]
    return tuple(unit for quantity in QUANTITIES if isinstance(unit := meaning(typed, quantity), Unit))


@lru_cache(maxsize=4096)
def meaning(text: str, quantity: str) -> Found:
    """What a text means as a unit of this quantity: the unit, a tuple of choices, or None."""
    exact = _symbols(quantity).get(text)
    if exact is not None:
        return exact
    bare, named = _split_quantity(text)
    if named not in (None, quantity):
        return None
    form = plain(bare)
    written = _written(quantity)
    found = written.get(form)
    return found if found is not None else written.get(form.removeprefix("deg")) if form != "deg" else None


@lru_cache(maxsize=4096)
def _meaning_alone(text: str) -> Found:
    """What a text means when nothing says which quantity is measured."""
    text = _TYPED_EXACTLY.get(text.strip(), text)
    hits = [(q, hit) for q in QUANTITIES if (hit := meaning(text, q)) is not None]
    form = plain(_split_quantity(text)[0])
    found = [hit for _, hit in hits if isinstance(hit, Unit)]
    if form not in _ASK or len(hits) == 1:
        exact = [unit for unit in found if plain(unit.symbol) == form]
        if exact:
            return exact[0]
    if len(found) == len(hits) and found:
        as_hardness = found[0].quantity == "hardness" and {q for q, _ in hits} <= _DISSOLVED
        if as_hardness or len({unit.symbol for unit in found}) == 1:
            return found[0]
    return _choices(form, hits)


def _choices(form: str, hits: list[tuple[str, Unit | tuple[str, ...]]]) -> Found:
    """Every reading of a text once, written so that it can be told from the others."""
    choices: dict[str, None] = {}
    for quantity, hit in hits:
        for symbol in (hit.symbol,) if isinstance(hit, Unit) else hit:
            unclear = plain(symbol) == form or plain(symbol) in _ASK
            choices[f"{symbol} ({quantity})" if unclear else symbol] = None
    return tuple(choices) or None


@cache
def _symbols(quantity: str) -> dict[str, Unit]:
    return {unit.symbol: unit for unit in REGISTRY[quantity]}


@cache
def _written(quantity: str) -> dict[str, Unit | tuple[str, ...]]:
    """Plain forms of one quantity; a symbol goes before an alias, an earlier unit before a later one."""
    forms: dict[str, Unit | tuple[str, ...]] = {}
    for unit in reversed(REGISTRY[quantity]):
        forms.update(dict.fromkeys(map(plain, unit.aliases), unit))
    for text, choices in _AMBIGUOUS.get(quantity, {}).items():
        forms[plain(text)] = choices
    forms.update((plain(unit.symbol), unit) for unit in REGISTRY[quantity])
    forms.pop("", None)
    return forms


_IN_BRACKETS = re.compile(r"(.*\S)\s*\(([a-z ]+)\)\s*", re.DOTALL)


def _split_quantity(text: str) -> tuple[str, str | None]:
    """A text and the quantity named after it in round brackets, if there is one."""
    found = _IN_BRACKETS.fullmatch(text) if text.rstrip().endswith(")") else None
    return (found[1], found[2]) if found and found[2] in REGISTRY else (text, None)


def _unknown(text: str, quantity: str | None) -> str:
    if not text.strip():
        return f"The unit is missing; {_accepted(quantity)}."
    elsewhere = _meaning_alone(text) if quantity else None
    if isinstance(elsewhere, Unit) and quantity:
        return _wrong_quantity(text, elsewhere, quantity)
    kind = f"unit of {quantity}" if quantity else "unit"
    return f"“{_short(text)}” is not a {kind} known here; {_accepted(quantity)}."


def _wrong_quantity(text: str, unit: Unit, quantity: str) -> str:
    return f"“{_short(text)}” measures {unit.quantity}, not {quantity}; {_accepted(quantity)}."


def _accepted(quantity: str | None) -> str:
    if quantity is None:
        return "accepted are units such as mg/L CaCO3, °dH, gpg, L/min, gpm, bar or °C"
    return f"accepted are {', '.join(units_of(quantity))}"


def _either(choices: tuple[str, ...]) -> str:
    shown = choices if len(choices) <= 7 else (*choices[:6], "another")
    return " or ".join((", ".join(shown[:-1]), shown[-1])) if len(shown) > 1 else shown[0]


def _short(text: object) -> str:
    words = " ".join(str(text)[: 4 * _SHOWN].split())
    return words if len(words) <= _SHOWN else words[: _SHOWN - 1] + "…"
