"""Bands, odds and what to measure next, held against cases whose answer is known in closed form."""

import math
from dataclasses import replace
from pathlib import Path
from statistics import NormalDist

import numpy as np
import pytest
from scipy import stats

from core.errors import InputError
from core.job import Entry, Job, assess
from core.job import spread as spread_module
from core.job.answers import Amount, Answer, Mark, Part, say
from core.job.decisions import in_cases, odds, sizes
from core.job.doubts import doubt
from core.job.fields import FIELDS, SECTIONS
from core.job.kits import Kit
from core.job.next_test import influences, measure_next, variance_by_entry
from core.job.spread import SpreadRun, spread, with_bands

SAMPLES = sorted((Path(__file__).resolve().parents[3] / "sample_tests").glob("*.json"))
SODIUM_PER_MMOL = 45.97954  # mg/L Na for a mmol/L of hardness: two atomic weights of sodium [IUPAC21]
NORMAL_KIT = Kit("sharp", "a kit with a normal doubt", ("hardness", "sodium"), "", shape="normal", relative=0.1)
EXACT = Kit("exact", "no doubt at all", tuple(FIELDS), "", shape="none")
EXACT_ENTRIES = {  # a job whose only doubts are those a test adds
    "water.manganese": Entry(0.0, "mg/L Mn", "measured", EXACT.words),
    "water.iron": Entry(0.0, "mg/L Fe", "measured", EXACT.words),
    "blend.softened": Entry(0.0, "gpg", "measured", EXACT.words),
    "demand.daily_volume": Entry(1000.0, "L/day", "measured", EXACT.words),
    "demand.peak_flow": Entry(20.0, "L/min", "measured", EXACT.words),
    "water.hardness": Entry(20.0, "gpg", "measured", EXACT.words),
}


def shown(amount):
    """An amount as plain text."""
    return f"{amount.value:.4g} {amount.unit}".strip()


def exact_job(**changes):
    """A job without doubts, what it assumes made exact; entries changed (dots as two underscores) or None."""
    changed = {name.replace("__", "."): entry for name, entry in changes.items()}
    job = Job("test", entries=EXACT_ENTRIES)
    for key, entry in changed.items():
        job = job.with_entry(key, entry)
    for section in ("softener", "blend"):
        for assumption in getattr(assess(job), section).assumptions:
            if assumption.amount is not None and assumption.field in FIELDS and assumption.field not in changed:
                amount = assumption.amount
                job = job.with_entry(assumption.field, Entry(amount.value, amount.unit, "measured", EXACT.words))
    return job


class OneAnswer:
    """An assessment with one answer that a test makes up."""

    def __init__(self, job, function):
        values = {key: entry.value for key, entry in job.entries.items()}
        amount = Amount(function(values), "L", "volume")
        answer = Answer("made_up", "Made up", amount, say("Made up."), marks=(Mark("limit", Amount(1.0, "L"), "X"),))
        self.water = Part("water", {"made_up": answer})


@pytest.fixture
def made_up(monkeypatch):
    """Let the spread assess a formula of the test's own instead of a job."""
    return lambda function: monkeypatch.setattr(spread_module, "assess", lambda job: OneAnswer(job, function))


def threshold(job, key, low, high, section, differs):
    """Value of an entry between `low` and `high` from which on a decision differs, by halving."""
    for _ in range(50):
        middle = (low + high) / 2.0
        entry = job.entries[key]
        case = getattr(assess(job.with_entry(key, Entry(middle, entry.unit, "told"))), section)
        low, high = (low, middle) if differs(case) else (middle, high)
    return low


# One code path


@pytest.mark.parametrize("path", SAMPLES, ids=lambda path: path.stem)
def test_each_case_is_the_assessment_of_a_job(path):
    """Putting the values of a case into the job and assessing it gives the numbers of that case, to the last bit."""
    job = Job.load(path)
    found = spread(job, draws=3, alone=0)
    for case in range(3):
        changed = job
        for key, drawn in found.drawn.items():
            held = job.entries.get(key) or Entry(0.0, found.doubts[key].unit, "assumed")
            changed = changed.with_entry(key, Entry(float(drawn[case]), held.unit, held.source, held.kit))
        assessment = assess(changed)
        for key, values in found.values.items():
            section, name = key.split(".")
            answer = getattr(assessment, section).answers.get(name)
            assert (math.nan if answer is None else answer.amount.value) == pytest.approx(
                values[case], rel=0, nan_ok=True
            )


@pytest.mark.parametrize("path", SAMPLES, ids=lambda path: path.stem)
def test_an_assumption_entered_as_such_changes_nothing(path):
    """Drawing what was assumed is sound: entered at its assumed value it gives the plain answers."""
    job = Job.load(path)
    entered = job
    for section in SECTIONS:
        for assumption in getattr(assess(job), section).assumptions:
            amount = assumption.amount
            if amount is None:  # no entry, something filled in
                continue
            entered = entered.with_entry(assumption.field, Entry(amount.value, amount.unit, "assumed"))
    for section in SECTIONS:
        plain, again = getattr(assess(job), section), getattr(assess(entered), section)
        assert {k: a.amount.value for k, a in plain.answers.items()} == {
            k: a.amount.value for k, a in again.answers.items()
        }


def test_what_was_assumed_is_drawn_too():
    """Iron nobody tested for has a doubt although it is no entry."""
    found = spread(exact_job(water__iron=None), own=(EXACT,), sections=("softener",), draws=10, alone=0)
    assert list(found.doubts) == ["water.iron"]


# Seeds, streams, slices


def test_same_seed_same_band():
    """A spread is a function of job and seed."""
    job = Job.load(SAMPLES[0])
    first, again, other = (spread(job, draws=20, alone=2, seed=seed) for seed in (1, 1, 2))
    assert first.bands == again.bands
    assert first.alone == again.alone
    assert first.bands != other.bands


def test_a_new_entry_leaves_the_other_draws_alone():
    """Common random numbers: what one entry draws does not depend on which others there are."""
    few = spread(exact_job(water__hardness=Entry(20.0, "gpg", "told")), own=(EXACT,), draws=20, alone=0)
    more = spread(
        exact_job(water__hardness=Entry(20.0, "gpg", "told"), water__iron=Entry(1.0, "mg/L Fe", "told")),
        own=(EXACT,),
        draws=20,
        alone=0,
    )
    np.testing.assert_array_equal(few.drawn["water.hardness"], more.drawn["water.hardness"])


def test_slices_give_what_the_whole_gives():
    """A few cases at a time, in uneven slices, come to the same spread."""
    job = Job.load(SAMPLES[1])
    sections = ("softener", "blend")
    run = SpreadRun(job, draws=15, alone=3, sections=sections)
    shares = [run.share_done]
    while run.step(4):
        shares.append(run.share_done)
    sliced, whole = run.result(), spread(job, draws=15, alone=3, sections=sections)
    assert run.finished
    assert shares == sorted(shares)
    assert sliced.bands == whole.bands
    assert sliced.alone == whole.alone
    assert not run.step()


def test_a_run_can_be_asked_at_any_time():
    """Before the first case there is nothing, half way there is a band; and neither is called finished."""
    run = SpreadRun(Job.load(SAMPLES[0]), draws=10, alone=1)
    nothing = run.result()
    assert (nothing.draws, dict(nothing.bands), odds(nothing)) == (0, {}, ())
    assert measure_next(nothing) is None
    run.step(5)
    half = run.result()
    assert (half.draws, half.finished) == (5, False)
    assert half.bands["softener.interval"].lowest > 0.0


def test_a_slice_is_so_many_assessments(monkeypatch):
    """`step(n)` assesses n jobs, no more, so that the app knows what it pays."""
    calls = []
    monkeypatch.setattr(spread_module, "assess", lambda job: calls.append(job) or assess(job))
    job = exact_job(water__hardness=Entry(20.0, "gpg", "told"))
    run = SpreadRun(job, draws=10, alone=2, own=(EXACT,), sections=("softener",))
    assert len(calls) == 1  # the plain answers
    run.step(3)
    assert len(calls) == 4
    while run.step(3):
        pass
    assert len(calls) == 1 + 10 + 2


def test_an_entry_that_moves_nothing_is_not_tried_on(monkeypatch):
    """Where the outermost values of an entry change no answer, the values between are not assessed."""
    calls = []
    monkeypatch.setattr(spread_module, "assess", lambda job: calls.append(job) or assess(job))
    sodium = Entry(30.0, "mg/L Na", "told")
    run = SpreadRun(exact_job(water__ph=Entry(7.2, "", "told")), 2, alone=20, own=(EXACT,), sections=("softener",))
    while run.step(7):
        pass
    assert len(calls) == 1 + 2 + 2
    assert (run.share_done, run.finished) == (1.0, True)
    assert len(run.result().alone["water.ph"]) == 20
    moving = spread(exact_job(water__sodium=sodium), draws=2, alone=5, own=(EXACT,), sections=("softener",))
    assert len(moving.alone["water.sodium"]) == 5


@pytest.mark.parametrize("draws", [1, 0, -5, 10**9])
def test_impossible_numbers_of_draws_are_refused(draws):
    """A sentence says how many are possible."""
    with pytest.raises(InputError):
        SpreadRun(Job("test"), draws=draws)


def test_a_job_without_doubt_has_bands_without_width():
    """Nothing in doubt, nothing to measure."""
    found = spread(exact_job(), own=(EXACT,), draws=5, sections=("softener", "blend"))
    assert not found.doubts
    for key, band in found.bands.items():
        section, name = key.split(".")
        value = found.plain[section].answers[name].amount.value
        assert (band.lowest, band.highest) == (value, value)
    assert measure_next(found) is None


@pytest.mark.parametrize("section", SECTIONS)
def test_an_empty_job_does_no_harm(section):
    """Without answers there are no bands, no odds, no advice, and no exception."""
    found = spread(Job("empty"), draws=4, alone=2)
    assert not found.bands
    assert not odds(found)
    assert measure_next(found, section) is None


# Closed forms: sums


def test_sodium_at_the_taps_is_a_sum():
    """sodium = raw sodium + 45.98 × (hardness − target): mean, band and shares of variance follow by hand."""
    job = exact_job(
        water__hardness=Entry(4.0, "mmol/L", "measured", NORMAL_KIT.words),
        water__sodium=Entry(120.0, "mg/L Na", "measured", NORMAL_KIT.words),
        blend__target=Entry(1.0, "mmol/L", "told"),
    )
    found = spread(job, own=(NORMAL_KIT, EXACT), sections=("blend",))
    sd_hardness, sd_sodium = SODIUM_PER_MMOL * 0.2, 6.0  # ± 10 % is two standard deviations
    mean, sd = 120.0 + SODIUM_PER_MMOL * 3.0, math.hypot(sd_hardness, sd_sodium)
    edges = NormalDist(mean, sd)
    band = found.bands["blend.sodium"]
    sampling = 4.0 * sd * math.sqrt(0.09 / 200.0) / 0.1755  # four standard errors of a 10 % quantile of 200 draws
    assert band.lowest == pytest.approx(edges.inv_cdf(0.1), abs=sampling)
    assert band.highest == pytest.approx(edges.inv_cdf(0.9), abs=sampling)
    shares = variance_by_entry(found, "blend.sodium")
    correlation = 4.0 / math.sqrt(200.0)  # of two independent columns of 200, four standard errors
    assert shares["water.hardness"] == pytest.approx(sd_hardness**2 / sd**2, abs=correlation)
    assert shares["water.sodium"] == pytest.approx(sd_sodium**2 / sd**2, abs=correlation)


def test_a_sum_of_many_is_told_apart(made_up):
    """Ten entries with weights 1 to 10: shares of the variance go as the squares of the weights, sum 385."""
    weights = {key: float(n) for n, key in enumerate(sorted(k for k in FIELDS if k.startswith("water."))[:10], 1)}
    units = {key: FIELDS[key].core_unit for key in weights}
    kit = Kit("k", "kit", tuple(weights), "", shape="normal", absolute=0.02)
    job = Job("t", entries={key: Entry(5.0, units[key], "measured", "kit") for key in weights})
    made_up(lambda values: sum(weight * values[key] for key, weight in weights.items()))
    found = spread(job, draws=1000, alone=0, sections=("water",), own=(kit,))
    shares = variance_by_entry(found, "water.made_up")
    for key, weight in weights.items():
        assert shares[key] == pytest.approx(weight**2 / 385.0, abs=4.0 / math.sqrt(1000.0))
    ranked = sorted(shares, key=shares.get)
    assert ranked[-1] == max(weights, key=weights.get)


# Closed forms: products


def test_a_lognormal_product(made_up):
    """exp(a + b), a and b normal: the band is that of a lognormal, the first-order shares those of the textbook."""
    kit = Kit("k", "kit", ("water.hardness", "water.alkalinity"), "", shape="normal", absolute=0.6)
    job = Job(
        "t",
        entries={
            "water.hardness": Entry(50.0, "mmol/L", "measured", "kit"),
            "water.alkalinity": Entry(50.0, "meq/L", "measured", "kit"),
        },
    )
    made_up(lambda values: math.exp(values["water.hardness"] - 50.0 + 2.0 * (values["water.alkalinity"] - 50.0)))
    found = spread(job, draws=4000, alone=0, sections=("water",), own=(kit,))
    first, second = 0.3, 0.6  # standard deviations of the two exponents
    both = stats.lognorm(math.hypot(first, second))
    band = found.bands["water.made_up"]
    assert band.lowest == pytest.approx(both.ppf(0.1), rel=0.05)  # 4 standard errors of 4,000 draws are 4.2 %
    assert band.highest == pytest.approx(both.ppf(0.9), rel=0.05)
    whole = math.expm1(first**2 + second**2)
    shares = variance_by_entry(found, "water.made_up")
    assert shares["water.hardness"] == pytest.approx(math.expm1(first**2) / whole, abs=0.06)
    assert shares["water.alkalinity"] == pytest.approx(math.expm1(second**2) / whole, abs=0.06)


def test_daily_volume_is_a_product():
    """persons × use: with means m and variances v the share of the first is v1 m2² / (v1 m2² + v2 m1² + v1 v2)."""
    job = Job(
        "t", entries={"demand.persons": Entry(4.0, ""), "demand.per_person": Entry(120.0, "L/person/day", "told")}
    )
    found = spread(job, draws=1000, alone=0, sections=("demand",))
    m1, m2 = 4.0, 120.0
    v1, v2 = (doubt(job.entries[key], FIELDS[key]).sd ** 2 for key in ("demand.persons", "demand.per_person"))
    whole = v1 * m2**2 + v2 * m1**2 + v1 * v2
    values = found.values["demand.volume"]
    assert np.mean(values) == pytest.approx(m1 * m2, rel=4.0 * math.sqrt(whole / 1000.0) / (m1 * m2))
    assert np.var(values) == pytest.approx(whole, rel=4.0 * math.sqrt(2.0 / 1000.0))
    shares = variance_by_entry(found, "demand.volume")
    assert shares["demand.persons"] == pytest.approx(v1 * m2**2 / whole, abs=4.0 / math.sqrt(1000.0))
    assert shares["demand.per_person"] == pytest.approx(v2 * m1**2 / whole, abs=4.0 / math.sqrt(1000.0))


def test_entries_that_only_act_together_have_no_share_of_their_own(made_up):
    """(a − 5) × (b − 5): knowing one alone tells nothing, so both first-order shares are near nothing."""
    kit = Kit("k", "kit", ("water.hardness", "water.alkalinity"), "", shape="normal", absolute=1.0)
    job = Job(
        "t",
        entries={
            "water.hardness": Entry(5.0, "mmol/L", "measured", "kit"),
            "water.alkalinity": Entry(5.0, "meq/L", "measured", "kit"),
        },
    )
    made_up(lambda values: (values["water.hardness"] - 5.0) * (values["water.alkalinity"] - 5.0))
    found = spread(job, draws=2000, alone=0, sections=("water",), own=(kit,))
    assert all(share < 0.05 for share in variance_by_entry(found, "water.made_up").values())


# Closed forms: chances


def test_chance_that_a_limit_is_passed():
    """P(sodium > 200) for the sum above, and the share of cases above the mark, agree to sampling."""
    job = exact_job(
        water__hardness=Entry(4.0, "mmol/L", "measured", NORMAL_KIT.words),
        water__sodium=Entry(70.0, "mg/L Na", "measured", NORMAL_KIT.words),
        blend__target=Entry(1.2, "mmol/L", "told"),
    )
    found = spread(job, own=(NORMAL_KIT, EXACT), sections=("blend",), draws=1000, alone=0)
    mean, sd = 70.0 + SODIUM_PER_MMOL * 2.8, math.hypot(SODIUM_PER_MMOL * 0.2, 3.5)
    chance = 1.0 - NormalDist(mean, sd).cdf(200.0)
    assert 0.1 < chance < 0.9
    assert found.beyond["blend.sodium", "eu"] == pytest.approx(chance, abs=4.0 * math.sqrt(0.25 / 1000.0))


def test_chance_that_one_entry_changes_the_recommendation():
    """The chance is that of the entry lying beyond the point where another bed is recommended, found by halving."""
    job = exact_job(water__hardness=Entry(20.0, "gpg", "told"))
    plain = assess(job).softener.headline.amount.value
    found = spread(job, own=(EXACT,), draws=10, alone=200, sections=("softener",))
    held = found.doubts["water.hardness"]
    up = threshold(
        job, "water.hardness", 20.0, 20.0 + held.above, "softener", lambda p: p.headline.amount.value > plain
    )
    down = threshold(
        job, "water.hardness", 20.0, 20.0 - held.below, "softener", lambda p: p.headline.amount.value < plain
    )
    triangle = stats.triang(0.5, 20.0 - held.below, 2.0 * held.above)
    chance = triangle.sf(up) + triangle.cdf(down)
    assert 0.02 < chance < 0.98
    (only,) = influences(found)
    assert only.field == "water.hardness"
    assert only.changes == pytest.approx(chance, abs=2.0 / 200.0)


def iron_job(iron):
    """A job in which iron decides between two neighbouring beds: the volume is put at the edge between them."""

    def bed(volume, mg):
        entries = {"demand.daily_volume": Entry(volume, "L/day", "measured", EXACT.words), "water.iron": mg}
        job = Job("iron", entries={**exact_job().entries, **entries})
        return assess(job).softener.headline.amount.value, job

    low, high = 500.0, 3000.0
    start, _ = bed(low, Entry(1.0, "mg/L Fe"))
    for _ in range(40):
        middle = (low + high) / 2.0
        low, high = (low, middle) if bed(middle, Entry(1.0, "mg/L Fe"))[0] > start else (middle, high)
    return bed(low, iron)[1].with_entry("water.hardness", Entry(20.0, "gpg", "measured", "sharp hardness"))


SHARP = Kit("sharp-hardness", "sharp hardness", ("hardness",), "gpg", shape="normal", absolute=0.01)


def test_iron_decides_and_then_does_not():
    """The line names iron and the two sizes; once iron is measured to the hundredth it is no longer named."""
    job = iron_job(Entry(1.0, "mg/L Fe", "told"))
    advice = measure_next(spread(job, own=(EXACT, SHARP), sections=("softener",)))
    assert advice.field == "water.iron"
    assert advice.changes == pytest.approx(0.5, abs=0.06)  # at the edge between two beds
    line = advice.words.render(shown)
    assert line.startswith("Measure iron: it decides between ")
    assert len(advice.words.amounts) == 2
    clearly_less = Entry(0.8, "mg/L Fe", "measured", "sharp iron")
    fine = Kit("sharp-iron", "sharp iron", ("iron",), "mg/L Fe", shape="normal", absolute=0.01)
    known = spread(job.with_entry("water.iron", clearly_less), own=(EXACT, SHARP, fine), sections=("softener",))
    after = measure_next(known)
    assert after is None or after.field != "water.iron"


def test_what_is_already_measured_is_asked_for_more_exactly():
    """An entry from a kit is not asked for as if it were missing."""
    job = iron_job(Entry(1.0, "mg/L Fe", "measured", "colour comparator"))
    advice = measure_next(spread(job, own=(EXACT, SHARP), sections=("softener",)))
    assert advice.words.text.startswith("Measure iron more exactly: ")


def test_a_bed_that_was_entered_is_judged_not_replaced():
    """With the resin entered the odds say whether it will do, and the advice what decides that."""
    plate = Kit("p", "plate", ("softener.resin",), shape="none")
    job = exact_job(softener__resin=Entry(28.3, "L", "measured", "plate"), water__hardness=Entry(20.0, "gpg", "told"))
    edge = threshold(job, "demand.daily_volume", 100.0, 5000.0, "softener", lambda p: p.headline.tone == "bad")
    job = job.with_entry("demand.daily_volume", Entry(edge, "L/day", "measured", EXACT.words))
    found = spread(job, own=(EXACT, plate), sections=("softener",))
    first = odds(found)[0]
    assert first.kind == "good"
    assert first.share == pytest.approx(0.5, abs=0.06)  # at the edge: half of the draws are harder
    assert first.words.text.endswith("this bed will do.")
    assert measure_next(found).words.text == "Measure the hardness: it decides whether this bed will do."


# Words and shapes


def test_odds_of_the_recommended_size():
    """The share of cases in which the size recommended, or a smaller one, is enough."""
    job = exact_job(water__hardness=Entry(20.0, "gpg", "told"))
    found = spread(job, own=(EXACT,), sections=("softener",), alone=0)
    held = sizes(found)
    plain = found.plain["softener"].headline.amount.value
    first = odds(found)[0]
    assert sum(held.values()) == pytest.approx(1.0)
    assert list(held) == sorted(held)
    assert len(held) > 1
    assert first.share == pytest.approx(sum(share for size, share in held.items() if size <= plain))
    assert "of resin is enough" in first.words.render(shown)


def test_cases_without_an_answer_are_said():
    """Where draws lead past the raw water, the blend has no answer in some cases, and the odds say so."""
    job = exact_job(water__hardness=Entry(10.0, "gpg", "told"), blend__target=Entry(9.5, "gpg", "told"))
    found = spread(job, own=(EXACT,), sections=("blend",), alone=4)
    band = found.bands["blend.share"]
    assert 0.3 < band.answered < 0.95
    assert any(item.kind == "answered" and item.share == pytest.approx(band.answered) for item in odds(found))
    assert "whether there is an answer" in measure_next(found, "blend").words.text


@pytest.mark.parametrize("path", SAMPLES, ids=lambda path: path.stem)
def test_every_sample_job_says_how_sure_it_is(path):
    """Bands hold the middle of their draws, sentences render, shares are shares."""
    found = spread(Job.load(path), draws=20, alone=2)
    for key, band in found.bands.items():
        values = found.values[key][~np.isnan(found.values[key])]
        assert np.mean((values >= band.lowest) & (values <= band.highest)) >= 0.75
    for item in odds(found):
        assert 0.0 <= item.share <= 1.0
        assert item.words.render(shown)
    for section in SECTIONS:
        advice = measure_next(found, section)
        assert advice is None or advice.words.render(shown)
        assert all(0.0 <= i.changes <= 1.0 and 0.0 <= i.variance <= 1.0 for i in influences(found, section))


def test_bands_are_put_into_the_answers():
    """A part of the assessment is shown with its bands; what has none keeps none."""
    found = spread(Job.load(SAMPLES[0]), draws=20, alone=0)
    part = with_bands(found.plain["softener"], found)
    for key, answer in part.answers.items():
        band = found.bands[f"softener.{key}"]
        assert answer.band == (band.lowest, band.highest)
        assert part.spread[key] == answer.band
    assert with_bands(assess(Job("empty")).softener, found).answers == {}


def test_a_band_an_answer_brings_along_is_widened():
    """What the constants leave open and what the readings leave open are both in the band that is shown."""
    found = spread(Job.load(SAMPLES[0]), draws=20, alone=0, sections=("softener",))
    band = found.bands["softener.interval"]
    answer = replace(found.plain["softener"].answers["interval"], band=(0.5, band.highest - 0.01))
    part = with_bands(replace(found.plain["softener"], answers={"interval": answer}), found)
    assert part.answers["interval"].band == (0.5, band.highest)


def test_a_wider_doubt_makes_a_wider_band():
    """A strip leaves more open than a drop count, a drop count more than a laboratory."""
    widths = []
    for kit in ("lab-iso", "drops-gpg", "strip-mg"):
        job = exact_job(water__hardness=Entry(14.6, "gpg", "measured", kit))
        band = spread(job, own=(EXACT,), sections=("softener",), alone=0).bands["softener.hardness"]
        widths.append(band.highest - band.lowest)
    assert widths[0] < widths[1] < widths[2]


@pytest.mark.parametrize(
    ("share", "words"),
    [
        (0.0, "in none of the cases tried"),
        (0.01, "in fewer than 1 of 20 cases"),
        (0.06, "in 1 of 10 cases"),
        (0.5, "in 5 of 10 cases"),
        (0.94, "in 9 of 10 cases"),
        (0.97, "in more than 19 of 20 cases"),
        (1.0, "in all cases tried"),
    ],
)
def test_shares_in_words(share, words):
    """Never "10 of 10" for what is not certain, never "0 of 10" for what can happen."""
    assert in_cases(share) == words
