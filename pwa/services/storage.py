"""Jobs and settings kept on the device: what the app may ask for, whatever keeps them.

A job is a text (the versioned job file) with a few columns beside it for the list. Every method that changes
something returns only when the change is down: it is there after the next start, however the app ends.

StorageError              its text is a sentence to show
├── UnknownJobError       there is no such job here
├── ReadOnlyError         another tab writes; this one may read until that one is closed
├── StorageFullError      the device has no room; nothing was changed, the same call may be tried again
├── NothingKeptError      this browser keeps nothing at all
├── NewerDataError        written by a newer version of the app; left as it is
└── BackupError           a file that is no backup, or one that is damaged or newer
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Protocol

PURGE_AFTER_DAYS = 30  # a deleted job can be brought back for this long


class StorageError(Exception):
    """Something that could not be kept or read; its text is a sentence a user can act on."""


class UnknownJobError(StorageError):
    """There is no such job on this device, or it was deleted."""

    def __init__(self, job_id: str) -> None:
        super().__init__("This job is not on this device. It may have been deleted, or it was made on another device.")
        self.job_id = job_id


class ReadOnlyError(StorageError):
    """Another tab writes; this one may read."""

    def __init__(self) -> None:
        super().__init__(
            "The app is open in another tab or window, which does the saving. Here jobs can be read, "
            "not changed. Close the other one and this one takes over."
        )


class StorageFullError(StorageError):
    """There is no room left; nothing was changed, and the same call may be tried again."""

    def __init__(self) -> None:
        super().__init__(
            "There is no room left on this device to save. Leave the app open, free some room, "
            "and it will be saved then; or save a backup file elsewhere now."
        )


class NothingKeptError(StorageError):
    """This browser keeps nothing for the app."""

    def __init__(self, reason: str) -> None:
        super().__init__(
            "This browser does not let the app keep anything (a private window, or site data switched off). "
            f"Jobs are lost when it is closed: save a backup file before that. ({reason})"
        )


class NewerDataError(StorageError):
    """The jobs were written by a newer version of the app; they are left as they are."""

    def __init__(self, found: int, known: int) -> None:
        super().__init__(
            f"The jobs on this device were written by a newer version of the app (form {found}; this one "
            f"reads up to {known}). Nothing was changed. Load the app again with a connection to update it."
        )


class BackupError(StorageError):
    """A file that is no backup, or that is damaged, or newer than this app."""


@dataclass(frozen=True, slots=True)
class JobRow:
    """One line of the list of jobs."""

    id: str
    name: str
    place: str
    changed: str  # ISO 8601 in UTC
    summary: str  # the answer in one line


@dataclass(frozen=True, slots=True)
class StoredJob:
    """One job as it is kept."""

    id: str
    document: str  # the job file; storage looks at it only to compare, and to give a copy its own id and name
    name: str = ""
    place: str = ""
    summary: str = ""  # the answer in one line, for the list
    words: str = ""  # further text under which it is found, not shown
    changed: str = ""  # ISO 8601 in UTC
    deleted: str = ""  # when it was deleted; empty while it is not


@dataclass(frozen=True, slots=True)
class RestoreReport:
    """What became of the jobs and settings of a backup; nothing here was overwritten."""

    added: int = 0
    same: int = 0  # already here with the same content, also as an earlier copy
    kept_both: int = 0  # here with other content: the one of the backup came in beside it, under a new name
    brought_back: int = 0  # deleted here, unchanged since: no longer deleted
    unreadable: int = 0  # entries of the file that are damaged
    settings_added: int = 0
    settings_kept: int = 0  # here with another value, which stays

    def sentence(self) -> str:
        """The report in words."""
        parts = [
            (self.added, "added"),
            (self.brought_back, "brought back from the deleted ones"),
            (self.kept_both, "kept beside the differing one here, with a note in the name"),
            (self.same, "already here"),
            (self.unreadable, "damaged in the file and left out"),
        ]
        said = "; ".join(f"{count} {words}" for count, words in parts if count)
        return f"Jobs of the backup: {said}." if said else "The backup holds no jobs."


@dataclass(frozen=True, slots=True)
class SetAside:
    """A damaged file that was put out of the way and kept."""

    name: str
    size: int  # bytes


class Storage(Protocol):
    """Jobs and settings, kept on the device."""

    @property
    def can_write(self) -> bool:
        """Whether changes are taken; False while another tab writes."""

    @property
    def notes(self) -> tuple[str, ...]:
        """Sentences to show about what was found on opening: damage, and what was done about it."""

    def on_writable(self, callback: Callable[[], None]) -> None:
        """Have a function called when `can_write` turns True; what was read before may be out of date."""

    async def open(self) -> None:
        """Read what is kept; NewerDataError or NothingKeptError where it cannot be. Damage leaves a note."""

    async def close(self) -> None:
        """Let go of everything; nothing is left to save."""

    async def list_jobs(self, search: str = "", limit: int = 50, offset: int = 0) -> list[JobRow]:
        """The jobs in which every word of the search occurs, the last changed first."""

    async def count_jobs(self, search: str = "") -> int:
        """How many jobs `list_jobs` would give in all."""

    async def load(self, job_id: str) -> StoredJob:
        """One job; UnknownJobError where it is not here or was deleted."""

    async def save(
        self, job_id: str, document: str, name: str = "", place: str = "", summary: str = "", words: str = ""
    ) -> str:
        """Keep a job, new or changed, and give the time noted for it; a deleted job stays deleted."""

    async def delete(self, job_id: str) -> None:
        """Take a job off the list; for 30 days it can be brought back."""

    async def undelete(self, job_id: str) -> None:
        """Bring a deleted job back as it was; UnknownJobError where it is gone for good."""

    async def get_setting(self, key: str) -> str | None:
        """A setting as JSON text; None where it was never set."""

    async def set_setting(self, key: str, value: str) -> None:
        """Keep a setting, as JSON text."""

    async def backup(self) -> bytes:
        """All jobs that are not deleted, and all settings, as one readable file."""

    async def restore(self, data: bytes) -> RestoreReport:
        """Join a backup to what is here, overwriting nothing; BackupError where the file cannot be used."""

    async def set_aside(self) -> list[SetAside]:
        """The damaged files that were kept."""

    async def read_set_aside(self, name: str) -> bytes:
        """One of them, to be saved elsewhere; StorageError where there is none of this name."""
