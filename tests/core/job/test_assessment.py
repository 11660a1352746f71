"""What an assessment says: missing entries, refusals, assumptions, direction of the answers."""

import math
from itertools import pairwise

import pytest

from core.job import Entry, Job, assess
from core.job.fields import FIELDS, SECTIONS

PLAIN = {
    "water.hardness": Entry(22.0, "gpg", "measured"),
    "water.iron": Entry(1.0, "mg/L Fe", "measured"),
    "demand.persons": Entry(4.0, "", "told"),
    "demand.bathrooms": Entry(2.0, "", "told"),
}


def job(**changes):
    """The plain job with entries changed (dots as two underscores), or taken out where None."""
    entries = dict(PLAIN)
    for name, entry in changes.items():
        key = name.replace("__", ".")
        entries.pop(key, None)
        if entry is not None:
            entries[key] = entry
    return Job("test", entries=entries)


def value(part, key):
    """The number of an answer."""
    return part.answers[key].amount.value


def test_the_plain_job_is_answered():
    """Hardness, iron, persons and bathrooms are enough for a size, a setting and an interval."""
    softener = assess(job()).softener

    assert not softener.missing
    assert not softener.problems
    assert softener.headline.key == "resin"
    assert 3.0 <= value(softener, "interval") <= 14.0


@pytest.mark.parametrize("section", SECTIONS)
def test_an_empty_job_says_what_is_missing(section):
    """Without entries there is no answer, and a sentence for what is missing."""
    part = getattr(assess(Job("empty")), section)

    assert not part.answers
    assert part.missing
    assert all(missing.text.startswith("Enter") for missing in part.missing)


def test_same_water_in_any_unit_gives_the_same_answer():
    """22 gpg and the same in °dH are one water."""
    from core.units import convert

    german = Entry(convert(22.0, "gpg", "°dH"), "°dH", "measured")

    assert value(assess(job(water__hardness=german)).softener, "interval") == pytest.approx(
        value(assess(job()).softener, "interval"), rel=1e-12
    )


def test_what_was_not_entered_is_said_to_be_assumed():
    """Nothing is assumed in silence."""
    assumed = {assumption.field for assumption in assess(job(water__iron=None)).softener.assumptions}

    assert {"water.iron", "water.manganese", "demand.per_person", "softener.longest"} <= assumed


def test_a_typed_text_that_is_no_number_stops_only_what_needs_it():
    """The softener says so and gives no answer; the blend, which does not need persons, still answers."""
    typed = Entry(None, "", "told", typed="four")
    assessment = assess(job(demand__persons=typed, blend__target=Entry(8.0, "gpg", "told")))

    assert not assessment.softener.answers
    assert any("four" in problem.text for problem in assessment.softener.problems)
    assert "share" in assessment.blend.answers


# Entries that the plain job does not use: they are held to their range once pH and alkalinity, or a dose, are there.
UNREAD = {
    *(
        f"water.{name}"
        for name in ("conductivity", "calcium", "magnesium", "potassium", "chloride", "sulfate", "nitrate")
    ),
    "scale.hot_share",
    "blend.set_flow",
    *(key for key in FIELDS if key.startswith("dose.") and key != "dose.target"),
}


@pytest.mark.parametrize("key", FIELDS)
def test_a_value_out_of_range_is_refused_with_the_range(key):
    """Above the highest accepted value: a sentence with field, value and range, and no exception anywhere."""
    field = FIELDS[key]
    unit = field.core_unit
    assessment = assess(Job("test", entries=PLAIN | {key: Entry(field.highest * 1.01 + 1.0, unit, "measured")}))
    problems = [p for section in SECTIONS for p in getattr(assessment, section).problems if p.field == key]

    assert bool(problems) == (key not in UNREAD)
    assert all(field.label in problem.text and "from" in problem.text for problem in problems)


def test_an_unknown_unit_is_refused_with_a_sentence():
    """A unit of a later version or a typing error stops the entry, not the app."""
    softener = assess(job(water__hardness=Entry(22.0, "furlongs", "measured"))).softener

    assert not softener.answers
    assert any("furlongs" in problem.text for problem in softener.problems)


MORE = [  # an entry that grows, the answer that must not fall
    ("water.hardness", "gpg", (5.0, 10.0, 20.0, 40.0), "salt_year"),
    ("water.iron", "mg/L Fe", (0.0, 1.0, 2.0), "hardness"),
    ("demand.persons", "", (1.0, 3.0, 6.0), "resin"),
    ("demand.bathrooms", "", (1.0, 2.0, 4.0), "resin"),
]


@pytest.mark.parametrize(("key", "unit", "values", "answer"), MORE)
def test_more_of_it_never_gives_less(key, unit, values, answer):
    """Harder water, more iron, more people, more bathrooms: never less salt, hardness to set, or resin."""
    got = [value(assess(job(**{key.replace(".", "__"): Entry(v, unit, "told")})).softener, answer) for v in values]

    assert all(later >= earlier for earlier, later in pairwise(got))


def test_a_blend_target_takes_load_off_the_softener():
    """Blending back saves salt, and adds less sodium."""
    whole, blended = assess(job()).softener, assess(job(blend__target=Entry(6.0, "gpg", "told"))).softener

    assert value(blended, "salt_year") < value(whole, "salt_year")
    assert value(blended, "sodium_added") < value(whole, "sodium_added")


@pytest.mark.parametrize(("target", "field"), [(30.0, "blend.target"), (1.0, "blend.target")])
def test_a_blend_that_cannot_be_is_refused(target, field):
    """Harder than the raw water, or softer than the softened: a sentence by the field."""
    part = assess(job(blend__target=Entry(target, "gpg", "told"), blend__softened=Entry(2.0, "gpg", "measured"))).blend

    assert "share" not in part.answers
    assert [problem.field for problem in part.problems] == [field]


def test_no_answer_is_nan():
    """What cannot be computed is left out or said, never shown as not-a-number."""
    for entries in (PLAIN, PLAIN | {"softener.resin": Entry(5.0, "L", "told")}):
        assessment = assess(Job("test", entries=entries))
        for section in SECTIONS:
            for answer in getattr(assessment, section).answers.values():
                assert not math.isnan(answer.amount.value)


def test_water_without_hardness_needs_no_softener():
    """Zero hardness: the softener says that there is nothing to remove."""
    softener = assess(job(water__hardness=Entry(0.0, "gpg", "measured"), water__iron=None)).softener

    assert not softener.answers
    assert any("no hardness" in missing.text for missing in softener.missing)


def test_potassium_chloride_needs_more_by_its_molar_mass():
    """The same bed and setting: 74.55 ÷ 58.44 of the mass, and potassium instead of sodium."""
    with_salt, with_potassium = job(), job().with_choice("softener.salt", "kcl")
    common, potassium = assess(with_salt).softener, assess(with_potassium).softener

    assert value(potassium, "salt_year") == pytest.approx(value(common, "salt_year") * 74.5483 / 58.43976928)
    assert "potassium" in potassium.answers


def test_water_that_is_not_softened_is_heated_too():
    """The share that is softened does not change what the heater gets of the raw water."""
    water = {"water__ph": Entry(7.3, "", "measured"), "water__alkalinity": Entry(5.0, "meq/L", "measured")}
    whole, half = (
        assess(job(**water, demand__softened_share=Entry(share, "%", "told"))).scale for share in (100.0, 50.0)
    )

    assert value(whole, "scale_year") == value(half, "scale_year")


def test_a_water_outside_the_range_of_the_constants_is_said():
    """A brine is computed and flagged, with the range named; an ordinary water is not flagged."""
    plain = {"water__ph": Entry(7.3, "", "measured"), "water__alkalinity": Entry(5.0, "meq/L", "measured")}
    brine = plain | {"water__conductivity": Entry(120_000.0, "µS/cm", "measured")}
    flagged = [
        [problem.text for problem in assess(job(**entries)).scale.problems if problem.level == "warning"]
        for entries in (plain, brine)
    ]

    assert flagged[0] == []
    assert any("mol/kg" in text for text in flagged[1])


@pytest.mark.parametrize("ph", [0.0, 1.0, 13.0, 14.0])
def test_a_water_that_cannot_be_says_so(ph):
    """pH and alkalinity that contradict each other: a sentence, not an empty card."""
    entries = {"water__ph": Entry(ph, "", "measured"), "water__alkalinity": Entry(5.0, "meq/L", "measured")}
    scale = assess(job(**entries)).scale

    assert scale.answers or scale.problems


@pytest.mark.parametrize("kind", ["single", "twin", "counter-current"])
@pytest.mark.parametrize("litres", [2.0, 10.0, 30.0, 5000.0])
def test_any_bed_of_any_kind_is_answered(kind, litres):
    """Also one far too small or far too large: every part answers or says why not."""
    assessment = assess(job(softener__resin=Entry(litres, "L", "told")).with_choice("softener.kind", kind))

    assert assessment.softener.answers
    assert assessment.softener.headline.tone in ("good", "bad", "watch")
    assert assessment.options.answers
    assert assessment.run_out.key == "run_out"


def test_intervals_that_exclude_each_other_are_said():
    """Shortest above longest: a sentence."""
    softener = assess(
        job(softener__shortest=Entry(10.0, "day", "told"), softener__longest=Entry(2.0, "day", "told"))
    ).softener

    assert any("longer than the longest" in problem.text for problem in softener.problems)
