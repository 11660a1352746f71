"""Saving while somebody types: the newest state of each job goes down soon, and is tried again until it is.

At most one save is under way; what is changed meanwhile follows at once, and only its newest state. Nothing
is dropped: a job stays here until storage has taken it.
"""

from __future__ import annotations

import asyncio
import logging
from collections.abc import Awaitable, Callable
from dataclasses import dataclass
from typing import Protocol

from pwa.services.storage import StorageError

log = logging.getLogger(__name__)
PAUSE = 0.1  # seconds from the first change to its save, so that a number typed quickly is one save
RETRY = 2.0  # seconds until a failed save is tried again


class Saving(Protocol):
    """The part of a storage that is needed here."""

    def save(
        self, job_id: str, document: str, name: str = "", place: str = "", summary: str = "", words: str = ""
    ) -> Awaitable[str]:
        """Keep a job and give the time noted for it."""


@dataclass(frozen=True, slots=True)
class Draft:
    """The state of a job that is not down yet."""

    job_id: str
    document: str
    name: str
    place: str
    summary: str
    words: str


class Autosave:
    """Takes each change as it is typed and sees to it that it is saved."""

    def __init__(
        self,
        storage: Saving,
        on_trouble: Callable[[str], None] = lambda sentence: None,
        on_saved: Callable[[str, str], None] = lambda job_id, changed: None,
    ) -> None:
        """`on_trouble` gets a sentence when saving fails, "" when it works again; `on_saved`, id and time."""
        self._storage = storage
        self._on_trouble = on_trouble
        self._on_saved = on_saved
        self._waiting: dict[str, Draft] = {}  # in the order in which they were first changed
        self._saving = asyncio.Lock()
        self._runner: asyncio.Task[None] | None = None
        self._trouble = ""

    @property
    def trouble(self) -> str:
        """Why the last save failed, as a sentence; empty while all is well."""
        return self._trouble

    @property
    def unsaved(self) -> bool:
        """Whether anything is not down yet."""
        return bool(self._waiting)

    def draft(self, job_id: str) -> Draft | None:
        """The newest state of a job where that is not down yet: newer than what storage gives."""
        return self._waiting.get(job_id)

    def touch(
        self, job_id: str, document: str, name: str = "", place: str = "", summary: str = "", words: str = ""
    ) -> None:
        """Take the newest state of a job; it is saved within 0.3 s, or as soon as saving works again."""
        self._waiting[job_id] = Draft(job_id, document, name, place, summary, words)
        if self._runner is None or self._runner.done():
            self._runner = asyncio.get_running_loop().create_task(self._run())

    async def flush(self) -> bool:
        """Save all that waits now; True when everything is down, False where it will be tried again."""
        async with self._saving:
            return await self._save_waiting()

    async def _run(self) -> None:
        pause = PAUSE
        while self._waiting:
            await asyncio.sleep(pause)
            try:
                pause = PAUSE if await self.flush() else RETRY
            except Exception:  # from a function we were given: saving goes on
                log.exception("A function told about saving failed.")
                pause = RETRY

    async def _save_waiting(self) -> bool:
        failed: set[str] = set()
        while drafts := [draft for job_id, draft in self._waiting.items() if job_id not in failed]:
            draft = drafts[0]
            try:
                changed = await self._storage.save(
                    draft.job_id, draft.document, draft.name, draft.place, draft.summary, draft.words
                )
            except Exception as error:  # whatever it is, it must not end the saving of the other jobs
                failed.add(draft.job_id)
                self._tell(_sentence(error))
                continue
            newest = self._waiting.pop(draft.job_id)
            if newest is not draft:
                self._waiting[draft.job_id] = newest
            self._on_saved(draft.job_id, changed)
        if not failed:
            self._tell("")
        return not failed

    def _tell(self, sentence: str) -> None:
        if sentence != self._trouble:
            self._trouble = sentence
            self._on_trouble(sentence)


def _sentence(error: Exception) -> str:
    if isinstance(error, StorageError):
        return str(error)
    return f"Saving failed ({error!r}). It is tried again; save a backup file to be safe."
