"""A fixed bypass as the flow swings: by hand, its laws, and what it does to the blend."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.treatment import hydraulics
from core.treatment.bypass import Path, bypass_opening, bypass_share, path_loss, softened_path, swing
from core.treatment.vessel import bed_area, bed_depth, surface_loading

FLOWS = st.floats(0.5, 120.0)
OPENINGS = st.floats(0.01, 50.0)
LINEAR = st.floats(0.0, 5.0)
SQUARE = st.floats(1e-4, 0.5)
AREA = bed_area(254.0)


def test_by_hand():
    """Linear loss 1 kPa/(L/min): 12 L/min, a quarter past the resin loses 9 kPa, so the opening is 3/√9 = 1."""
    assert bypass_opening(12.0, 0.25, 1.0, 0.0) == pytest.approx(1.0, rel=1e-14)
    assert bypass_share(12.0, 1.0, 1.0, 0.0) == pytest.approx(0.25, rel=1e-14)
    # 2 L/min: b² = 2 - b, so b = 1 and half of the water goes past the resin
    assert bypass_share(2.0, 1.0, 1.0, 0.0) == pytest.approx(0.5, rel=1e-14)


@given(FLOWS, OPENINGS, LINEAR, SQUARE)
def test_both_ways_lose_the_same_pressure(flow, opening, linear, square):
    """The loss of the opening at its flow is the loss of the softener at the rest, whatever the setting."""
    share = bypass_share(flow, opening, linear, square)

    assert 0.0 < share < 1.0
    through_opening = (share * flow / opening) ** 2
    assert through_opening == pytest.approx(path_loss((1 - share) * flow, linear, square), rel=1e-6)


@given(FLOWS, st.floats(0.01, 0.9), LINEAR, SQUARE)
def test_share_and_opening_undo_each_other(flow, share, linear, square):
    """The opening found from a share gives that share back at the same flow."""
    assert bypass_share(flow, bypass_opening(flow, share, linear, square), linear, square) == pytest.approx(
        share, rel=1e-9
    )


@given(FLOWS, st.floats(1.01, 20.0), OPENINGS, LINEAR, SQUARE)
def test_share_falls_as_the_flow_rises(flow, times, opening, linear, square):
    """At low flow more of the water goes past the resin, never less."""
    low, high = bypass_share(flow, opening, linear, square), bypass_share(times * flow, opening, linear, square)

    assert low >= high - 1e-12


def test_square_losses_alone_do_not_swing():
    """Where bed and fittings lose by the square too, every flow is split alike."""
    shares = bypass_share(np.array([1.0, 10.0, 100.0]), 2.0, 0.0, 0.01)

    assert np.ptp(shares) < 1e-12


def test_path_is_the_bed_and_its_fittings():
    """The path loses what the bed loses by Ergun and the fittings by the square, at any flow."""
    path = softened_path(35.0, AREA, 12.0, rated_flow=40.0, rated_loss=60.0)
    for flow in (3.0, 17.0, 60.0):
        bed = hydraulics.bed_pressure_loss(surface_loading(flow, AREA), bed_depth(35.0, AREA), 12.0)
        whole = bed + hydraulics.fitting_loss(flow, 40.0, 60.0)
        assert path_loss(flow, path.linear, path.square) == pytest.approx(whole, rel=1e-9)


def test_swing_of_a_bed_alone_and_with_its_valve():
    """Set to a third at 20 L/min, the blend hardens at 4 and softens at 40; a valve's own loss steadies it."""
    flows = np.array([4.0, 20.0, 40.0])
    bed = swing(softened_path(35.0, AREA, 12.0), 20.0, 1 / 3, flows, raw=4.0, softened=0.1)
    unit = swing(softened_path(35.0, AREA, 12.0, 40.0, 60.0), 20.0, 1 / 3, flows, raw=4.0, softened=0.1)

    assert bed.share[1] == pytest.approx(1 / 3, rel=1e-9)
    assert bed.hardness[0] > 1.3 * bed.hardness[1] > 1.3 * bed.hardness[2]
    assert np.ptp(unit.hardness) < np.ptp(bed.hardness)
    assert np.all(np.diff(bed.loss) > 0.0)


def test_closed_and_impossible_settings():
    """A closed bypass stays closed at every flow; a share of one or more has no opening."""
    assert bypass_opening(20.0, 0.0, 0.5, 0.01) == 0.0
    assert bypass_share(5.0, 0.0, 0.5, 0.01) == 0.0
    assert np.isnan(bypass_opening(20.0, [1.0, -0.1, 1.2], 0.5, 0.01)).all()


def test_many_waters_at_once():
    """Settings and flows broadcast: a column of shares against a row of flows."""
    path = Path(0.4, 0.01)
    answer = swing(path, 20.0, np.array([[0.2], [0.4]]), np.array([5.0, 20.0, 50.0]), 4.0, 0.0)

    assert answer.hardness.shape == (2, 3)
    assert answer.share[:, 1] == pytest.approx([0.2, 0.4])
