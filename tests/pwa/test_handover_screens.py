"""Handing a job over and taking one in, on a page without a browser."""

import io

import flet as ft
import numpy as np
import pytest
import zxingcpp
from PIL import Image

from core.job.record import Job
from pwa.services.files import PickedFile
from pwa.services.handover import file_of, links
from tests.pwa.services.loops import run
from tests.pwa.test_screens import opened

ADDRESS = "http://test/"


async def job_on(app, name="Heron Lane 4"):
    """A job with a hardness on a phone."""
    job_id = await app.workspace.new()
    await app.go(f"/job/{job_id}")
    await app.page.type("Name of the job", name)
    await app.go(f"/job/{job_id}/water")
    await app.page.type("Total hardness", "22 gpg")
    await app.page.settle(0.5)
    return job_id


def test_the_share_screen_shows_codes_and_the_message():
    """A code, the ways to save and send, and the text of the message stand on one screen."""

    async def story() -> None:
        app = await opened()
        job_id = await job_on(app)
        await app.go(f"/job/{job_id}/share")
        picture = app.page.find(ft.Image)
        ((_, part),) = links(app.workspace.sheets[job_id].job, ADDRESS)
        (read,) = zxingcpp.read_barcodes(np.asarray(Image.open(io.BytesIO(picture.src)).convert("L")))
        assert read.text.endswith(f"#/join/{part}")
        assert app.page.reads("Save as a file")
        assert app.page.reads("Heron Lane 4\n\nWATER: Total hardness")
        await app.page.click(app.page.find(ft.OutlinedButton, content="Save as a file"))
        assert list(app.files.saved) == ["Heron Lane 4.json"]

    run(story())


def test_a_large_job_takes_several_codes_one_at_a_time():
    """Next and previous step through the codes; each is another picture."""

    async def story() -> None:
        app = await opened()
        job_id = await job_on(app)
        words = " ".join(format(number * 2654435761 % 2**32, "08x") for number in range(120))
        app.workspace.sheets[job_id].rename(notes=words)
        await app.go(f"/job/{job_id}/share")
        assert app.page.reads("Code 1 of ")
        first = app.page.find(ft.Image).src
        await app.page.click(app.page.find(ft.FilledTonalButton, content="Next code"))
        assert app.page.reads("Code 2 of ")
        assert app.page.find(ft.Image).src != first
        await app.page.click(app.page.find(ft.OutlinedButton, content="Previous code"))
        assert app.page.find(ft.Image).src == first

    run(story())


def test_a_link_is_shown_and_joined_only_when_asked():
    """What arrives stands on the screen; the list has it after the tap, and a second time nothing is added."""

    async def story() -> None:
        one, other = await opened(), await opened()
        job_id = await job_on(one)
        ((_, part),) = links(one.workspace.sheets[job_id].job, ADDRESS)
        for label, rows in (("Add to the list", 0), ("Open it", 1)):
            await other.go("/")
            await other.go(f"/join/{part.lower()}")
            assert other.page.reads("Heron Lane 4")
            assert other.page.reads("Total hardness: 22")
            assert len(other.workspace.jobs.rows) == rows
            await other.page.click(other.page.find(ft.FilledButton, content=label))
            assert [row.id for row in other.workspace.jobs.rows] == [job_id]
        kept = Job.from_text((await other.storage.load(job_id)).document)
        assert kept.entries["water.hardness"].value == 22.0

    run(story())


def test_parts_are_collected_over_several_starts():
    """The first link says what lacks; a later one makes the job whole, though the screen was left between."""

    async def story() -> None:
        app = await opened()
        notes = " ".join(format(number * 2654435761 % 2**32, "08x") for number in range(120))
        parts = [part for _, part in links(Job("far", "Far House", notes=notes), ADDRESS)]
        for part in parts[:-1]:
            await app.go(f"/join/{part}")
            assert app.page.reads("Still to scan")
            await app.go("/")
        for _ in range(2):
            await app.go(f"/join/{parts[-1]}")
            assert app.page.reads("“Far House” is new here.")
            await app.go("/")

    run(story())


def test_another_version_comes_in_beside():
    """A job that differs from the one here is added under another name; the one here stays as it is."""

    async def story() -> None:
        app = await opened()
        job_id = await job_on(app)
        before = (await app.storage.load(job_id)).document
        ((_, part),) = links(Job(job_id, "Heron Lane 4", notes="other"), ADDRESS)
        await app.go(f"/join/{part}")
        assert app.page.reads("nothing is overwritten")
        await app.page.click(app.page.find(ft.FilledButton, content="Add to the list"))
        assert sorted(row.name for row in app.workspace.jobs.rows) == ["Heron Lane 4", "Heron Lane 4 (handed over)"]
        assert (await app.storage.load(job_id)).document == before

    run(story())


def test_a_deleted_job_that_comes_again_is_on_the_list():
    """The same job handed over after it was deleted here is brought back."""

    async def story() -> None:
        app = await opened()
        job_id = await job_on(app)
        name, data = file_of(app.workspace.sheets[job_id].job)
        await app.workspace.delete(job_id)
        app.files.next = PickedFile(name, data)
        assert await app.workspace.open_file() == job_id
        assert [row.id for row in app.workspace.jobs.rows] == [job_id]

    run(story())


def test_a_file_opened_twice_is_here_once():
    """The same file a second time adds nothing."""

    async def story() -> None:
        app = await opened()
        app.files.next = PickedFile(*file_of(Job("far", "Far House")))
        assert await app.workspace.open_file() == await app.workspace.open_file() == "far"
        assert len(app.workspace.jobs.rows) == 1

    run(story())


@pytest.mark.parametrize("part", ["x", "0" * 30, "%00", "zz" * 900, "…", "1K3F9ABCDEFGHIJKLMNOP"])
def test_a_hostile_link_gets_a_sentence(part):
    """A damaged, foreign or endless code changes nothing, and the screen stays alive."""

    async def story() -> None:
        app = await opened()
        await app.go(f"/join/{part}")
        assert any(
            words in " ".join(app.page.texts()) for words in ("no code of this app", "damaged", "no link of this app")
        )
        assert app.workspace.jobs.rows == ()
        await app.go("/")
        assert app.page.reads("New job")

    run(story())


def test_links_can_be_pasted():
    """All links of a job at once, from a message."""

    async def story() -> None:
        app = await opened()
        notes = " ".join(format(number * 2654435761 % 2**32, "08x") for number in range(120))
        made = [prefix + part for prefix, part in links(Job("far", "Far House", notes=notes), ADDRESS)]
        await app.go("/join")
        await app.page.type("Links of a job", "\n".join(made))
        await app.page.click(app.page.find(ft.OutlinedButton, content="Read the links"))
        assert app.page.reads("“Far House” is new here.")

    run(story())
