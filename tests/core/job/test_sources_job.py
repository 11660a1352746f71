"""The Sources section: flows by an outside solver, what binds, what blocks, what is missing, a card for each case."""

from pathlib import Path

import numpy as np
import pytest
from scipy.optimize import linprog

from core.job import Entry, Job, assess
from core.job.fields import choice_for, field_for, sections_of
from core.job.source_fields import parameters_of, source_numbers
from core.units import convert

VILLAGE = Path(__file__).resolve().parents[3] / "sample_tests" / "village-with-two-wells-and-a-spring.json"
HARDNESS, NITRATE, COST, MOST = (22.0, 13.0, 4.5), (9.0, 74.0, 3.0), (0.09, 0.06, 0.41), (60.0, 90.0, 70.0)


def village(entries=(), choices=()):
    """The sample village with entries and choices changed; None takes one out."""
    job = Job.load(VILLAGE)
    for key, entry in dict(entries).items():
        job = job.with_entry(key, entry)
    for key, choice in dict(choices).items():
        job = job.with_choice(key, choice)
    return job


def flows(part):
    """Flow of each source. [L/min]"""
    return [part.answers[f"flow_{n}"].amount.value for n in (1, 2, 3)]


def by_scipy(demand=120.0, hardness=12.0, nitrate=30.0, most=MOST):
    """Flows and cost by a general solver (scipy, HiGHS), in the units of the report."""
    found = linprog(
        COST,
        A_ub=[HARDNESS, NITRATE],
        b_ub=[hardness, nitrate],
        A_eq=[[1.0, 1.0, 1.0]],
        b_eq=[1.0],
        bounds=[(0.0, each / demand) for each in most],
    )
    return None if found.status == 2 else (found.x * demand, found.fun)


@pytest.mark.parametrize("hardness", [10.0, 12.0, 15.0])
@pytest.mark.parametrize("demand", [80.0, 120.0])
def test_flows_and_cost_as_a_general_solver_has_them(hardness, demand):
    """The least cost within hardness and nitrate, to a hundred-millionth."""
    wanted = {"sources.high.hardness": Entry(hardness, "°dH", "told"), "sources.demand": Entry(demand, "L/min", "told")}
    part = assess(village(wanted)).sources
    expected, cost = by_scipy(demand, hardness)

    assert flows(part) == pytest.approx(expected, rel=1e-6, abs=1e-6)
    assert part.answers["cost"].amount.value == pytest.approx(cost, rel=1e-8)


def test_which_limits_bind_and_what_they_cost():
    """Hardness and nitrate hold the blend back; easing nitrate by a tenth saves as much; sodium does not."""
    part = assess(village()).sources
    _, cost = by_scipy()
    _, eased = by_scipy(nitrate=33.0)

    assert part.headline.words.text.endswith("Held back by hardness and nitrate.")
    nitrate = part.answers["limit_nitrate"].words
    assert nitrate.amounts["saved"].value == pytest.approx(cost - eased, rel=1e-6)
    assert nitrate.amounts["eased"].value == pytest.approx(33.0, rel=1e-9)
    assert "spare" in part.answers["limit_sodium"].words.text


def test_a_source_switched_off_says_why_it_cannot_be_done():
    """Without the soft spring no blend keeps the hardness: that limit is named, the nearest blend is given."""
    part = assess(village(choices={"sources.3.on": "off"})).sources

    assert by_scipy(most=(60.0, 90.0, 0.0)) is None
    assert part.headline.tone == "bad"
    text = part.headline.words.text
    assert text.startswith("It cannot be done. Hardness at most {block_0} cannot be kept.")
    assert flows(part)[2] == 0.0
    assert sum(flows(part)) == pytest.approx(120.0)
    excess = part.headline.words.amounts
    assert excess["value_0"].value - excess["by_0"].value == pytest.approx(excess["block_0"].value, rel=1e-9)


def test_what_a_limit_would_have_to_be():
    """The hardness at which it would fit is the least that a general solver finds with all else kept."""
    part = assess(village({"sources.high.hardness": Entry(5.0, "°dH", "told")})).sources
    least = linprog(
        HARDNESS,
        A_ub=[NITRATE],
        b_ub=[30.0],
        A_eq=[[1.0, 1.0, 1.0]],
        b_eq=[1.0],
        bounds=[(0.0, each / 120.0) for each in MOST],
    ).fun

    fit = part.answers["fit_hardness_high"].amount
    assert convert(fit.value, fit.unit, "°dH", quantity="hardness") == pytest.approx(least, rel=1e-8)


def test_too_little_water_is_said_in_litres():
    """What the sources give, and what is short."""
    part = assess(village({"sources.demand": Entry(300.0, "L/min", "told")})).sources

    assert part.headline.tone == "bad"
    assert part.headline.words.amounts["most"].value == pytest.approx(220.0)
    assert part.headline.words.amounts["short"].value == pytest.approx(80.0)


def test_a_limit_on_what_was_not_measured_asks_for_the_readings():
    """Never taken for kept: each source is named, and nothing is computed."""
    part = assess(village({"sources.high.iron": Entry(0.2, "mg/L Fe", "told")})).sources

    assert not part.answers
    assert {missing.field for missing in part.missing} == {f"sources.{n}.iron" for n in (1, 2, 3)}


def test_limits_of_the_rules_give_way_to_those_typed():
    """The EU's 50 mg/L of nitrate holds only until somebody types 30."""
    typed = assess(village()).sources.answers["limit_nitrate"]
    ruled = assess(village({"sources.high.nitrate": None})).sources.answers["limit_nitrate"]

    assert [mark.at.value for mark in typed.marks] == pytest.approx([30.0])
    assert [mark.at.value for mark in ruled.marks] == pytest.approx([50.0])
    assert "directive" in ruled.words.text


def test_nearest_to_a_target_and_most_margin():
    """A target that can be met is met; the most margin is more than the cheapest blend has."""
    wanted = {"sources.target.hardness": Entry(10.0, "°dH", "told")}
    aimed = assess(village(wanted, {"sources.aim": "target"})).sources
    assert np.dot(HARDNESS, flows(aimed)) / 120.0 == pytest.approx(10.0, rel=1e-6)

    spare = [
        min(1.0 - np.dot(HARDNESS, f) / 120.0 / 12.0, 1.0 - np.dot(NITRATE, f) / 120.0 / 30.0)
        for f in (flows(assess(village(choices={"sources.aim": aim})).sources) for aim in ("cost", "margin"))
    ]
    assert spare[1] > spare[0] + 0.05


def test_mixed_waters_that_dissolve_lime_are_pointed_out():
    """The hard well drops lime, the spring dissolves it; the mixture's own balance is computed and said."""
    part = assess(village()).sources

    assert part.answers["lime"].amount.value < -5.0
    assert part.answers["lime"].tone == "watch"


def test_a_card_for_each_case():
    """As now, then each source off: the same answers as with that source switched off."""
    turns = assess(village()).turns
    assert list(turns.answers) == ["now", "off_1", "off_2", "off_3"]
    for n in (1, 2, 3):
        alone = assess(village(choices={f"sources.{n}.on": "off"})).sources
        assert turns.answers[f"off_{n}"].words == alone.headline.words
        assert turns.answers[f"off_{n}"].tone == alone.headline.tone


def test_names_with_braces_do_no_harm():
    """What somebody types as a name is shown as it is."""
    part = assess(village(choices={"sources.1.name": "Well {0} {x}"})).sources

    assert "Well {0} {x}" in part.headline.words.render(lambda amount: "…")


def test_two_sources_of_one_name_are_refused():
    """A sentence that asks for a name each."""
    part = assess(village(choices={"sources.1.name": "Church Field well"})).sources

    assert not part.answers
    assert any("its own name" in missing.text for missing in part.missing)


def test_a_least_flow_above_the_largest_is_refused():
    """By the entry, in a sentence."""
    part = assess(village({"sources.1.flow_low": Entry(80.0, "L/min", "told")})).sources

    assert not part.answers
    assert [problem.field for problem in part.problems] == ["sources.1.flow_low"]


def test_names_of_entries_by_rule():
    """Up to twelve sources, any parameter; what follows no rule is no entry."""
    for key in ("sources.1.hardness", "sources.12.arsenic", "sources.high.ph", "sources.low.saturation"):
        assert field_for(key).key == key
    for key in (
        "sources.0.ph",
        "sources.13.ph",
        "sources.01.ph",
        "sources.1.gold",
        "sources.target.ph",
        "sources.x.ph",
    ):
        assert field_for(key) is None
    assert choice_for("sources.3.on").default == "on"
    assert choice_for("sources.13.on") is None
    assert source_numbers(["sources.2.ph", "sources.10.on", "sources.high.ph", "water.ph"]) == (2, 10)
    assert parameters_of({}, ["sources.high.arsenic"]) == ("hardness", "sodium", "nitrate", "arsenic")


def test_sections_of_a_job():
    """The usual five until somebody chooses; what is not known is left out; never none."""
    assert sections_of({}) == ("water", "demand", "scale", "softener", "blend")
    assert sections_of({"job.sections": "sources nonsense water"}) == ("water", "sources")
    assert sections_of({"job.sections": "nonsense"}) == sections_of({})
