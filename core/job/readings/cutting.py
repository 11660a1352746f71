"""A line of a report cut into pieces, before anything is known of their meaning.

    fold(text) -> text of the same length, odd signs made plain
    cut(line, offset) -> list[Token]         every sign that is not blank is in exactly one of them
    words_of(name) -> ["Säurekapazität", "bis", "pH", "4.3"]

Time is proportional to the length of the line: no pattern can be entered in two ways.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from core.job.readings.vocabulary import Name

_NUMBER = (
    r"(?:\d{1,3}(?:['\u00a0]\d{3}){1,4}(?![\d])(?:[.,]\d{1,9})?"
    r"|\d{1,15}(?:[.,]\d{1,9}){0,5}(?:[eE][+-]?\d{1,3}(?!\w))?)"
)
_TOKEN = re.compile(
    rf"""
      (?P<date>\d{{4}}-\d\d?-\d\d?(?!\d)|\d\d?[./]\d\d?[./](?:\d{{4}}|\d\d)(?![\d.,/])|\d\d?:\d\d(?::\d\d)?(?!\d))
    | (?P<method>(?<!\w)(?:DIN|EN|ISO|NF|EPA|ASTM|SM|APHA|DEV|BS|VDI|ÖNORM|OENORM|USEPA)
        (?:[ /-]{{1,2}}(?:DIN|EN|ISO|IEC|T)){{0,4}}[ :-]{{0,2}}[A-Z]?\d[\w:./-]{{0,30}})
    | (?P<charge>(?<=[A-Za-z0-9])[ ]?[1-3]?[+-]{{1,2}}(?=[\s|;:,)(]|$))
    | (?P<range>{_NUMBER}[ ]?(?:-|\.\.\.?|…|bis|to)[ ]?{_NUMBER}(?!\w))
    | (?P<number>(?:(?:<=|>=|[<>])[ \u00a0]?|(?<![^\s:(;|])-(?=[\d.,]))?
        (?:{_NUMBER}|(?<![\w.,])[.,]\d{{1,9}}(?![\d.,])))
    | (?P<word>p[Hh](?=\d)|[^\W\d_][\w\u0300-\u036f']{{0,200}}|_\w{{0,200}})
    | (?P<sep>[\t;|•]|\s{{2,}}|,(?=\s)|[.](?=\s+[^\W\d]))
    | (?P<space>\s)
    | (?P<sign>.)
    """,
    re.VERBOSE | re.DOTALL,
)
_SAME_LENGTH = str.maketrans(
    {
        **dict.fromkeys("−‐‑‒–—﹣－", "-"),
        **dict.fromkeys("\u2007\u2008\u2009\u200a\u202f", "\u00a0"),
        **dict.fromkeys("’‘ʼ`´", "'"),
        **dict(zip("₀₁₂₃₄₅₆₇₈₉⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻", "01234567890123456789+-", strict=True)),
        **dict.fromkeys("≤＜˂", "<"),
        **dict.fromkeys("≥＞˃", ">"),
        **dict.fromkeys("º˚∘", "°"),
        **dict.fromkeys("∕⁄", "/"),
        "\u03bc": "\u00b5",
        "：": ":",
        "，": ",",
        "；": ";",
    }
)
_FOOTNOTE = re.compile("(?<=[0-9])[⁰¹²³⁴⁵⁶⁷⁸⁹]{1,9}")  # 92¹ is 92 with a footnote
COUNTED = ("word", "number", "range", "date")  # kinds that can be part of a name


@dataclass(slots=True)
class Token:
    """A piece of a line: what it is and where it stands in the whole text."""

    kind: (
        str  # cut: number range date method charge word sep sign; later also name basis absent unit limit at changes …
    )
    start: int
    end: int
    text: str  # folded
    name: Name | None = None

    @property
    def span(self) -> tuple[int, int]:
        """Where it stands in the text."""
        return self.start, self.end


def fold(text: str) -> str:
    """The text with odd signs made plain, each place where it was; a raised mark after a number is no part of it."""
    return _FOOTNOTE.sub(lambda found: "^" * len(found[0]), text).translate(_SAME_LENGTH)


def cut(line: str, offset: int = 0) -> list[Token]:
    """The pieces of a folded line that begins at this place of the text."""
    found = []
    for match in _TOKEN.finditer(line):
        kind = str(match.lastgroup)
        if kind != "space":
            found.append(Token(kind, offset + match.start(), offset + match.end(), match[0]))
    return found


def words_of(name: str) -> list[str]:
    """The words and numbers of a name, as a line that holds it would be cut."""
    return [token.text for token in cut(fold(name)) if token.kind in COUNTED]
