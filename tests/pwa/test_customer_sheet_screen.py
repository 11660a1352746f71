"""The screen of the customer's sheet, on a page without a browser; the PDF is opened by another library."""

import io

import flet as ft
import pypdf
import pytest

from pwa.services.files import PickedFile
from pwa.state.customer_sheet import FirmSetting, shown_date
from tests.pwa.services.loops import run
from tests.pwa.test_handover_screens import job_on
from tests.pwa.test_screens import opened


async def sheet_screen(app):
    """A job with a hardness, its sheet's screen open."""
    job_id = await job_on(app)
    await app.go(f"/job/{job_id}/sheet")
    await app.page.settle(0.1)
    return job_id


async def made(app):
    """Tap, and what was saved, opened."""
    await app.page.click(app.page.find(ft.FilledButton, content="Make the PDF"))
    for _ in range(100):
        if app.page.reads("is ready"):
            break
        await app.page.settle(0.1)
    ((name, data),) = app.files.saved.items()
    return name, pypdf.PdfReader(io.BytesIO(data))


def test_the_pdf_holds_the_job_and_the_firm():
    """Name of the job, hardness as typed, and the user's own firm and terms stand on the saved sheet."""

    async def story() -> None:
        app = await opened()
        await sheet_screen(app)
        await app.page.type("Name of the firm", "Brook & Vale")
        await app.page.type("Address, telephone, licence", "12 Mill Row\nLicence 00000")
        await app.page.type("Terms", "Prices hold for thirty days.")
        name, pdf = await made(app)
        text = "\n".join(page.extract_text() for page in pdf.pages)
        assert name == "Heron Lane 4.pdf"
        for words in ("Heron Lane 4", "22", "Brook & Vale", "Licence 00000", "Prices hold for thirty days."):
            assert words in text
        assert app.page.reads("“Heron Lane 4.pdf” is ready")

    run(story())


def test_the_paper_is_what_was_chosen():
    """A job in grains goes on Letter until A4 is chosen; the choice is kept."""

    async def story() -> None:
        app = await opened()
        job_id = await sheet_screen(app)
        _, pdf = await made(app)
        assert [round(float(side)) for side in pdf.pages[0].mediabox[2:]] == [612, 792]
        await app.page.click(app.page.find(ft.PopupMenuItem, content="A4"))
        await app.go(f"/job/{job_id}/sheet")
        _, pdf = await made(app)
        assert [round(float(side)) for side in pdf.pages[0].mediabox[2:]] == [595, 842]

    run(story())


def test_a_logo_is_drawn_and_one_that_cannot_be_is_said():
    """A picture stands on the sheet; another file leaves a sentence and a sheet without one."""

    async def story() -> None:
        app = await opened()
        await sheet_screen(app)
        app.files.next = PickedFile("logo.png", b"no picture")
        await app.page.click(app.page.find(ft.OutlinedButton, content="Pick a logo"))
        await made(app)
        assert app.page.reads("logo")
        assert app.page.find(ft.OutlinedButton, content="Another logo")

    run(story())


def test_the_firm_is_kept():
    """The next job's sheet carries the same firm."""

    async def story() -> None:
        app = await opened()
        await sheet_screen(app)
        await app.page.type("Name of the firm", "Brook & Vale")
        await app.page.settle(0.1)
        await app.go("/")
        await sheet_screen(app)
        assert app.page.reads("Brook & Vale")

    run(story())


@pytest.mark.parametrize("text", [None, "", "[]", "{", '{"name": 3, "paper": "A0"}', "[" * 5000])
def test_a_damaged_firm_is_an_empty_one(text):
    """What is kept and cannot be read does no harm."""
    assert FirmSetting.from_text(text) == FirmSetting()


def test_dates_are_written_out():
    """An ISO date is written for a reader; anything else stays."""
    assert shown_date("2031-05-04") == "4 May 2031"
    assert shown_date("soon") == "soon"
