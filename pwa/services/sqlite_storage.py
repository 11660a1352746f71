"""The storage of the app over a SQLite database; how a change is made to last is left to a keeper.

All share the schema, the list, the backup and every rule; they differ only in where the database lives.
"""

from __future__ import annotations

import asyncio
import json
import sqlite3
from collections.abc import Callable, Iterator, Sequence
from contextlib import contextmanager
from dataclasses import replace
from typing import Protocol

from pwa.services import backup
from pwa.services.changes import Change, DropJob, PutJob, PutSetting
from pwa.services.clock import Clock, days_before
from pwa.services.job_database import JobDatabase
from pwa.services.storage import (
    PURGE_AFTER_DAYS,
    JobRow,
    ReadOnlyError,
    RestoreReport,
    SetAside,
    StorageError,
    StorageFullError,
    StoredJob,
    UnknownJobError,
)

AT_ONCE = 100  # jobs that are written into a backup before others get their turn
FULL = 13  # SQLite's result code for a full disk


class Keeper(Protocol):
    """Where the database lives between two starts of the app."""

    database: JobDatabase  # to be read; a keeper may put another in its place
    can_write: bool
    notes: list[str]

    async def open(self, writable: Callable[[], None]) -> None:
        """Read what is kept. `writable` is called when `can_write` turns True later on."""

    async def keep(self, changes: Sequence[Change]) -> None:
        """Make all the changes; they are down when this returns, and none is made where it raises."""

    async def close(self) -> None:
        """Let go of everything."""

    async def set_aside(self) -> list[SetAside]:
        """The damaged files that were kept."""

    async def read_set_aside(self, name: str) -> bytes:
        """One of them; KeyError where there is none of this name."""


class SqliteStorage:
    """Jobs and settings in SQLite, as `pwa.services.storage.Storage` describes it."""

    def __init__(self, keeper: Keeper, clock: Clock) -> None:
        self._keeper = keeper
        self._clock = clock
        self._turn = asyncio.Lock()  # one change at a time, each down before the next
        self._callbacks: list[Callable[[], None]] = []
        self._tasks: set[asyncio.Task[None]] = set()

    @property
    def can_write(self) -> bool:
        """Whether changes are taken; False while another tab writes."""
        return self._keeper.can_write

    @property
    def notes(self) -> tuple[str, ...]:
        """Sentences to show about what was found on opening: damage, and what was done about it."""
        return tuple(self._keeper.notes)

    def on_writable(self, callback: Callable[[], None]) -> None:
        """Have a function called when `can_write` turns True; what was read before may be out of date."""
        self._callbacks.append(callback)

    async def open(self) -> None:
        """Read what is kept, and drop for good what was deleted long ago."""
        with _said():
            await self._keeper.open(self._became_writable)
        if self.can_write:
            await self._purge()

    async def close(self) -> None:
        """Let go of everything; nothing is left to save."""
        async with self._turn:
            await self._keeper.close()

    def _became_writable(self) -> None:
        task = asyncio.get_running_loop().create_task(self._purge())
        self._tasks.add(task)  # or it may vanish before it has run
        task.add_done_callback(self._tasks.discard)
        for callback in self._callbacks:
            callback()

    async def _purge(self) -> None:
        async with self._turn:
            try:
                old = self._database.deleted_before(days_before(self._clock.now(), PURGE_AFTER_DAYS))
                if old:
                    await self._keep([DropJob(job_id) for job_id in old])
            except StorageError:
                return  # no room even for that: the next start tries again

    @property
    def _database(self) -> JobDatabase:
        return self._keeper.database

    async def _keep(self, changes: Sequence[Change]) -> None:
        if not self._keeper.can_write:
            raise ReadOnlyError
        with _said():
            await self._keeper.keep(changes)

    async def list_jobs(self, search: str = "", limit: int = 50, offset: int = 0) -> list[JobRow]:
        """The jobs in which every word of the search occurs, the last changed first."""
        with _said():
            return self._database.list_jobs(clean(search), limit, offset)

    async def count_jobs(self, search: str = "") -> int:
        """How many jobs `list_jobs` would give in all."""
        with _said():
            return self._database.count_jobs(clean(search))

    async def load(self, job_id: str) -> StoredJob:
        """One job; UnknownJobError where it is not here or was deleted."""
        with _said():
            return self._database.load(clean(job_id))

    async def save(
        self, job_id: str, document: str, name: str = "", place: str = "", summary: str = "", words: str = ""
    ) -> str:
        """Keep a job, new or changed, and give the time noted for it; a deleted job stays deleted."""
        if not job_id:
            raise ValueError("A job needs an id to be saved.")
        job = StoredJob(clean(job_id), clean(document), clean(name), clean(place), clean(summary), clean(words))
        async with self._turn:
            here = self._find(job.id)
            if here and replace(job, changed=here.changed, deleted=here.deleted) == here:
                return here.changed  # nothing new: it keeps its place in the list
            job = replace(job, changed=self._clock.now(), deleted=here.deleted if here else "")
            await self._keep([PutJob(job)])
        return job.changed

    def _find(self, job_id: str) -> StoredJob | None:
        with _said():
            return self._database.find(job_id)

    async def delete(self, job_id: str) -> None:
        """Take a job off the list; for 30 days it can be brought back."""
        await self._mark(job_id, self._clock.now())

    async def undelete(self, job_id: str) -> None:
        """Bring a deleted job back as it was; UnknownJobError where it is gone for good."""
        await self._mark(job_id, "")

    async def _mark(self, job_id: str, deleted: str) -> None:
        async with self._turn:
            here = self._find(clean(job_id))
            if here is None:
                raise UnknownJobError(job_id)
            if bool(here.deleted) != bool(deleted):
                await self._keep([PutJob(replace(here, deleted=deleted))])

    async def get_setting(self, key: str) -> str | None:
        """A setting as JSON text; None where it was never set."""
        with _said():
            return self._database.setting(clean(key))

    async def set_setting(self, key: str, value: str) -> None:
        """Keep a setting, as JSON text; ValueError where it is no JSON."""
        json.loads(value)
        async with self._turn:
            if await self.get_setting(key) != value:
                await self._keep([PutSetting(clean(key), clean(value))])

    async def backup(self) -> bytes:
        """All jobs that are not deleted, and all settings, as one readable file."""
        with _said():
            head = backup.header(self._clock.now(), self._database.settings())
            lines: list[str] = []
            for number, job_id in enumerate(self._database.job_ids()):
                if number % AT_ONCE == AT_ONCE - 1:
                    await asyncio.sleep(0)
                job = self._database.find(job_id)
                if job and not job.deleted:
                    lines.append(backup.job_line(job))
        return backup.file_of(head, lines)

    async def restore(self, data: bytes) -> RestoreReport:
        """Join a backup to what is here, overwriting nothing; BackupError where the file cannot be used."""
        found = backup.read(data)
        async with self._turn:
            jobs, fates = backup.joined(map(_cleaned, found.jobs), found.made, self._find)
            changes: list[Change] = [PutJob(job) for job in jobs]
            known = self._database.settings()
            new = {clean(name): clean(value) for name, value in found.settings.items() if name not in known}
            kept = sum(known.get(name, value) != value for name, value in found.settings.items())
            changes += [PutSetting(name, value) for name, value in new.items()]
            if changes:
                await self._keep(changes)
        return RestoreReport(**fates, unreadable=found.unreadable, settings_added=len(new), settings_kept=kept)

    async def set_aside(self) -> list[SetAside]:
        """The damaged files that were kept."""
        return await self._keeper.set_aside()

    async def read_set_aside(self, name: str) -> bytes:
        """One of them, to be saved elsewhere; StorageError where there is none of this name."""
        try:
            return await self._keeper.read_set_aside(name)
        except KeyError:
            raise StorageError(f"There is no file “{name}” among the damaged ones that were kept.") from None


@contextmanager
def _said() -> Iterator[None]:
    """Turn what SQLite complains of into a sentence."""
    try:
        yield
    except (sqlite3.Error, UnicodeError) as error:
        if getattr(error, "sqlite_errorcode", 0) & 0xFF == FULL:
            raise StorageFullError from error
        raise StorageError(f"The jobs on this device could not be read or written ({error}). Try again.") from error


def clean(text: str) -> str:
    """The text without halves of characters, which no file can hold; they come from broken clipboards."""
    return text.encode("utf-8", "replace").decode("utf-8")


def _cleaned(job: StoredJob) -> StoredJob:
    return StoredJob(
        clean(job.id),
        clean(job.document),
        clean(job.name),
        clean(job.place),
        clean(job.summary),
        clean(job.words),
        job.changed,
    )
