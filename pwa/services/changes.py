"""Changes to what is kept, as values and as lines that show whether they are whole.

A change carries the full new state of one job or one setting, so that doing it twice is doing it once, and of
several changes to the same thing only the last is needed. As a line it is a checksum and JSON:

    7d1c09ab {"v": 1, "job": {"id": "…", "document": "…", …}}
"""

from __future__ import annotations

import json
import zlib
from dataclasses import asdict, dataclass, fields
from typing import Any

from pwa.services.storage import NewerDataError, StoredJob

VERSION = 1  # of the lines


class DamagedChangeError(ValueError):
    """A line that is torn or altered."""


@dataclass(frozen=True, slots=True)
class PutJob:
    """A job as it is from now on."""

    job: StoredJob

    @property
    def key(self) -> str:
        """What is changed; of two changes with one key the later stands."""
        return f"job {self.job.id}"


@dataclass(frozen=True, slots=True)
class DropJob:
    """A job that is gone for good."""

    id: str

    @property
    def key(self) -> str:
        """What is changed; of two changes with one key the later stands."""
        return f"job {self.id}"


@dataclass(frozen=True, slots=True)
class PutSetting:
    """A setting as it is from now on, as JSON text."""

    name: str
    value: str

    @property
    def key(self) -> str:
        """What is changed; of two changes with one key the later stands."""
        return f"setting {self.name}"


Change = PutJob | DropJob | PutSetting
JOB_FIELDS = tuple(part.name for part in fields(StoredJob))


def as_line(change: Change) -> str:
    """A change as one line of text, with its checksum in front."""
    body: dict[str, Any] = {"v": VERSION}
    if isinstance(change, PutJob):
        body["job"] = asdict(change.job)
    elif isinstance(change, DropJob):
        body["drop"] = change.id
    else:
        body["setting"] = [change.name, change.value]
    text = json.dumps(body)  # plain ASCII: no encoding can alter it
    return f"{zlib.crc32(text.encode()):08x} {text}"


def from_line(line: str) -> Change:
    """The change of a line; DamagedChangeError where it is torn, NewerDataError from a later version."""
    checksum, _, text = line.partition(" ")
    if checksum != f"{zlib.crc32(text.encode('utf-8', 'replace')):08x}":
        raise DamagedChangeError("The checksum does not fit.")
    try:
        body = json.loads(text)
        if body["v"] > VERSION:
            raise NewerDataError(body["v"], VERSION)
        return _read(body)
    except (ValueError, TypeError, KeyError, AttributeError) as error:
        raise DamagedChangeError(f"The line cannot be read: {error!r}") from None


def _read(body: dict[str, Any]) -> Change:
    if "job" in body:
        parts = {name: str(part) for name, part in body["job"].items() if name in JOB_FIELDS}
        return PutJob(StoredJob(**parts))
    if "drop" in body:
        return DropJob(str(body["drop"]))
    name, value = body["setting"]
    return PutSetting(str(name), str(value))
