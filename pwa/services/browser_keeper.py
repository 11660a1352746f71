"""How a database in the memory of a web page is made to last.

The browser keeps an image of the whole database and, beside it, the changes made since, each under the key of
what it changes. A change is put beside the image in one transaction, which costs a few milliseconds however
many jobs there are; the image is written anew only when many changes have gathered. Image, changes and a
revision number live in one transactional store, so that no moment at which the page is killed leaves a
mixture: no line is ever torn, and no change is ever both absent from the image and cleared.

Each transaction names the revision it builds on. Where somebody else has written meanwhile, which the lock
between tabs rules out where there is one, it is refused; the state is then read anew and the change made on
top.
"""

from __future__ import annotations

import asyncio
import sqlite3
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from typing import Protocol

from pwa.services.changes import Change, DamagedChangeError, as_line, from_line
from pwa.services.clock import Clock
from pwa.services.job_database import DamagedDatabaseError, JobDatabase, rescued
from pwa.services.native_storage import damage_note, damaged_name
from pwa.services.storage import NewerDataError, SetAside, StorageError

CHECKPOINT_AT = 200  # changed things beside the image from which on it is written anew
TIDY_AT = 50  # the same on opening, when nobody is typing yet
TRIES = 5  # at a change that others keep overtaking
RETRY = 2.0  # seconds until a tab whose turn has come tries again to read


@dataclass(frozen=True, slots=True)
class Kept:
    """All that the browser keeps, as of one moment."""

    image: bytes | None = None  # a SQLite file; None before the first one was written
    lines: tuple[str, ...] = ()  # the changes since
    revision: int | None = None  # None where nothing was ever kept, or the browser has cleared it


class DiskChangedError(Exception):
    """Somebody else has written since the revision that was named; `found` is the present one."""

    def __init__(self, found: int | None) -> None:
        super().__init__(f"The revision is now {found}.")
        self.found = found


class Disk(Protocol):
    """A transactional store of the browser: each call happens wholly or not at all, and is down on return.

    StorageFullError where there is no room, StorageError for other trouble.
    """

    async def open(self) -> None:
        """Get at it; NothingKeptError where the browser has none."""

    async def read(self) -> Kept:
        """All that is kept."""

    async def add(self, lines: Mapping[str, str], revision: int | None) -> int:
        """Put changes beside the image, by key; gives the new revision, or raises DiskChangedError."""

    async def replace(self, image: bytes, revision: int | None, aside: Mapping[str, bytes]) -> int:
        """Write the image, drop the changes, keep some files aside; the new revision, or DiskChangedError."""

    async def set_aside(self) -> list[SetAside]:
        """The files kept aside."""

    async def read_set_aside(self, name: str) -> bytes:
        """One of them; KeyError where there is none of this name."""

    async def close(self) -> None:
        """Let go of it."""


class Lock(Protocol):
    """One holder among all tabs of the app."""

    async def take(self, granted: Callable[[], None]) -> bool:
        """Take it if it is free; otherwise queue for it, and call `granted` when the turn has come."""

    def release(self) -> None:
        """Give it back, or leave the queue."""


@dataclass(slots=True)
class _Loaded:
    """A database built from what was kept."""

    database: JobDatabase
    outdated: bool = False  # the image is of an older version than the database
    aside: dict[str, bytes] = field(default_factory=dict)  # damaged parts
    notes: list[str] = field(default_factory=list)


class BrowserKeeper:
    """A database in memory, its image and changes on a disk of the browser, one writer among the tabs."""

    def __init__(self, disk: Disk, lock: Lock, clock: Clock) -> None:
        self._disk = disk
        self._lock = lock
        self._clock = clock
        self._revision: int | None = None
        self._beside: set[str] = set()  # keys of the changes beside the image
        self._aside: Mapping[str, bytes] = {}  # damaged parts, to be kept aside when the image is next written
        self._checkpoint_at = CHECKPOINT_AT
        self._turn_come: asyncio.Task[None] | None = None
        self.database: JobDatabase
        self.can_write = False
        self.notes: list[str] = []

    async def open(self, writable: Callable[[], None]) -> None:
        """Read what is kept, and become the one that writes if no other tab is."""
        await self._disk.open()
        loop = asyncio.get_running_loop()

        def granted() -> None:
            self._turn_come = loop.create_task(self._take_over(writable))

        mine = await self._lock.take(granted)
        try:
            await self._read(tidy=mine)
        except StorageError:
            self._lock.release()  # a tab that cannot use what is kept stands in nobody's way
            raise
        self.can_write = mine

    async def _take_over(self, writable: Callable[[], None]) -> None:
        while not self.can_write:
            try:
                await self._read(tidy=True)
                self.can_write = True
            except NewerDataError as error:
                self.notes.append(str(error))
                self._lock.release()
                return
            except StorageError:
                await asyncio.sleep(RETRY)
        writable()

    async def _read(self, *, tidy: bool) -> None:
        kept = await self._disk.read()
        loaded = self._loaded(kept)
        self.database = loaded.database
        self._revision = kept.revision
        self._beside = {line_key(line) for line in kept.lines}
        self._aside = loaded.aside
        self.notes += [note for note in loaded.notes if note not in self.notes]
        if tidy and (loaded.outdated or loaded.aside or len(self._beside) >= TIDY_AT):
            await self._checkpoint()

    def _loaded(self, kept: Kept) -> _Loaded:
        name = damaged_name(self._clock.now())
        loaded = _from_image(kept.image, name)
        torn = [line for line in kept.lines if not _replayed(loaded.database, line)]
        if torn:
            loaded.aside[name.replace(".sqlite3", ".txt")] = "\n".join(torn).encode("utf-8", "replace")
            loaded.notes.append(
                f"{len(torn)} of the last changes to jobs were damaged on this device and are kept aside; "
                "the jobs concerned are as they were before. Look through the jobs you changed last."
            )
        return loaded

    async def keep(self, changes: Sequence[Change]) -> None:
        """Make all the changes; they are down when this returns, and none is made where it raises."""
        for _ in range(TRIES):
            try:
                await (self._keep_beside(changes) if len(changes) < CHECKPOINT_AT else self._keep_whole(changes))
                return
            except DiskChangedError as other:
                await self._catch_up(other.found)
        raise StorageError("Another window of the app keeps saving at the same moment. Close it, then try again.")

    async def _keep_beside(self, changes: Sequence[Change]) -> None:
        lines = {change.key: as_line(change) for change in changes}
        self._revision = await self._disk.add(lines, self._revision)
        self.database.apply(changes)
        self._beside |= lines.keys()
        if len(self._beside) >= self._checkpoint_at:
            await self._checkpoint()

    async def _keep_whole(self, changes: Sequence[Change]) -> None:
        before = self.database.image()
        self.database.apply(changes)
        try:
            await self._write_anew(self._revision)
        except BaseException:
            self.database = _connected(before)
            raise

    async def _checkpoint(self) -> None:
        """Write the image anew, if it can be done: the changes beside it are as safe, only slower to open."""
        try:
            await self._write_anew(self._revision)
        except (StorageError, DiskChangedError):
            self._checkpoint_at = len(self._beside) + CHECKPOINT_AT

    async def _write_anew(self, revision: int | None) -> None:
        self._revision = await self._disk.replace(self.database.image(), revision, self._aside)
        self._beside, self._aside = set(), {}
        self._checkpoint_at = CHECKPOINT_AT

    async def _catch_up(self, found: int | None) -> None:
        if found is not None:
            await self._read(tidy=False)
            return
        # The browser has cleared what it kept while the app was open: all that is in memory goes back.
        await self._write_anew(None)

    async def close(self) -> None:
        """Let go of the lock, the disk and the memory."""
        self.can_write = False
        if self._turn_come:
            self._turn_come.cancel()
        self._lock.release()
        await self._disk.close()
        self.database.close()

    async def set_aside(self) -> list[SetAside]:
        """The damaged files that were kept."""
        return await self._disk.set_aside()

    async def read_set_aside(self, name: str) -> bytes:
        """One of them; KeyError where there is none of this name."""
        return await self._disk.read_set_aside(name)


def line_key(line: str) -> str:
    """What a line changes; a damaged line stands for itself."""
    try:
        return from_line(line).key
    except DamagedChangeError:
        return line


def _connected(image: bytes | None) -> JobDatabase:
    connection = sqlite3.connect(":memory:")
    if image:
        connection.deserialize(image)
    return JobDatabase(connection)


def _from_image(image: bytes | None, name: str) -> _Loaded:
    try:
        database = _connected(image)
        return _Loaded(database, outdated=database.prepare() and image is not None)
    except DamagedDatabaseError:
        changes = rescued(database.connection)
    fresh = _connected(None)
    fresh.prepare()
    fresh.apply(changes)
    return _Loaded(fresh, aside={name: image or b""}, notes=[damage_note(len(changes), name)])


def _replayed(database: JobDatabase, line: str) -> bool:
    try:
        database.apply([from_line(line)])
    except (DamagedChangeError, sqlite3.Error, UnicodeError):
        return False
    return True
