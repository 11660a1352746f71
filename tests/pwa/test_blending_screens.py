"""Sections put on a sheet and taken off, several sources, a dose with its jars: on a page without a browser."""

import flet as ft

from pwa.samples import load_sample
from tests.pwa.services.loops import run
from tests.pwa.test_screens import opened

VILLAGE = "village-with-two-wells-and-a-spring.json"


def tappable(app, label):
    """The button that is read aloud with this label."""
    return next(c for c in app.page.controls() if isinstance(c, ft.Semantics) and c.label == label).content


async def village(app):
    """The sample village, opened on its sheet."""
    job_id = await app.workspace.add_copy(load_sample(VILLAGE))
    await app.go(f"/job/{job_id}")
    return job_id


def test_the_sheet_carries_only_the_sections_that_are_wanted():
    """A new job has the usual five; a section is added and removed with a tap, and the choice stays in the job."""

    async def story() -> None:
        app = await opened()
        job_id = await app.workspace.new()
        await app.go(f"/job/{job_id}")
        sheet = app.workspace.sheets[job_id]
        assert "dose" not in sheet.layout.sections
        await app.page.click(tappable(app, "Add or remove sections"))
        await app.page.click(tappable(app, "Add Dose"))
        await app.page.click(tappable(app, "Remove Softener"))
        assert sheet.layout.sections == ("water", "demand", "scale", "blend", "dose")
        assert sheet.job.choices["job.sections"] == "water demand scale blend dose"
        assert app.page.reads("Enter the hardness wanted after dosing.")

    run(story())


def test_the_last_section_cannot_be_taken_off():
    """A sheet is never empty."""

    async def story() -> None:
        app = await opened()
        sheet = await app.workspace.sheet(await app.workspace.new())
        for section in ("water", "demand", "scale", "softener", "blend"):
            sheet.show_section(section, shown=False)
        assert sheet.layout.sections == ("blend",)

    run(story())


def test_a_source_is_switched_off_in_the_list():
    """One tap: the strip says why it cannot be done; another, and it can again."""

    async def story() -> None:
        app = await opened()
        job_id = await village(app)
        await app.go(f"/job/{job_id}/sources")
        assert app.page.reads("Held back by hardness and nitrate.")
        await app.page.click(tappable(app, "Switch Upper Fold spring off"))
        assert app.page.reads("It cannot be done.")
        await app.page.click(tappable(app, "Switch Upper Fold spring on"))
        assert app.page.reads("Held back by hardness and nitrate.")

    run(story())


def test_a_source_is_added_entered_and_removed_with_a_way_back():
    """Its name and flow are kept in the job; removing takes all of it, undo brings all of it back."""

    async def story() -> None:
        app = await opened()
        job_id = await village(app)
        sheet = app.workspace.sheets[job_id]
        number = sheet.add_source()
        assert number == 4
        await app.go(f"/job/{job_id}/sources/{number}")
        assert app.page.reads("Enter what Source 4 gives at most.")
        await app.page.type("Name of the source", "Mill race")
        await app.page.type("Gives at most", "15")
        assert sheet.job.choices["sources.4.name"] == "Mill race"
        assert sheet.job.entries["sources.4.flow_high"].value == 15.0
        put_back = sheet.remove_source(4)
        assert not [key for key in (*sheet.job.entries, *sheet.job.choices) if key.startswith("sources.4.")]
        put_back()
        assert sheet.layout.sources == (1, 2, 3, 4)
        assert sheet.fields["sources.4.flow_high"].typed == "15"

    run(story())


def test_no_more_sources_than_can_be_blended():
    """Twelve, and then no more."""

    async def story() -> None:
        app = await opened()
        sheet = await app.workspace.sheet(await app.workspace.new())
        assert [sheet.add_source() for _ in range(13)] == [*range(1, 13), None]

    run(story())


def test_a_limit_is_typed_and_the_answer_follows():
    """A parameter opens to its limits; a harder limit on hardness changes what is said of it."""

    async def story() -> None:
        app = await opened()
        job_id = await village(app)
        await app.go(f"/job/{job_id}/sources")
        await app.page.click(tappable(app, "Hardness"))
        await app.page.type("Hardness, at most", "14")
        assert app.page.reads("at most 14 °dH")
        assert app.workspace.sheets[job_id].parts["sources"].part.answers["blend"].amount.value < 14.001 * 0.178326

    run(story())


def test_the_list_of_jobs_shows_the_blend():
    """A job of several sources is known by its flows."""

    async def story() -> None:
        app = await opened()
        await village(app)
        assert "of Long Meadow well" in app.workspace.jobs.rows[0].summary

    run(story())


def test_jars_are_entered_where_they_are_shown():
    """The jar test stands under the dose, with a box for each jar; what is seen corrects the dose."""

    async def story() -> None:
        app = await opened()
        job_id = await village(app)
        await app.go(f"/job/{job_id}/dose")
        await app.page.settle(0.8)
        assert app.page.reads("Textbook residual (product rule)")
        assert app.page.reads("Equilibrium residual")
        assert app.page.reads("Practical residual")
        for number, seen in ((1, "14"), (2, "12"), (3, "9"), (4, "7")):
            await app.page.type(f"Hardness seen in jar {number}", seen)
        await app.page.settle(1.2)
        assert app.page.reads("Soda ash by the jars, as sold")

    run(story())
