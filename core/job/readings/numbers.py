"""Numbers as reports write them, with comma or point; what can be read in two ways is said to be so.

readings_of("1.250", sign=None) -> (1.25, 1250.0)      both, where the text does not decide
decimal_sign(numbers) -> "," | "." | None              what the other numbers of the report show
"""

from __future__ import annotations

import re
from collections.abc import Iterable
from math import isfinite

_GROUPED = {sign: re.compile(rf"\d{{1,3}}(?:\{sign}\d{{3}})+") for sign in ".,"}
_SPACED = re.compile(r"(\d{1,3}(?:['\u00a0]\d{3})+)(?:[.,](\d+))?")


def readings_of(text: str, sign: str | None = None) -> tuple[float, ...]:
    """The values a number can have, the likeliest first; none where it is no number, such as "1.2.3".

    A sign for "at most" or "at least" before it is passed over. `sign` is the decimal sign of the report, if known.
    """
    found = (_value(form) for form in _forms(text.lstrip("<>=~ \u00a0"), sign))
    return tuple(dict.fromkeys(value for value in found if value is not None and isfinite(value)))


def decimal_sign(numbers: Iterable[str]) -> str | None:
    """The decimal sign of a report, where its numbers show one and only one."""
    shown = {sign for text in numbers if (sign := _shown(text.lstrip("<>=~ \u00a0")))}
    return shown.pop() if len(shown) == 1 else None


def _value(form: str) -> float | None:
    try:
        return float(form)
    except ValueError:
        return None


def _forms(text: str, sign: str | None) -> tuple[str, ...]:
    spaced = _SPACED.fullmatch(text)
    if spaced:
        return (f"{re.sub('[^0-9]', '', spaced[1])}.{spaced[2] or '0'}",)
    number, power, exponent = text.partition("e" if "e" in text else "E")
    return tuple(f"{form}{'e' if power else ''}{exponent}" for form in _plain_forms(number, sign))


def _plain_forms(text: str, sign: str | None) -> tuple[str, ...]:
    signs = [mark for mark in ".," if mark in text]
    if not signs:
        return (text,)
    if len(signs) == 2:  # the last one is the decimal sign, the other groups
        last = max(signs, key=text.rfind)
        whole, _, part = text.rpartition(last)
        other = "," if last == "." else "."
        return (f"{whole.replace(other, '')}.{part}",) if _GROUPED[other].fullmatch(whole) else ()
    mark = signs[0]
    if text.count(mark) > 1:
        return (text.replace(mark, ""),) if _GROUPED[mark].fullmatch(text) else ()
    decimal, grouped = text.replace(mark, "."), text.replace(mark, "")
    if not _could_group(text, mark):
        return (decimal,)
    if sign is None:
        return (decimal, grouped)
    return (decimal,) if sign == mark else (grouped,)


def _could_group(text: str, mark: str) -> bool:
    return bool(_GROUPED[mark].fullmatch(text)) and not text.startswith("0")


def _shown(text: str) -> str:
    """The decimal sign that a number shows beyond doubt; "" where it shows none."""
    signs = [mark for mark in ".," if mark in text]
    if len(signs) == 2:
        return max(signs, key=text.rfind)
    if len(signs) != 1 or text.count(signs[0]) > 1 or _could_group(text, signs[0]):
        return ""
    return signs[0]
