"""Storage in a SQLite file on the machine: for the development server and for tests."""

from __future__ import annotations

import os
import shutil
import sqlite3
from collections.abc import Callable, Sequence
from pathlib import Path

from pwa.services.changes import Change
from pwa.services.clock import Clock
from pwa.services.job_database import DamagedDatabaseError, JobDatabase, rescued
from pwa.services.platform import data_folder
from pwa.services.sqlite_storage import SqliteStorage
from pwa.services.storage import SetAside, StorageError

FILE_NAME = "jobs.sqlite3"


class FileKeeper:
    """A SQLite file; SQLite itself makes a commit last and keeps several programs apart."""

    def __init__(self, path: Path, clock: Clock) -> None:
        self._path = path
        self._clock = clock
        self.database: JobDatabase
        self.can_write = True
        self.notes: list[str] = []

    async def open(self, writable: Callable[[], None]) -> None:
        """Open the file, or begin one; a damaged one is put aside, and its readable rows are carried over."""
        try:
            self._path.parent.mkdir(parents=True, exist_ok=True)
            self._open()
        except OSError as error:
            raise StorageError(f"The folder for the jobs cannot be used: {error}.") from None

    def _open(self) -> None:
        self.database = _connected(self._path)
        try:
            self.database.prepare()
        except DamagedDatabaseError:
            changes = rescued(self.database.connection)
            self.database.close()
            name = self._put_aside(changes)
            self.notes.append(damage_note(len(changes), name))
            self.database = _connected(self._path)
            self.database.prepare()
        except BaseException:
            self.database.close()
            raise
        self.database.connection.execute("pragma synchronous = full")  # a commit is on the disk when it returns

    def _put_aside(self, changes: Sequence[Change]) -> str:
        # The fresh file takes the old one's place in one step, so that a crash leaves either of them, whole.
        name = damaged_name(self._clock.now())
        shutil.copyfile(self._path, self._path.with_name(name))
        fresh = self._path.with_suffix(".fresh")
        fresh.unlink(missing_ok=True)
        database = _connected(fresh)
        database.prepare()
        database.apply(changes)
        database.close()
        self._path.with_name(self._path.name + "-journal").unlink(missing_ok=True)
        os.replace(fresh, self._path)
        return name

    async def keep(self, changes: Sequence[Change]) -> None:
        """Make all the changes in one transaction."""
        self.database.apply(changes)

    async def close(self) -> None:
        """Close the file."""
        self.database.close()

    async def set_aside(self) -> list[SetAside]:
        """The damaged files that were kept."""
        paths = sorted(self._path.parent.glob("jobs damaged *"))
        return [SetAside(path.name, path.stat().st_size) for path in paths]

    async def read_set_aside(self, name: str) -> bytes:
        """One of them; KeyError where there is none of this name."""
        if name not in {aside.name for aside in await self.set_aside()}:
            raise KeyError(name)
        return self._path.with_name(name).read_bytes()


class NativeStorage(SqliteStorage):
    """Jobs and settings in a file; without a path, in the folder for the data of this user's programs."""

    def __init__(self, clock: Clock, path: Path | None = None) -> None:
        super().__init__(FileKeeper(path or data_folder() / FILE_NAME, clock), clock)


def _connected(path: Path) -> JobDatabase:
    return JobDatabase(sqlite3.connect(path, timeout=5.0))


def damaged_name(now: str) -> str:
    """The name under which a damaged database is kept."""
    return f"jobs damaged {now.replace(':', '-')}.sqlite3"


def damage_note(rescued_parts: int, name: str) -> str:
    """The sentence about a damaged database."""
    return (
        f"What was kept on this device was damaged. {rescued_parts} jobs and settings could be read and are "
        f"here. The damaged file was kept as “{name}”: save it elsewhere if something is missing, "
        "and open a backup."
    )
