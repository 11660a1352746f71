"""Storage that lasts as long as the app does not end: for tests, and where a browser keeps nothing."""

from __future__ import annotations

import sqlite3
from collections.abc import Callable, Sequence

from pwa.services.changes import Change
from pwa.services.clock import Clock
from pwa.services.job_database import JobDatabase
from pwa.services.sqlite_storage import SqliteStorage
from pwa.services.storage import SetAside, StorageError


class MemoryKeeper:
    """A database in memory. A test may make it refuse: by `trouble`, or by taking `can_write` away."""

    def __init__(self, notes: Sequence[str] = ()) -> None:
        self.database = JobDatabase(sqlite3.connect(":memory:"))
        self.can_write = True
        self.notes = list(notes)
        self.trouble: StorageError | None = None  # raised instead of keeping anything
        self._writable: Callable[[], None] = lambda: None

    async def open(self, writable: Callable[[], None]) -> None:
        """Start empty."""
        self._writable = writable
        self.database.prepare()

    async def keep(self, changes: Sequence[Change]) -> None:
        """Make all the changes, or raise the trouble that was set."""
        if self.trouble:
            raise self.trouble
        self.database.apply(changes)

    def let_write(self) -> None:
        """Act as if the other tab had been closed."""
        self.can_write = True
        self._writable()

    async def close(self) -> None:
        """Forget everything."""
        self.database.close()

    async def set_aside(self) -> list[SetAside]:
        """Nothing: memory has no damaged files."""
        return []

    async def read_set_aside(self, name: str) -> bytes:
        """Nothing of any name."""
        raise KeyError(name)


class MemoryStorage(SqliteStorage):
    """Jobs and settings in memory alone; `keeper` lets a test make it refuse."""

    def __init__(self, clock: Clock, notes: Sequence[str] = ()) -> None:
        self.keeper = MemoryKeeper(notes)
        super().__init__(self.keeper, clock)
