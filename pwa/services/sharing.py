"""Handing a text or a file to other apps: the clipboard and the share sheet of the device.

Browsers allow both only for a moment after a tap, Safari only inside it. Where the text is known beforehand,
put `copy_action` or `share_action` on the button as its `action`; the other calls are for what the tap makes.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any, Protocol

import flet as ft


class SharingError(Exception):
    """What could not be copied or shared; its text is a sentence."""


class Clipboard(Protocol):
    """The clipboard of the device."""

    async def copy(self, text: str) -> None:
        """Put a text on it. SharingError where the device does not allow it."""

    async def paste(self) -> str:
        """The text on it; empty where there is none. SharingError where the device does not allow it."""


class Share(Protocol):
    """The share sheet of the device. Devices do not tell reliably what the user did with it, so nor do we."""

    async def share_text(self, text: str, subject: str = "") -> None:
        """Offer a text to other apps."""

    async def share_file(self, name: str, data: bytes, mime_type: str, text: str = "") -> None:
        """Offer a file to other apps; where the device cannot share files it is downloaded."""


class FletClipboard:
    """The clipboard through Flet."""

    def __init__(self, clipboard: Callable[[], Any] = ft.Clipboard) -> None:
        self._clipboard = clipboard

    async def copy(self, text: str) -> None:
        """Put a text on it."""
        try:
            await self._clipboard().set(text)
        except Exception as error:  # whatever the platform says, the user gets a sentence
            raise SharingError(f"The text could not be copied ({error}). Mark it and copy it by hand.") from error

    async def paste(self) -> str:
        """The text on it; empty where there is none."""
        try:
            return await self._clipboard().get() or ""
        except Exception as error:  # as above
            raise SharingError(f"The clipboard could not be read ({error}). Paste into the field.") from error


class FletShare:
    """The share sheet through Flet."""

    def __init__(self, share: Callable[[], Any] = ft.Share) -> None:
        self._share = share

    async def share_text(self, text: str, subject: str = "") -> None:
        """Offer a text to other apps."""
        await self._shared(self._share().share_text(text, subject=subject or None))

    async def share_file(self, name: str, data: bytes, mime_type: str, text: str = "") -> None:
        """Offer a file to other apps; where the device cannot share files it is downloaded."""
        file = ft.ShareFile.from_bytes(data, mime_type=mime_type, name=name)
        await self._shared(self._share().share_files([file], text=text or None, title=name))

    async def _shared(self, call: Any) -> None:
        try:
            await call
        except Exception as error:  # as above
            raise SharingError(f"Sharing did not work here ({error}). Save it as a file instead.") from error


def copy_action(text: str) -> ft.CopyToClipboard:
    """What a button needs as its `action` to copy a text inside the tap."""
    return ft.CopyToClipboard(text)


def share_action(text: str, subject: str = "") -> ft.ShareText:
    """What a button needs as its `action` to share a text inside the tap."""
    return ft.ShareText(text, subject=subject or None)
