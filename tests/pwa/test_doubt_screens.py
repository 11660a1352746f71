"""How sure an entry and an answer are, on a page without a browser."""

import asyncio

import flet as ft

from core.job.answers import Amount
from core.job.record import Entry, Job
from pwa.services.host import NativeHost
from pwa.state.unit_sets import with_own_unit
from pwa.state.workspace import Workspace
from pwa.text import GAP
from tests.pwa.fake_page import FakePage
from tests.pwa.services.loops import run
from tests.pwa.test_screens import opened


async def tap_on(page: FakePage, label: str) -> None:
    """Tap what is read aloud as this."""
    for control in reversed(list(page.controls())):
        if isinstance(control, ft.Semantics) and control.on_tap and (control.label or "").startswith(label):
            await page.session.dispatch_event(control._i, "tap", None)
            await page.settle()
            return
    raise AssertionError(f"nothing called {label!r} to tap on")


async def press(page: FakePage, words: str) -> None:
    """Press the first button with these words."""
    for control in page.controls():
        if isinstance(control, ft.Button | ft.TextButton | ft.OutlinedButton | ft.FilledButton) and (
            str(control.content).startswith(words)
        ):
            await page.click(control)
            return
    raise AssertionError(f"no button {words!r}")


async def kept(app, job_id: str, key: str):
    """The entry as it is kept."""
    await app.page.settle(0.5)
    return Job.from_text((await app.storage.load(job_id)).document).entries[key]


def test_the_kit_is_kept_and_its_doubt_is_said():
    """22 gpg by a drop count may be 20.5 to 23.5 gpg: one drop and 5 %, √(1² + 1.1²) = 1.49."""

    async def story() -> None:
        app = await opened()
        job_id = await app.workspace.new()
        await app.go(f"/job/{job_id}/water")
        await app.page.type("Total hardness", "22 gpg")
        await tap_on(app.page, "Where Total hardness comes from")
        await tap_on(app.page, "drop count, 1 gpg a drop")
        assert app.page.reads("20.5")
        assert app.page.reads("23.5")
        assert (await kept(app, job_id, "water.hardness")).kit == "drop count, 1 gpg a drop"
        await tap_on(app.page, "Where Total hardness comes from")
        await tap_on(app.page, "told by the customer")
        assert (await kept(app, job_id, "water.hardness")).kit == ""

    run(story())


def test_drops_counted_fill_the_entry():
    """Three counts of a diluted sample are averaged, and the entry says how it was read."""

    async def story() -> None:
        app = await opened()
        job_id = await app.workspace.new()
        await app.workspace.set(unit_set="us")
        await app.go(f"/job/{job_id}/water")
        await press(app.page, "Count drops")
        await app.page.type("Drops 1", "11")
        await press(app.page, "Read once more")
        await app.page.type("Drops 2", "12")
        await app.page.type("Dilution", "2")
        assert app.page.reads("Mean of 2")
        await press(app.page, "Take over")
        entry = await kept(app, job_id, "water.hardness")
        assert entry.value == 23.0
        assert "diluted 2 times" in entry.kit
        assert "mean of 2" in entry.kit

    run(story())


def test_a_reading_that_does_not_belong_is_pointed_out():
    """20, 20, 21 and 30 drops: the last is named, and can be left out by a tap."""

    async def story() -> None:
        app = await opened()
        job_id = await app.workspace.new()
        await app.go(f"/job/{job_id}/water")
        await press(app.page, "Count drops")
        for number, count in enumerate(("20", "20", "21", "20", "30"), start=1):
            if number > 1:
                await press(app.page, "Read once more")
            await app.page.type(f"Drops {number}", count)
        assert app.page.reads("Reading 5 (30) does not belong")
        await press(app.page, "Leave it out")
        assert not app.page.reads("does not belong")

    run(story())


async def until(app, condition, most: float = 20.0) -> None:
    """Wait until something holds."""
    for _ in range(int(most / 0.1)):
        await app.page.settle(0.1)
        if condition():
            return
    raise AssertionError(f"it did not come to hold; there is: {app.page.texts()}")


STRIP = {
    "water.hardness": Entry(425.0, "mg/L CaCO3", "measured", "test strip, steps in mg/L"),
    "demand.persons": Entry(5.0),
    "demand.bathrooms": Entry(2.0),
}


async def strip_job(app):
    """The sheet of a job that rests on a strip, on the screen of its softener."""
    job_id = await app.workspace.add_copy(Job(id="", entries=STRIP))
    await app.go(f"/job/{job_id}/softener")
    sheet = app.workspace.sheets[job_id]
    await until(app, lambda: sheet.sure["softener"].known)
    return sheet


def test_a_job_on_strip_readings_says_how_sure_it_is_and_what_to_measure():
    """Odds of the size, the next test by name; the same once more, and another once that test is entered."""

    async def story() -> None:
        app = await opened()
        sheet = await strip_job(app)
        assert app.page.reads("of resin is enough")
        advised = sheet.sure["softener"].next
        assert advised is not None
        assert advised.field == "water.hardness"
        assert app.page.reads(app.workspace.display(sheet).say(advised.words))
        again = await strip_job(app)
        assert again.sure["softener"].odds == sheet.sure["softener"].odds
        assert again.parts["softener"].part.headline.band == sheet.parts["softener"].part.headline.band
        again.set_source("water.hardness", "measured", "digital titrator, 1 mg/L a count")
        assert again.sure["softener"].stale
        await until(app, lambda: not again.sure["softener"].stale)
        assert again.sure["softener"].odds != sheet.sure["softener"].odds

    run(story())


def test_a_new_name_changes_no_odds():
    """What was worked out stays when only the name of the job changes."""

    async def story() -> None:
        app = await opened()
        sheet = await strip_job(app)
        before = sheet.sure["softener"].odds
        sheet.rename(name="Lane 4")
        await until(app, lambda: not sheet.sure["softener"].stale, most=2.0)
        assert sheet.sure["softener"].odds == before
        assert sheet.parts["softener"].part.headline.band is not None

    run(story())


def test_what_is_odd_stands_beside_its_entry_and_on_the_sheet():
    """300 gpg is taken for a slip of the unit; once it is put right, nothing is odd any more."""

    async def story() -> None:
        app = await opened()
        job_id = await app.workspace.new()
        await app.go(f"/job/{job_id}/water")
        await app.page.type("Total hardness", "300 gpg")
        await app.page.settle(0.6)
        assert app.page.reads("did you mean 300 mg/L CaCO3?")
        await app.go(f"/job/{job_id}")
        assert app.page.reads("Look again")
        app.workspace.sheets[job_id].type("water.hardness", "300 mg/L CaCO3")
        await app.page.settle(0.6)
        assert not app.page.reads("Look again")

    run(story())


REPORT = """Waterworks Example, sample of 3 May
Gesamthärte 17 °dH
Calcium 92 mg/l
pH 7,4
Iron 0.2
Colour: none to speak of
"""


def test_a_pasted_report_is_confirmed_value_by_value():
    """Each value beside its words, a question where it is open, the rest in sight; and it can be undone."""

    async def story() -> None:
        app = await opened()
        job_id = await app.workspace.add_copy(Job(id="", entries={"water.ph": Entry(7.1, "", "measured", "pH meter")}))
        await app.go(f"/job/{job_id}/paste")
        await app.page.type("Text of the report", REPORT)
        await app.page.settle(0.5)
        assert app.page.reads(f"Total hardness: 17{GAP}°dH")
        assert app.page.reads("from “Calcium 92 mg/l”")
        assert app.page.reads("The job holds 7.1, measured")
        assert app.page.reads("Take over 2 entries")
        await tap_on(app.page, f"0.2{GAP}mg/L Fe")
        await press(app.page, "Take over 3 entries")
        sheet = app.workspace.sheets[job_id]
        held = {key: (entry.value, entry.unit, entry.source) for key, entry in sheet.job.entries.items()}
        assert held == {
            "water.hardness": (17.0, "°dH", "report"),
            "water.calcium": (92.0, "mg/L Ca", "report"),
            "water.iron": (0.2, "mg/L Fe", "report"),
            "water.ph": (7.1, "", "measured"),
        }
        await app.workspace.notice.undo()
        assert set(sheet.job.entries) == {"water.ph"}

    run(story())


def test_an_own_kit_is_kept_offered_first_and_counts():
    """A kit of the user's own: half a grain a drop; 20 drops are 10 gpg, and the next start still knows it."""

    async def story() -> None:
        app = await opened()
        await app.go("/settings")
        await press(app.page, "Add a kit")
        assert app.page.reads("Give the kit a name.")
        await app.page.type("Name", "my half-grain kit")
        assert app.page.reads("Enter what a drop is worth")
        await app.page.type("A drop is worth, gpg", "0,5")
        await press(app.page, "Keep this kit")
        again = Workspace(lambda: asyncio.sleep(0, app.storage), app.files, NativeHost())
        await again.open()
        assert [(kit.words, kit.resolution, kit.unit) for kit in again.preferences.own_kits] == [
            ("my half-grain kit", 0.5, "gpg")
        ]
        job_id = await app.workspace.add_copy(Job(id="", entries={"water.hardness": Entry(10.0, "gpg", "measured")}))
        await app.go(f"/job/{job_id}/water")
        await tap_on(app.page, "Where Total hardness comes from")
        await tap_on(app.page, "my half-grain kit")
        assert app.page.reads(f"9.5 to 10.5{GAP}gpg")
        state = app.workspace.sheets[job_id].fields["water.hardness"]
        await app.workspace.remove_kit("my half-grain kit")
        assert state.doubt.amounts["lowest"].value == 9.0  # as of a kit that is not named: 10 %, at least 1 gpg
        await app.workspace.notice.undo()
        assert state.doubt.amounts["lowest"].value == 9.5

    run(story())


def test_units_follow_the_set_and_what_was_chosen_before_it():
    """French: hardness in °fH, pressure in bar; then flow alone in gallons a minute."""

    async def story() -> None:
        app = await opened()
        await app.workspace.set(unit_set="fr", own_units=with_own_unit("", "flow", "gpm"))
        display = app.workspace.display()
        assert display.show(Amount(1.0, "mmol/L", "hardness")) == f"10.0{GAP}°fH"  # 1 °fH = 10 mg/L CaCO3 = 0.1 mmol/L
        assert display.show(Amount(100.0, "kPa", "pressure")).endswith("bar")
        assert display.show(Amount(3.785411784, "L/min", "flow")) == f"1.0{GAP}gpm"  # the US gallon, exact
        assert display.unit_of(Amount(1.0, "L/day", "flow", "daily volume")) == "L/day"

    run(story())
