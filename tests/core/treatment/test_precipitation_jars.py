"""Six jars: what to expect in each, and the dose that what was seen asks for."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.errors import InputError
from core.treatment.precipitation import Dose, book_dose
from core.treatment.precipitation_jars import correct, falling, jar_sheet
from core.treatment.precipitation_water import settle
from tests.core.treatment.lime_waters import raw, solution

NAN = float("nan")
SODA = 105.98753856


@pytest.fixture(scope="module")
def sheet():
    """Soda ash varied beside a fixed lime dose."""
    return jar_sheet(solution("L1"), book_dose("lime-soda", raw("L1")).dose, "soda_ash")


def test_jars_stand_around_the_dose(sheet):
    """Six jars, rising doses, the third at the computed dose; 1 mL of stock in a litre is 10 mg/L."""
    assert len(sheet.jars) == 6
    assert sheet.jars[2].dose == pytest.approx(55.3, abs=0.1)
    assert all(a.dose < b.dose for a, b in zip(sheet.jars, sheet.jars[1:], strict=False))
    assert sheet.jars[2].stock == pytest.approx(sheet.jars[2].dose / 10.0)
    assert sheet.held == {"lime": pytest.approx(177.7, abs=0.1)}


def test_purity_and_jar_size_change_the_stock():
    """Half a litre takes half the stock, a product of 92 % takes a twelfth more."""
    jar = jar_sheet(solution("L1"), Dose(lime=2.4), "lime", jar=0.5, stock=5.0, purity=0.92).jars[2]

    assert jar.stock == pytest.approx(jar.dose / 0.92 * 0.5 / 5.0)


def test_each_jar_is_what_settling_gives(sheet):
    """What a jar is expected to hold is the equilibrium of its own dose; practice is never below it."""
    for jar in sheet.jars:
        alone = settle(solution("L1"), Dose(lime=sheet.dose.lime, soda_ash=jar.dose / SODA))
        assert jar.calcium == pytest.approx(alone.water.ca, rel=1e-6)
        assert jar.ph == pytest.approx(alone.water.ph, abs=1e-6)
        assert jar.hardness == pytest.approx(jar.calcium + jar.magnesium)
        assert jar.practice >= jar.hardness - 1e-12


def test_target_between_two_jars_is_interpolated(sheet):
    """Seen 1.2, 1.0, 0.8, ... for 0.9 wanted: halfway between the second and the third jar."""
    found = correct(sheet, [1.2, 1.0, 0.8, 0.7, 0.65, 0.6], 0.9)
    doses = [jar.dose for jar in sheet.jars]

    assert found.method == "interpolation"
    assert found.dose == pytest.approx((doses[1] + doses[2]) / 2)
    assert found.between == pytest.approx((doses[1], doses[2]))
    assert found.factor == pytest.approx(0.9)


def test_unread_jars_are_left_out(sheet):
    """A jar that was spilt does not stop the others."""
    found = correct(sheet, [1.2, NAN, 0.8, NAN, NAN, 0.6], 1.0)
    doses = [jar.dose for jar in sheet.jars]

    assert found.method == "interpolation"
    assert found.dose == pytest.approx((doses[0] + doses[2]) / 2)


def test_jars_that_contradict_are_evened_out(sheet):
    """A jar that reads higher than one with less chemical is averaged with it before reading off."""
    found = correct(sheet, [1.2, 0.9, 1.1, 0.7, 0.65, 0.6], 1.0)

    assert found.method == "interpolation"
    doses = [jar.dose for jar in sheet.jars]
    assert found.dose == pytest.approx(doses[1])


def test_lowest_jar_enough(sheet):
    """If the emptiest jar is soft enough, less is to be tried: nothing is read off below it."""
    found = correct(sheet, [0.5, 0.45, 0.42, 0.41, 0.41, 0.41], 0.9)

    assert found.method == "lowest jar"
    assert found.dose == sheet.jars[0].dose


def _seen(sheet, efficiency, lift):
    doses = np.array([jar.dose for jar in sheet.jars]) / SODA * efficiency
    water = settle(sheet.water, Dose(lime=sheet.dose.lime, soda_ash=doses))
    return np.asarray(water.hardness) + lift


@pytest.mark.parametrize(("efficiency", "lift"), [(0.6, 0.05), (0.7, 0.1), (0.65, 0.0)])
def test_fit_recovers_what_made_the_readings(sheet, efficiency, lift):
    """Readings made with part of the chemical working and some not settling give both back, and the dose they need."""
    seen = _seen(sheet, efficiency, lift)
    target = float(seen.min()) - 0.01
    found = correct(sheet, seen, target)

    assert found.method == "fit"
    assert found.efficiency == pytest.approx(efficiency, abs=0.02)
    assert found.lift == pytest.approx(lift, abs=0.02)
    assert found.misfit < 0.01
    needed = settle(sheet.water, Dose(lime=sheet.dose.lime, soda_ash=found.dose / SODA * efficiency))
    assert needed.hardness + lift == pytest.approx(target, abs=0.01)
    assert found.dose > sheet.jars[-1].dose


def test_out_of_reach_is_said(sheet):
    """Where lime that does not settle keeps every jar above the target, no dose is named."""
    found = correct(sheet, _seen(sheet, 1.0, 0.6), 0.5)

    assert found.method == "none"
    assert np.isnan(found.dose)
    assert found.lift == pytest.approx(0.6, abs=0.05)


def test_one_reading_lifts_and_does_not_stretch(sheet):
    """From one jar only what does not settle is taken, not how much of the chemical works."""
    found = correct(sheet, [NAN, NAN, 1.0, NAN, NAN, NAN], 0.9)

    assert found.efficiency == 1.0
    assert found.misfit == pytest.approx(0.0, abs=1e-9)


def test_calcium_alone_can_be_read(sheet):
    """Calcium is read off the same way as hardness."""
    found = correct(sheet, [0.9, 0.7, 0.5, 0.3, 0.2, 0.1], 0.4, "calcium")

    assert found.method == "interpolation"
    assert found.factor == pytest.approx(1.1)


@given(st.lists(st.floats(0.0, 5.0), min_size=1, max_size=8))
def test_evening_out_never_rises_and_keeps_the_mean(values):
    """Evened-out readings fall or stay, their mean is that of the readings, and falling ones are left as they are."""
    smooth = falling(np.array(values))

    assert np.all(np.diff(smooth) <= 1e-12)
    assert smooth.mean() == pytest.approx(np.mean(values), abs=1e-9)
    assert falling(np.sort(values)[::-1]) == pytest.approx(np.sort(values)[::-1])


def test_impossible_sheets_and_readings_are_refused(sheet):
    """A chemical the dose lacks, a wrong number of readings, none at all: refused in a sentence."""
    with pytest.raises(InputError, match="Vary a chemical"):
        jar_sheet(solution("L1"), Dose(lime=2.0), "soda_ash")
    with pytest.raises(InputError, match="There are 6 jars"):
        correct(sheet, [1.0], 0.5)
    with pytest.raises(InputError, match="at least one jar"):
        correct(sheet, [NAN] * 6, 0.5)
    with pytest.raises(InputError, match="hardness wanted"):
        correct(sheet, [1.0] * 6, NAN)
    with pytest.raises(InputError, match="one of hardness"):
        correct(sheet, [1.0] * 6, 0.5, "taste")
