"""How sure, and what to measure next, in the built app at phone size."""

from __future__ import annotations

from tests.browser.harness import STEP
from tests.browser.test_journeys import enter, field, tap

REPORT = """Gesamthärte 17 °dH
Calcium 92 mg/l
pH-Wert 7,4
Iron 0.2
Colour: none to speak of
"""


def test_a_strip_says_its_doubt_names_the_next_test_and_changes_its_mind(site, serve, visit):
    """A job on a strip reading: odds and the next test; drops are counted, and it is surer."""
    server = serve(site)
    seen = visit()
    seen.open(server.url, "Hardness reading")
    tap(seen, "New job")
    seen.wait_for("Water: answer")
    enter(seen, "Total hardness", "425 mg/L CaCO3")
    seen.wait_for("Very hard")
    tap(seen, "Where Total hardness comes from")
    tap(seen, "test strip, steps in mg/L")
    seen.wait_for("test strip, steps in mg/L.")
    tap(seen, "Next: Demand")
    seen.wait_for("Demand: answer")
    enter(seen, "Persons", "5")
    enter(seen, "Bathrooms", "2")
    tap(seen, "Next: Scale")
    tap(seen, "Next: Softener")
    seen.wait_for("of resin is enough")
    seen.wait_for("Measure the hardness more exactly")
    seen.screenshot("doubt-strip")
    tap(seen, "Next: Measure the hardness")
    seen.wait_for("Water: answer")
    tap(seen, "Where Total hardness comes from")
    tap(seen, "Count or average")
    enter(seen, "Drops 1", "21")
    tap(seen, "Read once more")
    enter(seen, "Drops 2", "22")
    seen.wait_for("Mean of 2")
    seen.screenshot("doubt-drops")
    tap(seen, "Take over")
    seen.wait_for("drop count, 20 mg/L a drop; mean of 2")
    assert field(seen, "Total hardness").input_value() in ("430", "")
    for _ in range(40):
        if not any("Measure the hardness" in text for text in seen.texts()):
            break
        seen.page.wait_for_timeout(500)
    assert not any("Measure the hardness" in text for text in seen.texts())
    seen.screenshot("doubt-surer")


def test_typing_is_not_held_up_while_it_is_worked_out(site, serve, visit):
    """Letters typed while the draws run all arrive, and the answer follows."""
    server = serve(site)
    seen = visit()
    seen.open(server.url, "Hardness reading")
    tap(seen, "Examples")
    tap(seen, "Mill Quay 12")
    seen.wait_for("Set the valve until 8.0")
    tap(seen, "Demand: ")
    seen.wait_for("Demand: answer")
    box = field(seen, "Persons")
    box.click(timeout=STEP)
    for text in ("12", "123", "1234"):
        box.fill("", timeout=STEP)
        seen.page.keyboard.type(text, delay=120)
        seen.page.wait_for_timeout(1100)  # long enough for the draws to have begun
        assert box.input_value() == text


def test_a_report_is_pasted_and_taken_over(site, serve, visit):
    """What was found stands beside its words; a question is answered; the entries say that they are from a report."""
    server = serve(site)
    seen = visit()
    seen.open(server.url, "Hardness reading")
    tap(seen, "New job")
    seen.wait_for("Water: answer")
    tap(seen, "Paste a report")
    seen.wait_for("Text of the report")
    seen.page.wait_for_timeout(600)
    box = seen.page.get_by_role("textbox", name="Text of the report")  # with its hint once it has the focus
    box.click(timeout=STEP)
    box.fill(REPORT, timeout=STEP)
    seen.wait_for("from “Gesamthärte 17 °dH”")
    seen.screenshot("doubt-paste")
    tap(seen, "0.2\u00a0mg/L Fe")
    tap(seen, "Take over 4 entries")
    seen.wait_for("4 entries taken over.")
    assert field(seen, "Total hardness").input_value() in ("17", "")
    seen.wait_for("from a report")
