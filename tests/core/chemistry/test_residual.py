"""Calcium left beside soda ash: the naive view, the full one, and what lies between."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.testing import assert_allclose

from core.chemistry import residual_calcium
from core.chemistry.residual import ideal_calcium, product_rule
from core.chemistry.thermodynamics import log_k
from core.errors import InputError

# Soda ash [mol/kg], REF over the quadratic at 25 °C as a general library gives it (PHREEQC 3.8.6)
RATIOS = [
    (1e-4, 2.83),
    (3e-4, 3.19),
    (1e-3, 4.15),
    (3e-3, 7.89),
    (0.01, 21.1),
    (0.03, 57.9),
    (0.1, 180.0),
    (0.5, 767.0),
]
# Deviation from the full answer when all ion pairs of calcium are left out, 25 °C (independent solver, same constants)
WITHOUT_PAIRS = [(1e-4, -0.0771), (1e-3, -0.4106), (0.01, -0.7942)]


@pytest.mark.parametrize(("soda_ash", "ratio"), RATIOS)
def test_the_textbook_is_wrong_by_this_much(soda_ash, ratio):
    """Equilibrium is 2.8 to 767 times what Ksp alone says, as the library found."""
    assert_allclose(residual_calcium(25.0, soda_ash).ratio, ratio, rtol=0.01)


def test_contributions_sum_up():
    """Ideal plus hydrolysis, activity and ion pairs is the equilibrium."""
    found = residual_calcium([5.0, 25.0, 60.0], [[1e-4], [0.01], [0.5]])

    assert_allclose(found.ideal + sum(found.contributions.values()), found.equilibrium, rtol=1e-12)
    assert all(np.all(part > 0.0) for part in (found.contributions["hydrolysis"], found.contributions["ion pairs"]))


@pytest.mark.parametrize(("soda_ash", "deviation"), WITHOUT_PAIRS)
def test_ion_pairs_weigh_what_they_weigh(soda_ash, deviation):
    """Without pairs the answer falls short by what an independent solver found, to a few per cent."""
    found = residual_calcium(25.0, soda_ash)

    # That solver left out calcium's pairs and kept sodium's, which are 2.4 % of the answer at 0.01 mol/kg.
    assert_allclose(found.with_activity / found.equilibrium - 1.0, deviation, rtol=0, atol=0.025)


def test_dissolved_pair_is_a_floor():
    """The CaCO3 pair stays at K times Ksp whatever the soda ash, so that no dose goes below it."""
    found = residual_calcium(25.0, [0.0, 1e-3, 0.1])
    expected = 10.0 ** (np.asarray(log_k("CaCO3", 25.0)) + np.asarray(log_k("calcite", 25.0)))

    assert_allclose(found.ion_pair, expected / 10.0 ** (0.1 * found.ionic_strength), rtol=1e-6)
    assert np.all(found.equilibrium > found.ion_pair)


def test_without_soda_ash():
    """With none added the ideal is the root of Ksp, and the product rule has no answer."""
    found = residual_calcium(25.0, 0.0)

    assert_allclose(found.ideal, np.sqrt(10.0 ** np.asarray(log_k("calcite", 25.0))), rtol=1e-12)
    assert found.product_rule == np.inf
    assert found.equilibrium > found.ideal


def test_quadratic_by_hand():
    """x (x + 0.01) = 10^-8.48: x = 3.311e-7; the product rule gives 3.3113e-7."""
    assert_allclose(ideal_calcium(10.0**-8.48, 0.01), 3.3112e-7, rtol=1e-4)
    assert_allclose(product_rule(10.0**-8.48, 0.01), 3.31131e-7, rtol=1e-5)


def test_band_is_honest():
    """The band holds the answer of either set; where models dispute, it is 0.7 to 9 µmol/kg at least."""
    doses = np.array([0.0, 1e-4, 0.01, 0.1, 0.5])
    for data in ("pb1982", "usgs2024"):
        found = residual_calcium(25.0, doses, data=data)
        assert np.all(found.band[0] <= found.equilibrium)
        assert np.all(found.equilibrium <= found.band[1])
    low, high = residual_calcium(25.0, 0.1).band
    assert_allclose([low, high], [0.7e-6, 9e-6])


def test_practice_is_a_number_apart():
    """What plants are left with, 30 mg/L as CaCO3, lies far above the equilibrium and is not mixed with it."""
    found = residual_calcium(10.0, 0.01)

    assert_allclose(found.practical_floor * 100.086 * 1000, 30.0)
    assert found.practical_floor > 20 * found.band[1]


def test_other_forms_leave_more():
    """Beside 0.01 mol/kg soda at 25 °C aragonite leaves 9.75 and vaterite 25.8 µmol/kg, as the library found."""
    left = [1e6 * residual_calcium(25.0, 0.01, solid=form).equilibrium for form in ("aragonite", "vaterite")]

    assert_allclose(left, [9.75, 25.8], rtol=0.01)


@pytest.mark.parametrize(
    ("arguments", "field"),
    [({"soda_ash": -0.1}, "soda_ash"), ({"soda_ash": 5.0}, "soda_ash"), ({"temp_c": 200.0}, "temp_c"),
     ({"solid": "gypsum"}, "solid"), ({"data": "x"}, "data")],
)  # fmt: skip
def test_refusals(arguments, field):
    """What cannot be is refused by name."""
    with pytest.raises(InputError) as refused:
        residual_calcium(**arguments)

    assert refused.value.field == field


def test_unknown_travels():
    """An unknown dose leaves its neighbours alone."""
    found = residual_calcium(25.0, [0.01, np.nan])

    assert np.isnan(found.equilibrium).tolist() == np.isnan(found.band[0]).tolist() == [False, True]
    assert found.why[1]
