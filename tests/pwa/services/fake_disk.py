"""A disk of a browser and a lock between tabs, without a browser: for trying every moment at which a tab can end."""

from __future__ import annotations

import asyncio
from collections.abc import Callable, Mapping
from dataclasses import dataclass, field

from pwa.services.browser_keeper import BrowserKeeper, DiskChangedError, Kept
from pwa.services.clock import Clock
from pwa.services.sqlite_storage import SqliteStorage
from pwa.services.storage import SetAside, StorageFullError


class Killed(BaseException):
    """The tab was killed here; nothing after it runs, no handler sees it."""


@dataclass
class Store:
    """What outlives a tab."""

    image: bytes | None = None
    lines: dict[str, str] = field(default_factory=dict)
    revision: int | None = None
    aside: dict[str, bytes] = field(default_factory=dict)

    def size(self) -> int:
        """Bytes in use."""
        texts = sum(len(line) for line in self.lines.values())
        return len(self.image or b"") + texts + sum(map(len, self.aside.values()))


class FakeDisk:
    """Transactions on a store. It can be full, and the tab can be killed before or after one of them takes place."""

    def __init__(self, store: Store) -> None:
        self.store = store
        self.room: int | None = None
        self.writes = 0
        self.replaced = 0
        self.kill_at: int | None = None  # the number of the write
        self.kill_after = False  # whether that write still takes place

    async def open(self) -> None:
        """Nothing to do."""

    async def close(self) -> None:
        """Nothing to do."""

    async def read(self) -> Kept:
        """All that is kept."""
        await asyncio.sleep(0)
        return Kept(self.store.image, tuple(self.store.lines.values()), self.store.revision)

    async def _write(self, revision: int | None, change: Callable[[Store], None]) -> int:
        await asyncio.sleep(0)
        self.writes += 1
        doomed = self.writes == self.kill_at
        if doomed and not self.kill_after:
            raise Killed
        if self.store.revision != revision:
            raise DiskChangedError(self.store.revision)
        after = Store(self.store.image, dict(self.store.lines), (revision or 0) + 1, dict(self.store.aside))
        change(after)
        if self.room is not None and after.size() > self.room:
            raise StorageFullError
        vars(self.store).update(vars(after))
        if doomed:
            raise Killed
        await asyncio.sleep(0)
        return self.store.revision or 0

    async def add(self, lines: Mapping[str, str], revision: int | None) -> int:
        """Put changes beside the image, by key."""
        return await self._write(revision, lambda store: store.lines.update(lines))

    async def replace(self, image: bytes, revision: int | None, aside: Mapping[str, bytes]) -> int:
        """Write the image, drop the changes, keep some files aside."""

        def change(store: Store) -> None:
            store.image = image
            store.lines = {}
            store.aside.update(aside)

        result = await self._write(revision, change)
        self.replaced += 1
        return result

    async def set_aside(self) -> list[SetAside]:
        """The files kept aside."""
        return [SetAside(name, len(data)) for name, data in self.store.aside.items()]

    async def read_set_aside(self, name: str) -> bytes:
        """One of them; KeyError where there is none of this name."""
        return self.store.aside[name]


class Room:
    """All tabs that want the one lock, the holder first."""

    def __init__(self) -> None:
        self.queue: list[FakeLock] = []


class FakeLock:
    """The lock as one tab sees it."""

    def __init__(self, room: Room) -> None:
        self.room = room
        self.granted: Callable[[], None] = lambda: None

    async def take(self, granted: Callable[[], None]) -> bool:
        """Take it if it is free, or queue for it."""
        await asyncio.sleep(0)
        self.granted = granted
        self.room.queue.append(self)
        return self.room.queue[0] is self

    def release(self) -> None:
        """Give it back, or leave the queue; the next one's turn comes."""
        if self not in self.room.queue:
            return
        held = self.room.queue[0] is self
        self.room.queue.remove(self)
        if held and self.room.queue:
            asyncio.get_running_loop().call_soon(self.room.queue[0].granted)


class FakeTab(SqliteStorage):
    """The storage of one tab over a store that outlives it."""

    def __init__(self, clock: Clock, store: Store, room: Room | None = None) -> None:
        self.disk = FakeDisk(store)
        self.lock = FakeLock(room or Room())
        self.keeper = BrowserKeeper(self.disk, self.lock, clock)
        super().__init__(self.keeper, clock)
