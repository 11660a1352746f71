"""Tables in a report: cells, and what the heading says of each column.

    columns = Columns()                    remembers the last heading
    columns.take(line, next_line)          "heading" · "names" · ""      a line that only says what comes below
    columns.row(line)                      list[Cell] | None             a line of the table below it
    columns.by_order(kinds)                what each number of a line is, where only the order tells

Cells are parted by tabs, semicolons, bars, two or more blanks, or commas where the heading shows that they are. A
heading without any of these still gives the order of the columns.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from functools import lru_cache

from core.job.readings.cutting import fold
from core.job.readings.tokens import tokens_of
from core.job.readings.vocabulary import role_of

DEAD = ("limit", "method", "other")  # columns whose numbers are no readings
_WIDE = re.compile(r"\t|\s{2,}")
_ORDER = ("limit", "method", "other", "unit", "value", "name")  # which word of a heading counts most
_LONGEST_HEADING = 400  # characters of a line that is looked at as a heading
_MOST_COLUMNS = 40


@dataclass(frozen=True, slots=True)
class Cell:
    """One cell of a line: where it stands, what its column holds, its heading."""

    start: int  # places within the line
    end: int
    role: str = ""
    label: str = ""
    column: int = 0


@dataclass(slots=True)
class Columns:
    """What the last heading said of the columns."""

    sign: str = ""  # what parts the cells; "wide" for blanks; "" where only the order is known
    labels: tuple[str, ...] = ()
    roles: tuple[str, ...] = ()
    names: dict[int, int] = field(default_factory=dict)  # column -> place of its heading, where columns are names

    def take(self, line: str, next_line: str) -> str:
        """Whether a line is a heading; if so it is remembered. `next_line` helps to tell commas from commas."""
        if not line.strip() or len(line) > _LONGEST_HEADING:
            return ""
        for sign in _signs(line, next_line):
            cells = split(line, sign)
            if len(cells) > _MOST_COLUMNS:
                continue
            texts = [line[cell.start : cell.end] for cell in cells]
            if _heads(texts) or (_names_first(texts) and _has_numbers_below(next_line, sign, len(cells), 1)):
                self._set(sign, texts, tuple(map(_role, texts)))
                return "heading"
            if _all_names(texts) and _has_numbers_below(next_line, sign, len(cells), 2):
                self._set(sign, texts, ("value",) * len(texts))
                self.names = {cell.column: cell.start for cell in cells}
                return "names"
        return self._take_order(line)

    def row(self, line: str) -> list[Cell] | None:
        """The cells of a line of the table; None where it does not have as many as the heading."""
        if not self.sign or (self.sign != "wide" and self.sign not in line):
            return None
        cells = split(line, self.sign)
        while len(cells) > len(self.roles) and cells[-1].start == cells[-1].end:
            cells.pop()
        if not 1 < len(cells) <= len(self.roles) or (self.sign == "wide" and len(cells) < len(self.roles)):
            return None
        return [
            Cell(cell.start, cell.end, self.roles[cell.column], self.labels[cell.column], cell.column) for cell in cells
        ]

    def by_order(self) -> tuple[str, ...]:
        """Which columns with numbers follow each other: "limit", "value"; () where no heading is known."""
        return tuple(role for role in self.roles if role in ("limit", "value", "")) if not self.names else ()

    def _set(self, sign: str, texts: list[str], roles: tuple[str, ...]) -> None:
        self.sign, self.labels, self.roles, self.names = sign, tuple(text.strip() for text in texts), roles, {}

    def _take_order(self, line: str) -> str:
        """A heading whose words are parted by single blanks: each word must name a column."""
        words = line.split()
        roles = [role_of(word.strip(".:()")) for word in words]
        if not 3 <= len(words) <= _MOST_COLUMNS or not all(roles) or not _tells(roles):
            return ""
        self._set("", words, tuple(roles))
        return "heading"


def split(line: str, sign: str) -> list[Cell]:
    """The cells of a line, quotes around them left out."""
    if sign == "wide":
        ends = [match.span() for match in _WIDE.finditer(line) if match.start() and line[match.end() :].strip()]
    else:
        ends = [(at, at + 1) for at in _separators(line, sign)]
    starts = [0, *(end for _, end in ends)]
    stops = [*(start for start, _ in ends), len(line)]
    return [_trimmed(line, start, stop, column) for column, (start, stop) in enumerate(zip(starts, stops, strict=True))]


def _separators(line: str, sign: str) -> list[int]:
    """Places of a separator outside quotes."""
    if '"' not in line:
        return [at for at, letter in enumerate(line) if letter == sign]
    places, quoted = [], False
    for at, letter in enumerate(line):
        if letter == '"':
            quoted = not quoted
        elif letter == sign and not quoted:
            places.append(at)
    return places


def _trimmed(line: str, start: int, stop: int, column: int) -> Cell:
    while start < stop and line[start] in ' "\u00a0':
        start += 1
    while stop > start and line[stop - 1] in ' "\u00a0\r':
        stop -= 1
    return Cell(start, stop, column=column)


def _signs(line: str, next_line: str) -> list[str]:
    """What may part the cells of a line, the surest first."""
    signs = [sign for sign in "\t;|" if sign in line]
    if not signs and line.count(",") and line.count(",") == len(_separators(next_line, ",")):
        signs.append(",")
    if not signs and _WIDE.search(line.strip()):
        signs.append("wide")
    return signs


@lru_cache(maxsize=1024)
def _role(text: str) -> str:
    """What a column holds, by the words of its heading; "" where they do not say."""
    roles = {role_of(word) for word in re.findall(r"[^\W\d_]+°?", fold(text))}
    return next((role for role in _ORDER if role in roles), "")


def _heads(texts: list[str]) -> bool:
    """Whether cells are headings: at least two of them name a column, none holds a reading."""
    roles = [_role(text) for text in texts]
    if not _tells([role for role in roles if role]):
        return False
    return not any(_kinds(text) >= {"name", "number"} or _kinds(text) & {"unit"} for text in texts)


def _tells(roles: list[str]) -> bool:
    return len(set(roles)) >= 2 and bool({"value", "limit", "unit", "name"} & set(roles))


def _all_names(texts: list[str]) -> bool:
    """Whether each cell names something measured (the first may name the sample), two at least."""
    named = ["name" in _kinds(text) and "number" not in _kinds(text) for text in texts]
    return sum(named) >= 2 and all(named[1:])


def _names_first(texts: list[str]) -> bool:
    """Whether the first column is headed as that of the names, the others by words of their own."""
    plain = not any(_kinds(text) & {"name", "number", "unit"} for text in texts)
    return len(texts) > 1 and _role(texts[0]) == "name" and all(text.strip() for text in texts) and plain


def _has_numbers_below(line: str, sign: str, count: int, least: int) -> bool:
    cells = split(line[:_LONGEST_HEADING], sign)
    numbers = sum(_kinds(line[cell.start : cell.end]) & {"number", "name"} == {"number"} for cell in cells)
    return len(cells) == count and numbers >= least


@lru_cache(maxsize=1024)
def _kinds(text: str) -> frozenset[str]:
    return frozenset(token.kind for token in tokens_of(fold(text[:_LONGEST_HEADING])))
