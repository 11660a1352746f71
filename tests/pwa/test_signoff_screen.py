"""The sign-off on a page without a browser: readings become verdicts and causes, and stand on the sheet."""

import flet as ft

from core.job.record import Job
from tests.pwa.services.loops import run
from tests.pwa.test_customer_sheet_screen import made
from tests.pwa.test_screens import opened


async def signed(app, **readings):
    """A job of 22 gpg, four persons and two bathrooms, with readings typed on its sign-off."""
    job_id = await app.workspace.new()
    await app.go(f"/job/{job_id}/water")
    await app.page.type("Total hardness", "22 gpg")
    await app.go(f"/job/{job_id}/demand")
    await app.page.type("Persons", "4")
    await app.page.type("Bathrooms", "2")
    await app.go(f"/job/{job_id}/signoff")
    for label, text in readings.items():
        await app.page.type(LABELS[label], text)
    return job_id


WHY = "Why, and the arithmetic"
LABELS = {
    "raw": "Raw water",
    "fresh": "Softened, after a fresh regeneration",
    "late": "Softened, now or at the end of the run",
    "since": "Water since the regeneration",
    "salt": "Salt of the last regeneration",
    "flow": "Flow while reading",
}


def test_soft_water_is_met_and_nothing_is_explained():
    """Readings below what counts as soft are met; without a miss no cause is named."""

    async def story() -> None:
        app = await opened()
        await signed(app, fresh="0.1 gpg", late="0.1 gpg")
        assert app.page.reads("Met. Promised: at most 1.0")
        assert not app.page.reads("What may be behind it")

    run(story())


def test_a_leaking_bypass_is_told_from_an_exhausted_bed():
    """Hard from the start and no harder later: a leak. Soft at first, hard after too much water: the bed ran out."""

    async def story() -> None:
        app = await opened()
        await signed(app, raw="22 gpg", fresh="3 gpg", late="3 gpg", since="500 US gal", salt="6 lb", flow="3 gpm")
        assert app.page.reads("Not met. Promised: at most 1.0")
        leak = next(text for text in app.page.texts() if text.startswith("1. "))
        assert "leaks" in leak
        app = await opened()
        await signed(app, raw="22 gpg", fresh="0.2 gpg", late="9 gpg", since="3000 US gal", salt="6 lb", flow="3 gpm")
        spent = next(text for text in app.page.texts() if text.startswith("1. "))
        assert "The bed ran out" in spent

    run(story())


def test_a_cause_opens_to_its_arithmetic():
    """What speaks for a cause and its formulas are one tap away."""

    async def story() -> None:
        app = await opened()
        await signed(app, raw="22 gpg", fresh="3 gpg", late="3 gpg")
        assert not app.page.reads("Hard right after the regeneration? Yes.")
        openers = [part for part in app.page.controls() if isinstance(part, ft.Semantics) and part.label == WHY]
        await app.page.session.dispatch_event(openers[0]._i, "tap", None)
        await app.page.settle()
        assert app.page.reads("Hard right after the regeneration? Yes.")

    run(story())


def test_a_reading_on_the_limit_cannot_tell():
    """A rough kit at the limit leaves it open, and the screen says what would tell."""

    async def story() -> None:
        app = await opened()
        await signed(app, fresh="1.2 gpg")
        assert app.page.reads("Cannot tell. Promised: at most 1.0")
        assert app.page.reads("would tell")

    run(story())


def test_a_reading_that_cannot_be_is_named():
    """An impossible reading gets a sentence and judges nothing."""

    async def story() -> None:
        app = await opened()
        await signed(app, raw="22 gpg", fresh="99999 gpg")
        assert app.page.reads("must be from 0 to")

    run(story())


def test_it_is_kept_in_the_job_and_stands_on_the_sheet():
    """Readings, name and date are in the job file, and the PDF shows verdict, cause and who stands for it."""

    async def story() -> None:
        app = await opened()
        job_id = await signed(app, raw="22 gpg", fresh="3 gpg", late="3 gpg")
        await app.page.type("Name", "R. Vale")
        await app.page.type("Date, such as 2031-05-04", "2031-05-04")
        await app.page.settle(0.6)
        kept = Job.from_text((await app.storage.load(job_id)).document)
        assert kept.entries["signoff.softened_fresh"].value == 3.0
        assert (kept.choices["signoff.name"], kept.choices["signoff.date"]) == ("R. Vale", "2031-05-04")
        await app.go(f"/job/{job_id}/sheet")
        await app.page.settle(0.1)
        _, pdf = await made(app)
        text = "\n".join(page.extract_text() for page in pdf.pages)
        for words in ("What was measured", "Not met", "Likeliest reason", "R. Vale", "4 May 2031"):
            assert words in text

    run(story())
