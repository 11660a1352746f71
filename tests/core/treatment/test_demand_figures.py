"""Use per person, guests, the share softened, and peak flow by either code and by DIN 1988-300."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from core.constants import US_GALLON
from core.errors import InputError
from core.references import REFERENCES
from core.treatment import demand, peak_flow

FIGURES = {*demand.use_figures()}


@pytest.mark.parametrize("figure", FIGURES, ids=lambda figure: figure.key)
def test_each_figure_names_a_known_source_and_is_plausible(figure):
    """A figure of use carries its source; a person uses between 100 and 320 L a day in all of them."""
    assert figure.source in REFERENCES
    assert figure.status in {"checked", "secondary", "from memory"}
    assert 100.0 < figure.per_person < 320.0


def test_figures_by_region():
    """A region gets its own figures only; an unknown figure is refused with those known."""
    assert {figure.region for figure in demand.use_figures("DE")} == {"DE"}
    with pytest.raises(InputError, match="us-indoor"):
        demand.use_figure("moon")


def test_guests_and_leave():
    """By hand: 4 persons, 30 days away, 2 guests for 14 days: (4 x 335 + 28) / 365 = 3.748."""
    assert demand.average_persons(4, guests=2, guest_days=14, away_days=30) == pytest.approx(1368 / 365)
    assert demand.daily_volume_from_meter(12_000.0, 30.0) == 400.0
    assert demand.softened_share(0.1, 0.24) == pytest.approx(0.66)


def test_two_bathrooms_by_fixture_units():
    """By hand: 2 x 3.6 + 1.4 + 1.4 + 1.4 = 11.4; between 10 (14.6) and 12 (16.0 gpm): 15.58; NSPC 8 to 9:
    8.7.
    """
    units = peak_flow.household_fixture_units(2)
    assert units == pytest.approx(11.4)
    assert peak_flow.peak_flow_fixture_units(units) / US_GALLON == pytest.approx(15.58)
    assert peak_flow.peak_flow_fixture_units(units, "nspc") / US_GALLON == pytest.approx(8.7)
    assert peak_flow.household_fixture_units(1, flushing="valve") == pytest.approx(8.0 + 4.2)
    assert peak_flow.household_fixture_units(1, half_baths=1) == pytest.approx(3.6 + 2.9 + 4.2)


@pytest.mark.parametrize("code", peak_flow.CODES)
@pytest.mark.parametrize("flushing", peak_flow.FLUSHING)
def test_curves_rise_and_carry_a_status(code, flushing):
    """More fixtures never need less flow, and each point says how well it was read."""
    curve = peak_flow.demand_curve(code, flushing)
    assert np.all(np.diff(curve.fixture_units) > 0)
    assert np.all(np.diff(curve.flow) > 0)
    assert set(curve.status) <= {"checked", "secondary", "from memory"}
    assert curve.source in REFERENCES


def test_outside_the_curve_is_nan_with_a_reason():
    """No curve is stretched: the reason names the code and its end."""
    assert np.isnan(peak_flow.peak_flow_fixture_units([0.5, 2000.0])).all()
    assert "starts at 1" in peak_flow.why_no_peak_flow(0.5)
    assert "ends at 1000" in peak_flow.why_no_peak_flow(2000.0, "nspc")
    assert "missing" in peak_flow.why_no_peak_flow(float("nan"))
    assert peak_flow.why_no_peak_flow(11.4) == ""


@pytest.mark.parametrize("ask", [lambda: peak_flow.demand_curve("mine"), lambda: peak_flow.peak_flow_din(60, "barn")])
def test_unknown_code_or_building_is_refused_with_those_known(ask):
    """A word that is not in the list is refused, and the list is given."""
    with pytest.raises(InputError, match="accepted are"):
        ask()


def test_unknown_fixture_is_refused():
    """A fixture that is not in the table cannot be counted."""
    with pytest.raises(InputError, match="bidet"):
        peak_flow.fixture_units({"fountain": 1})
    assert peak_flow.fixture_units({"bidet": [1, 2]}).tolist() == [2.0, 4.0]


@settings(max_examples=50, deadline=None)
@given(st.floats(1.0, 30_000.0), st.floats(1.0, 30_000.0), st.sampled_from(list(peak_flow.din_building_types())))
def test_din_peak_never_exceeds_the_sum_and_never_falls(one, other, building):
    """Not all taps run at once, so the peak is at most the sum; above the start of the range it rises with
    it.
    """
    low, high = sorted((one, other))
    assert 0.0 < peak_flow.peak_flow_din(high, building) <= high
    if low >= 12.0:
        assert peak_flow.peak_flow_din(low, building) <= peak_flow.peak_flow_din(high, building) + 1e-9


def test_din_keeps_the_largest_draw_off_and_its_range():
    """The peak is not below the largest single draw-off; above 500 L/s there is no answer."""
    assert peak_flow.peak_flow_din(30.0, largest=25.0) == 25.0
    assert np.isnan(peak_flow.peak_flow_din(30_001.0))


def test_two_bathrooms_by_din():
    """By hand, L/s: 2 x (0.13 + 0.07 + 0.15 + 0.15) + 0.07 + 0.07 + 0.15 = 1.29 = 77.4 L/min."""
    assert peak_flow.household_flow_sum(2) == pytest.approx(77.4)
