"""The screens on a page without a browser: what is typed becomes an answer, and a failing part fails alone."""

import asyncio

import flet as ft
import pytest

from core.job.record import Job
from pwa.components.guard import guarded
from pwa.routes import App
from pwa.services.clock import HandClock
from pwa.services.files import PickedFile
from pwa.services.host import NativeHost
from pwa.services.memory_storage import MemoryStorage
from pwa.state.workspace import Workspace
from tests.pwa.fake_page import FakePage, walk
from tests.pwa.services.loops import run


class FakeFiles:
    """Files that are handed over in a test."""

    def __init__(self) -> None:
        self.saved: dict[str, bytes] = {}
        self.next: PickedFile | None = None

    async def save(self, name: str, data: bytes) -> None:
        """Keep what would be downloaded."""
        self.saved[name] = data

    async def pick(self, endings) -> PickedFile | None:
        """The file laid ready."""
        return self.next


class Opened:
    """The app on a fake page, with everything ready."""

    def __init__(self, page: FakePage, workspace: Workspace, storage: MemoryStorage, files: FakeFiles) -> None:
        self.page, self.workspace, self.storage, self.files = page, workspace, storage, files

    async def go(self, route: str) -> None:
        """Follow a link."""
        self.page.session.apply_page_patch({"route": route})
        await self.page.session.dispatch_event(self.page.page._i, "route_change", {"route": route})
        await self.page.settle(0.05)


async def opened(width: int = 412) -> Opened:
    """The app after its start."""
    storage, files = MemoryStorage(HandClock()), FakeFiles()

    async def open_storage() -> MemoryStorage:
        await storage.open()
        return storage

    workspace = Workspace(open_storage, files, NativeHost())
    page = FakePage(width=width)
    page.show_views(App, workspace, workspace.preferences, workspace.notice)
    for _ in range(100):
        await page.settle(0.02)
        if workspace.standing.computing:
            break
    return Opened(page, workspace, storage, files)


def test_the_converter_needs_no_tap():
    """A number typed on the first screen stands there in every unit."""

    async def story() -> None:
        app = await opened()
        await app.page.type("Hardness reading", "20")
        assert app.page.reads("357")  # 20 °dH in mg/L CaCO3, exact definitions
        assert app.page.reads("20.9")  # in grains per US gallon
        await app.page.type("Hardness reading", "20 gpg")
        assert app.page.reads("342")

    run(story())


def test_a_reading_that_is_no_number_gets_a_sentence():
    """What is wrong, and what is accepted; the tiles go on."""

    async def story() -> None:
        app = await opened()
        await app.page.type("Hardness reading", "twelve")
        assert app.page.reads("is not a number")
        await app.page.type("Hardness reading", "12,x")
        assert app.page.reads("accepted are")
        await app.page.type("Hardness reading", "12,5")
        assert not app.page.reads("accepted are")

    run(story())


def test_entries_become_an_answer():
    """Hardness, iron, persons and bathrooms: the strip of the softener shows a size."""

    async def story() -> None:
        app = await opened()
        job_id = await app.workspace.new()
        await app.go(f"/job/{job_id}/water")
        await app.page.type("Total hardness", "22 gpg")
        await app.page.type("Dissolved iron", "1")
        await app.go(f"/job/{job_id}/demand")
        await app.page.type("Persons", "4")
        await app.page.type("Bathrooms", "2")
        await app.go(f"/job/{job_id}/softener")
        await app.page.settle(0.6)
        assert app.page.reads("regenerates every 3.1 days")
        assert app.page.reads("ft³")

    run(story())


def test_what_is_typed_is_kept():
    """The stored job holds the entry, as typed, soon after the last key."""

    async def story() -> None:
        app = await opened()
        job_id = await app.workspace.new()
        await app.go(f"/job/{job_id}/water")
        await app.page.type("Total hardness", "12,5")
        await app.page.settle(0.5)
        job = Job.from_text((await app.storage.load(job_id)).document)
        assert (job.entries["water.hardness"].value, job.entries["water.hardness"].typed) == (12.5, "12,5")

    run(story())


def test_a_deleted_job_can_be_brought_back():
    """Delete offers an undo, and the undo brings the job back to the list."""

    async def story() -> None:
        app = await opened()
        job_id = await app.workspace.new()
        await app.workspace.delete(job_id)
        assert app.workspace.jobs.rows == ()
        await app.workspace.notice.undo()
        assert [row.id for row in app.workspace.jobs.rows] == [job_id]

    run(story())


def test_backup_and_restore():
    """A backup of one device restores on another; a second time it changes nothing."""

    async def story() -> None:
        one, other = await opened(), await opened()
        await one.workspace.new()
        await one.workspace.back_up()
        (data,) = one.files.saved.values()
        other.files.next = PickedFile("backup.json", data)
        for _ in range(2):
            await other.workspace.open_file()
            assert len(other.workspace.jobs.rows) == 1

    run(story())


@pytest.mark.parametrize("data", [b"", b"{", b"\xff\xfe", b'{"format": "a recipe"}'])
def test_a_strange_file_gets_a_sentence(data):
    """Opening something else says so and changes nothing."""

    async def story() -> None:
        app = await opened()
        app.files.next = PickedFile("strange.json", data)
        assert await app.workspace.open_file() is None
        assert app.workspace.notice.text
        assert app.workspace.jobs.rows == ()

    run(story())


@pytest.mark.parametrize("route", ["/job/nowhere", "/job/nowhere/water", "/nowhere", "/job", "/settings/x"])
def test_a_link_to_nowhere_leads_somewhere(route):
    """A wrong link neither freezes nor blanks the app."""

    async def story() -> None:
        app = await opened()
        await app.go(route)
        assert app.page.texts()
        await app.go("/")
        assert app.page.reads("New job")

    run(story())


def test_a_wide_screen_shows_sheet_and_section_side_by_side():
    """From 840 pixels on, both stand in one view."""

    async def story() -> None:
        app = await opened(width=1180)
        job_id = await app.workspace.new()
        await app.go(f"/job/{job_id}/water")
        views = [control for control in app.page.controls() if isinstance(control, ft.View)]
        labels = {box.label for box in walk(views[-1]) if isinstance(box, ft.TextField)}
        assert {"Name of the job", "Total hardness"} <= labels

    run(story())


def test_a_part_that_fails_fails_alone():
    """An exception in one component shows a sentence in its place; the rest stays alive."""

    @guarded
    def Sound(text: str) -> ft.Control:
        return ft.Text(text)

    @guarded
    def Broken() -> ft.Control:
        raise RuntimeError("a joint gave way")

    @ft.component
    def Both() -> ft.Control:
        count, set_count = ft.use_state(0)
        return ft.Column([Broken(), Sound(f"taps {count}"), ft.Button("tap", on_click=lambda e: set_count(count + 1))])

    async def story() -> None:
        page = FakePage()
        page.show(Both)
        await page.click(page.find(ft.Button))
        assert page.reads("a joint gave way")
        assert page.reads("taps 1")

    run(story())


def test_settings_are_kept_for_the_next_start():
    """What was chosen is there after the next start of the app."""

    async def story() -> None:
        app = await opened()
        await app.workspace.set(decimal=",", ground="dark")
        again = Workspace(lambda: asyncio.sleep(0, app.storage), app.files, NativeHost())
        await again.open()
        assert (again.preferences.settings.decimal, again.preferences.settings.ground) == (",", "dark")

    run(story())


def test_reloading_inside_a_job_shows_the_job():
    """A start at the address of a section waits for the storage and then shows it."""

    async def story() -> None:
        app = await opened()
        job_id = await app.workspace.new()
        again = Workspace(lambda: asyncio.sleep(0.05, app.storage), app.files, NativeHost())
        page = FakePage()
        page.session.apply_page_patch({"route": f"/job/{job_id}/water"})
        page.show_views(App, again, again.preferences, again.notice)
        await page.settle(0.6)
        assert page.reads("Total hardness")

    run(story())


def test_where_another_tab_writes_nothing_is_taken_that_would_be_lost():
    """No job is begun, and what is typed into an open one is not taken."""

    async def story() -> None:
        app = await opened()
        job_id = await app.workspace.new()
        app.storage.keeper.can_write = False
        app.workspace.standing.read_only = True
        app.workspace.sheets.clear()
        assert await app.workspace.new() is None
        sheet = await app.workspace.sheet(job_id)
        sheet.type("water.hardness", "22")
        assert sheet.job.entries == {}

    run(story())


def test_a_part_that_cannot_be_worked_out_says_so(monkeypatch):
    """An error in one part of the assessment leaves the others standing."""

    async def story() -> None:
        app = await opened()
        monkeypatch.setattr("core.job.assessment.assess_blend", lambda job: 1 / 0)
        sheet = await app.workspace.sheet(await app.workspace.new())
        assert "could not be worked out" in sheet.parts["blend"].part.missing[0].text
        assert sheet.parts["water"].part.missing

    run(story())
