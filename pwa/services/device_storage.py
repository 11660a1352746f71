"""The storage that fits where the app runs."""

from __future__ import annotations

from pwa.services.clock import Clock
from pwa.services.memory_storage import MemoryStorage
from pwa.services.native_storage import NativeStorage
from pwa.services.platform import IN_BROWSER
from pwa.services.storage import NothingKeptError, Storage

if IN_BROWSER:
    from pwa.services.browser_storage import BrowserStorage


async def open_storage(clock: Clock) -> Storage:
    """The storage of this device, opened; where a browser keeps nothing, one in memory and a note on that."""
    storage: Storage = BrowserStorage(clock) if IN_BROWSER else NativeStorage(clock)
    try:
        await storage.open()
    except NothingKeptError as reason:
        storage = MemoryStorage(clock, notes=(str(reason),))
        await storage.open()
    return storage
