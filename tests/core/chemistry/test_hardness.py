"""Hardness from ions, and the splits of hardness and alkalinity."""

import numpy as np
import pytest
from hypothesis import given
from numpy.testing import assert_allclose

from core.chemistry import hardness as h
from tests import strategies
from tests.published import rows

CALLS = {
    "hardness, rounded factors": lambda **ions: {"value": h.hardness_SM2340B(**ions)},
    "hardness, full factors": lambda **ions: {"value": h.hardness_of_ions(**ions)},
    "hardness, mmol/L": lambda **ions: {"value": h.hardness_in_mmol(**ions)},
    "carbonate split": lambda **pair: {
        "carbonate": h.carbonate_hardness(**pair),
        "non_carbonate": h.non_carbonate_hardness(**pair),
        "sodium_alkalinity": h.sodium_alkalinity(**pair),
    },
    "titration split": lambda **ends: h.titration_split(**ends)._asdict(),
}
ELSEWHERE = {"convert", "round trip", "class"}  # mapped in the tests of units and of classes
OF_TWO = [
    h.hardness_of_ions,
    h.hardness_SM2340B,
    h.hardness_in_mmol,
    h.carbonate_hardness,
    h.non_carbonate_hardness,
    h.sodium_alkalinity,
    h.hydroxide_alkalinity,
    h.carbonate_alkalinity,
    h.bicarbonate_alkalinity,
]


@pytest.mark.parametrize("row", [r for r in rows("units") if r.what not in ELSEWHERE], ids=lambda row: row.id)
def test_agrees_with_outside_figure(row):
    """Hardness and its splits come out as standards and definitions give them."""
    row.check(**CALLS[row.what](**row.inputs))


def test_sample_of_the_method():
    """108 mg/L Ca and 82 mg/L Mg are the 610 mg/L sample of SM 2340 C, rounded there (from memory)."""
    assert_allclose(h.hardness_of_ions(108, 82), 610, rtol=0, atol=5)
    assert_allclose(h.hardness_SM2340B(108, 82), 607.352, rtol=0, atol=1e-9)


@given(strategies.hardnesses, strategies.hardnesses)
def test_parts_of_hardness_make_the_whole(hardness, alkalinity):
    """Carbonate and non-carbonate hardness add up; sodium alkalinity is there only when the latter is not."""
    carbonate = h.carbonate_hardness(hardness, alkalinity)
    non_carbonate = h.non_carbonate_hardness(hardness, alkalinity)
    sodium = h.sodium_alkalinity(hardness, alkalinity)

    assert_allclose(carbonate + non_carbonate, hardness, rtol=1e-12, atol=1e-9)
    assert_allclose(carbonate + sodium, alkalinity, rtol=1e-12, atol=1e-9)
    assert min(carbonate, non_carbonate, sodium) >= 0
    assert non_carbonate * sodium == 0


@given(strategies.hardnesses, strategies.hardnesses, strategies.hardnesses)
def test_alkalinity_goes_to_calcium_first(calcium, magnesium, alkalinity):
    """The parts make the whole, none is negative; magnesium has carbonate only once calcium is served."""
    parts = h.assign_alkalinity(calcium, magnesium, alkalinity)

    assert min(parts) >= 0
    assert_allclose(parts.carbonate_calcium + parts.non_carbonate_calcium, calcium, rtol=1e-12, atol=1e-9)
    assert_allclose(parts.carbonate_magnesium + parts.non_carbonate_magnesium, magnesium, rtol=1e-12, atol=1e-9)
    assert parts.carbonate_magnesium == 0 or parts.non_carbonate_calcium == 0


def test_assignment_by_hand():
    """Ca 262.2, Mg 39.9, alkalinity 210 mg/L CaCO3: 210 and 52.2 of calcium, 0 and 39.9 of magnesium."""
    assert_allclose(h.assign_alkalinity(262.2, 39.9, 210.0), (210.0, 0.0, 52.2, 39.9), rtol=0, atol=1e-9)


@given(strategies.hardnesses, strategies.shares)
def test_titration_parts_make_the_total(t, share):
    """Hydroxide, carbonate and bicarbonate add up to T, and hydroxide and bicarbonate exclude each other."""
    split = h.titration_split(share * t, t)

    assert_allclose(sum(split), t, rtol=1e-12, atol=1e-9)
    assert min(split) >= 0
    assert split.hydroxide * split.bicarbonate == 0


@pytest.mark.parametrize(
    ("p", "expected"), [(0, (0, 0, 100)), (50, (0, 100, 0)), (100, (100, 0, 0))], ids=["P=0", "P=T/2", "P=T"]
)
def test_titration_corners(p, expected):
    """The three corner cases of the table in SM 2320 B (from memory)."""
    assert h.titration_split(p, 100) == expected


@pytest.mark.parametrize(("p", "t"), [(60, 50), (-1, 50), (np.nan, 50), (10, np.nan)])
def test_impossible_titration_has_no_parts(p, t):
    """P above T, a negative P or an unknown one gives NaN, not a number that looks like one."""
    assert np.isnan(h.titration_split(p, t)).all()


@pytest.mark.parametrize("function", OF_TWO, ids=lambda f: f.__name__)
def test_broadcasts(function):
    """Scalars give a float; arrays combine as numpy's do; one NaN stays alone; empty stays empty."""
    first, second = [10.0, np.nan, 40.0], [[50.0], [80.0]]
    table = function(first, second)

    assert type(function(10, 50)) is float
    assert table.shape == (2, 3)
    assert np.isnan(table).tolist() == [[False, True, False]] * 2
    assert table[1, 2] == function(40.0, 80.0)
    assert np.shape(function([], [])) == (0,)
    assert set(function.card.takes) <= set(function.__code__.co_varnames)


def test_bicarbonate_of_acid_capacity():
    """K_S4.3 of 4.00 mmol/L is 3.95 mmol/L of bicarbonate (DIN 38409-7, from memory); never below zero."""
    assert_allclose(h.bicarbonate_of_acid_capacity([4.0, 0.02, np.nan]), [3.95, 0.0, np.nan], rtol=0, atol=1e-12)
    assert type(h.bicarbonate_of_acid_capacity(4)) is float
