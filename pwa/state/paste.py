"""A report on its way into a job: what was pasted, what was read in it, what of it is to be taken over."""

from __future__ import annotations

import asyncio
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

import flet as ft

from core.job.record import Entry, Job

if TYPE_CHECKING:
    from core.job.readings import Found, Report

REST = 0.3  # s after the last key until the text is read


@ft.observable
@dataclass
class PasteState:
    """The text, and what the user says about what was found in it."""

    text: str = ""
    turn: int = 0  # changes with each reading of the text
    refused: list[int] = field(default_factory=list)  # what was found but is not to be taken over, by place
    chosen: dict[int, int] = field(default_factory=dict)  # the answer to each question, by place
    _report: Report | None = None
    _waiting: asyncio.Task[None] | None = None

    @property
    def report(self) -> Report | None:
        """What was read; None before the first text."""
        return self._report

    def type(self, text: str, job: Job) -> None:
        """Take in the text; it is read once nothing more is typed for a moment."""
        self.text = text
        if self._waiting is not None:
            self._waiting.cancel()
        self._waiting = asyncio.get_running_loop().create_task(self._read_soon(job))

    async def _read_soon(self, job: Job) -> None:
        await asyncio.sleep(REST)
        self.read(job)

    def read(self, job: Job) -> None:
        """Read the text; what a kit has measured already is not replaced unless it is ticked."""
        from core.job.readings import read_report  # not needed before somebody pastes

        self._report = read_report(self.text) if self.text.strip() else None
        found = self._report.found if self._report else ()
        self.refused = [place for place, item in enumerate(found) if _measured(job, item.field)]
        self.chosen = {}
        self.turn += 1

    def toggle(self, place: int) -> None:
        """Tick what was found, or take the tick away."""
        out = self.refused
        self.refused = [other for other in out if other != place] if place in out else [*out, place]

    def answer(self, question: int, choice: int | None) -> None:
        """Answer a question; None leaves it out."""
        kept = {place: held for place, held in self.chosen.items() if place != question}
        self.chosen = kept if choice is None else {**kept, question: choice}

    def wanted(self) -> dict[str, Entry]:
        """The entries to be taken over; an answered question goes before what was found for the same entry."""
        if self._report is None:
            return {}
        items = [item for place, item in enumerate(self._report.found) if place not in self.refused]
        items += [self._report.questions[place].choices[choice] for place, choice in self.chosen.items()]
        return {item.field: item.entry for item in items}


def held_already(job: Job, item: Found) -> Entry | None:
    """What the job holds for an entry that a report gives another value for."""
    held = job.entries.get(item.field)
    same = held is not None and (held.value, held.unit) == (item.entry.value, item.entry.unit)
    return None if held is None or held.value is None or same else held


def _measured(job: Job, key: str) -> bool:
    held = job.entries.get(key)
    return held is not None and held.value is not None and held.source == "measured"
