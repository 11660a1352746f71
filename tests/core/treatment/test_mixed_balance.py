"""Mixed waters: the mixture of waters in balance dissolves lime, and by how much a general library says."""

import numpy as np
import pytest

from core.chemistry import Solution, to_saturation
from core.constants import ATOMIC_WEIGHTS, MOLAR_MASS_CACO3, molar_mass
from core.treatment.mixed_balance import least_balanced, mixed_balance
from tests.published import rows

# mg/L, alkalinity as CaCO3; as printed in the remarks of tests/published/mixing.tsv
PRINTED = {
    "W1": (7.20, 10.0, 2.0, 6.0, 1.0, 25.0, 7.0, 2.0, 9.7),
    "W3": (7.15, 120.0, 25.0, 15.0, 2.0, 330.0, 60.0, 25.0, 17.8),
    "W4": (7.15, 0.6, 0.12, 199.0, 2.0, 330.0, 60.0, 25.0, 17.8),
}


def named(name, temp_c):
    """One of the printed waters, at this temperature."""
    ph, ca, mg, na, k, alkalinity, so4, no3, cl = PRINTED[name]
    w = ATOMIC_WEIGHTS
    return Solution(
        temp_c=temp_c,
        ph=ph,
        alkalinity=2.0 * alkalinity / MOLAR_MASS_CACO3,
        ca=ca / w["Ca"],
        mg=mg / w["Mg"],
        na=na / w["Na"],
        k=k / w["K"],
        so4=so4 / molar_mass(S=1, O=4),
        no3=no3 / molar_mass(N=1, O=3),
        cl=cl / w["Cl"],
    )


def saturated(log_p, temp_c):
    """Pure water in balance with calcite and this pressure of CO2 (log10 of atm)."""
    return to_saturation(Solution(temp_c=temp_c, alkalinity=0.0, dic=0.0), p_co2=10.0**log_p).solution


def _said(balance):
    return {"ph": balance.ph, "saturation": balance.saturation, "ccpp": balance.ccpp}


COMPUTED = {
    "named waters": lambda first, second, share, temp_c: _said(
        mixed_balance([named(first, temp_c), named(second, temp_c)], [share, 1 - share])
    ),
    "saturated waters": lambda first, second, share, temp_c: _said(
        mixed_balance([saturated(first, temp_c), saturated(second, temp_c)], [share, 1 - share])
    ),
    "saturated water": lambda log_p, temp_c: {
        "ph": saturated(log_p, temp_c).ph,
        "ca": saturated(log_p, temp_c).ca,
    },
}


@pytest.mark.parametrize("row", rows("mixing"), ids=lambda row: row.id)
def test_check_value(row):
    """Mixtures are what a general geochemistry library makes of them."""
    row.check(**COMPUTED[row.what](**row.inputs))


def test_two_waters_in_balance_dissolve_when_mixed():
    """Neither part dissolves lime, their mixture does: the words say so."""
    balance = mixed_balance([saturated(-1.5, 10.0), saturated(-3.0, 10.0)], [1.0, 1.0])

    assert balance.tendencies() == ("in balance", "in balance")
    assert balance.tendency() == "dissolves"
    assert balance.of_mean == pytest.approx(0.0, abs=1e-6)
    assert balance.ccpp < balance.of_mean - 20.0


def test_least_balanced_share_is_the_lowest():
    """No other share dissolves more lime than the one that is named."""
    first, second = saturated(-1.5, 10.0), saturated(-3.0, 10.0)
    worst = least_balanced(first, second)
    others = mixed_balance([first, second], [np.linspace(0, 1, 41), 1 - np.linspace(0, 1, 41)]).ccpp

    assert worst.ccpp == pytest.approx(others.min(), abs=1e-6)
    assert 0.1 < worst.shares[0] < 0.9
    assert worst.ccpp < mixed_balance([first, second], [0.5, 0.5]).ccpp


def test_arrays_of_shares_and_the_ends():
    """A row of shares gives a row of answers; a share of one is the water itself."""
    first, second = named("W3", 11.0), named("W1", 11.0)
    balance = mixed_balance([first, second], [np.array([1.0, 0.5, 0.0]), np.array([0.0, 0.5, 1.0])])

    assert balance.ccpp.shape == (3,)
    assert balance.ccpp[0] == pytest.approx(balance.of_parts[0], abs=1e-6)
    assert balance.ccpp[2] == pytest.approx(balance.of_parts[1], abs=1e-6)
    assert mixed_balance([first, first], [0.3, 0.7]).tendency(near=0.0) == "deposits"


def test_unknown_stays_unknown():
    """A water without an answer has no tendency."""
    blind = Solution(temp_c=10.0, ph=np.nan, alkalinity=3.0, ca=1.0)

    assert mixed_balance([blind, named("W1", 10.0)], [0.5, 0.5]).tendency() == "unknown"
