"""What a water throws out or takes up: amounts, forms, and what can be asked."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.testing import assert_allclose

from core.chemistry import (
    Solution,
    add,
    dissolution_capacity,
    ph_at_saturation,
    precipitation_potential,
    speciate,
    to_saturation,
)
from core.errors import InputError

HARD = {"temp_c": 12, "ph": 7.6, "ca": 2.4, "mg": 0.8, "na": 0.9, "cl": 2.3, "so4": 0.6, "alkalinity": 4.0}
SOFT = {"temp_c": 12, "ph": 7.0, "ca": 0.3, "mg": 0.1, "na": 0.3, "cl": 0.5, "so4": 0.05, "alkalinity": 0.5}


def test_one_solid_gives_a_number_several_give_a_mapping():
    """One solid answers with its amount, several by name; by_solid is a mapping either way."""
    one = to_saturation(Solution(**HARD), "calcite")
    two = to_saturation(Solution(**HARD), "calcite", "gypsum", may_dissolve=False)

    assert type(one.precipitated) is float
    assert one.by_solid["calcite"] == one.precipitated
    assert two.precipitated is two.by_solid
    assert set(two.precipitated) == {"calcite", "gypsum"}


def test_hard_water_precipitates_and_soft_water_dissolves():
    """The sign says which way: positive out of the water, negative into it."""
    hard, soft = to_saturation(Solution(**HARD)), to_saturation(Solution(**SOFT))

    assert hard.precipitated > 0.0 > soft.precipitated
    assert hard.solution.ca < HARD["ca"]
    assert soft.solution.ca > SOFT["ca"]
    assert hard.solution.ph < HARD["ph"]
    assert_allclose(hard.speciation.si_calcite, 0.0, atol=1e-7)


def test_without_solid_an_undersaturated_water_stays():
    """Where nothing may dissolve, a water below saturation is left exactly as it was."""
    found = to_saturation(Solution(**SOFT), "calcite", "brucite", may_dissolve=False)

    assert dict(found.by_solid) == {"calcite": 0.0, "brucite": 0.0}
    assert_allclose(found.solution.ph, 7.0, rtol=0, atol=1e-9)


def test_mixed_fates_in_one_array():
    """Among many waters each forms its own solids: none, calcite, or calcite and brucite."""
    dosed = add(Solution(**HARD), lime=[0.0, 2.0, 6.0])
    found = to_saturation(dosed.change(ca=[0.01, 4.4, 8.4]), "calcite", "brucite", may_dissolve=False)

    assert (found.by_solid["calcite"] > 0.0).tolist() == [False, True, True]
    assert (found.by_solid["brucite"] > 0.0).tolist() == [False, False, True]


def test_less_stable_forms_leave_more():
    """Aragonite leaves more calcium dissolved than calcite, vaterite more than aragonite."""
    left = [to_saturation(Solution(**HARD), form).solution.ca for form in ("calcite", "aragonite", "vaterite")]

    assert left == sorted(left)
    assert len(set(left)) == 3


def test_open_to_air_more_scale_comes_out():
    """A water that may give off CO2 to air drops far more calcite than a closed one."""
    closed = to_saturation(Solution(**HARD)).precipitated
    aired = to_saturation(Solution(**HARD), p_co2=4.2e-4).precipitated

    assert aired > 3.0 * closed


def test_potential_capacity_and_ph_belong_together():
    """CCPP, the dissolution capacity and the pH at saturation are three views of one answer."""
    water = Solution(**SOFT)

    assert_allclose(precipitation_potential(water), 100.086 * to_saturation(water).precipitated, rtol=1e-12)
    assert dissolution_capacity(water) == -precipitation_potential(water)
    assert ph_at_saturation(water) == to_saturation(water).solution.ph


def test_reason_is_kept():
    """A water that cannot be answered stays without answer, its neighbours keep theirs."""
    found = to_saturation(Solution(**HARD | {"ph": [7.6, 12.5, 7.6]}), "calcite", "brucite", may_dissolve=False)

    assert np.isnan(found.by_solid["calcite"]).tolist() == [False, True, False]
    assert found.why[1]
    assert found.why[0] == found.why[2] == ""


@pytest.mark.parametrize(
    ("solids", "words"),
    [
        (("rust",), "'rust' is not a solid known here; accepted are calcite"),
        (("calcite", "aragonite"), "cannot both be in balance"),
    ],
)
def test_solids_that_cannot_be(solids, words):
    """An unknown solid, or two forms of calcium carbonate at once, is refused in a sentence."""
    with pytest.raises(InputError, match=words):
        to_saturation(Solution(**HARD), *solids)


def test_only_carbonates_have_a_precipitation_potential():
    """The potential is one of calcium carbonate."""
    with pytest.raises(InputError, match="not a form of CaCO3"):
        precipitation_potential(Solution(**HARD), "gypsum")


def test_no_equilibrium_is_said():
    """Where two solids and a gas leave no water possible, the answer is NaN with a reason, not an error."""
    found = to_saturation(Solution(**HARD), "calcite", "brucite", "gypsum", p_co2=1.0)

    assert np.isnan(found.solution.ca) or abs(speciate(found.solution).si_brucite) < 1e-6
    assert found.why == "" or "No equilibrium" in found.why
