"""The Dose section: the dose of the books, three residuals, what the operator sets, what is refused."""

import pytest

from core.job import Entry, Job, assess
from core.job.dose import CHEMICALS, assess_dose
from core.job.dose_formulas import settled_after
from core.job.fields import CHOICES
from core.treatment import dosing
from core.treatment.precipitation import book_dose
from core.treatment.precipitation_water import raw_water

WATER = {
    "water.hardness": Entry(22.0, "°dH", "measured"),
    "water.ph": Entry(7.3, "", "measured"),
    "water.alkalinity": Entry(6.0, "mmol/L K_S4.3", "measured"),
    "water.temperature": Entry(10.0, "°C", "measured"),
    "dose.target": Entry(8.0, "°dH", "told"),
}
PROCESSES = [value for value, _ in CHOICES["dose.process"].options]


def job(process="soda", choices=(), **changes):
    """A job with a dose; entries by name, dots as two underscores; None takes one out."""
    entries = dict(WATER)
    for name, entry in changes.items():
        entries.pop(name.replace("__", "."), None)
        if entry is not None:
            entries[name.replace("__", ".")] = entry
    return Job("test", entries=entries, choices={"dose.process": process, **dict(choices)})


def value(part, key):
    """The number of an answer."""
    return part.answers[key].amount.value


def test_soda_ash_by_hand():
    """14 °dH to remove is 2.4966 mmol/L: 264.6 mg/L of pure soda ash, 266.7 at 99.2 %, 5.33 kg for 20 m³."""
    part = assess(job(dose__tank=Entry(20.0, "m³", "told"))).dose

    removed = 14.0 * 0.178326  # mmol/L; 1 °dH = 10 mg/L CaO, 56.077 g/mol
    assert value(part, "soda_ash") == pytest.approx(removed * 105.988 / 0.992, rel=1e-4)
    assert value(part, "soda_ash_tank") == pytest.approx(removed * 105.988 / 0.992 * 20.0 / 1000.0, rel=1e-4)
    assert value(part, "sodium_added") == pytest.approx(2.0 * 22.990 * removed, rel=1e-4)


@pytest.mark.parametrize("process", PROCESSES)
def test_the_steps_lead_to_the_dose_of_the_books(process):
    """The working, formula by formula, gives the amounts that the treatment gives in one call."""
    found = assess_dose(job(process))
    book = book_dose(process, raw_water(found.water), found.goal, found.excess)

    assert book == found.book
    for fed in found.fed:
        assert fed.pure == pytest.approx(getattr(book.dose, fed.chemical) * fed.product.molar_mass, rel=1e-12)
    fed_at_all = {fed.chemical for fed in found.fed}
    assert fed_at_all == {name for name in CHEMICALS[process] if getattr(book.dose, name) > 1e-9}


@pytest.mark.parametrize("process", PROCESSES)
def test_three_residuals_side_by_side(process):
    """Textbook, equilibrium and practice are told apart, and practice is never below equilibrium before CO2 helps."""
    found = assess_dose(job(process))
    part = found.part
    dose = found.book.dose

    settled = settled_after(found.water, dose.soda_ash, dose.lime, dose.caustic)
    assert value(part, "equilibrium") == pytest.approx(settled.hardness)
    assert value(part, "textbook") == pytest.approx(found.book.hardness, abs=0.07)  # √Ksp, 0.065 mmol/L at 10 °C
    assert value(part, "textbook") > found.book.hardness
    assert [mark.name for mark in part.headline.marks] == ["textbook", "equilibrium", "wanted"]
    if not found.book.excess:
        assert value(part, "practice") >= value(part, "equilibrium") * (1.0 - 1e-12)


def test_a_cold_solution_is_refused_with_what_dissolves():
    """Nobody mixes 20 % of soda ash at 5 °C: a sentence by the entry, and no pump setting."""
    held = job(
        dose__flow=Entry(40.0, "L/min", "told"),
        dose__soda_strength=Entry(20.0, "%", "told"),
        dose__solution_temperature=Entry(5.0, "°C", "told"),
    )
    part = assess(held).dose

    assert "soda_ash_feed" not in part.answers
    assert any("dissolves" in p.text and p.field == "dose.soda_strength" for p in part.problems)
    warm = held.with_entry("dose.solution_temperature", Entry(30.0, "°C", "told"))
    assert "soda_ash_feed" in assess(warm).dose.answers


def test_pump_and_bags_by_hand():
    """Feed = flow × dose ÷ (strength × density); a setting of its capacity; a bag over the day's kilograms."""
    held = job(
        dose__flow=Entry(40.0, "L/min", "told"),
        dose__volume=Entry(20.0, "m³/day", "told"),
        dose__soda_strength=Entry(8.0, "%", "told"),
        dose__pump_capacity=Entry(200.0, "", "told"),
    )
    part = assess(held).dose
    pure = 14.0 * 0.178326 * 105.988

    feed = 40.0 * pure / (0.08 * dosing.solution_density("soda_ash", 0.08) * 1000.0)
    assert value(part, "soda_ash_feed") == pytest.approx(feed, rel=1e-4)
    assert value(part, "soda_ash_setting") == pytest.approx(feed / 200.0, rel=1e-4)
    assert value(part, "soda_ash_daily") == pytest.approx(pure / 0.992 * 20.0 / 1000.0, rel=1e-4)
    days = part.answers["soda_ash_daily"].words.amounts["days"].value
    assert days == pytest.approx(25.0 / (pure / 0.992 * 20.0 / 1000.0), rel=1e-4)


def test_quicklime_is_fed_as_the_lime_it_turns_into():
    """The same slurry feed, less product by 56.08 / 74.09, other purity."""
    flow = {"dose__flow": Entry(40.0, "L/min", "told")}
    hydrated = assess(job("lime", **flow)).dose
    quick = assess(job("lime", (("dose.lime", "quicklime"),), **flow)).dose

    assert value(quick, "lime_feed") == pytest.approx(value(hydrated, "lime_feed"), rel=1e-9)
    assert value(quick, "lime") * 0.90 / (value(hydrated, "lime") * 0.93) == pytest.approx(56.077 / 74.092, rel=1e-4)


@pytest.mark.parametrize(
    ("process", "changes", "field"),
    [
        ("soda", {"dose__target": Entry(1.0, "°dH", "told")}, "dose.target"),  # magnesium alone is harder
        ("soda", {"dose__target": Entry(25.0, "°dH", "told")}, "dose.target"),  # softer already
        ("lime", {"dose__target": Entry(-1.0, "°dH", "told")}, "dose.target"),
    ],
)
def test_what_cannot_be_is_said_by_the_entry(process, changes, field):
    """No dose, and a sentence where the user can act on it."""
    part = assess(job(process, **changes)).dose

    assert not part.answers
    assert [problem.field for problem in part.problems] == [field]


def test_lime_alone_says_when_it_cannot_come_down_so_far():
    """Hardness that bicarbonate does not hold stays: the answer is marked, and says so."""
    part = assess(job("lime", water__alkalinity=Entry(2.0, "mmol/L K_S4.3", "measured"))).dose

    assert part.headline.tone == "watch"
    assert "cannot come down" in part.headline.words.text


def test_cautions_follow_the_chemical():
    """Burns for what burns, heat for quicklime, sodium for what adds it; licence, certificates and sludge always."""
    soda, lime, caustic = ({c.key for c in assess(job(p)).dose.cautions} for p in ("soda", "lime", "caustic"))
    quick = {c.key for c in assess(job("lime", (("dose.lime", "quicklime"),))).dose.cautions}

    assert "caustic_burns" in caustic - soda - lime
    assert "lime_burns" in lime - soda
    assert "slaking" in quick - lime
    assert "sodium_dosed" in soda - lime
    for keys in (soda, lime, caustic):
        assert {"certified_feed", "licensed_operator", "sludge", "never_together", "high_ph"} <= keys


def test_co2_brings_the_finished_water_to_its_ph():
    """In one stage and in two: the pH asked for, CO2 counted, and a pH far above it before."""
    for stages in ("1", "2"):
        part = assess(job("excess-lime-soda", (("dose.stages", stages),))).dose_water
        assert value(part, "ph") > 10.5
        assert value(part, "ph_after") == pytest.approx(8.5, abs=0.01)
        assert value(part, "co2") > 10.0
    assert "co2" not in assess(job("excess-lime-soda")).dose_water.answers


def test_six_jars_and_what_was_seen_in_them():
    """Jars grow in dose; a target seen between two jars gives the dose between them, by a straight line."""
    plain = assess(job()).jars
    assert [key for key in plain.answers if key.startswith("jar_")] == [f"jar_{n}" for n in range(1, 7)]
    assert "corrected" not in plain.answers

    seen = {f"dose__jar_{n}": Entry(h, "°dH", "measured") for n, h in enumerate((15, 13, 11, 9, 7, 6), 1)}
    assessment = assess(job(**seen))
    computed = value(assessment.dose, "soda_ash")
    assert value(assessment.jars, "corrected") == pytest.approx(1.3 * computed, rel=1e-9)  # jars 4 and 5: 1.2 and 1.4


def test_jars_that_never_reach_the_target_say_so():
    """Nothing is promised beyond what the curve reaches."""
    seen = {f"dose__jar_{n}": Entry(20.0, "°dH", "measured") for n in range(1, 7)}
    jars = assess(job(**seen)).jars

    assert "corrected" not in jars.answers
    assert any("not reached" in problem.text for problem in jars.problems)


@pytest.mark.parametrize("process", PROCESSES)
@pytest.mark.parametrize("part", ["dose", "dose_water", "jars"])
def test_every_step_can_be_recomputed(process, part):
    """What the working shows is what was computed; no answer is without it."""
    full = {"dose__flow": Entry(40.0, "L/min", "told"), "dose__volume": Entry(9000.0, "L/day", "told")}
    full |= {"dose__batch": Entry(100.0, "L", "told"), "dose__jar_3": Entry(9.0, "°dH", "measured")}
    for answer in getattr(assess(job(process, **full)), part).answers.values():
        assert answer.steps, answer.key
        for step in answer.steps:
            assert step.function(**step.inputs) == step.result, step.card.quantity
