"""The job as it is kept: entries with where they come from, choices, and a versioned file.

A job file is JSON:

    {"format": "tapwright job", "version": 1, "id": "…", "name": "…", "place": "…", "notes": "…", "changed": "…",
     "entries": {"water.hardness": {"value": 22, "unit": "gpg", "source": "measured", "kit": "drop count"}},
     "choices": {"softener.iron_rule": "trade"}}

Keys that this version does not know are kept and written back, so that a file is never made poorer by being opened.
A sample file may also hold "expected" (answers its author worked out); it is read by the tests alone.
"""

from __future__ import annotations

import json
import math
import re
from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import Any

from core.errors import JobFileError

FORMAT = "tapwright job"
VERSION = 1
SOURCES = ("measured", "report", "told", "assumed")  # where an entry comes from, the surest first
DEEPEST = 40  # levels of lists and tables; a job file has four
_BRACKETS = re.compile(r'"(?:[^"\\]|\\.)*"?|[\[\]{}]')  # whole texts, so that brackets in them do not count
LARGEST_FILE = 2_000_000  # characters; a job of thousands of readings is far smaller


@dataclass(frozen=True, slots=True)
class Entry:
    """One thing that is known about a job: a number, its unit, and where it comes from."""

    value: float | None  # None while what was typed is not a number
    unit: str = ""
    source: str = "told"
    kit: str = ""  # the test kit, where the source is "measured"
    typed: str = ""  # as typed, where that is not simply the number

    def as_json(self) -> dict[str, Any]:
        """The entry for a job file, empty parts left out."""
        parts = {
            "value": self.value,
            "unit": self.unit,
            "source": self.source,
            "kit": self.kit,
            "typed": self.typed,
        }
        return {key: part for key, part in parts.items() if part != "" or key == "unit"}


@dataclass(frozen=True, slots=True)
class Job:
    """All that is known and chosen for one place; values are changed by making a new job from the old."""

    id: str
    name: str = ""
    place: str = ""
    notes: str = ""
    changed: str = ""  # ISO 8601, given by whoever keeps the clock
    entries: Mapping[str, Entry] = field(default_factory=dict)
    choices: Mapping[str, str] = field(default_factory=dict)
    unknown: Mapping[str, Any] = field(default_factory=dict)  # top-level keys of a later writer, kept as they are

    def with_entry(self, key: str, entry: Entry | None) -> Job:
        """The same job with one entry set, or taken out where it is None."""
        return replace(self, entries=_changed(self.entries, key, entry))

    def with_choice(self, key: str, choice: str | None) -> Job:
        """The same job with one choice made, or withdrawn where it is None."""
        return replace(self, choices=_changed(self.choices, key, choice))

    def to_text(self) -> str:
        """The job file: readable JSON, keys in a fixed order."""
        document = {
            "format": FORMAT,
            "version": VERSION,
            "id": self.id,
            "name": self.name,
            "place": self.place,
            "notes": self.notes,
            "changed": self.changed,
            "entries": {key: self.entries[key].as_json() for key in sorted(self.entries)},
            "choices": {key: self.choices[key] for key in sorted(self.choices)},
            **self.unknown,
        }
        return json.dumps(document, ensure_ascii=False, indent=1)

    @classmethod
    def load(cls, path: str | Path) -> Job:
        """Read a job file from a path; JobFileError says why it cannot be read."""
        return cls.from_text(Path(path).read_text(encoding="utf-8"))

    @classmethod
    def from_text(cls, text: str) -> Job:
        """Read the text of a job file; JobFileError says why it cannot be read."""
        return _read(_parse(text))


def _changed(mapping: Mapping[str, Any], key: str, value: Any) -> dict[str, Any]:
    kept = {name: held for name, held in mapping.items() if name != key}
    return kept if value is None else {**kept, key: value}


def _depth(text: str) -> int:
    """How deep lists and tables are nested; found without nesting, as deep JSON ends a browser's Python."""
    depth = deepest = 0
    for sign in _BRACKETS.findall(text):
        depth += 1 if sign in "[{" else -1 if sign in "]}" else 0
        deepest = max(deepest, depth)
    return deepest


def _parse(text: str) -> dict[str, Any]:
    if len(text) > LARGEST_FILE:
        raise JobFileError(f"The file holds {len(text):,} characters; a job file holds at most {LARGEST_FILE:,}.")
    if _depth(text) > DEEPEST:
        raise JobFileError("This is not a job file: its lists are nested deeper than any job file's.")
    try:
        document = json.loads(text)
    except (ValueError, RecursionError):  # also an integer of thousands of digits
        raise JobFileError("This is not a job file: it cannot be read as JSON.") from None
    if not isinstance(document, dict) or document.get("format") != FORMAT:
        raise JobFileError(f"This is not a job file: its “format” is not “{FORMAT}”.")
    version = document.get("version")
    if not isinstance(version, int) or isinstance(version, bool) or version < 1:
        raise JobFileError(f"The job file gives no usable version (“{version}”); version {VERSION} is accepted.")
    if version > VERSION:
        raise JobFileError(
            f"The job file has version {version}, this app reads up to {VERSION}. Update the app, then open it again."
        )
    return document


def _read(document: dict[str, Any]) -> Job:
    known = {"format", "version", "expected"}
    texts = {}
    for key in ("id", "name", "place", "notes", "changed"):
        known.add(key)
        texts[key] = _text(document.get(key, ""), key)
    entries, choices = document.get("entries", {}), document.get("choices", {})
    known |= {"entries", "choices"}
    for key, part in (("entries", entries), ("choices", choices)):
        if not isinstance(part, dict):
            raise JobFileError(f"“{key}” of the job file is not a table of names and values.")
    return Job(
        **texts,
        entries={key: _entry(key, part) for key, part in entries.items()},
        choices={key: _text(choice, key) for key, choice in choices.items()},
        unknown={key: part for key, part in document.items() if key not in known},
    )


def _text(value: Any, key: str) -> str:
    if not isinstance(value, str):
        raise JobFileError(f"“{key}” of the job file is not a text.")
    return value.encode("utf-8", "replace").decode("utf-8")  # half a surrogate pair cannot be drawn


def _entry(key: str, part: Any) -> Entry:
    if not isinstance(part, dict):
        raise JobFileError(f"The entry “{key}” of the job file is not a table with value, unit and source.")
    value = part.get("value")
    if value is not None and (isinstance(value, bool) or not isinstance(value, int | float)):
        raise JobFileError(f"The value of “{key}” in the job file is not a number.")
    try:
        number = None if value is None else float(value)
    except OverflowError:
        number = math.inf
    if number is not None and not math.isfinite(number):
        raise JobFileError(f"The value of “{key}” in the job file is not a finite number.")
    source = _text(part.get("source", "told"), f"{key}: source")
    if source not in SOURCES:
        raise JobFileError(f"The source of “{key}” is “{source}”; one of {', '.join(SOURCES)} is accepted.")
    return Entry(
        value=number,
        unit=_text(part.get("unit", ""), f"{key}: unit"),
        source=source,
        kit=_text(part.get("kit", ""), f"{key}: kit"),
        typed=_text(part.get("typed", ""), f"{key}: typed"),
    )
