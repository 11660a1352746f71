"""What people type, and what they read: numbers and quantities in and out of text.

    parse_number("12,5") -> Parsed(value=12.5)                        never raises; .refusal is a sentence
    parse_quantity("22 gpg", "hardness") -> Reading(value=22.0, unit="gpg")       or UnitError
    format_number(17.118, unit="gpg") -> "17.1"                       digits that suit the unit
    format_quantity(17.118, "mg/L CaCO3") -> "17 mg/L CaCO3"
    format_band(11.62, 14.2, "gpg") -> "11.6 to 14.2 gpg"

Comma and point are both decimal signs when typed; which one is shown is the reader's choice. Words for units are in
`pwa.unit_words`. Nothing here knows the screen.
"""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from functools import lru_cache

from core.errors import AmbiguousUnit, UnitError
from core.units import Unit, find_unit, possible_units, quantity_named, units_of

NOTHING = "–"  # shown where there is no number
MINUS = "−"
GAP = "\u00a0"  # groups digits, parts number from unit: it breaks no line, and every font has it
LONGEST = 100  # characters; no number is longer
_QUOTED = 40  # characters of what was typed that are quoted back
_EXAMPLE = "type digits with a comma or a point, such as 12.5 or 12,5"

_SIGNS = str.maketrans(
    {
        **dict.fromkeys("−‐‑–﹣－", "-"),
        **dict.fromkeys("\u00a0\u2007\u2008\u2009\u200a\u202f\t\r\n", " "),
        **dict.fromkeys("’‘ʼ`´", "'"),
        **dict(zip("⁰¹²³⁴⁵⁶⁷⁸⁹⁻", "0123456789-", strict=True)),
        **{"½": " 1/2", "⅓": " 1/3", "⅔": " 2/3", "¼": " 1/4", "¾": " 3/4"},
        **{"⅛": " 1/8", "⅜": " 3/8", "⅝": " 5/8", "⅞": " 7/8", "⁄": "/"},
        **{"≈": "~", "≤": "<", "≥": ">"},
    }
)
_LEAD = re.compile(r" *(?P<mark><|>|~|(?:circa|approx|about|ca|c)\b\.?)? *(?P<sign>[+-]?) *", re.IGNORECASE)
_FRACTION = re.compile(r"(?:(\d{1,9})[ -]{1,3})?(\d{1,9}) ?/ ?(\d{1,9})(?![\d.,])", re.ASCII)
_DIGITS = re.compile(r"[.,]?\d[\d.,' ]*", re.ASCII)
_POWER = re.compile(r"(?:[eE]| ?[x×*·] ?10 ?\^? ?)([+-]?\d{1,4})(?![\d.,])", re.ASCII)
_SPACED = re.compile(r"(\d{1,3}(?:([ '])\d{3})(?:\2\d{3})*)(?:[.,](\d+))?", re.ASCII)
_GROUPED = {sign: re.compile(rf"\d{{1,3}}(?:\{sign}\d{{3}})+", re.ASCII) for sign in ".,"}
_RANGE = re.compile(r" *(?:-|to\b|bis\b|…) *[.,]?\d", re.IGNORECASE | re.ASCII)


@dataclass(frozen=True, slots=True)
class Parsed:
    """A number as typed: its value, what was said about it, or why it is none.

    `value` is None for an empty text and for a refused one; only the latter has a `refusal`.
    """

    value: float | None
    note: str = ""  # how it was understood, where it could be read otherwise
    refusal: str = ""  # a sentence: why it is no number, and what to type
    below: bool = False  # "< 0.05": the truth is at most this
    above: bool = False  # "> 425": the truth is at least this
    about: bool = False  # "ca. 20"


@dataclass(frozen=True, slots=True)
class Reading:
    """A number with its unit, as typed; the value is None where nothing was typed."""

    value: float | None
    unit: str  # symbol in core.units; "" for a plain number
    note: str = ""
    below: bool = False
    above: bool = False
    about: bool = False


def parse_number(typed: str) -> Parsed:
    """The number in a text: "12,5", "1 234.5", "1'234", "1 1/2", "< 0.05", "ca. 20", "2e3". Never raises."""
    parsed, rest = _number_and_rest(typed)
    if rest.strip() and not parsed.refusal:
        return Parsed(None, refusal=f"“{_short(typed)}” is not a number; {_EXAMPLE}.")
    return parsed


def parse_quantity(typed: str, quantity: str | None = None, unit: str | None = None) -> Reading:
    """A number and its unit: "22 gpg", "1 1/2 in", "300ppm CaCO3", or "22" with the unit chosen beside it.

    A unit that is typed goes before `unit`, the chosen one; where it is ambiguous and the chosen unit is one of
    its readings, the chosen one is meant. The quantity "" is a plain number, which takes no unit.

    Raises UnitError with a sentence, AmbiguousUnit with `.choices` where the unit can mean several things.
    """
    if not typed.strip():
        return Reading(None, unit or "")
    parsed, rest = _number_and_rest(typed)
    if parsed.value is None:
        raise UnitError(parsed.refusal)
    name = quantity_named(quantity) if quantity else quantity
    symbol, meant = _unit_meant(rest.strip(), name, unit or "")
    note = " ".join(filter(None, (parsed.note, meant)))
    return Reading(parsed.value, symbol, note, parsed.below, parsed.above, parsed.about)


def format_number(value: float | None, digits: int = 3, decimal: str = ".", unit: str | Unit | None = None) -> str:
    """A number as people read it: with a unit to the digits usual for it, otherwise to `digits` that count.

    Whole digits are never rounded away, groups of three are parted from 10 000 up, NaN and None are "–".
    """
    if value is None or math.isnan(value):
        return NOTHING
    if math.isinf(value):
        return "∞" if value > 0 else f"{MINUS}∞"
    usual = None if unit is None else _usual_decimals(str(unit) if isinstance(unit, str) else unit)
    if usual is not None and abs(value) < 5e-7:  # dust of a subtraction: no kit and no meter reads that low
        value = 0.0
    if value and not 1e-6 <= abs(value) < 1e15:
        return _with_exponent(value, digits, decimal)
    if usual is not None:
        return _fixed(value, _places_of_unit(value, usual), decimal)
    return _fixed(value, max(0, digits - 1 - _exponent(value, digits)), decimal, strip=True)


def format_quantity(value: float | None, unit: str | Unit, decimal: str = ".", digits: int | None = None) -> str:
    """A number with its unit, "17.5 gpg"; to `digits` that count if given. The units "" and "1" are not written."""
    if digits is None:
        number = format_number(value, decimal=decimal, unit=unit)
    else:
        number = format_number(value, digits, decimal)
    return _with_unit(number, unit)


def format_band(lowest: float | None, highest: float | None, unit: str | Unit, decimal: str = ".") -> str:
    """A band with its unit, "11.6 to 14.2 gpg"; a single number where both ends read the same."""
    if lowest is None or highest is None or math.isnan(lowest) or math.isnan(highest):
        return NOTHING
    first, last = (format_number(end, decimal=decimal, unit=unit) for end in sorted((lowest, highest)))
    return _with_unit(last if first == last else f"{first} to {last}", unit)


def _number_and_rest(typed: str) -> tuple[Parsed, str]:
    """The number that a text begins with, and what follows it."""
    if not typed.strip():
        return Parsed(None), ""
    if len(typed) > LONGEST:
        return Parsed(None, refusal=f"“{_short(typed)}” is too long for a number; {_EXAMPLE}."), ""
    text = typed.translate(_SIGNS)
    lead = _LEAD.match(text)
    mark, sign, body = (lead["mark"] or "", lead["sign"], text[lead.end() :]) if lead else ("", "", text)
    size, note, rest = _magnitude(body.lstrip())
    if size is None:
        return Parsed(None, refusal=f"“{_short(typed)}” is not a number; {_EXAMPLE}."), ""
    if _RANGE.match(rest):
        return Parsed(None, refusal=f"“{_short(typed)}” is a range; type one number, such as its middle."), ""
    if math.isinf(size):
        return Parsed(None, refusal=f"“{_short(typed)}” is too large a number."), ""
    value = 0.0 - size if sign == "-" else size
    limit = {"<": "at most", ">": "at least"}.get(mark, "")
    if limit:
        note = f"{note} The value is {limit} {format_number(value, 6)}.".lstrip()
    return Parsed(value, note, "", mark == "<", mark == ">", bool(mark) and not limit), rest


def _magnitude(text: str) -> tuple[float | None, str, str]:
    """Size of the number that a text begins with, a note on how it was read, and what follows it."""
    fraction = _FRACTION.match(text)
    if fraction:
        whole, over, under = (float(part or 0) for part in fraction.groups())
        return (whole + over / under if under else None), "", text[fraction.end() :]
    digits = _DIGITS.match(text)
    if not digits:
        return None, "", text
    token = digits[0].rstrip(" '")
    rest = text[len(token) :]
    plain, note = _plain_digits(token[:-1] if token[-1] in ".," else token)
    power = _POWER.match(rest)
    if plain and power:
        return float(f"{plain}e{power[1]}"), note, rest[power.end() :]
    return (float(plain) if plain else None), note, rest


def _plain_digits(token: str) -> tuple[str, str]:
    """Digits as Python reads them and a note, from digits with any separators; "" where they make no number."""
    spaced = _SPACED.fullmatch(token)
    if spaced:
        return f"{spaced[1].replace(spaced[2], '')}.{spaced[3] or '0'}", ""
    if " " in token or "'" in token:
        return "", ""
    last = max(token.rfind("."), token.rfind(","))
    if last < 0:
        return token, ""
    sign, whole, part = token[last], token[:last], token[last + 1 :]
    other = "," if sign == "." else "."
    if sign in whole:  # twice the same sign: it can only group
        return (token.replace(sign, ""), "") if _GROUPED[sign].fullmatch(token) else ("", "")
    if other in whole:  # both signs: the last one is the decimal sign
        return (f"{whole.replace(other, '')}.{part}", "") if _GROUPED[other].fullmatch(whole) else ("", "")
    note = ""
    if len(part) == 3 and 1 <= len(whole) <= 3 and not whole.startswith("0"):
        name = "comma" if sign == "," else "point"
        note = f"“{token}” is read with a decimal {name}; if you mean {whole}{part}, leave the {name} out."
    return f"{whole or '0'}.{part or '0'}", note


def _unit_meant(text: str, quantity: str | None, chosen: str) -> tuple[str, str]:
    """Symbol of the unit typed or else chosen, and a note where the one settled the other."""
    if quantity == "":
        if text:
            raise UnitError(f"“{_short(text)}” does not belong here; type the number alone.")
        return "", ""
    if not text:
        if chosen:
            return find_unit(chosen, quantity).symbol, ""
        if quantity is None:
            return "", ""
        raise UnitError(f"The unit is missing; accepted are {', '.join(units_of(quantity))}.")
    try:
        return find_unit(text, quantity).symbol, ""
    except AmbiguousUnit as question:
        if chosen not in question.choices:
            raise
        return chosen, f"“{_short(text)}” is read as {chosen}, the unit chosen."


def _short(text: str) -> str:
    words = " ".join(text[: 4 * _QUOTED].split())
    return words if len(words) <= _QUOTED else words[: _QUOTED - 1] + "…"


@lru_cache(maxsize=512)
def _usual_decimals(unit: str | Unit) -> int | None:
    """Decimals that a reading in this unit usually has; None for a unit that is not known."""
    if isinstance(unit, Unit):
        return unit.decimals
    return next((found.decimals for found in possible_units(unit)), None)


def _exponent(value: float, digits: int) -> int:
    """Power of ten of the first digit, once rounded to that many digits."""
    return int(f"{abs(value):.{digits - 1}e}".partition("e")[2]) if value else 0


def _places_of_unit(value: float, usual: int) -> int:
    """Decimals to show: the usual ones, but two digits that count at least, and no decimals beyond four."""
    if not value:
        return usual
    at_least = 1 - _exponent(value, 2)
    at_most = 3 - _exponent(value, 4)
    return max(0, min(max(usual, at_least), at_most))


def _fixed(value: float, places: int, decimal: str, strip: bool = False) -> str:
    text = f"{abs(value):.{places}f}"
    if strip and "." in text:
        short = text.rstrip("0").rstrip(".")
        if math.isclose(float(short), abs(value), rel_tol=1e-12):  # 2.5 is 2.5, but 2.4999 stays 2.50
            text = short
    whole, point, part = text.partition(".")
    if len(whole) > 4:
        whole = f"{int(whole):,}".replace(",", GAP)
    sign = MINUS if value < 0 and any(digit not in "0." for digit in text) else ""
    return f"{sign}{whole}{decimal if point else ''}{part}"


def _with_exponent(value: float, digits: int, decimal: str) -> str:
    number, _, power = f"{abs(value):.{digits - 1}e}".partition("e")
    return f"{MINUS if value < 0 else ''}{number.replace('.', decimal)}e{int(power)}"


def _with_unit(number: str, unit: str | Unit) -> str:
    symbol = str(unit)
    return number if symbol in ("", "1") else f"{number}{GAP}{symbol}"
