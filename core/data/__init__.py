"""Tables from print, one TSV each, as they were printed: units of the source, status of each row.

A table starts with comment lines (`# name: text`) that say where it comes from and how well it was read,
then a line of column names, then the rows. Nothing here is computed; whoever reads a table converts it to
the core's units.

    read_table("salt_capacity")          # -> Table(name, notes, rows)
    table.rows[0]["salt_lb_ft3"]         # -> "4", still text
    number(row, "salt_lb_ft3")           # -> 4.0; an empty or "-" cell is NaN
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from os.path import dirname, join

Row = Mapping[str, str]


@dataclass(frozen=True, slots=True)
class Table:
    """A printed table: its name, what is said of its origin, its rows as text."""

    name: str
    notes: Mapping[str, str]
    rows: tuple[Row, ...]

    def column(self, name: str) -> tuple[float, ...]:
        """Numbers of one column, NaN where the cell is empty."""
        return tuple(number(row, name) for row in self.rows)


def number(row: Row, column: str) -> float:
    """Number in a cell; NaN where the source has none."""
    text = row[column]
    return float("nan") if text in ("", "-") else float(text)


@cache
def read_table(name: str) -> Table:
    """Table of that name, read once. Raises OSError where there is none."""
    path = join(dirname(__file__), f"{name}.tsv")
    # The loader reads from a folder and from a zip archive alike; open() would not.
    text = __spec__.loader.get_data(path).decode("utf-8")  # type: ignore[union-attr]
    notes: dict[str, str] = {}
    lines: list[list[str]] = []
    for line in text.splitlines():
        if line.startswith("#"):
            key, _, value = line[1:].partition(":")
            notes[key.strip()] = value.strip()
        elif line.strip():
            lines.append(line.split("\t"))
    names = lines[0]
    return Table(name, notes, tuple(dict(zip(names, cells, strict=True)) for cells in lines[1:]))
