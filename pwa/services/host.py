"""What hosts the app: the page in a browser, or the development server.

In the browser the page offers a module `tapwright_host`, see `pwa.bundle`. Natively numpy is simply installed and
nothing is ever updated.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Protocol

from pwa.services.platform import IN_BROWSER


class Host(Protocol):
    """The page or the server that the app runs in."""

    async def load_numpy(self) -> None:
        """Bring numpy in; it is not part of the first load."""

    async def load_pdf(self) -> None:
        """Bring in what draws the PDF; may be called again."""

    def update_waits(self) -> bool:
        """Whether a new version is ready to be changed to."""

    def on_change(self, listener: Callable[[], None]) -> None:
        """Have a function called when what the host says may have changed."""

    async def accept_update(self) -> None:
        """Change to the new version; the app starts anew."""

    async def persist_storage(self) -> bool:
        """Ask the browser not to clear what is kept; whether it agreed."""


class NativeHost:
    """The development server."""

    async def load_numpy(self) -> None:
        """Nothing to do: numpy is installed."""

    async def load_pdf(self) -> None:
        """Nothing to do: it is installed."""

    def update_waits(self) -> bool:
        """Never."""
        return False

    def on_change(self, listener: Callable[[], None]) -> None:
        """Nothing ever changes."""

    async def accept_update(self) -> None:
        """Nothing to do."""

    async def persist_storage(self) -> bool:
        """A file on a disk stays."""
        return True


class PageHost:
    """The page in the browser."""

    def __init__(self) -> None:
        import tapwright_host  # exists only where the page made it

        self._page = tapwright_host

    async def load_numpy(self) -> None:
        """Fetch and unpack numpy, after the first frame."""
        await self._page.load_numpy()

    async def load_pdf(self) -> None:
        """Fetch what draws the PDF; kept by the page once it is in."""
        await self._page.load_pdf()

    def update_waits(self) -> bool:
        """Whether the service worker holds a new version."""
        return bool(self._page.update_waiting())

    def on_change(self, listener: Callable[[], None]) -> None:
        """Called by the page's worker when its state changes."""
        from pyodide.ffi import create_proxy

        self._page.on_change(create_proxy(listener))

    async def accept_update(self) -> None:
        """The service worker takes over and the page loads again."""
        await self._page.accept_update()

    async def persist_storage(self) -> bool:
        """The browser decides, some without asking the user."""
        return bool(await self._page.persist_storage())


def host() -> Host:
    """The host the app runs in."""
    return PageHost() if IN_BROWSER else NativeHost()
