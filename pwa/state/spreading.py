"""Works out at leisure how sure the answers are: a few cases at a time, begun anew when the job changes."""

from __future__ import annotations

import asyncio
import logging
from dataclasses import dataclass
from typing import TYPE_CHECKING

from core.job.record import Job
from pwa.state.sheet import Sheet
from pwa.state.sureness import PLANS, SIZING, Plan, same_to_reckon, with_known_bands

if TYPE_CHECKING:
    from core.job.spread import Spread

log = logging.getLogger("tapwright")

BREATH = 0.6  # s of rest before the first case
BETWEEN = 0.005  # s between two slices, in which key presses come through


@dataclass(frozen=True, slots=True)
class _Held:
    """What was found for a job."""

    job: Job
    found: Spread


class Spreading:
    """One run for each open job; the last results are kept, so that turning pages costs nothing."""

    def __init__(self) -> None:
        self._running: dict[str, tuple[list[Plan], asyncio.Task[None]]] = {}
        self._held: dict[tuple[str, Plan], _Held] = {}

    def stop(self, sheet: Sheet) -> None:
        """The job has changed: what is said is out of date, and what was being worked out is not wanted."""
        _, running = self._running.pop(sheet.job.id, ([], None))
        if running is not None:
            running.cancel()
        for state in sheet.sure.values():
            if state.known and not state.stale:
                state.stale = True

    def forget(self) -> None:
        """What was found no longer holds for any job: the kits have changed."""
        self._held.clear()

    def begin(self, sheet: Sheet) -> None:
        """Work out the section on the screen, then what the recommendation rests on."""
        plans = list(dict.fromkeys([PLANS.get(sheet.looked_at, SIZING), SIZING]))
        at_work, running = self._running.get(sheet.job.id, ([], None))
        if running is not None and not running.done():
            if at_work == plans:
                return
            running.cancel()
        task = asyncio.get_running_loop().create_task(self._work(sheet, plans))
        self._running[sheet.job.id] = plans, task

    async def _work(self, sheet: Sheet, plans: list[Plan]) -> None:
        try:
            await self._work_on(sheet, plans)
        except Exception:
            log.exception("how sure the answers are could not be worked out")
            for state in sheet.sure.values():
                state.give_up()

    async def _work_on(self, sheet: Sheet, plans: list[Plan]) -> None:
        for plan in plans:
            held = self._held.get((sheet.job.id, plan))
            if held is None or not same_to_reckon(sheet.job, held.job.entries, held.job.choices):
                await asyncio.sleep(BREATH)
                held = _Held(sheet.job, await _spread(sheet, plan))
                self._held[sheet.job.id, plan] = held
            self._show(sheet, plan, held.found)

    def _show(self, sheet: Sheet, plan: Plan, found: Spread) -> None:
        for section in found.plain:
            part = sheet.parts[section].part
            if part is None or part.spread is not None:
                continue  # not assessed yet, or shown already
            sheet.parts[section].put(with_known_bands(part, found))
            sheet.sure[section].take(found)


async def _spread(sheet: Sheet, plan: Plan) -> Spread:
    from core.job.spread import SpreadRun  # it needs numpy

    shown = (*sheet.layout.sections, sheet.looked_at)
    sections = [section for section in plan.sections if section in shown]
    run = SpreadRun(sheet.job, plan.draws, sections=sections, own=sheet.own_kits, alone=plan.alone)
    while run.step(plan.at_once):
        await asyncio.sleep(BETWEEN)
    return run.result()
