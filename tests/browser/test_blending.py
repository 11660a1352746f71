"""What an operator does at a wellhead, in the built app: flows within limits, a well off, a dose for a tank."""

from __future__ import annotations

from tests.browser.test_journeys import enter, tap


def test_an_operator_blends_three_sources_and_loses_one(site, serve, visit):
    """Flows for a hardness with nitrate held, the limit that binds, a source off, and why it cannot be done."""
    server = serve(site)
    seen = visit()
    seen.open(server.url, "Hardness reading")
    tap(seen, "Examples")
    tap(seen, "Two wells and a spring")
    seen.wait_for("Name of the job")
    tap(seen, "Sources: ")
    seen.wait_for("Held back by hardness and nitrate")
    tap(seen, "Switch Upper Fold spring off")
    seen.wait_for("It cannot be done")
    seen.screenshot("blending-cannot")
    tap(seen, "Switch Upper Fold spring on")
    seen.wait_for("Held back by hardness and nitrate")

    tap(seen, "Church Field well: ")
    seen.wait_for("Name of the source")
    enter(seen, "Nitrate", "20")
    seen.wait_for("Held back by hardness.")
    seen.screenshot("blending-source")

    assert seen.errors == []
    assert seen.foreign(server) == []


def test_a_dose_of_soda_ash_for_a_tank(site, serve, visit):
    """A section is added; textbook, equilibrium and practice stand side by side, with what to weigh in."""
    server = serve(site)
    seen = visit()
    seen.open(server.url, "Hardness reading")
    tap(seen, "New job")
    seen.wait_for("Water: answer")
    for label, text in (("Total hardness", "22 °dH"), ("pH", "7.3"), ("Alkalinity", "6.0")):
        enter(seen, label, text)
    seen.page.go_back()
    seen.wait_for("Job without a name")
    tap(seen, "Job without a name")
    seen.wait_for("Name of the job")
    tap(seen, "Add or remove sections")
    tap(seen, "Add Dose")
    seen.wait_for("Enter the hardness wanted after dosing")
    tap(seen, "Dose: ")
    seen.wait_for("Dose: answer")
    enter(seen, "Hardness wanted after dosing", "8")
    enter(seen, "Tank dosed at once", "2000")
    for words in ("Practical residual", "Textbook residual (product rule)", "Equilibrium residual"):
        seen.wait_for(words)
    seen.screenshot("dose-tank")
    tap(seen, "Soda ash, for the tank: 0.53")
    seen.wait_for("used = volume × dose")

    assert seen.errors == []
