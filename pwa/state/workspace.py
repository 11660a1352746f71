"""The app while it runs: the list of jobs, the open job, the settings, and the verbs that change them.

What needs the device (storage, files, the page that hosts the app) comes in from outside, so that everything here
runs in a test without a browser.
"""

from __future__ import annotations

import asyncio
import logging
import uuid
from collections.abc import Awaitable, Callable, Mapping
from dataclasses import dataclass, field, replace
from typing import Any

import flet as ft

from core.errors import TapwrightError
from core.job import kits
from core.job.answers import Missing, Part, Phrase
from core.job.fields import FURTHER_PARTS, ON_DEMAND, field_for
from core.job.kits import Kit
from core.job.record import Entry, Job
from pwa.services.autosave import Autosave
from pwa.services.files import Files, FilesError
from pwa.services.handover import HandoverError, arrival, file_of, read_file
from pwa.services.host import Host
from pwa.services.storage import JobRow, ReadOnlyError, Storage, StorageError, UnknownJobError
from pwa.state.display import Display
from pwa.state.settings import Settings
from pwa.state.sheet import Sheet
from pwa.state.spreading import Spreading
from pwa.state.unit_sets import UNIT_SETS, own_units, unit_set_for
from pwa.theme import SCALES, WIDE

log = logging.getLogger("tapwright")

REST = 0.25  # s after the last key press until the sections that are not in view are assessed again
LEISURE = 0.1  # s between the parts that take longer, so that the screen is never held up for all of them
LEADING = ("sources", "dose", "softener", "blend", "scale", "water")  # whose answer stands for a job in the list
PAGE = 50  # jobs of the list that are fetched at once


@ft.observable
@dataclass
class Notice:
    """One sentence for the user, with an undo where there is one."""

    text: str = ""
    undo: Callable[[], Awaitable[None]] | None = None
    turn: int = 0

    def say(self, text: str, undo: Callable[[], Awaitable[None]] | None = None) -> None:
        """Show a sentence."""
        self.text, self.undo = text, undo
        self.turn += 1


@ft.observable
@dataclass
class JobList:
    """The list of jobs as it is shown."""

    rows: tuple[JobRow, ...] = ()
    total: int = 0
    search: str = ""
    opened: bool = False  # the storage has been read
    turn: int = 0  # changes when what was read before may be out of date


@ft.observable
@dataclass
class Standing:
    """How the app stands: what is ready, what hinders it."""

    computing: bool = False  # numpy is in, assessments are made
    read_only: bool = False  # another tab writes
    update_waits: bool = False
    trouble: str = ""  # a sentence that stays until it is over
    wide: bool = False


@ft.observable
@dataclass
class Preferences:
    """The settings in force."""

    settings: Settings = field(default_factory=Settings)
    own_kits: tuple[Kit, ...] = ()


class Workspace:
    """The models of the app and the verbs that need more than one of them."""

    def __init__(self, open_storage: Callable[[], Awaitable[Storage]], files: Files, host: Host) -> None:
        """`open_storage` is awaited once, by `open`; nothing but `open` may be called before."""
        self._open_storage, self.files, self.host = open_storage, files, host
        self.jobs, self.standing = JobList(), Standing()
        self.preferences, self.notice = Preferences(), Notice()
        self.sheets: dict[str, Sheet] = {}
        self._assess: Callable[[Job], Any] | None = None
        self._doubt: Callable[..., Any] | None = None
        self._check: Callable[..., Any] | None = None
        self._resting: dict[str, asyncio.Task[None]] = {}
        self._spreading = Spreading()
        self._ready = asyncio.Event()  # the storage has been opened, or cannot be

    # Opening

    async def open(self) -> None:
        """Read what is kept, then bring in the calculator."""
        try:
            await self._read_kept()
        except StorageError as error:
            self.standing.trouble = str(error)
            return
        finally:
            self._ready.set()
        await self._bring_in_calculator()

    async def _read_kept(self) -> None:
        self.storage = await self._open_storage()
        self._autosave = Autosave(self.storage, on_trouble=self._trouble)
        self.storage.on_writable(self._writable)
        self.standing.read_only = not self.storage.can_write
        self.standing.trouble = " ".join(self.storage.notes)
        self.preferences.settings = Settings.from_text(await self.storage.get_setting("settings"))
        await self._read_own_kits()
        await self.list_again()

    async def _read_own_kits(self) -> None:
        try:
            self.preferences.own_kits = kits.from_text(await self.storage.get_setting("kits") or "")
        except TapwrightError as error:
            self.standing.trouble = f"Your own kits could not be read. {error}"

    async def _bring_in_calculator(self) -> None:
        self.host.on_change(self._host_changed)
        await self.host.load_numpy()
        from core.job import assess  # it needs numpy, which has only now arrived
        from core.job.checks import check_job
        from core.job.doubts import doubt

        self._assess, self._doubt, self._check = assess, doubt, check_job
        self.standing.computing = True
        for sheet in self.sheets.values():
            self._assess_sheet(sheet, sheet.layout.sections)
            self._check_sheet(sheet)
            await self._further(sheet)
            self.see_how_sure(sheet)

    def _host_changed(self) -> None:
        self.standing.update_waits = self.host.update_waits()

    async def update(self) -> None:
        """Change to the new version once everything typed is down."""
        await self._autosave.flush()
        await self.host.accept_update()

    def _writable(self) -> None:
        self.standing.read_only = False
        self.sheets.clear()
        self.jobs.turn += 1
        asyncio.get_running_loop().create_task(self.list_again())

    def resized(self, width: float | None) -> None:
        """Take note of the width of the window."""
        wide = (width or 0.0) >= WIDE
        if wide != self.standing.wide:
            self.standing.wide = wide

    # The list

    async def list_again(self, search: str | None = None) -> None:
        """Read the list anew."""
        jobs = self.jobs
        jobs.search = jobs.search if search is None else search
        try:
            jobs.rows = tuple(await self.storage.list_jobs(jobs.search, limit=PAGE))
            jobs.total = await self.storage.count_jobs(jobs.search)
        except StorageError as error:
            self.standing.trouble = str(error)
        jobs.opened = True

    async def more(self) -> None:
        """Fetch the next jobs of the list."""
        rows = await self.storage.list_jobs(self.jobs.search, limit=PAGE, offset=len(self.jobs.rows))
        self.jobs.rows += tuple(rows)

    async def new(self) -> str | None:
        """Begin an empty job; gives its id, None where nothing may be written here."""
        region = self.preferences.settings.region
        job = Job(id=_new_id())
        return await self._add(job.with_choice("softener.region", region) if region else job)

    async def add_copy(self, job: Job) -> str | None:
        """Put a job (a sample, an opened file) on the list under an id of its own."""
        return await self._add(replace(job, id=_new_id()))

    async def join(self, job: Job) -> str:
        """Put a job that was handed over on the list, overwriting nothing; gives its id, and says what became of it."""
        await self._autosave.flush()
        came = await arrival(job, self._kept_or_deleted)
        if came.kind == "same":
            await self.list_again()
        else:
            await self._add(came.job)
        self.notice.say(came.sentence)
        return came.job.id

    async def kept(self, job_id: str) -> str | None:
        """The job file kept here under an id; None where there is none."""
        try:
            return (await self.storage.load(job_id)).document
        except UnknownJobError:
            return None

    async def _kept_or_deleted(self, job_id: str) -> str | None:
        held = await self.kept(job_id)
        if held is None:
            try:
                await self.storage.undelete(job_id)  # what would be written over comes back instead
            except UnknownJobError:
                return None
            held = await self.kept(job_id)
        return held

    async def delete(self, job_id: str) -> None:
        """Take a job off the list, with a way back."""
        await self._autosave.flush()
        await self.storage.delete(job_id)
        self.sheets.pop(job_id, None)
        await self.list_again()

        async def undo() -> None:
            await self.storage.undelete(job_id)
            await self.list_again()

        self.notice.say("Job deleted.", undo)

    # One job

    async def sheet(self, job_id: str) -> Sheet | None:
        """The open sheet of a job, read from storage the first time; None where there is no such job."""
        await self._ready.wait()
        if job_id not in self.sheets:
            try:
                job = Job.from_text((await self.storage.load(job_id)).document)
            except (StorageError, TapwrightError) as error:
                self.notice.say(str(error))
                return None
            self.sheets[job_id] = self._open_sheet(job)
        return self.sheets[job_id]

    def _open_sheet(self, job: Job) -> Sheet:
        sheet = Sheet(job, self._changed, self._units)
        sheet.locked = self.standing.read_only
        sheet.own_kits, sheet.doubt_of = self.preferences.own_kits, self._doubt_of
        self._assess_sheet(sheet, sheet.layout.sections)
        self._check_sheet(sheet)
        return sheet

    def _changed(self, sheet: Sheet, section: str) -> None:
        if section:
            self._assess_sheet(sheet, (section,))
        self._keep(sheet)
        self._spreading.stop(sheet)
        job_id = sheet.job.id
        resting = self._resting.pop(job_id, None)
        if resting is not None:
            resting.cancel()
        self._resting[job_id] = asyncio.get_running_loop().create_task(self._rest(sheet))

    async def _rest(self, sheet: Sheet) -> None:
        await asyncio.sleep(REST)
        for section in sheet.layout.sections:
            self._assess_sheet(sheet, (section,))
            await asyncio.sleep(0)
        self._check_sheet(sheet)
        self._keep(sheet)
        await self._further(sheet)
        self.see_how_sure(sheet)

    def see_how_sure(self, sheet: Sheet) -> None:
        """Have it worked out at leisure how sure the answers are."""
        if self._assess is not None:
            self._spreading.begin(sheet)

    async def look(self, sheet: Sheet, section: str) -> None:
        """Say which section is on the screen; what it shows further is worked out at leisure."""
        sheet.looked_at = section
        if sheet.parts[section].part is None:
            self._assess_sheet(sheet, (section,))
        await self._further(sheet)
        self.see_how_sure(sheet)

    def work_out(self, sheet: Sheet, part: str) -> None:
        """Make a part that was asked for."""
        self._assess_sheet(sheet, (part,))

    async def _further(self, sheet: Sheet) -> None:
        job = sheet.job
        for part in FURTHER_PARTS.get(sheet.looked_at, ()):
            if part in ON_DEMAND:
                sheet.parts[part].put(None)
                continue
            await asyncio.sleep(LEISURE)
            if sheet.job is not job:
                return  # changed meanwhile: the next rest comes back here
            self._assess_sheet(sheet, (part,))

    def _assess_sheet(self, sheet: Sheet, sections: Any) -> None:
        if self._assess is None:
            return
        assessment = self._assessment_of(sheet)
        sheet.take({section: _part_of(assessment, section) for section in sections})
        for section in sections:
            sheet.say_doubts(section)

    def _assessment_of(self, sheet: Sheet) -> Any:
        """The assessment of a sheet's job: one for each state of the job, so that no part of it is made twice."""
        if sheet.assessment is None or sheet.assessment.job is not sheet.job:
            sheet.assessment = self._assess(sheet.job)
        return sheet.assessment

    def _check_sheet(self, sheet: Sheet) -> None:
        if self._check is not None:
            sheet.take_findings(self._check(sheet.job, sheet.own_kits))

    def _doubt_of(self, key: str, entry: Entry) -> Phrase | None:
        """What the truth may be where this was entered; None where nothing is doubted, or nothing is computed yet."""
        known = field_for(key)
        if self._doubt is None or known is None:
            return None
        held = self._doubt(entry, known, self.preferences.own_kits)
        return None if held.is_none else held.words

    def _keep(self, sheet: Sheet) -> None:
        if self.standing.read_only:
            return
        job = sheet.job
        self._autosave.touch(job.id, job.to_text(), name=job.name, place=job.place, summary=self.summary(sheet))

    def summary(self, sheet: Sheet) -> str:
        """The answer of a job in one line, for the list."""
        shown = [key for key in LEADING if key in sheet.layout.sections]
        parts = [part for part in (sheet.parts[key].part for key in shown) if part is not None]
        answered = next((part.headline for part in parts if part.headline is not None), None)
        if answered is not None:
            return self.display(sheet).say(answered.words)
        return next((part.missing[0].text for part in parts if part.missing), "")

    def assessed(self, job: Job) -> Any:
        """The whole assessment of a job; None until the calculator is in."""
        return None if self._assess is None else self._assess(job)

    def display(self, sheet: Sheet | None = None) -> Display:
        """How answers are shown: the user's units, hardness in the unit that was typed in this job."""
        settings = self.preferences.settings
        unit = sheet.hardness_unit if sheet is not None else ""
        own = {**own_units(settings.own_units), **({"hardness": unit} if unit else {})}
        return Display(unit_set_for(settings.unit_set, unit), settings.decimal, SCALES[settings.text], own)

    def _units(self, hardness_unit: str) -> Mapping[str, str]:
        settings = self.preferences.settings
        own = {**own_units(settings.own_units), **({"hardness": hardness_unit} if hardness_unit else {})}
        return UNIT_SETS[unit_set_for(settings.unit_set, hardness_unit)] | own

    async def _add(self, job: Job) -> str | None:
        if not self.storage.can_write:
            self.notice.say(str(ReadOnlyError()))
            return None
        await self.host.persist_storage()
        sheet = self._open_sheet(job)
        try:
            await self.storage.save(job.id, job.to_text(), job.name, job.place, self.summary(sheet))
        except StorageError as error:
            self.notice.say(str(error))
        self.sheets[job.id] = sheet
        await self.list_again()
        return job.id

    # Settings, files

    async def set(self, **changes: Any) -> None:
        """Change settings and keep them."""
        self.preferences.settings = replace(self.preferences.settings, **changes)
        try:
            await self.storage.set_setting("settings", self.preferences.settings.to_text())
        except StorageError as error:
            self.notice.say(str(error))

    async def keep_kit(self, kit: Kit, instead_of: str = "") -> None:
        """Add one of the user's own kits, or put it in the place of the one of that name."""
        own = self.preferences.own_kits
        places = [at for at, held in enumerate(own) if held.words == instead_of]
        kept = [kit if at in places else held for at, held in enumerate(own)]
        await self._set_kits(tuple(kept if places else [*kept, kit]))

    async def remove_kit(self, name: str) -> None:
        """Take one of the user's own kits away, with a way back; entries keep its name."""
        before = self.preferences.own_kits

        async def undo() -> None:
            await self._set_kits(before)

        await self._set_kits(tuple(kit for kit in before if kit.words != name))
        self.notice.say("Kit removed.", undo)

    async def _set_kits(self, own: tuple[Kit, ...]) -> None:
        self.preferences.own_kits = own
        self._spreading.forget()
        for sheet in self.sheets.values():
            sheet.own_kits = own
            for section in sheet.layout.sections:
                self._assess_sheet(sheet, (section,))
        try:
            await self.storage.set_setting("kits", kits.to_text(own))
        except StorageError as error:
            self.notice.say(str(error))

    async def back_up(self) -> None:
        """Give the user one file with everything."""
        await self._autosave.flush()
        await self.give("tapwright-backup.json", await self.storage.backup())

    async def save_job_file(self, job_id: str) -> None:
        """Give the user the file of one job."""
        sheet = await self.sheet(job_id)
        if sheet is not None:
            await self.give(*file_of(sheet.job))

    async def give(self, name: str, data: bytes) -> None:
        """Hand a file to the user."""
        try:
            await self.files.save(name, data)
        except FilesError as error:
            self.notice.say(str(error))

    async def open_file(self) -> str | None:
        """Take in a job file or a backup; gives the id of a job that was opened."""
        try:
            picked = await self.files.pick(["json"])
        except FilesError as error:
            self.notice.say(str(error))
            return None
        if picked is None:
            return None
        try:
            job = read_file(picked.data)
        except HandoverError as not_a_job:
            return await self._restore(picked.data, str(not_a_job))
        try:
            return await self.join(job)
        except StorageError as error:
            self.notice.say(str(error))
            return None

    async def read_text(self) -> str | None:
        """The text of a file the user picks; None where none was picked."""
        try:
            picked = await self.files.pick(["txt", "csv", "json"])
        except FilesError as error:
            self.notice.say(str(error))
            return None
        return None if picked is None else picked.data.decode("utf-8", errors="replace")

    def take_over(self, sheet: Sheet, entries: Mapping[str, Entry]) -> None:
        """Put entries out of a report into a job, with a way back."""
        before = {key: sheet.job.entries.get(key) for key in entries}
        sheet.put_entries(entries)

        async def undo() -> None:
            sheet.put_entries(before)

        count = len(entries)
        self.notice.say(f"{count} {'entry' if count == 1 else 'entries'} taken over.", undo)

    async def _restore(self, data: bytes, why_not_a_job: str) -> None:
        try:
            report = await self.storage.restore(data)
        except StorageError as error:
            self.notice.say(f"{error} {why_not_a_job}")
            return
        self.notice.say(report.sentence())
        self.sheets.clear()  # what is open may have come in anew
        self.jobs.turn += 1
        await self.list_again()

    def _trouble(self, sentence: str) -> None:
        self.standing.trouble = sentence


def _new_id() -> str:
    return uuid.uuid4().hex


def _part_of(assessment: Any, name: str) -> Part:
    """A part of an assessment; where it fails, one that says so, so that the others go on."""
    try:
        return getattr(assessment, name)
    except Exception:
        log.exception("%s failed", name)
        text = "This part could not be worked out; your entries are kept. Look at what was entered last."
        return Part(name, missing=(Missing("", text),))
