"""The ways in which an entry comes to be known, each with the doubt it leaves.

    kits() -> tuple[Kit, ...]                       what is known here: kits, laboratories, meters
    find_kit(name, field, own=()) -> Kit | None     the kit that an entry names; the user's own go first
    kits_for(field, own=()) -> tuple[Kit, ...]      those that measure an entry
    way_of(entry, field, own=()) -> Kit | None      the kit, or else what stands for its source: told, assumed …
    check_kit(kit) -> Kit                           InputError with a sentence where it cannot be
    HowRead(kit, dilution, readings, standard_error).text     what to keep in `Entry.kit`; HowRead.of(text) reads it
    to_text(kits), from_text(text)                  the user's own kits, kept as JSON

The doubts themselves are in `core.job.doubts`. The figures stand in core/data/kits.tsv, each with its source; most
are common practice.
"""

from __future__ import annotations

import json
import math
import re
from collections.abc import Iterable, Sequence
from dataclasses import asdict, dataclass, fields
from functools import cache
from itertools import pairwise
from typing import Any

from core.data import Row, number, read_table
from core.errors import InputError, TapwrightError
from core.job.fields import FIELDS, Field
from core.job.record import Entry
from core.units import convert

SHAPES = ("normal", "triangular", "upward", "step", "none")
WITHOUT_KIT = ("any", "measured", "report", "told", "assumed")  # kinds of rows that stand for a source
LARGEST_FILE = 200_000  # characters
MOST_STEPS = 100
COMMON = "common practice, no source"


@dataclass(frozen=True, slots=True)
class Kit:
    """One way to know a value, and how far it can be from the truth.

    The doubt is the root of the squares of `resolution` and of the larger of `absolute` and `relative` × reading.
    """

    key: str
    words: str  # as it is shown, and kept in `Entry.kit`
    measures: tuple[str, ...]  # quantities of core.units, or keys of entries
    unit: str = ""  # of resolution, absolute, lowest and steps; "" where only `relative` counts, and for plain numbers
    kind: str = "own"  # strip, drops, titration, titrator, lab, meter, colour, check, own; or what stands for a source
    shape: str = "triangular"  # normal: the doubt is two standard deviations · upward: from the reading up only · …
    resolution: float = 0.0  # one drop, one count: what a repeat can differ by
    relative: float = 0.0  # share of the reading
    absolute: float = 0.0
    lowest: float = 0.0  # below it a reading only says "less than this"
    steps: tuple[float, ...] = ()  # the pads of a strip, rising
    source: str = COMMON
    status: str = COMMON
    note: str = ""

    def fits(self, field: Field) -> bool:
        """Whether it measures what this entry holds."""
        return field.key in self.measures or (bool(field.quantity) and field.quantity in self.measures)


@dataclass(frozen=True, slots=True)
class HowRead:
    """What `Entry.kit` says: the kit, how the sample was diluted, how many readings were averaged."""

    kit: str
    dilution: float = 1.0
    readings: int = 1
    standard_error: float = 0.0  # of the mean, in the unit of the entry

    @property
    def text(self) -> str:
        """What to keep in `Entry.kit`: "drop count, 1 gpg a drop; sample diluted 2 times"."""
        words = self.kit.replace(";", ",")
        if self.dilution != 1.0:
            words += f"; sample diluted {self.dilution:g} times"
        if self.readings > 1:
            words += f"; mean of {self.readings}, standard error {self.standard_error:.3g}"
        return words

    @classmethod
    def of(cls, text: str) -> HowRead:
        """What a text kept in `Entry.kit` says; one that only names a kit is a single undiluted reading."""
        found = _HOW.fullmatch(text.strip()[:_LONGEST_NAME])
        if found is None:
            return cls(text.strip())
        dilution, readings, error = (_positive(part) for part in found.groups()[1:])
        return cls(found["kit"].strip(), dilution or 1.0, int(readings or 1), error or 0.0)


_LONGEST_NAME = 200  # characters of `Entry.kit` that are looked at
_HOW = re.compile(
    r"(?P<kit>[^;]*)(?:; sample diluted ([0-9.e+-]{1,12}) times)?"
    r"(?:; mean of ([0-9]{1,4}), standard error ([0-9.e+-]{1,14}))?"
)


@cache
def kits() -> tuple[Kit, ...]:
    """The kits, laboratories and meters known here, in the order in which they are offered."""
    return tuple(kit for kit in _all_rows() if kit.kind not in WITHOUT_KIT)


def kits_for(field: Field, own: Sequence[Kit] = ()) -> tuple[Kit, ...]:
    """The kits that measure what this entry holds, the user's own first."""
    return () if field.chosen else tuple(kit for kit in (*own, *kits()) if kit.fits(field))


def find_kit(name: str, field: Field, own: Sequence[Kit] = ()) -> Kit | None:
    """The kit an entry names by its words or its key, if it measures that entry; the user's own go first."""
    wanted = HowRead.of(name).kit.casefold()
    if not wanted:
        return None
    fitting = kits_for(field, own)
    return next((kit for kit in fitting if wanted in (kit.words.casefold(), kit.key.casefold())), None)


def way_of(entry: Entry, field: Field, own: Sequence[Kit] = ()) -> Kit | None:
    """How an entry came to be known: its kit, else what stands for its source; None where nothing is known of it."""
    if field.chosen:
        return None
    if entry.source == "measured" and entry.kit:
        kit = find_kit(entry.kit, field, own)
        if kit is not None:
            return kit
    for kind in ("any", entry.source):
        for row in _by_kind(kind):
            if row.fits(field):
                return row
    return None


def to_text(own: Iterable[Kit]) -> str:
    """The user's own kits as JSON, to be kept among the settings."""
    return json.dumps([asdict(kit) for kit in own], ensure_ascii=False, indent=1)


def from_text(text: str) -> tuple[Kit, ...]:
    """The user's own kits out of their JSON; InputError says which of them cannot be and why."""
    if len(text) > LARGEST_FILE:
        raise InputError("kits", len(text), f"The list of kits is too long; at most {LARGEST_FILE:,} characters.")
    try:
        rows = json.loads(text or "[]")
    except (json.JSONDecodeError, RecursionError) as error:
        raise InputError("kits", None, f"The list of kits cannot be read as JSON ({error}).") from None
    if not isinstance(rows, list):
        raise InputError("kits", None, "The list of kits is not a list.")
    return tuple(check_kit(_kit_of(row)) for row in rows)


def check_kit(kit: Kit) -> Kit:
    """The kit as it is, if it can be; InputError with a sentence otherwise."""
    name = kit.words.strip() or kit.key
    if not name or ";" in name:
        raise InputError("words", kit.words, "A kit needs a name, without a semicolon.")
    for part in ("resolution", "relative", "absolute", "lowest"):
        value = getattr(kit, part)
        if not (math.isfinite(value) and value >= 0.0):
            raise InputError(part, value, f"“{name}”: {part} is {value:g}; a number of zero or more is accepted.")
    if kit.shape not in SHAPES:
        raise InputError("shape", kit.shape, f"“{name}”: the shape must be one of {', '.join(SHAPES)}.")
    if kit.relative > 1.0:
        raise InputError("relative", kit.relative, f"“{name}”: {kit.relative:g} is {kit.relative:.0%}. Enter a share.")
    if kit.shape == "step" and not _rising(kit.steps):
        raise InputError("steps", kit.steps, f"“{name}”: enter at least two steps, rising, none below zero.")
    if not kit.measures:
        raise InputError("measures", kit.measures, f"“{name}”: say what it measures.")
    for measured in kit.measures:
        _check_unit(kit, name, measured)
    return kit


def _check_unit(kit: Kit, name: str, measured: str) -> None:
    quantity = FIELDS[measured].quantity if measured in FIELDS else measured
    in_unit = kit.resolution or kit.absolute or kit.lowest or kit.steps
    if not quantity or not (kit.unit or in_unit):
        return
    try:
        convert(1.0, kit.unit, kit.unit, quantity)
    except TapwrightError as error:
        raise InputError("unit", kit.unit, f"“{name}”: {error}") from None


def _rising(steps: Sequence[float]) -> bool:
    finite = all(math.isfinite(step) and step >= 0.0 for step in steps)
    return 2 <= len(steps) <= MOST_STEPS and finite and all(a < b for a, b in pairwise(steps))


_TEXTS = ("key", "words", "unit", "kind", "shape", "source", "status", "note")
_NUMBERS = ("resolution", "relative", "absolute", "lowest")


def _kit_of(row: Any) -> Kit:
    if not isinstance(row, dict):
        raise InputError("kits", None, "A kit of the list is not a table of names and values.")
    given = {field.name: row[field.name] for field in fields(Kit) if field.name in row}
    for name, value in given.items():
        if name in _TEXTS and not isinstance(value, str):
            raise InputError(name, value, f"“{name}” of a kit is not a text.")
        if name in _NUMBERS:
            given[name] = _as_float(name, value)
    steps, measures = given.get("steps", ()), given.get("measures", ())
    if not isinstance(steps, list | tuple) or not isinstance(measures, list | tuple):
        raise InputError("steps", None, "“steps” and “measures” of a kit are lists.")
    if not all(isinstance(part, str) for part in measures):
        raise InputError("measures", None, "“measures” of a kit is a list of texts.")
    given["steps"] = tuple(_as_float("steps", step) for step in steps)
    given["measures"] = tuple(measures)
    return Kit(**{"key": "", "words": "", **given})


def _as_float(name: str, value: Any) -> float:
    if isinstance(value, bool) or not isinstance(value, int | float):
        raise InputError(name, None, f"“{name}” of a kit is not a number.")
    try:
        return float(value)
    except OverflowError:
        return math.inf


def _positive(text: str | None) -> float:
    try:
        value = float(text or 0.0)
    except ValueError:
        return 0.0
    return value if math.isfinite(value) and value > 0.0 else 0.0


@cache
def _all_rows() -> tuple[Kit, ...]:
    return tuple(map(_from_row, read_table("kits").rows))


@cache
def _by_kind(kind: str) -> tuple[Kit, ...]:
    return tuple(kit for kit in _all_rows() if kit.kind == kind)


def _from_row(row: Row) -> Kit:
    numbers = {name: number(row, name) for name in _NUMBERS}
    return Kit(
        key=row["key"],
        words=row["words"],
        measures=tuple(row["measures"].split("|")),
        unit=row["unit"],
        kind=row["kind"],
        shape=row["shape"],
        steps=tuple(map(float, row["steps"].split())),
        source=row["source"],
        status=row["status"],
        note=row["note"],
        **{name: 0.0 if math.isnan(value) else value for name, value in numbers.items()},
    )
