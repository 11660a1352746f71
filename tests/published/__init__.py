"""Tables of check values that do not come from us, and how to read them; README.md gives the format."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path

FOLDER = Path(__file__).parent
COLUMNS = ("id", "area", "what", "inputs", "expected", "tolerance", "source", "status")
STATUSES = frozenset(
    {
        "checked",
        "secondary",
        "from memory",
        "by hand",
        "reference library",
        "choice",
        "common practice, no source",
        "regression, own output",
    }
)
EXACT_REL = 1e-14  # "exact": equal up to the last bits of a float
EXACT_ABS = 1e-13

Value = float | bool | str


@dataclass(frozen=True, slots=True)
class Row:
    """One check value: what is computed from which inputs, what it must be, and who says so."""

    id: str
    area: str
    what: str
    inputs: Mapping[str, Value]
    expected: Mapping[str, Value]
    tolerance: str
    source: str
    status: str

    def check(self, **actual: object) -> None:
        """Fail unless every expected name is there and agrees within the tolerance of the row."""
        missing = set(self.expected) - set(actual)
        assert not missing, f"{self.id}: nothing computed for {sorted(missing)}"
        for name, wanted in self.expected.items():
            got = actual[name]
            said = f"{self.id} {self.what}: {name} is {got!r}, {self.source} has {wanted!r} ({self.tolerance})"
            if isinstance(wanted, float):
                assert self._near(float(got), wanted), said  # type: ignore[arg-type]
            else:
                assert got == wanted, said

    def _near(self, got: float, wanted: float) -> bool:
        if self.tolerance == "exact":
            return math.isclose(got, wanted, rel_tol=EXACT_REL, abs_tol=EXACT_ABS)
        size, kind = self.tolerance.split()
        if kind == "rel":
            return math.isclose(got, wanted, rel_tol=float(size), abs_tol=0.0)
        if kind == "abs":
            return abs(got - wanted) <= float(size)
        raise ValueError(f"{self.id}: tolerance {self.tolerance!r} is neither rel, abs nor exact")


def rows(table: str, *, area: str | None = None, what: str | None = None) -> list[Row]:
    """The check values of one table, or of one area or one `what` in it; never an empty list."""
    path = FOLDER / f"{table}.tsv"
    lines = [t for t in path.read_text(encoding="utf-8").splitlines() if t.strip() and not t.startswith("#")]
    header, *body = (line.split("\t") for line in lines)
    if tuple(header) != COLUMNS:
        raise ValueError(f"{path.name}: the columns must be {', '.join(COLUMNS)}")
    found = [_row(path.name, cells) for cells in body]
    chosen = [r for r in found if area in (None, r.area) and what in (None, r.what)]
    if not chosen:
        raise ValueError(f"{path.name}: no row for area {area!r}, what {what!r}")
    return chosen


def _row(where: str, cells: list[str]) -> Row:
    if len(cells) != len(COLUMNS) or not all(cell.strip() for cell in cells):
        raise ValueError(f"{where}: {len(COLUMNS)} filled columns wanted in {cells}")
    id_, area, what, inputs, expected, tolerance, source, status = (cell.strip() for cell in cells)
    if status not in STATUSES:
        raise ValueError(f"{where} {id_}: status {status!r} is not one of {sorted(STATUSES)}")
    return Row(id_, area, what, _pairs(inputs), _pairs(expected), tolerance, source, status)


def _pairs(text: str) -> dict[str, Value]:
    pairs = (pair.partition("=") for pair in text.split(";"))
    return {name.strip(): _value(value.strip()) for name, _, value in pairs}


def _value(text: str) -> Value:
    if text in ("true", "false"):
        return text == "true"
    try:
        return float(text)
    except ValueError:
        return text
