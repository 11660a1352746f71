"""The table of capacity against salt, the trade's and the user's own."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from core.errors import InputError
from core.treatment import resin

DOSES = st.floats(64.1, 320.3)


def test_nothing_is_extrapolated():
    """Below 4 and above 20 lb/ft³ there is no capacity, and the reason says which side."""
    assert np.isnan(resin.trade_capacity([0.0, 60.0, 330.0])).all()
    assert "below" in resin.why_no_capacity(60.0)
    assert "above" in resin.why_no_capacity(330.0)
    assert "missing" in resin.why_no_capacity(float("nan"))
    assert resin.why_no_capacity(96.2) == ""


def test_a_dose_rounded_to_the_gram_still_counts_as_the_end_of_the_table():
    """4 lb/ft³ is 64.07 g/L: somebody who types 64 means that row; likewise 320 and 320.9."""
    assert resin.trade_capacity(64.0) == resin.trade_table().capacities[0]
    assert resin.trade_capacity(320.9) == resin.trade_table().capacities[-1]


@settings(max_examples=50, deadline=None)
@given(DOSES, DOSES)
def test_more_salt_never_less_capacity(one, other):
    """The table never falls, and never promises more than the salt can exchange."""
    low, high = sorted((one, other))
    assert resin.trade_capacity(low) <= resin.trade_capacity(high)
    efficiency = resin.salt_efficiency(resin.trade_capacity(low), low)
    assert 0.25 < resin.share_of_stoichiometric(efficiency) < 0.70


def test_own_curve_replaces_the_trades():
    """A supplier's curve is interpolated like the trade's, within its own ends."""
    own = resin.capacity_table([50, 100, 150], [0.8, 1.1, 1.3])
    assert resin.trade_capacity(75.0, own) == pytest.approx(0.95)
    assert np.isnan(resin.trade_capacity(200.0, own))
    assert "supplier's curve" in resin.why_no_capacity(200.0, own)


@pytest.mark.parametrize(
    ("doses", "capacities", "word"),
    [
        ([100], [1.0], "two rows"),
        ([100, 150], [1.0, float("nan")], "above zero"),
        ([100, 100], [1.0, 1.1], "rise"),
        ([100, 150], [1.1, 1.0], "less capacity"),
        ([10, 150], [1.0, 1.1], "check the units"),
    ],
)
def test_impossible_curve_is_refused_in_words(doses, capacities, word):
    """What cannot be a capacity curve is refused with the reason."""
    with pytest.raises(InputError, match=word):
        resin.capacity_table(doses, capacities)


def test_potassium_chloride_takes_more_by_mass():
    """1.27564 times the mass by stoichiometry (molar masses 74.5483 and 58.4398)."""
    assert resin.potassium_chloride_dose(100.0) == pytest.approx(127.564, rel=1e-5)
    assert resin.share_of_stoichiometric(6.7071, "KCl") == pytest.approx(1.0, rel=1e-4)
