"""Chemicals added and waters blended: what they put in, and what is refused."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.testing import assert_allclose

from core.chemistry import REAGENTS, Solution, add, mix, speciate
from core.errors import InputError

HARD = Solution(temp_c=12, ph=7.3, ca=2.4, mg=0.8, na=0.9, cl=2.3, so4=0.6, alkalinity=4.0)
SOFT = Solution(temp_c=20, ph=8.0, na=5.0, cl=1.0, alkalinity=4.0)

MOLAR_MASSES = {  # g/mol, weights of IUPAC 2021, as a table of lime-soda chemicals prints them
    "quicklime": 56.077, "lime": 74.092, "soda_ash": 105.98754, "caustic": 39.99677, "co2": 44.009,
    "bicarbonate": 84.00577,
}  # fmt: skip


@pytest.mark.parametrize(("name", "mass"), MOLAR_MASSES.items())
def test_molar_masses(name, mass):
    """Each chemical has the molar mass of its formula, to the digits printed."""
    assert_allclose(REAGENTS[name].molar_mass, mass, rtol=0, atol=6e-4)


@pytest.mark.parametrize("name", REAGENTS)
def test_reagents_carry_no_charge(name):
    """What a chemical adds is neutral: cations balance anions and alkalinity."""
    charge = {"ca": 2, "na": 1, "cl": -1, "so4": -2, "alkalinity": -1, "dic": 0}

    assert sum(charge[field] * moles for field, moles in REAGENTS[name].adds.items()) == 0


@pytest.mark.parametrize(
    ("name", "up"), [("soda_ash", True), ("lime", True), ("quicklime", True), ("caustic", True), ("co2", False),
                     ("hcl", False), ("h2so4", False), ("gypsum", False), ("calcium_chloride", False)],
)  # fmt: skip
def test_direction_of_ph(name, up):
    """Bases raise the pH, acids lower it, and calcium salts lower it a little by pairing with carbonate."""
    dosed = add(HARD, **{name: 0.5})

    assert (dosed.ph > speciate(HARD).ph) is up


def test_nothing_added_changes_nothing():
    """A dose of zero leaves the water as it is, now holding pH, alkalinity and carbon."""
    same = add(HARD, soda_ash=0.0, lime=0, caustic=0, co2=0)

    assert_allclose([same.ph, same.alkalinity, same.ca], [7.3, 4.0, 2.4], rtol=1e-8)


def test_doses_broadcast():
    """Fifty doses are fifty waters."""
    assert add(HARD, lime=np.linspace(0.0, 3.0, 50)).ph.shape == (50,)


def test_temperature_and_totals_mix_by_share():
    """Temperature and totals are weighed; pH is solved and lies elsewhere than the mean."""
    blend = mix([HARD, SOFT], [0.75, 0.25])

    assert_allclose([blend.temp_c, blend.ca, blend.na], [14.0, 1.8, 1.925], rtol=1e-12)
    assert abs(blend.ph - (0.75 * 7.3 + 0.25 * 8.0)) > 0.02


def test_shares_are_relative_and_broadcast():
    """Litres do as well as shares, and an array of shares gives an array of blends."""
    assert mix([HARD, SOFT], [3.0, 1.0]) == mix([HARD, SOFT], [0.75, 0.25])
    assert mix([HARD, SOFT], [np.linspace(0.0, 1.0, 11), np.linspace(1.0, 0.0, 11)]).ca.shape == (11,)


def test_a_water_without_share_leaves_no_trace():
    """A water that is not known does no harm where none of it is used."""
    unknown = Solution(temp_c=12, ph=7.3, ca=float("nan"), alkalinity=4.0)
    blends = mix([HARD, unknown], [[1.0, 0.5], [0.0, 0.5]])

    assert np.isnan(blends.ph).tolist() == [False, True]
    assert_allclose(blends.ph[0], 7.3, atol=1e-7)


@pytest.mark.parametrize(
    ("call", "words"),
    [
        (lambda: add(HARD, salt=1.0), "'salt' is not a chemical known here"),
        (lambda: add(HARD, lime=-1.0), "lime is -1 mmol/kg"),
        (lambda: mix([HARD, SOFT], [1.0]), "one share for each"),
        (lambda: mix([], []), "one share for each"),
        (lambda: mix([HARD, SOFT], [0.0, 0.0]), "add up to zero"),
        (lambda: mix([HARD, SOFT], [1.0, -0.5]), "shares is -0.5"),
        (lambda: mix([HARD, SOFT.change(data="usgs2024")], [1, 1]), "different data sets"),
    ],
)
def test_refusals(call, words):
    """What cannot be dosed or blended is refused in a sentence."""
    with pytest.raises(InputError, match=words):
        call()
