"""Storage in the browser. Imported there alone; what can be tested elsewhere is in `browser_keeper`."""

from __future__ import annotations

from pwa.services.browser_keeper import BrowserKeeper
from pwa.services.clock import Clock
from pwa.services.indexed_db import IndexedDisk
from pwa.services.sqlite_storage import SqliteStorage
from pwa.services.web_lock import WebLock

NAME = "tapwright"


class BrowserStorage(SqliteStorage):
    """Jobs and settings of all tabs of this origin; another `name` is another, separate storage."""

    def __init__(self, clock: Clock, name: str = NAME) -> None:
        keeper = BrowserKeeper(IndexedDisk(name), WebLock(f"{name} writer"), clock)
        super().__init__(keeper, clock)
