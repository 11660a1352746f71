"""The first recommendation: smallest usual bed that carries the peak and lasts."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from core.constants import CUBIC_FOOT, INCH, US_GALLON
from core.treatment import sizing, softener, vessel
from core.treatment.vessel import Bed

GPG = softener.GRAIN_PER_GALLON
LOAD_US = 4 * 60 * US_GALLON * 24 * GPG / 1000  # mol/day, worked example S-US


def test_worked_example_gets_one_and_a_quarter_cubic_feet():
    """By hand: 4 x 5760 gr = 23 040 gr for three days and the reserve; 1.25 ft³ x 20 000 = 25 000 is the
    first above.
    """
    choice = sizing.choose_size(LOAD_US, 10 * US_GALLON)
    assert choice.beds[choice.best] == Bed(1.25 * CUBIC_FOOT, 10 * INCH)
    assert choice.sizing.interval[choice.best] == pytest.approx((25_000 - 5760) / 5760, rel=1e-9)
    assert choice.beds[choice.larger].resin_volume == pytest.approx(1.5 * CUBIC_FOOT)
    assert choice.beds[choice.smaller].resin_volume == pytest.approx(1.0 * CUBIC_FOOT)
    assert choice.reasons[choice.best] == ""
    assert "2.5 days" in choice.reasons[choice.smaller]


def test_peak_flow_alone_can_decide():
    """A small load behind two bathrooms takes the bed the flow needs, and the calendar caps the interval."""
    choice = sizing.choose_size(0.5, 15.58 * US_GALLON)
    best = choice.best
    assert choice.beds[best].resin_volume == pytest.approx(2.0 * CUBIC_FOOT)
    assert choice.sizing.interval[best] == sizing.LONGEST_INTERVAL < choice.sizing.interval_full[best]
    assert "Too little resin" in choice.reasons[choice.smaller]


def test_no_bed_will_do():
    """A load no usual bed carries gives no recommendation, and each candidate says why."""
    choice = sizing.choose_size(500.0, 40.0)
    assert choice.best is choice.smaller is choice.larger is None
    assert all(choice.reasons)
    assert "one day's load" in choice.reasons[-1]


def test_unknown_load_or_dose_is_said():
    """A missing number rules every bed out, in words."""
    assert "missing" in sizing.choose_size(float("nan"), 40.0).reasons[0]
    assert "below the lowest row" in sizing.choose_size(2.0, 40.0, 30.0).reasons[0]


@settings(max_examples=30, deadline=None)
@given(st.floats(0.1, 20.0), st.floats(5.0, 150.0), st.floats(64.1, 320.0))
def test_the_choice_is_the_smallest_that_fits(load, peak, dose):
    """The bed recommended meets peak and interval; every smaller one fails one of them."""
    choice = sizing.choose_size(load, peak, dose)
    figures = choice.sizing
    fits = (figures.largest_peak_flow >= peak) & (figures.interval_full >= sizing.SHORTEST_INTERVAL)
    assert [not reason for reason in choice.reasons] == fits.tolist()
    if choice.best is not None:
        assert fits[choice.best]
        assert not fits[: choice.best].any()


def test_grid_of_beds_and_doses_equals_single_questions():
    """Beds down, salt doses across: each cell is what the single question gives."""
    beds = vessel.trade_beds()[:4]
    doses = np.array([96.2, 128.0, 240.0])
    grid = sizing.size_beds(
        2.0, 30.0, np.array([[b.resin_volume] for b in beds]), np.array([[b.diameter] for b in beds]), doses
    )
    one = sizing.size_beds(2.0, 30.0, beds[2].resin_volume, beds[2].diameter, 128.0)
    assert grid.interval.shape == (4, 3)
    for name in ("interval", "salt_per_year", "water_per_year", "efficiency"):
        assert getattr(grid, name)[2, 1] == pytest.approx(getattr(one, name), rel=1e-13)


def test_vessels_are_sorted_and_hold_what_they_say():
    """Usual beds are between 15 and 44 inches deep, as the trade's table has them."""
    beds = vessel.trade_beds()
    volumes = np.array([bed.resin_volume for bed in beds])
    depth = vessel.bed_depth(volumes, vessel.bed_area([bed.diameter for bed in beds])) / INCH * 1000
    assert np.all(np.diff(volumes) >= 0)
    assert np.all((depth > 15.0) & (depth < 44.0))


def test_default_limits_are_those_of_the_table():
    """The limits used where nothing is set are rows of the table of service limits, not figures of their own."""
    limits = vessel.service_limits()
    assert pytest.approx(limits["flow-peak"].value) == vessel.SPECIFIC_PEAK
    assert pytest.approx(limits["flow-least"].value) == vessel.SPECIFIC_LEAST
    assert pytest.approx(limits["surface-peak"].value) == vessel.SURFACE_PEAK
