"""Type on the page: sizes, and the breaking of text into lines. Lengths are points."""

from __future__ import annotations

import unicodedata
from collections.abc import Collection
from dataclasses import dataclass
from typing import Protocol

UNKNOWN = "□"  # stands for a sign that the font has not


@dataclass(frozen=True, slots=True)
class Style:
    """How a run of text looks."""

    size: float
    leading: float
    colour: str = "ink"
    bold: bool = False

    def scaled(self, by: float) -> Style:
        """The same, larger or smaller."""
        return Style(self.size * by, self.leading * by, self.colour, self.bold)


TITLE = Style(22.0, 26.0, "accent", True)
SUBTITLE = Style(10.0, 14.0, "quiet")
FIRM = Style(12.0, 15.0, "ink", True)
LABEL = Style(10.5, 13.0, "accent", True)
LEAD = Style(11.5, 15.5)
BODY = Style(10.0, 13.6)
SMALL = Style(8.2, 11.0, "quiet")
FIGURE = Style(25.0, 29.0, "accent", True)
UNIT = Style(12.0, 15.0, "quiet")
TECHNICAL = Style(8.6, 11.6)
FINE = Style(7.6, 10.0, "quiet")
RUNNING = Style(7.6, 10.0, "quiet")


class Measure(Protocol):
    """What the layout must know of the font."""

    def width(self, text: str, style: Style) -> float:
        """Width of a text in one line."""

    @property
    def signs(self) -> Collection[int]:
        """Code points that the font can draw."""


def printable(text: str, signs: Collection[int]) -> str:
    """A text with signs that the font has; what it has not stands as □, marks and joiners without a place go."""
    out = []
    for sign in unicodedata.normalize("NFC", text):
        if sign == "\n" or ord(sign) in signs:
            out.append(sign)
        elif unicodedata.category(sign) in ("Cc", "Zs", "Zl", "Zp"):
            out.append(" ")
        elif unicodedata.category(sign) not in ("Mn", "Me", "Cf"):
            out.append(UNKNOWN)
    return "".join(out)


def lines_of(text: str, style: Style, width: float, measure: Measure, first: float = 0.0) -> list[str]:
    """A text broken to a width; the first line leaves out `first` at its left. An empty line for an empty text."""
    lines: list[str] = []
    for paragraph in text.split("\n"):
        room = width - first if not lines else width
        current = ""
        for word in filter(None, paragraph.split(" ")):
            joined = f"{current} {word}" if current else word
            if measure.width(joined, style) <= room:
                current = joined
                continue
            if current or room < width:
                lines.append(current)
                room = width
            pieces = _pieces(word, style, width, measure)
            lines += pieces[:-1]
            current = pieces[-1]
        lines.append(current)
    return lines


def _pieces(word: str, style: Style, width: float, measure: Measure) -> list[str]:
    """A word, broken anywhere where it is wider than a line."""
    pieces = [""]
    for sign in word:
        if pieces[-1] and measure.width(pieces[-1] + sign, style) > width:
            pieces.append("")
        pieces[-1] += sign
    return pieces
