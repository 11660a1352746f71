"""Generic vessels and the limits of flow through them."""

import numpy as np
import pytest

from core.constants import INCH
from core.treatment import vessel


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
