"""Files that leave the app and come into it: saved as a download, picked by the user.

On iPhones a page may open the file picker only inside the tap itself: put `pick_action`
on the button.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Any, Protocol

import flet as ft

LONGEST_NAME = 80  # characters, without the ending; some systems cut longer ones


class FilesError(Exception):
    """A file that could not be saved or picked; its text is a sentence."""


@dataclass(frozen=True, slots=True)
class PickedFile:
    """A file that the user picked."""

    name: str
    data: bytes


class Files(Protocol):
    """Saving and picking files."""

    async def save(self, name: str, data: bytes) -> None:
        """Hand a file to the user, as a download or through the system's dialog; or FilesError."""

    async def pick(self, endings: Sequence[str]) -> PickedFile | None:
        """Let the user pick one file, with one of these endings; None where nothing was picked."""

    def pick_action(self, endings: Sequence[str], picked: Callable[[PickedFile], Any]) -> Any:
        """The same as something to put on a button as its `action`; `picked` gets the file."""


class FletFiles:
    """Saving and picking through Flet. One for each page."""

    def __init__(self, picker: Callable[..., Any] = ft.FilePicker) -> None:
        self._picker = picker

    async def save(self, name: str, data: bytes) -> None:
        """Hand a file to the user, as a download or through the system's dialog."""
        if not data:
            raise FilesError(f"“{name}” is empty; there is nothing to save.")
        try:
            await self._picker().save_file(file_name=name, src_bytes=data)
        except Exception as error:  # whatever the platform says, the user gets a sentence
            raise FilesError(f"“{name}” could not be saved ({error}). Try again.") from error

    async def pick(self, endings: Sequence[str]) -> PickedFile | None:
        """Let the user pick one file, with one of these endings; None where nothing was picked."""
        try:
            files = await self._picker().pick_files(with_data=True, **_only(endings))
        except Exception as error:  # as above
            raise FilesError(f"No file could be picked ({error}). Try again.") from error
        return _first(files)

    def pick_action(self, endings: Sequence[str], picked: Callable[[PickedFile], Any]) -> ft.PickFiles:
        """The same as the `action` of a button; `picked` gets the file, if there is one."""

        def handle(event: Any) -> Any:
            file = _first(event.files)
            return picked(file) if file else None

        return ft.PickFiles(self._picker(on_result=handle), with_data=True, **_only(endings))


def _only(endings: Sequence[str]) -> dict[str, Any]:
    if not endings:
        return {}
    return {"file_type": ft.FilePickerFileType.CUSTOM, "allowed_extensions": list(endings)}


def _first(files: Sequence[Any] | None) -> PickedFile | None:
    if not files:
        return None
    data = files[0].bytes
    if data is None:
        raise FilesError(f"“{files[0].name}” could not be read. Copy it to this device first.")
    return PickedFile(files[0].name, bytes(data))


def file_name(title: str, ending: str) -> str:
    """A name that every system accepts for a file about something; "job" where nothing is left of it."""
    kept = re.sub(r'[\\/:*?"<>|\x00-\x1f\x7f]+', " ", title)
    kept = " ".join(kept.split())[:LONGEST_NAME].strip(" .")
    return f"{kept or 'job'}.{ending}"
