"""The backup file: all jobs and settings as readable JSON, one job a line; and how it is joined to others.

    {"format": "tapwright-backup", "version": 1, "made": "2031-05-04T09:30:00.250Z",
     "settings": {"units": {"hardness": "°dH"}},
     "jobs": [
      {"id": "…", "name": "…", "place": "…", "changed": "…", "summary": "…", "words": "…", "job": {…}}
     ]}

The job file stands in it as it is; a document that is no JSON object stands under "text" instead of "job".
"""

from __future__ import annotations

import hashlib
import json
from collections import Counter
from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass, replace
from typing import Any

from pwa.services.storage import BackupError, StoredJob

FORMAT = "tapwright-backup"
VERSION = 1
ROW_FIELDS = ("id", "name", "place", "changed", "summary", "words")


@dataclass(frozen=True, slots=True)
class Backup:
    """What a backup file holds."""

    made: str
    jobs: tuple[StoredJob, ...]
    settings: Mapping[str, str]  # JSON texts
    unreadable: int  # entries that are damaged


def header(made: str, settings: Mapping[str, str]) -> str:
    """The first lines of a backup file, up to the jobs."""
    known = {name: _parsed(value) for name, value in settings.items()}
    parts = {"format": FORMAT, "version": VERSION, "made": made, "settings": known}
    lines = [f"{_written(key)}: {_written(part)}" for key, part in parts.items()]
    return "{" + ",\n ".join(lines) + ',\n "jobs": [\n'


def job_line(job: StoredJob) -> str:
    """The line of one job."""
    row = {name: getattr(job, name) for name in ROW_FIELDS}
    parsed = _parsed(job.document)
    document = {"job": parsed} if isinstance(parsed, dict) else {"text": job.document}
    return "  " + _written({**row, **document})


def file_of(head: str, lines: Iterable[str]) -> bytes:
    """The whole file."""
    return (head + ",\n".join(lines) + "\n ]}\n").encode("utf-8", "replace")


def read(data: bytes) -> Backup:
    """What a backup file holds; BackupError says why it cannot be read."""
    whole = _whole(data)
    jobs, settings = whole.get("jobs"), whole.get("settings", {})
    if not isinstance(jobs, list) or not isinstance(settings, dict):
        raise BackupError(
            "This backup file is damaged: its list of jobs or of settings is missing. Nothing was changed."
        )
    found = [_job(entry) for entry in jobs]
    return Backup(
        made=whole["made"] if isinstance(whole.get("made"), str) else "",
        jobs=tuple(job for job in found if job),
        settings={name: _written(value) for name, value in settings.items()},
        unreadable=sum(job is None for job in found),
    )


def _whole(data: bytes) -> dict[str, Any]:
    try:
        whole = json.loads(data.decode("utf-8-sig"))
    except (ValueError, RecursionError):
        raise BackupError(
            "This file cannot be read as a backup: it is cut off or damaged, or another kind of file. "
            "Nothing was changed."
        ) from None
    if not isinstance(whole, dict) or whole.get("format") != FORMAT:
        raise BackupError("This is not a backup file of this app. Nothing was changed.")
    version = whole.get("version")
    if not isinstance(version, int) or isinstance(version, bool) or version < 1:
        raise BackupError("This backup file is damaged: it gives no version. Nothing was changed.")
    if version > VERSION:
        raise BackupError(
            f"This backup was made by a newer version of the app (form {version}; this one reads up to "
            f"{VERSION}). Bring the app up to date, then open it again. Nothing was changed."
        )
    return whole


def _job(entry: Any) -> StoredJob | None:
    if not isinstance(entry, dict) or not entry.get("id"):
        return None
    parts = {name: entry.get(name, "") for name in ROW_FIELDS}
    document = _written(entry["job"]) if isinstance(entry.get("job"), dict) else entry.get("text")
    if not all(isinstance(part, str) for part in (document, *parts.values())):
        return None
    return StoredJob(document=str(document), **parts)


def _parsed(text: str) -> Any:
    try:
        return json.loads(text)
    except (ValueError, RecursionError):
        return text


def _written(value: Any) -> str:
    return json.dumps(value, ensure_ascii=False)


def same_content(one: str, other: str) -> bool:
    """Whether two job files say the same, whatever their layout and the time noted in them."""
    return one == other or _content(one) == _content(other)


def _content(document: str) -> Any:
    parsed = _parsed(document)
    return {key: part for key, part in parsed.items() if key != "changed"} if isinstance(parsed, dict) else parsed


def copy_id(job: StoredJob) -> str:
    """The id under which a differing job of a backup comes in: always the same, so it comes in only once."""
    content = json.dumps([job.id, _content(job.document)], sort_keys=True)
    return hashlib.sha256(content.encode()).hexdigest()[:32]


def as_copy(job: StoredJob, made: str) -> StoredJob:
    """A job of a backup as it comes in beside the differing one here: own id, and a note in its name."""
    note = f"(backup of {made[:10]})" if made else "(from a backup)"
    name = f"{job.name} {note}".strip()
    new_id = copy_id(job)
    return StoredJob(
        id=new_id,
        document=_relabelled(job.document, new_id, name),
        name=name,
        place=job.place,
        summary=job.summary,
        words=job.words,
        changed=job.changed,
    )


def _relabelled(document: str, new_id: str, name: str) -> str:
    parsed = _parsed(document)
    if not isinstance(parsed, dict):
        return document
    labels = {key: value for key, value in (("id", new_id), ("name", name)) if key in parsed}
    return json.dumps({**parsed, **labels}, ensure_ascii=False, indent=1)


def joined(
    jobs: Iterable[StoredJob], made: str, find: Callable[[str], StoredJob | None]
) -> tuple[list[StoredJob], Counter[str]]:
    """The jobs to write so that those of a backup are here too, and how many met which fate.

    Fates are fields of the report. `find` gives the job that is here under an id, deleted or not. No job that
    is here is given other content.
    """
    written: dict[str, StoredJob] = {}
    fates: Counter[str] = Counter()
    for job in jobs:
        here = written.get(job.id) or find(job.id)
        fate = "added"
        if here is not None and not same_content(here.document, job.document):
            fate, job = "kept_both", as_copy(job, made)
            here = written.get(job.id) or find(job.id)  # the copy may have come in before
        if here is not None:
            fate, job = ("brought_back", replace(here, deleted="")) if here.deleted else ("same", here)
        if fate != "same":
            written[job.id] = job
        fates[fate] += 1
    return list(written.values()), fates
