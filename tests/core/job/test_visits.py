"""Later visits: lines with their doubts, drift against a band, and dates."""

import datetime
import json
import random
from math import inf, nan

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.errors import InputError, JobFileError
from core.job.dates import day_number, iso_date, months_later
from core.job.signoff_readings import Measured
from core.job.trend import birge_ratio, slope, slope_doubt, trend
from core.job.visits import (
    CANNOT_TELL,
    FALLING,
    RISING,
    STEADY,
    Visit,
    drift,
    reading_due,
    salt_due,
    salt_lasts,
    salt_use,
    service_due,
    upcoming,
    visits_as_json,
    visits_from_json,
)
from tests.published import rows

DAYS = st.dates(datetime.date(1900, 1, 1), datetime.date(2899, 12, 31))


def numbers(cell):
    """One number or several from a cell."""
    return [float(part) for part in str(cell).split("|")]


def visits(start, every, values, doubt=0.03):
    """Visits at even intervals that read the blend."""
    first = day_number(start)
    return [Visit(iso_date(first + every * n), {"blend": Measured(v, doubt)}) for n, v in enumerate(values)]


@pytest.mark.parametrize("row", rows("visits", what="line"), ids=lambda row: row.id)
def test_lines_by_hand(row):
    """Slope, its doubt, level and middle of lines that can be fitted on paper."""
    doubts = numbers(row.inputs["doubts"])
    line = trend(numbers(row.inputs["days"]), numbers(row.inputs["values"]), doubts if len(doubts) > 1 else doubts[0])
    row.check(slope=line.slope, slope_doubt=line.slope_doubt, level=line.level, middle=line.middle)


@pytest.mark.parametrize("row", rows("visits", area="salt"), ids=lambda row: row.id)
def test_salt_by_hand(row):
    """How long salt lasts, and how much was used."""
    inputs = row.inputs
    if row.what == "use":
        row.check(use=salt_use(**inputs))
    else:
        row.check(days=salt_lasts(**inputs))


@given(DAYS)
def test_days_and_dates_agree_with_the_calendar(date):
    """Against the standard library's calendar."""
    iso = date.isoformat()
    assert day_number(iso) == (date - datetime.date(1970, 1, 1)).days
    assert iso_date(day_number(iso)) == iso


@given(DAYS, st.integers(1, 240))
def test_months_later_keeps_the_day_where_there_is_one(date, months):
    """The same day of the month, or its last."""
    later = datetime.date.fromisoformat(months_later(date.isoformat(), months))
    assert (later.year - date.year) * 12 + later.month - date.month == months
    assert later.day == date.day or (later.day < date.day and (later + datetime.timedelta(1)).day == 1)


@pytest.mark.parametrize(
    "text",
    [
        "",
        "today",
        "now",
        "NaT",
        "2031-5-4",
        "2031-02-30",
        "31.05.2031",
        "2031-05-04T10:00",
        "0001-01-01",
        "９９９９-01-01",
    ],
)
def test_what_is_no_date_is_refused(text):
    """Above all no word that would ask a clock."""
    with pytest.raises(InputError, match="is not a date"):
        day_number(text)


def test_the_line_agrees_with_a_reference_library():
    """Slope and its doubt for scattered readings without doubts, against numpy's least squares with covariance."""
    dice = np.random.default_rng(3)
    days = np.sort(dice.uniform(0, 1000, 12))
    values = 1.4 + 2e-4 * days + dice.normal(0, 0.05, 12)
    fitted, covariance = np.polyfit(days, values, 1, cov=True)

    assert slope(days, values) == pytest.approx(fitted[0], rel=1e-9)
    assert slope_doubt(days, values) == pytest.approx(np.sqrt(covariance[0, 0]), rel=1e-9)


def test_weights_agree_with_a_reference_library():
    """With doubts given, against numpy's weighted least squares with unscaled covariance."""
    days, values, doubts = [0, 40, 100, 220], [1.0, 1.3, 1.2, 1.9], [0.5, 0.6, 0.5, 0.9]
    fitted, covariance = np.polyfit(days, values, 1, w=1 / np.array(doubts), cov="unscaled")

    assert slope(days, values, doubts) == pytest.approx(fitted[0], rel=1e-9)
    assert birge_ratio(days, values, doubts) == 1.0
    assert slope_doubt(days, values, doubts) == pytest.approx(np.sqrt(covariance[0, 0]), rel=1e-9)


def test_lines_broadcast():
    """Many series at once, along the last axis; a NaN spoils its own series only."""
    days, values = [0.0, 1.0, 2.0], np.array([[1.0, 2.0, 3.0], [5.0, 5.0, 5.0], [1.0, nan, 3.0]])
    assert slope(days, values)[:2].tolist() == [1.0, 0.0]
    assert np.isnan(slope(days, values)).tolist() == [False, False, True]
    assert slope_doubt(days, values, 0.1)[0] == pytest.approx(slope_doubt(days, values[0], 0.1))
    assert type(slope(days, [1.0, 2.0, 3.0])) is float
    assert np.isnan(birge_ratio([0.0, 1.0], [1.0, 2.0]))


@pytest.mark.parametrize("count", [0, 1])
def test_a_line_needs_two_days(count):
    """A sentence says to read again."""
    with pytest.raises(InputError, match="two"):
        trend([1.0] * count, [1.0] * count)
    with pytest.raises(InputError, match="two days"):
        trend([1.0, 1.0], [1.0, 2.0])


def test_a_blend_that_drifts_is_seen_with_its_day():
    """0.05 more every 90 days: rises; by hand it is at 1.58 after 90 × 0.18 / 0.05 = 324 days."""
    found = drift(visits("2031-01-01", 90, [1.40, 1.45, 1.50, 1.55], 0.005), "blend", low=1.22, high=1.58)

    assert found.verdict == RISING
    assert found.leaves[1] == iso_date(day_number("2031-01-01") + 324)
    assert found.leaves[0] <= found.leaves[1] <= found.leaves[2]
    assert found.words.amounts["change"].value == pytest.approx(0.05 / 90 * 365)
    assert all(step.function(**step.inputs) == step.result for step in found.steps)


def test_falling_meets_the_lower_limit():
    """The mirror of a rise."""
    found = drift(visits("2031-01-01", 90, [1.40, 1.35, 1.30, 1.25], 0.005), "blend", low=1.22, high=1.58)
    assert found.verdict == FALLING
    assert found.leaves[1] == iso_date(day_number("2031-01-01") + 324)


def test_steady_and_not_to_be_told_are_different():
    """Even readings by a good kit are steady; the same by a rough kit, or over days, tell nothing yet."""
    even = [1.40, 1.41, 1.40, 1.41]
    assert drift(visits("2031-01-01", 120, even, 0.01), "blend", low=1.22, high=1.58).verdict == STEADY
    assert drift(visits("2031-01-01", 120, even, 0.2), "blend", low=1.22, high=1.58).verdict == CANNOT_TELL
    assert drift(visits("2031-01-01", 2, even, 0.01), "blend", low=1.22, high=1.58).verdict == CANNOT_TELL


def test_one_visit_shows_no_change():
    """Nothing is drawn through one point, nor through two without a doubt."""
    assert drift(visits("2031-01-01", 1, [1.4]), "blend").trend is None
    assert drift(visits("2031-01-01", 1, [1.4]), "raw").verdict == CANNOT_TELL
    assert drift(visits("2031-01-01", 90, [1.4, 1.6], 0.0), "blend").verdict == CANNOT_TELL


def test_false_alarms_are_as_rare_as_the_band_says():
    """Even water read with honest doubts is called drifting in about 2 of 10 cases, by the band of 8 of 10.

    Binomial: 400 cases at 0.2 scatter by 8; four of these either way.
    """
    dice = random.Random(11)
    alarms = sum(
        drift(visits("2031-01-01", 90, [dice.gauss(1.4, 0.03) for _ in range(4)]), "blend", low=1.22, high=1.58).verdict
        in (RISING, FALLING)
        for _ in range(400)
    )
    assert alarms <= 80 + 32  # a widened doubt only makes alarms rarer
    assert alarms >= 40


def test_without_a_limit_a_drift_has_no_day():
    """A rise without an upper limit leaves nothing, and asks for no reading."""
    found = drift(visits("2031-01-01", 90, [1.4, 1.5, 1.6], 0.01), "blend", low=1.22, high=inf)
    assert found.verdict == RISING
    assert found.leaves == (None, None, None)
    assert reading_due(found) is None


def test_dates_that_come_due():
    """Salt after twelve regenerations, service after a year, and a drifting blend: the earliest first."""
    drifting = drift(visits("2031-01-01", 90, [1.40, 1.45, 1.50, 1.55], 0.005), "blend", low=1.22, high=1.58)
    dues = upcoming(
        service_due("2031-05-04", 12),
        salt_due("2031-05-04", salt=40.0, each=3.0, interval=4.2),
        reading_due(drifting),
        None,
    )
    assert [due.kind for due in dues] == ["salt", "reading", "service"]
    assert dues[0].date == "2031-06-23"  # 50 days on
    assert dues[2].date == "2032-05-04"


@pytest.mark.parametrize(("each", "interval"), [(0.0, 4.0), (3.0, nan), (3.0, inf)])
def test_salt_without_a_use_is_refused(each, interval):
    """No date from no use."""
    with pytest.raises(InputError, match="above zero"):
        salt_due("2031-05-04", salt=40.0, each=each, interval=interval)


def test_visits_survive_their_file():
    """What is read back is what was written."""
    held = (
        Visit("2031-05-04", {"blend": Measured(1.4, 0.03), "raw": Measured(3.9)}, "valve stiff"),
        Visit("2031-08-01"),
    )
    assert visits_from_json(json.loads(json.dumps(visits_as_json(held)))) == held


@pytest.mark.parametrize(
    "part",
    [
        None,
        {},
        [5],
        [{"date": 5}],
        [{"date": "soon"}],
        [{"date": "2031-05-04", "readings": []}],
        [{"date": "2031-05-04", "readings": {"x": 5}}],
        [{"date": "2031-05-04", "readings": {"x": [1]}}],
        [{"date": "2031-05-04", "readings": {"x": [1, -1]}}],
        [{"date": "2031-05-04", "readings": {"x": [True, 0]}}],
        [{"date": "2031-05-04", "readings": {"x": [10**400, 0]}}],
        [{"date": "2031-05-04"}] * 2001,
    ],
    ids=lambda part: json.dumps(part)[:50],
)
def test_damaged_visits_are_refused_with_a_sentence(part):
    """Nothing else than JobFileError gets out."""
    with pytest.raises(JobFileError, match=r"visits in the job file cannot be used: .*\."):
        visits_from_json(part)
