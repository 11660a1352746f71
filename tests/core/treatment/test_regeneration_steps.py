"""A regeneration step by step."""

import numpy as np
import pytest

from core.treatment import regeneration


def test_no_litre_is_counted_twice():
    """Brine as it meets the resin = refill water + water added + salt: masses close to the brine's own."""
    salt = 4.0
    steps = {step.name: step for step in regeneration.regeneration_steps(40.0, 0.05, salt)}
    mass = steps["brine"].water + steps["refill"].water + salt
    assert mass == pytest.approx(salt / 0.10, rel=1e-12)
    assert regeneration.diluted_brine(salt) * 1.0707 == pytest.approx(mass, rel=1e-12)


def test_sums_and_times():
    """Water is the sum of the steps, each step's volume at the resin its flow times its minutes."""
    steps = regeneration.regeneration_steps(np.array([20.0, 40.0]), 0.05, 4.0)
    assert [step.name for step in steps] == ["backwash", "brine", "slow rinse", "fast rinse", "refill"]
    assert regeneration.regeneration_water(steps).shape == (2,)
    for step in steps:
        if step.name != "brine":
            np.testing.assert_allclose(step.flow * step.minutes, step.water, rtol=1e-12)
    assert np.all(regeneration.regeneration_minutes(steps) > 30.0)


def test_defaults_stay_within_what_their_sources_print():
    """Slow rinse 1-3 BV, all rinsing 20-35 gal/ft³ (2.7-4.7 BV), fast rinse 12-16 BV/h, backwash at least
    10 min.
    """
    steps = {step.name: step for step in regeneration.regeneration_steps(40.0, 0.05, 4.0)}
    slow, fast = steps["slow rinse"].water / 40.0, steps["fast rinse"].water / 40.0
    assert 1.0 <= slow <= 3.0
    assert 2.7 <= slow + fast <= 4.7
    assert 12.0 <= steps["fast rinse"].flow * 60.0 / 40.0 <= 16.0
    assert steps["backwash"].minutes >= 10.0


def test_solubility_is_not_extrapolated():
    """The table ends at 0 and 37.8 °C; warmer brine holds a little more."""
    assert np.isnan(regeneration.salt_solubility([-1.0, 40.0])).all()
    assert np.all(np.diff(regeneration.salt_solubility(np.linspace(0, 37.8, 20))) > 0)
    assert np.isnan(regeneration.diluted_brine(1.0, [0.0, 0.3])).all()
