"""The items of a price book as CSV, for a spreadsheet: out, and in again with a sentence for each bad row.

Columns: key, name, unit, price, kind, tax, use, quantity, size, fits. The first line names them, in any order; of them
only key, name and price are needed. Comma, semicolon and tab part the cells; numbers may have a comma or a point.

A cell that a spreadsheet would take for a formula is written with an apostrophe before it, and read without it.
"""

from __future__ import annotations

import csv
import io
from collections.abc import Mapping
from dataclasses import dataclass
from decimal import Decimal

from core.errors import InputError, JobFileError
from core.job.prices import LARGEST, Item, check_item, item_json, read_decimal

COLUMNS = ("key", "name", "unit", "price", "kind", "tax", "use", "quantity", "size", "fits")
NEEDED = ("key", "name", "price")
SEPARATORS = (";", "\t", ",")
LARGEST_FILE = 2_000_000  # characters
MOST_ROWS = 5000
_FORMULA = ("=", "+", "-", "@", "\t", "\r", "'")
_NUMBERS = ("price", "quantity", "size")


@dataclass(frozen=True, slots=True)
class BadRow:
    """A row that was left out, and why."""

    row: int  # as a spreadsheet counts, the heading is row 1
    text: str


@dataclass(frozen=True, slots=True)
class Imported:
    """What a CSV file held: the items that can be used, and the rows that cannot."""

    items: tuple[Item, ...]
    bad: tuple[BadRow, ...]

    def sentence(self) -> str:
        """The outcome in words."""
        count = len(self.items)
        read = f"{count} item{'' if count == 1 else 's'} read"
        return f"{read}." if not self.bad else f"{read}, {len(self.bad)} left out: see the reasons."


def items_as_csv(items: tuple[Item, ...], separator: str = ",") -> str:
    """The items as the text of a CSV file; numbers have a decimal point."""
    out = io.StringIO()
    writer = csv.writer(out, delimiter=separator, lineterminator="\r\n")
    writer.writerow(COLUMNS)
    for item in items:
        parts = item_json(item)
        writer.writerow([_guarded(column, parts[column] or "") for column in COLUMNS])
    return out.getvalue()


def items_from_csv(text: str, tax_rates: Mapping[str, Decimal]) -> Imported:
    """The items of a CSV file; JobFileError where the file as a whole cannot be read."""
    if len(text) > LARGEST_FILE:
        raise JobFileError(f"The file holds {len(text):,} characters; a price list holds at most {LARGEST_FILE:,}.")
    lines = _lines(text.removeprefix("\ufeff"))
    columns = _columns(lines[0] if lines else [])
    if len(lines) > MOST_ROWS + 1:
        raise JobFileError(f"The file has {len(lines) - 1} rows; at most {MOST_ROWS} are read.")
    items: dict[str, Item] = {}
    bad: list[BadRow] = []
    for row, cells in enumerate(lines[1:], start=2):
        if not any(cell.strip() for cell in cells):
            continue
        try:
            item = _item(columns, cells, tax_rates)
            if item.key in items:
                raise InputError("key", item.key, f"The key “{item.key}” occurs twice; the first is kept.")
            items[item.key] = item
        except InputError as error:
            bad.append(BadRow(row, f"Row {row}: {error}"))
    return Imported(tuple(items.values()), tuple(bad))


def _guarded(column: str, cell: str) -> str:
    return f"'{cell}" if column not in _NUMBERS and cell.startswith(_FORMULA) else cell


def _freed(cell: str) -> str:
    return cell[1:] if cell.startswith("'") and cell[1:].startswith(_FORMULA) else cell


def _lines(text: str) -> list[list[str]]:
    heading = text.partition("\n")[0]
    separator = max(SEPARATORS, key=heading.count)
    try:
        return list(csv.reader(io.StringIO(text, newline=""), delimiter=separator))
    except csv.Error as error:
        raise JobFileError(f"The file cannot be read as CSV ({error}). Save it as CSV in UTF-8.") from None


def _columns(heading: list[str]) -> dict[str, int]:
    names = [cell.strip().casefold() for cell in heading]
    lacking = [name for name in NEEDED if name not in names]
    if lacking:
        raise JobFileError(
            f"The first line must name the columns; missing: {', '.join(lacking)}. Known are: {', '.join(COLUMNS)}."
        )
    return {name: names.index(name) for name in COLUMNS if name in names}


def _item(columns: Mapping[str, int], cells: list[str], tax_rates: Mapping[str, Decimal]) -> Item:
    held = {name: cells[at].strip() if at < len(cells) else "" for name, at in columns.items()}

    def text(name: str, otherwise: str = "") -> str:
        return _freed(held.get(name, "")) or otherwise

    size = held.get("size", "")
    item = Item(
        key=text("key"),
        name=text("name"),
        unit=text("unit", "each"),
        price=read_decimal(held["price"], "price", -LARGEST),
        kind=text("kind", "material"),
        tax=text("tax"),
        use=text("use", "by hand"),
        quantity=read_decimal(held.get("quantity") or "1", "quantity"),
        size=read_decimal(size, "size") if size else None,
        fits=text("fits"),
    )
    return check_item(item, tax_rates)
