"""What a user does, in the built app at phone size: from a reading to an answer, with no signal, and back again."""

from __future__ import annotations

import pytest

from tests.browser.harness import STEP, Visit, phone, serving


def field(visit: Visit, label: str):
    """A box to type in."""
    return visit.page.get_by_role("textbox", name=label, exact=True)


def tap(visit: Visit, name: str):
    """Tap a button, scrolled to where it is not in sight."""
    button = visit.page.get_by_role("button", name=name)
    size = visit.page.viewport_size
    for _ in range(12):
        box = button.first.bounding_box() if button.count() else None
        if box and box["y"] + box["height"] < size["height"] * 0.9:
            break
        visit.page.mouse.move(size["width"] * 0.8, size["height"] * 0.7)
        visit.page.mouse.wheel(0, size["height"] * 0.4)
        visit.page.wait_for_timeout(400)
    button.first.click(timeout=STEP)


def enter(visit: Visit, label: str, text: str):
    """Type into a box, replacing what is there; once more where the screen was still sliding in."""
    box = field(visit, label)
    for _ in range(3):
        box.click(timeout=STEP)
        box.fill(text, timeout=STEP)
        visit.page.wait_for_timeout(300)
        if box.input_value() == text:
            return
    raise AssertionError(f"{label} reads {box.input_value()!r}, not {text!r}")


def plain_job(visit: Visit):
    """The job of the first page of the manual: 22 gpg, 1 mg/L of iron, four people, two bathrooms."""
    tap(visit, "New job")
    visit.wait_for("Water: answer")
    enter(visit, "Total hardness", "22 gpg")
    visit.wait_for("Very hard")
    enter(visit, "Dissolved iron", "1")
    tap(visit, "Next: Demand")
    visit.wait_for("Demand: answer")
    enter(visit, "Persons", "4")
    enter(visit, "Bathrooms", "2")
    visit.wait_for("of softened water")


def test_from_a_reading_to_a_size_a_setting_and_a_blend(site, serve, visit):
    """A stranger's first job: size, salt setting, days between, working, blend; and it is said in US units."""
    server = serve(site)
    seen = visit()
    seen.open(server.url, "Hardness reading")
    plain_job(seen)
    seen.screenshot("journey-demand")
    tap(seen, "Next: Scale")
    seen.wait_for("Enter the pH")
    tap(seen, "Next: Softener")
    seen.wait_for("regenerates every 3.1 days")
    seen.screenshot("journey-softener")

    tap(seen, "Next: Blend")
    seen.wait_for("Blend: answer")
    enter(seen, "Hardness wanted at the taps", "6")
    seen.wait_for("27")

    seen.screenshot("journey-blend")
    assert seen.errors == []
    assert seen.foreign(server) == []


def test_the_strip_follows_the_typing(site, serve, visit):
    """The answer above changes with each entry below; nothing needs to be pressed."""
    server = serve(site)
    seen = visit()
    seen.open(server.url, "Hardness reading")
    tap(seen, "New job")
    seen.wait_for("Water: answer")
    for typed, said in (("3", "Soft"), ("21", "Hard"), ("12,5", "Medium"), ("x", "is not a number"), ("21", "Hard")):
        enter(seen, "Total hardness", typed)
        seen.wait_for(said)


def test_letters_typed_one_by_one_all_arrive(site, serve, visit):
    """A field keeps every key, also the first, after which the source of the entry appears under it."""
    server = serve(site)
    seen = visit()
    seen.open(server.url, "Hardness reading")
    tap(seen, "New job")
    seen.wait_for("Water: answer")
    for label, text in (("Total hardness", "21.75"), ("pH", "7.45"), ("Dissolved iron", "0,35")):
        field(seen, label).click(timeout=STEP)
        seen.page.keyboard.type(text, delay=40)
        seen.page.wait_for_timeout(700)
        assert field(seen, label).input_value() == text


def test_working_is_one_tap_away(site, serve, visit):
    """An answer opens to the readings it began from, its formulas and their sources."""
    server = serve(site)
    seen = visit()
    seen.open(server.url, "Hardness reading")
    plain_job(seen)
    seen.page.get_by_role("button", name="Softened water a day").scroll_into_view_if_needed(timeout=STEP)
    tap(seen, "Softened water a day")
    seen.wait_for("volume = persons × use per person × share softened")

    seen.screenshot("journey-working")


def test_a_sample_opens_as_a_job(site, serve, visit):
    """An example gives a whole sheet of answers at once, also after a reload."""
    server = serve(site)
    seen = visit()
    seen.open(server.url, "Hardness reading")
    tap(seen, "Examples")
    tap(seen, "Mill Quay 12")
    seen.wait_for("Set the valve until 8.0")
    seen.wait_for("So much lime a year")

    seen.screenshot("journey-sample")
    seen.reload("Set the valve until 8.0")


def test_offline_closed_and_reopened_the_job_is_as_it_was(site, playwright, tmp_path):
    """The network goes, the browser is closed and started again: the job is there, and answers change offline."""
    profile = tmp_path / "profile"
    with serving(site) as server:
        with phone(playwright, profile) as context:
            seen = Visit(context)
            seen.open(server.url, "Hardness reading")
            seen.wait_until_offline_ready()
            plain_job(seen)
            seen.page.wait_for_timeout(1000)
        server.down = True
        with phone(playwright, profile) as context:
            context.set_offline(True)
            seen = Visit(context)
            seen.open(server.url, "Job without a name")
            tap(seen, "Job without a name")
            seen.wait_for("Demand: ")
            seen.screenshot("journey-offline")
            tap(seen, "Demand: ")
            seen.wait_for("Demand: answer")
            assert field(seen, "Persons").input_value() in ("4", "")
            enter(seen, "Persons", "8")
            seen.wait_for("469")


@pytest.mark.parametrize(("width", "height"), [(360, 640), (820, 1180), (1366, 768)])
def test_other_screens(site, serve, visit, width, height):
    """The smallest phone, a tablet, a desk: the sheet and its sections can be used; a wide one shows both."""
    server = serve(site)
    seen = visit(viewport={"width": width, "height": height})
    seen.open(server.url, "Hardness reading")
    tap(seen, "Examples")
    tap(seen, "Mill Quay 12")
    seen.wait_for("Name of the job")
    if width >= 840:
        seen.wait_for("Water: answer")
    seen.screenshot(f"screen-{width}-sheet")


@pytest.mark.parametrize(("ground", "text"), [("Dark", "Usual"), ("Light", "Twice the size")])
def test_dark_and_large(site, serve, visit, ground, text):
    """Dark ground and text twice the size are kept and used at once."""
    server = serve(site)
    seen = visit()
    seen.open(server.url + "#/settings", "Ground")
    for setting, value in (("Ground", ground), ("Text size", text)):
        seen.page.get_by_role("button", name=setting).first.click(timeout=STEP)
        seen.page.locator(f'[aria-label="{value}"]').last.click(timeout=STEP)
        seen.page.wait_for_timeout(400)
    seen.open(server.url + "?again", "Hardness reading")
    tap(seen, "Examples")
    tap(seen, "Mill Quay 12")
    seen.wait_for("Name of the job")
    seen.page.wait_for_timeout(1500)

    seen.screenshot(f"looks-{ground}-{text.replace(' ', '-')}".lower())
