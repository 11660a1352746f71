"""Kits, the doubts they leave, and tests as people do them in the field."""

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import stats

from core.errors import InputError
from core.job import field_tests
from core.job.doubts import COVERAGE, doubt, half_width
from core.job.field_tests import by_drops, by_titration, drops, grubbs_distance, repeat, standard_error, titration
from core.job.fields import FIELDS
from core.job.kits import HowRead, Kit, check_kit, find_kit, from_text, kits, kits_for, to_text, way_of
from core.job.record import SOURCES, Entry
from core.references import REFERENCES
from core.units import convert
from tests.published import rows

HARDNESS, IRON, PH = FIELDS["water.hardness"], FIELDS["water.iron"], FIELDS["water.ph"]
GRAIN_DROPS = "drop count, 1 gpg a drop"
SHARES = np.linspace(0.0, 1.0, 101)


def shown(amount):
    """An amount as plain text."""
    return f"{amount.value:.4g} {amount.unit}".strip()


def kit_named(key):
    """The kit of that key."""
    return next(kit for kit in kits() if kit.key == key)


# Published


@pytest.mark.parametrize("row", rows("kits", area="doubt"), ids=lambda row: row.id)
def test_published_doubt(row):
    """A kit carries the doubt that is stated for it."""
    kit = kit_named(row.inputs["kit"])
    entry = Entry(row.inputs["value"], row.inputs["unit"], "measured", kit.words)
    found = doubt(entry, FIELDS[row.inputs["field"]])
    row.check(below=found.below, above=found.above)


@pytest.mark.parametrize("row", rows("kits", area="titration"), ids=lambda row: row.id)
def test_published_titration(row):
    """What the titrant used says, in mg/L of CaCO3."""
    row.check(value=convert(titration(**row.inputs), "mmol/L", "mg/L CaCO3", quantity="hardness"))


@pytest.mark.parametrize("row", rows("kits", area="outlier"), ids=lambda row: row.id)
def test_published_outlier(row):
    """Grubbs' statistic, and the reading it points at; -1 for none."""
    readings = tuple(map(float, row.inputs["readings"].split()))
    index = -1 if (found := repeat(readings).outlier) is None else found
    row.check(
        **{"distance": grubbs_distance(readings)}
        if row.what == "Grubbs"
        else {"index": -1.0 if index is None else float(index)}
    )


def test_critical_values_follow_from_students_t():
    """Each printed critical value is, to its last digit, the one the t distribution gives (scipy, two-sided 5 %)."""
    table = field_tests._critical()
    assert sorted(table) == list(range(3, 21))
    for n, printed in table.items():
        t = stats.t.ppf(1 - 0.05 / (2 * n), n - 2)
        exact = (n - 1) / math.sqrt(n) * math.sqrt(t * t / (n - 2 + t * t))
        assert printed == pytest.approx(exact, abs=1e-3), n  # a unit of the last digit printed


# The table


@pytest.mark.parametrize("kit", kits(), ids=lambda kit: kit.key)
def test_every_kit_can_be(kit):
    """Each row passes the checks that a user's own kit has to pass, and names a source that is known."""
    assert check_kit(kit) is kit
    assert kit.source in REFERENCES or kit.source == "common practice, no source"


def test_kits_are_told_apart():
    """No two kits share a key, nor the words within one quantity."""
    assert len({kit.key for kit in kits()}) == len(kits())
    named = [(kit.words, measured) for kit in kits() for measured in kit.measures]
    assert len(set(named)) == len(named)


@pytest.mark.parametrize("key", [key for key in FIELDS if key.startswith("water.")])
@pytest.mark.parametrize("source", SOURCES)
def test_every_water_entry_has_a_doubt_from_any_source(key, source):
    """No reading of the water is taken as exact because its source was forgotten."""
    field = FIELDS[key]
    middle = 7.0 if key == "water.ph" else 20.0
    assert not doubt(Entry(middle, field.core_unit, source), field).is_none


def test_surer_sources_doubt_less():
    """Told is surer than assumed, a report surer than told."""
    sds = [doubt(Entry(20.0, "gpg", source), HARDNESS).sd for source in ("report", "told", "assumed")]
    assert sds == sorted(sds)
    assert sds[0] < sds[2]


# Finding the kit


@pytest.mark.parametrize(
    "name",
    [GRAIN_DROPS, "DROPS-GPG", f" {GRAIN_DROPS.upper()} ", f"{GRAIN_DROPS}; sample diluted 2 times"],
)
def test_a_kit_is_found_by_words_or_key(name):
    """However the entry writes it."""
    assert find_kit(name, HARDNESS).key == "drops-gpg"


def test_a_kit_that_measures_something_else_does_not_count():
    """A hardness kit named beside iron says nothing about the iron."""
    assert find_kit(GRAIN_DROPS, IRON) is None
    assert way_of(Entry(1.0, "mg/L Fe", "measured", GRAIN_DROPS), IRON).kind == "measured"


def test_own_kits_go_first():
    """A kit of the user's own with the words of a known one is used instead of it."""
    own = Kit("mine", GRAIN_DROPS, ("hardness",), "gpg", resolution=0.25)
    found = doubt(Entry(20.0, "gpg", "measured", GRAIN_DROPS), HARDNESS, (own,))
    assert found.above == pytest.approx(0.25)
    assert kits_for(HARDNESS, (own,))[0] is own


def test_a_kit_only_counts_for_what_was_measured():
    """A kit left behind in an entry that is now "told" no longer sharpens it."""
    told = doubt(Entry(20.0, "gpg", "told", GRAIN_DROPS), HARDNESS)
    assert told.sd == doubt(Entry(20.0, "gpg", "told"), HARDNESS).sd


@given(
    st.sampled_from(kits()),
    st.floats(1.0, 100.0).map(lambda value: float(f"{value:g}")),
    st.integers(2, 20),
    st.floats(0.0, 10.0).map(lambda value: float(f"{value:.3g}")),
)
def test_how_it_was_read_survives_the_entry(kit, dilution, readings, error):
    """Kit, dilution and repeats are read back from the text that is kept."""
    how = HowRead(kit.words, dilution, readings, error)
    assert HowRead.of(how.text) == how


@given(st.text(max_size=300))
def test_any_text_names_some_test(text):
    """Whatever stands in an entry's kit, it is read without an error and means one undiluted reading or more."""
    how = HowRead.of(text)
    assert how.dilution > 0.0
    assert how.readings >= 1


# Own kits as a file


def test_own_kits_survive_their_file():
    """What is written is read back the same."""
    own = (*kits(), Kit("a", "my strip {odd}", ("hardness",), "°e", shape="step", steps=(0.0, 5.0, 12.5), absolute=1.0))
    assert from_text(to_text(own)) == own
    assert from_text("") == ()


REFUSED = [
    ("no JSON", "[", "JSON"),
    ("deep", "[" * 100_000, "JSON"),
    ("no list", "{}", "not a list"),
    ("no table", "[3]", "not a table"),
    ("no name", '[{"measures": ["hardness"]}]', "name"),
    ("text as number", '[{"words": "a", "relative": "5"}]', "not a number"),
    ("truth as number", '[{"words": "a", "relative": true}]', "not a number"),
    ("number as text", '[{"words": 3}]', "not a text"),
    ("negative", '[{"words": "a", "measures": ["hardness"], "absolute": -1}]', "zero or more"),
    ("endless", '[{"words": "a", "measures": ["hardness"], "absolute": 1e999}]', "zero or more"),
    ("huge", '[{"words": "a", "measures": ["hardness"], "absolute": 1' + "0" * 400 + "}]", "zero or more"),
    ("percent", '[{"words": "a", "measures": ["hardness"], "relative": 5}]', "share"),
    ("shape", '[{"words": "a", "measures": ["hardness"], "shape": "round"}]', "shape"),
    ("steps fall", '[{"words": "a", "measures": ["hardness"], "shape": "step", "steps": [5, 1]}]', "rising"),
    ("one step", '[{"words": "a", "measures": ["hardness"], "shape": "step", "steps": [5]}]', "rising"),
    ("steps no list", '[{"words": "a", "measures": ["hardness"], "steps": 5}]', "lists"),
    ("measures nothing", '[{"words": "a"}]', "what it measures"),
    ("wrong unit", '[{"words": "a", "measures": ["hardness"], "unit": "bar", "absolute": 1}]', "bar"),
    ("no unit", '[{"words": "a", "measures": ["hardness"], "absolute": 1}]', "unit"),
    ("semicolon", '[{"words": "a; b", "measures": ["hardness"]}]', "semicolon"),
    ("too long", " " * 200_001, "too long"),
]


@pytest.mark.parametrize(("text", "words"), [row[1:] for row in REFUSED], ids=[row[0] for row in REFUSED])
def test_a_bad_kit_is_refused_with_a_sentence(text, words):
    """The sentence says what is wrong."""
    with pytest.raises(InputError) as refused:
        from_text(text)
    assert words in str(refused.value)


# Doubts against an outside library


def test_normal_doubt_is_a_cut_normal():
    """Quantiles are those of scipy's truncated normal with two standard deviations in the ±."""
    found = doubt(Entry(0.03, "mg/L Fe", "report"), IRON)
    assert found.kind == "normal"
    sd = found.above / COVERAGE
    expected = stats.truncnorm((0.0 - 0.03) / sd, np.inf, 0.03, sd).ppf(SHARES[1:-1])
    np.testing.assert_allclose(found.at(SHARES[1:-1]), expected, rtol=1e-6)


def test_triangular_doubt_is_a_triangle():
    """Quantiles and standard deviation are those of scipy's triangular distribution."""
    found = doubt(Entry(20.0, "gpg", "measured", GRAIN_DROPS), HARDNESS)
    low, width = 20.0 - found.below, found.below + found.above
    expected = stats.triang(found.below / width, low, width)
    np.testing.assert_allclose(found.at(SHARES), expected.ppf(SHARES), rtol=1e-12)
    assert found.sd == pytest.approx(expected.std(), rel=1e-12)


def test_upward_doubt_begins_at_the_reading():
    """Iron that nobody tested for: from none up to what would have been noticed, the less the likelier."""
    found = doubt(Entry(0.0, "mg/L Fe", "assumed"), IRON)
    expected = stats.triang(0.0, 0.0, 0.3)
    np.testing.assert_allclose(found.at(SHARES), expected.ppf(SHARES), rtol=1e-12)
    assert found.sd == pytest.approx(expected.std())


def test_strip_doubt_is_even_between_the_half_steps():
    """A pad at 250 between 120 and 425 says 185 to 337.5, nothing likelier than the rest."""
    found = doubt(Entry(250.0, "mg/L CaCO3", "measured", "test strip, steps in mg/L"), HARDNESS)
    np.testing.assert_allclose(found.at(SHARES), stats.uniform(185.0, 152.5).ppf(SHARES), rtol=1e-12)
    assert found.sd == pytest.approx(152.5 / math.sqrt(12.0))


def test_a_triangle_cut_at_zero_keeps_its_shape():
    """Cutting off what is impossible leaves the rest in proportion, as conditional probability says."""
    found = doubt(Entry(0.1, "mg/L Fe", "told"), IRON)
    whole = stats.triang(0.5, 0.1 - found.below, 2 * found.above)
    below_zero = whole.cdf(0.0)
    assert below_zero > 0.0
    np.testing.assert_allclose(found.at(SHARES), whole.ppf(below_zero + SHARES * (1 - below_zero)), atol=1e-9)


# What readings say


def test_a_pad_read_in_another_unit_is_still_that_pad():
    """250 mg/L written as 14.6 gpg is the pad, not a value between two."""
    found = doubt(Entry(14.6, "gpg", "measured", "test strip, steps in mg/L"), HARDNESS)
    assert found.below == pytest.approx(14.6 - convert(185.0, "mg/L CaCO3", "gpg"))


def test_between_two_pads_it_is_between_them():
    """A colour between the pads of 120 and 250 means no more than that."""
    found = doubt(Entry(180.0, "mg/L CaCO3", "measured", "test strip, steps in mg/L"), HARDNESS)
    assert (found.value - found.below, found.value + found.above) == pytest.approx((120.0, 250.0))


def test_below_a_limit_is_anything_up_to_it():
    """ "< 0,05" is anything from nothing to 0.05, however it came to be known."""
    for source in SOURCES:
        found = doubt(Entry(0.05, "mg/L Fe", source, typed="< 0,05"), IRON)
        np.testing.assert_allclose(found.at([0.0, 0.5, 1.0]), [0.0, 0.025, 0.05])


def test_above_the_end_of_a_strip_is_never_below_it():
    """ "> 425" is 425 or more, and the sentence says to dilute."""
    found = doubt(Entry(425.0, "mg/L CaCO3", "measured", "test strip, steps in mg/L", "> 425"), HARDNESS)
    assert found.at(0.0) == 425.0
    assert found.at(1.0) == pytest.approx(600.0)
    assert "Dilute" in found.words.render(shown)


def test_too_little_for_the_test():
    """Half a drop cannot be told from none: anything up to one drop."""
    found = doubt(Entry(0.4, "gpg", "measured", GRAIN_DROPS), HARDNESS)
    np.testing.assert_allclose(found.at([0.0, 1.0]), [0.0, 1.0], atol=1e-12)


def test_dilution_widens_and_repeats_narrow():
    """A drop of a sample diluted twice is worth two; the mean of four strays half as far in what is chance."""
    once = doubt(Entry(10.0, "gpg", "measured", GRAIN_DROPS), HARDNESS)
    diluted = doubt(Entry(10.0, "gpg", "measured", HowRead(GRAIN_DROPS, 2.0).text), HARDNESS)
    mean = doubt(Entry(10.0, "gpg", "measured", HowRead(GRAIN_DROPS, 1.0, 4, 0.1).text), HARDNESS)
    assert once.above == pytest.approx(math.hypot(1.0, 0.5))
    assert diluted.above == pytest.approx(math.hypot(2.0, 0.5))
    assert mean.above == pytest.approx(math.hypot(0.5, 0.5))


def test_readings_that_scatter_widen_the_doubt():
    """Repeats that differ by more than the kit allows count with their own scatter."""
    mean = doubt(Entry(10.0, "gpg", "measured", HowRead(GRAIN_DROPS, 1.0, 3, 2.0).text), HARDNESS)
    assert mean.above == pytest.approx(math.hypot(4.0, 0.5))


def test_a_difference_of_temperatures_has_no_zero():
    """6 °C of doubt are 10.8 °F, not 42.8."""
    found = doubt(Entry(55.0, "°F", "assumed"), FIELDS["water.temperature"])
    assert found.above == pytest.approx(10.8)


def test_a_decision_has_no_doubt():
    """What was chosen is not in doubt, and the sentence says so."""
    found = doubt(Entry(6.0, "lb/ft³", "told"), FIELDS["softener.salt_dose"])
    assert found.is_none
    assert found.at(0.3) == 6.0
    assert "chosen" in found.words.text


@pytest.mark.parametrize(
    "entry",
    [Entry(None, "gpg", typed="four"), Entry(20.0, "furlong"), Entry(-1.0, "gpg"), Entry(1e6, "gpg"), Entry(7.0, "")],
)
def test_an_entry_nothing_is_computed_from_has_no_doubt(entry):
    """No value, an unknown unit, out of range: no doubt, no exception."""
    assert doubt(entry, HARDNESS).is_none


def test_braces_in_a_kits_name_do_no_harm():
    """The words of a user's own kit may hold anything."""
    own = Kit("mine", "my {kit} {", ("hardness",), "gpg", resolution=1.0)
    found = doubt(Entry(20.0, "gpg", "measured", own.words), HARDNESS, (own,))
    assert "my {kit} {" in found.words.render(shown)


ENTRIES = st.builds(
    Entry,
    value=st.floats(0.0, 100.0),
    unit=st.sampled_from(HARDNESS.units),
    source=st.sampled_from(SOURCES),
    kit=st.sampled_from(["", *(kit.words for kit in kits_for(HARDNESS))]),
    typed=st.sampled_from(["", "< 5", "> 5"]),
)


@given(ENTRIES)
def test_no_draw_is_impossible(entry):
    """Whatever the doubt, every draw is a number within what the field accepts, rising with its share."""
    found = doubt(entry, HARDNESS)
    drawn = np.asarray(found.at(SHARES))
    low, high = (convert(end, "mmol/L", entry.unit, quantity="hardness") for end in (HARDNESS.lowest, HARDNESS.highest))
    assert np.all((drawn >= low) & (drawn <= high * (1 + 1e-12)))
    assert np.all(np.diff(drawn) >= -1e-9)


@given(ENTRIES)
def test_the_sentence_names_what_is_drawn(entry):
    """The phrase renders, and its ends hold nearly all draws."""
    found = doubt(entry, HARDNESS)
    assert found.words.render(shown)
    if {"lowest", "highest"} <= set(found.words.amounts) and found.kind != "normal":
        ends = (found.words.amounts["lowest"].value, found.words.amounts["highest"].value)
        drawn = np.asarray(found.at([0.0, 1.0]))
        assert drawn == pytest.approx(ends, rel=1e-9, abs=1e-9)


def test_scalar_is_vector_element():
    """A single share gives a float, and the same number as in an array."""
    found = doubt(Entry(20.0, "gpg", "report"), HARDNESS)
    assert isinstance(found.at(0.3), float)
    assert found.at([[0.3, 0.4]]).shape == (1, 2)
    assert found.at([0.1, 0.3])[1] == found.at(0.3)


def test_half_width_by_hand():
    """√(1² + (0.05 × 20)²) = 1.41421356; the larger of absolute and relative counts."""
    assert half_width(20.0, 1.0, 0.05) == pytest.approx(1.41421356)
    assert half_width(20.0, 0.0, 0.05, 3.0) == 3.0


# Field tests


def test_drops_by_hand():
    """15 drops of 1 gpg, the sample diluted to twice its volume: 30 gpg."""
    assert drops(15, 1.0, 2.0) == 30.0


@pytest.mark.parametrize(
    ("function", "numbers", "field"),
    [
        (drops, (-1, 1.0), "drops"),
        (drops, (5, 0.0), "value of a drop"),
        (drops, (5, 1.0, 0.5), "dilution"),
        (drops, (math.nan, 1.0), "drops"),
        (titration, (-1.0, 0.01, 50.0), "titrant"),
        (titration, (1.0, 0.0, 50.0), "strength"),
        (titration, (1.0, 0.01, 0.0), "sample"),
    ],
)
def test_impossible_field_tests_are_refused(function, numbers, field):
    """A sentence, with the field and the value."""
    with pytest.raises(InputError) as refused:
        function(*numbers)
    assert refused.value.field == field


def test_mean_and_standard_error_by_hand():
    """20, 22, 24: mean 22, standard deviation 2, standard error 2/√3."""
    found = repeat([20, 22, 24])
    assert (found.mean, found.standard_error) == pytest.approx((22.0, 2.0 / math.sqrt(3.0)))


@given(st.lists(st.floats(0.0, 1000.0), min_size=2, max_size=20))
def test_standard_error_is_numpys(readings):
    """The same as numpy's standard deviation with n − 1, over √n."""
    expected = np.std(readings, ddof=1) / math.sqrt(len(readings))
    assert standard_error(readings) == pytest.approx(expected, rel=1e-6, abs=1e-9)


def test_an_outlier_is_pointed_out_and_kept():
    """The mean is that of all; the mean of the others stands beside it; the sentence names method and reading."""
    found = repeat([22, 22, 23, 22, 30], resolution=1.0)
    assert found.outlier == 4
    assert found.mean == pytest.approx(23.8)
    assert found.mean_without == pytest.approx(22.25)
    assert "Reading 5" in found.words
    assert "Grubbs" in found.words


def test_one_drop_more_is_no_outlier():
    """Readings that agree to the drop do not make the next drop an outlier."""
    readings = [22, 22, 22, 22, 23]
    assert repeat(readings).outlier == 4
    assert repeat(readings, resolution=1.0).outlier is None


@pytest.mark.parametrize("readings", [[5.0], [5.0, 9.0], [5.0, 5.0, 5.0]])
def test_no_outlier_can_be_told_from_too_few(readings):
    """One or two readings, or readings that all agree, point at none."""
    assert repeat(readings).outlier is None


@pytest.mark.parametrize("readings", [[], [1.0] * 21, [math.nan], [math.inf, 1.0]])
def test_readings_that_cannot_be_averaged(readings):
    """None, too many, or no numbers: a sentence."""
    with pytest.raises(InputError):
        repeat(readings)


@given(st.lists(st.floats(0.0, 100.0), min_size=3, max_size=20), st.randoms())
def test_the_order_of_readings_is_irrelevant(readings, random):
    """The same reading is pointed out in whatever order they were taken."""
    shuffled = readings.copy()
    random.shuffle(shuffled)
    first, second = repeat(readings), repeat(shuffled)
    assert (first.outlier is None) == (second.outlier is None)
    assert second.mean == pytest.approx(first.mean)


def test_drops_make_an_entry_with_its_working():
    """22, 22 and 23 drops of a sample diluted twice: the mean in gpg, how it was read, and steps that recompute."""
    made = by_drops(kit_named("drops-gpg"), [22, 22, 23], HARDNESS, dilution=2.0)
    assert made.entry.value == pytest.approx(2.0 * 67.0 / 3.0)
    assert (made.entry.unit, made.entry.source) == ("gpg", "measured")
    how = HowRead.of(made.entry.kit)
    assert (how.kit, how.dilution, how.readings) == (GRAIN_DROPS, 2.0, 3)
    for step in made.working.steps:
        assert step.function(**step.inputs) == step.result
    assert doubt(made.entry, HARDNESS).above == pytest.approx(
        half_width(made.entry.value, max(2.0 / math.sqrt(3.0), 2 * how.standard_error), 0.05)
    )


def test_titration_makes_an_entry_in_the_unit_wanted():
    """10 mL of 0.01 M EDTA on 50 mL are 2 mmol/L, 11.2 °dH."""
    made = by_titration(kit_named("burette"), [10.0], 0.01, 50.0, HARDNESS, "°dH")
    assert made.entry.value == pytest.approx(11.2154, rel=1e-5)
    assert made.entry.kit == kit_named("burette").words


def test_acid_titration_reads_alkalinity():
    """10 mL of 0.02 M acid on 100 mL are 2 meq/L, 100 mg/L of CaCO3."""
    made = by_titration(kit_named("burette-acid"), [10.0], 0.02, 100.0, FIELDS["water.alkalinity"], "mg/L CaCO3")
    assert made.entry.value == pytest.approx(100.086, rel=1e-6)
