"""How sure an entry and an answer are, on a page without a browser."""

import flet as ft

from core.job.record import Job
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
        await app.page.type("Sample filled up to … times its volume", "2")
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
