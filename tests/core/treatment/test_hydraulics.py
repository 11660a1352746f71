"""Laws of water through beads: pressure loss, expansion, temperature."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from core.treatment import hydraulics

TEMPERATURE = st.floats(0.0, 60.0)
VELOCITY = st.floats(0.5, 80.0)


@settings(max_examples=50, deadline=None)
@given(TEMPERATURE, TEMPERATURE, VELOCITY)
def test_colder_water_never_loses_less_pressure(one, other, velocity):
    """Cold water is thicker: at the same flow the bed never costs less pressure."""
    cold, warm = sorted((one, other))
    loss = [hydraulics.bed_pressure_loss(velocity, 0.8, t) for t in (cold, warm)]
    assert loss[0] >= loss[1] > 0.0


@settings(max_examples=50, deadline=None)
@given(VELOCITY, VELOCITY, TEMPERATURE)
def test_more_flow_never_loses_less_pressure(one, other, temperature):
    """Pressure loss rises with the flow, faster than in proportion."""
    slow, fast = sorted((one, other))
    loss = [hydraulics.bed_pressure_loss(v, 1.0, temperature) for v in (slow, fast)]
    assert loss[1] * slow >= loss[0] * fast * (1.0 - 1e-12)


@settings(max_examples=50, deadline=None)
@given(TEMPERATURE, st.floats(0.01, 2.0))
def test_expansion_and_backwash_velocity_undo_each_other(temperature, expansion):
    """The velocity for an expansion gives that expansion."""
    velocity = hydraulics.backwash_velocity(temperature, expansion)
    assert hydraulics.bed_expansion(velocity, temperature) == pytest.approx(expansion, rel=1e-9)


@settings(max_examples=50, deadline=None)
@given(TEMPERATURE, st.floats(0.2, 1.2), st.floats(1100.0, 1400.0))
def test_terminal_velocity_solves_its_equation(temperature, bead, density):
    """Weight in water equals drag: 18 Re + 2.7 Re^1.687 = Ar, both from their definitions."""
    u, d = hydraulics.terminal_velocity(temperature, bead, density) / 3600.0, bead / 1000.0
    mu, water = hydraulics.viscosity(temperature) / 1000.0, hydraulics.water_density(temperature)
    reynolds = water * u * d / mu
    archimedes = water * (density - water) * 9.80665 * d**3 / mu**2
    assert 18.0 * reynolds + 2.7 * reynolds**1.687 == pytest.approx(archimedes, rel=1e-10)


def test_cold_water_lifts_the_bed_higher():
    """The flow that expands a bed by half at 20 °C expands it by far more at 5 °C."""
    flow = hydraulics.backwash_velocity(20.0)
    assert hydraulics.bed_expansion(flow, 5.0) > 0.75
    assert hydraulics.bed_expansion(0.5, 5.0) == 0.0


def test_beads_carried_away_have_no_expansion():
    """Above the terminal velocity there is no bed left; beads lighter than water never sink."""
    assert np.isnan(hydraulics.bed_expansion(200.0, 10.0))
    assert np.isnan(hydraulics.terminal_velocity(10.0, 0.6, 900.0))


def test_density_of_water():
    """Handbook values at 4, 20 and 60 °C: 999.97, 998.20 and 983.20 kg/m³ (from memory)."""
    np.testing.assert_allclose(hydraulics.water_density([4.0, 20.0, 60.0]), [999.97, 998.20, 983.20], atol=0.01)


def test_fittings_lose_four_times_at_twice_the_flow():
    """From the maker's one point by the square of the flow."""
    assert hydraulics.fitting_loss(40.0, 20.0, 50.0) == 200.0


def test_freeboard_by_hand():
    """48 in of vessel, 0.1 m below, 30.6 in of bed: 1.2192 - 0.1 - 0.7772 = 0.342 m, 44 %."""
    free = hydraulics.freeboard(48 * 25.4, 30.6 * 0.0254)
    assert free == pytest.approx(0.342, abs=5e-4)
    assert hydraulics.freeboard_share(free, 30.6 * 0.0254) == pytest.approx(0.44, abs=5e-3)
