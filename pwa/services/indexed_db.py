"""The disk of a web page: IndexedDB, used from Python in a worker. Imported in a browser alone.

IndexedDB is there in every browser, also in pages that were not loaded over TLS (a phone that tries the app
from the developer's machine), and a second tab may read while the first one writes. `durability: "strict"`
asks that a transaction has reached the disk before it is reported complete.
"""

from __future__ import annotations

import asyncio
from collections.abc import Callable, Iterable, Mapping
from typing import Any

import js
from pyodide.ffi import JsException, JsProxy, create_proxy, jsnull, to_js

from pwa.services.browser_keeper import DiskChangedError, Kept
from pwa.services.storage import NothingKeptError, SetAside, StorageError, StorageFullError

STORES = ("image", "changes", "meta", "aside")
IMAGE, REVISION = "image", "revision"  # keys in the stores "image" and "meta"
LAYOUT = 1  # of the stores, not of what they hold; a change would lock out tabs that still run the app before it


class IndexedDisk:
    """One IndexedDB database that holds the image, the changes since, the revision, and damaged files."""

    def __init__(self, name: str) -> None:
        self._name = name
        self._connection: Any = None

    async def open(self) -> None:
        """Open the database, or make it; NothingKeptError where the browser has none for us."""
        factory = getattr(js, "indexedDB", None)
        if not factory:  # undefined or null
            raise NothingKeptError("no IndexedDB")
        try:
            request = factory.open(self._name, LAYOUT)
        except JsException as error:
            raise NothingKeptError(_name_of(error)) from None
        opened = _Outcome()
        request.onupgradeneeded = opened.proxy(lambda event: _make_stores(event.target.result))
        request.onsuccess = opened.proxy(lambda event: opened.done(event.target.result))
        request.onerror = opened.proxy(lambda event: opened.fail(NothingKeptError(_name_of(event.target.error))))
        self._connection = await opened

    async def _begin(self, stores: Iterable[str], mode: str) -> Any:
        options = to_js({"durability": "strict"}, dict_converter=js.Object.fromEntries)
        for again in (True, False):
            if self._connection is None:
                await self.open()
            try:
                return self._connection.transaction(to_js(list(stores)), mode, options)
            except JsException as error:  # some browsers drop the connection of a page that slept
                self._connection = None
                if not again:
                    raise _trouble(_name_of(error)) from None

    async def _read(self, stores: Iterable[str], ask: Callable[[Any], dict[str, Any]]) -> dict[str, Any]:
        """Ask several things in one transaction and give the answers by name."""
        transaction = await self._begin(stores, "readonly")
        requests = ask(transaction)
        await _ended(transaction)
        return {name: request.result for name, request in requests.items()}

    async def _write(self, stores: Iterable[str], revision: int | None, work: Callable[[Any], None]) -> int:
        """Do something in one transaction if the revision is still the one named; gives the next revision."""
        transaction = await self._begin({*stores, "meta"}, "readwrite")
        meta = transaction.objectStore("meta")
        following = (revision or 0) + 1
        others: list[int | None] = []

        def compare(event: Any) -> None:
            found = _number(event.target.result)
            if found != revision:
                others.append(found)
                transaction.abort()
                return
            work(transaction)
            meta.put(following, REVISION)

        handler = create_proxy(compare)
        try:
            meta.get(REVISION).onsuccess = handler
            await _ended(transaction)
        except StorageError as error:
            if others:
                raise DiskChangedError(others[0]) from None
            if not isinstance(error, StorageFullError):
                self._connection = None  # the next call makes it anew
            raise
        finally:
            handler.destroy()
        return following

    async def read(self) -> Kept:
        """All that is kept, as of one moment."""
        found = await self._read(
            ("image", "changes", "meta"),
            lambda transaction: {
                "image": transaction.objectStore("image").get(IMAGE),
                "changes": transaction.objectStore("changes").getAll(),
                "revision": transaction.objectStore("meta").get(REVISION),
            },
        )
        image = found["image"]
        lines = tuple(str(line) for line in found["changes"].to_py())
        return Kept(image.to_bytes() if _given(image) else None, lines, _number(found["revision"]))

    async def add(self, lines: Mapping[str, str], revision: int | None) -> int:
        """Put changes beside the image, by key."""

        def work(transaction: Any) -> None:
            store = transaction.objectStore("changes")
            for key, line in lines.items():
                store.put(line, key)

        return await self._write(("changes",), revision, work)

    async def replace(self, image: bytes, revision: int | None, aside: Mapping[str, bytes]) -> int:
        """Write the image, drop the changes, keep some files aside."""

        def work(transaction: Any) -> None:
            transaction.objectStore("image").put(to_js(image), IMAGE)
            transaction.objectStore("changes").clear()
            for name, data in aside.items():
                transaction.objectStore("aside").put(to_js(data), name)

        return await self._write(("image", "changes", "aside"), revision, work)

    async def set_aside(self) -> list[SetAside]:
        """The files kept aside."""
        found = await self._read(
            ("aside",),
            lambda transaction: {
                "names": transaction.objectStore("aside").getAllKeys(),
                "files": transaction.objectStore("aside").getAll(),
            },
        )
        return [
            SetAside(str(name), int(file.length)) for name, file in zip(found["names"], found["files"], strict=True)
        ]

    async def read_set_aside(self, name: str) -> bytes:
        """One of them; KeyError where there is none of this name."""
        found = await self._read(("aside",), lambda transaction: {"file": transaction.objectStore("aside").get(name)})
        if not _given(found["file"]):
            raise KeyError(name)
        return found["file"].to_bytes()

    async def close(self) -> None:
        """Let go of the database."""
        if self._connection is not None:
            self._connection.close()


class _Outcome:
    """What comes of a request: awaited once, after which its event handlers are let go."""

    def __init__(self) -> None:
        self._future: asyncio.Future[Any] = asyncio.get_running_loop().create_future()
        self._proxies: list[JsProxy] = []

    def proxy(self, handler: Callable[[Any], None]) -> JsProxy:
        """An event handler for JavaScript that lives until the outcome is known."""
        self._proxies.append(create_proxy(handler))
        return self._proxies[-1]

    def done(self, result: Any = None) -> None:
        """It has succeeded."""
        if not self._future.done():
            self._future.set_result(result)

    def fail(self, error: Exception) -> None:
        """It has failed."""
        if not self._future.done():
            self._future.set_exception(error)

    def __await__(self) -> Any:
        try:
            return (yield from self._future)
        finally:
            for proxy in self._proxies:
                proxy.destroy()


async def _ended(transaction: Any) -> None:
    """Wait until a transaction is down; StorageFullError or StorageError where it was undone."""
    ended = _Outcome()
    transaction.oncomplete = ended.proxy(lambda event: ended.done())
    transaction.onabort = ended.proxy(lambda event: ended.fail(_trouble(_name_of(transaction.error))))
    await ended


def _make_stores(database: Any) -> None:
    for name in STORES:
        database.createObjectStore(name)


def _given(value: Any) -> bool:
    return value is not None and value is not jsnull  # undefined arrives as None, null as jsnull


def _number(value: Any) -> int | None:
    return int(value) if _given(value) else None


def _name_of(error: Any) -> str:
    return str(getattr(error, "name", None) or "unknown error") if _given(error) else "undone"


def _trouble(name: str) -> StorageError:
    if name == "QuotaExceededError":
        return StorageFullError()
    return StorageError(f"The browser could not save or read ({name}). It is tried again; keep the app open.")
