"""What leaves the phone, with the network off: the job by code and by file to a second phone, the sheet as a PDF."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pypdf
import zxingcpp
from PIL import Image

from tests.browser.harness import STEP, Visit, phone, serving
from tests.browser.test_journeys import enter, plain_job, tap


def choose(visit: Visit, menu: str, entry: str):
    """Open a menu and pick an entry."""
    tap(visit, menu)
    visit.page.locator(f'[aria-label="{entry}"]').last.click(timeout=STEP)


def saved(visit: Visit, button: str, folder: Path) -> Path:
    """Tap a button that gives a file; where it was put."""
    with visit.page.expect_download(timeout=2 * STEP) as download:
        tap(visit, button)
    path = folder / download.value.suggested_filename
    download.value.save_as(path)
    return path


def back(visit: Visit, text: str):
    """One screen back."""
    visit.page.go_back()
    visit.wait_for(text)


def code_on(visit: Visit) -> str:
    """The link in the code on the screen, read by a decoder off a picture of it."""
    visit.page.wait_for_timeout(800)
    picture = np.asarray(Image.open(visit.screenshot("handover-code")).convert("L"))
    (found,) = zxingcpp.read_barcodes(picture)
    return found.text


def test_a_job_goes_to_another_phone_and_its_sheet_to_the_customer(site, playwright, tmp_path):
    """The PDF holds the job; the second phone gets it by the code, and a changed one by a file beside it."""
    with serving(site) as server:
        with phone(playwright, tmp_path / "one") as context:
            one = Visit(context)
            one.open(server.url, "Hardness reading")
            one.wait_until_offline_ready()
            context.set_offline(True)
            plain_job(one)
            one.page.wait_for_timeout(800)
            tap(one, "Back")
            one.wait_for("Name of the job")
            choose(one, "Hand over", "To another phone, or as a message")
            one.wait_for("QR code 1 of 1")
            link = code_on(one)
            back(one, "Name of the job")
            enter(one, "Name of the job", "Heron Lane 4")
            choose(one, "Hand over", "Customer’s sheet (PDF)")
            one.wait_for("Name of the firm")
            enter(one, "Name of the firm", "Brook & Vale")
            pdf = pypdf.PdfReader(saved(one, "Make the PDF", tmp_path))
            one.screenshot("handover-pdf")
            back(one, "Name of the job")
            choose(one, "Hand over", "To another phone, or as a message")
            file = saved(one, "Save as a file", tmp_path)
            assert one.errors == []
        text = pdf.pages[0].extract_text()
        assert all(words in text for words in ("Heron Lane 4", "Brook & Vale", "22.0", "What is proposed"))

        with phone(playwright, tmp_path / "two") as context:
            two = Visit(context)
            two.open(server.url, "Hardness reading")
            two.wait_until_offline_ready()
            context.set_offline(True)
            two.open(link.replace("#", "?again#"), "is new here.")
            two.screenshot("handover-arrived")
            tap(two, "Add to the list")
            two.wait_for("of softened water on an average day")
            tap(two, "Back")
            two.wait_for("Open a file")
            with two.page.expect_file_chooser(timeout=STEP) as chooser:
                tap(two, "Open a file")
            chooser.value.set_files(file)
            two.wait_for("Another version of “Heron Lane 4” is here.")
            two.wait_for("Heron Lane 4 (handed over)")
            tap(two, "Back")
            two.wait_for("Job without a name")
            assert two.errors == []


def scroll_to(visit: Visit, text: str):
    """Scroll until a text is in the tree."""
    for _ in range(20):
        if any(text in found for found in visit.texts()):
            return
        visit.page.mouse.move(300, 600)
        visit.page.mouse.wheel(0, 350)
        visit.page.wait_for_timeout(400)
    raise AssertionError(f"{text!r} did not appear. There is: {visit.texts()}")


def test_a_leaking_bypass_is_told_from_an_exhausted_bed(site, serve, visit):
    """Hard from the start: a leak. Soft at first and hard after too much water: the bed ran out."""
    server = serve(site)
    seen = visit()
    seen.open(server.url, "Hardness reading")
    plain_job(seen)
    tap(seen, "Back")
    seen.wait_for("Name of the job")
    choose(seen, "Hand over", "Sign-off")
    seen.wait_for("Softened, after a fresh regeneration")
    for fresh, late, since, cause in (
        ("3", "3", "500", "1. A bypass at the softener"),
        ("0.2", "9", "3000", "1. The bed ran out"),
    ):
        for label, text in (
            ("Raw water", "22"),
            ("Softened, after a fresh regeneration", fresh),
            ("Softened, now or at the end of the run", late),
            ("Water since the regeneration", since),
        ):
            enter(seen, label, text)
        scroll_to(seen, cause)
        seen.screenshot(f"signoff-{since}")
        seen.page.mouse.wheel(0, -9000)
        seen.page.wait_for_timeout(500)
    assert seen.errors == []
