"""Laws that hold for every water: nothing is made or lost, order does not matter, one water is not its neighbour."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import HealthCheck, assume, given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from core.chemistry import Solution, add, at_temperature, mix, speciate, to_saturation
from core.chemistry.solution import IONS
from tests.strategies import waters

BUSY = [HealthCheck.too_slow, HealthCheck.filter_too_much]  # a busy machine, and waters without answer, are no fault
FEW = settings(max_examples=25, deadline=None, derandomize=True, suppress_health_check=BUSY)
DATA = st.sampled_from(["pb1982", "usgs2024"])
SOLID_SETS = st.sampled_from(
    [("calcite",), ("aragonite",), ("brucite",), ("gypsum",), ("calcite", "brucite"), ("calcite", "gypsum")]
)
HOLDS = {  # solid -> mol of calcium, magnesium, sulfate, carbon and alkalinity that one mole takes along
    "calcite": (1, 0, 0, 1, 2),
    "aragonite": (1, 0, 0, 1, 2),
    "brucite": (0, 1, 0, 0, 2),
    "gypsum": (1, 0, 1, 0, 0),
}
CONSERVED = ("ca", "mg", "so4", "dic", "alkalinity")
# The loop stops at 1e-9 in the activity of water. Rounding, which depends on how many waters an array holds, may bring
# a water there a step sooner or later, so that two ways to one answer agree to a few times that.
CLOSE = 1e-8


def settled(water, data="pb1982"):
    """A water that has an answer, holding pH, alkalinity and carbon."""
    found = speciate(Solution(**water, data=data))
    assume(found.why == "")
    return found.solution


@given(waters(), DATA)
@FEW
def test_species_add_up(water, data):
    """Each total is the sum of its species, and alkalinity that of carbonate and hydroxide less acid."""
    found = speciate(Solution(**water, data=data))
    assume(found.why == "")
    model = found._cols.model()

    for field, ion in IONS.items():
        if water.get(field):
            parts = [found.molalities[s.name] for s in model.species if ion in (s.of, s.partner)]
            assert_allclose(1000 * sum(parts), water[field], rtol=CLOSE, atol=1e-20)
    carbon = sum(s.made[1] * found.molalities[s.name] for s in model.species)
    protons = sum(s.made[0] * found.molalities[s.name] for s in model.species)
    assert_allclose(1000 * carbon, found.dic, rtol=CLOSE, atol=CLOSE)
    assert_allclose(1000 * (2 * carbon - protons), found.alkalinity, rtol=CLOSE, atol=CLOSE)
    room = 0.01 * water["alkalinity"] if found.dic == 0.0 else 1e-6  # pH may rule out carbonate by a reading's breadth
    assert_allclose(found.alkalinity, water["alkalinity"], rtol=0, atol=1e-6 + room)


@given(waters(), DATA)
@FEW
def test_charge_is_that_of_the_analysis(water, data):
    """The charge of all species is the difference of cations and anions that was put in."""
    found = speciate(Solution(**water, data=data))
    assume(found.why == "")

    put_in = 2 * water["ca"] + 2 * water["mg"] + water["na"] + water["k"]
    put_in -= water["cl"] + 2 * water["so4"] + water["no3"] + water["alkalinity"]
    assert_allclose(found.charge_balance, put_in, rtol=0, atol=1e-6)


@given(waters(), SOLID_SETS, st.booleans(), DATA)
@FEW
def test_mass_is_conserved_by_solids(water, solids, may_dissolve, data):
    """What left the water is in the solids, element by element and in alkalinity."""
    before = settled(water, data)
    found = to_saturation(before, *solids, may_dissolve=may_dissolve)
    assume(found.why == "")

    for i, name in enumerate(CONSERVED):
        taken = sum(HOLDS[solid][i] * amount for solid, amount in found.by_solid.items())
        assert_allclose(getattr(found.solution, name) + taken, getattr(before, name), rtol=1e-7, atol=1e-7)


@given(waters(), SOLID_SETS, DATA)
@FEW
def test_solids_end_in_balance(water, solids, data):
    """A solid in contact ends saturated; one that may only form is never oversaturated, nor missing while it forms."""
    dissolved = to_saturation(Solution(**water, data=data), *solids)
    formed = to_saturation(Solution(**water, data=data), *solids, may_dissolve=False)
    assume(dissolved.why == "" and formed.why == "")

    for solid in solids:
        assert abs(dissolved.speciation.si(solid)) < 1e-6
        assert formed.speciation.si(solid) < 1e-6
        assert formed.by_solid[solid] >= 0.0
        assert formed.by_solid[solid] == 0.0 or formed.speciation.si(solid) > -1e-6


@given(waters(), SOLID_SETS, DATA)
@FEW
def test_saturation_is_idempotent(water, solids, data):
    """A water in balance stays as it is when it is brought into balance again."""
    once = to_saturation(Solution(**water, data=data), *solids)
    assume(once.why == "")
    twice = to_saturation(once.solution, *solids)

    assert all(abs(amount) < 1e-6 for amount in twice.by_solid.values())
    assert_allclose(twice.solution.ph, once.solution.ph, rtol=0, atol=1e-7)


@given(waters(), st.floats(0.0, 90.0), DATA)
@FEW
def test_warming_and_back(water, temp_c, data):
    """A water warmed and cooled again is the same; alkalinity and carbon never move."""
    before = settled(water, data)
    warm = at_temperature(before, temp_c)
    back = at_temperature(warm, before.temp_c)

    assert_allclose([warm.alkalinity, warm.dic], [before.alkalinity, before.dic], rtol=1e-7, atol=1e-7)
    assert_allclose(back.ph, before.ph, rtol=0, atol=1e-6)


@given(waters(), DATA)
@FEW
def test_known_pairs_agree(water, data):
    """PH with alkalinity, alkalinity with carbon, and pH with carbon are the same water."""
    first = settled(water, data)
    assume(first.dic > 0.01 * first.alkalinity)  # else pH says nothing of carbon
    ions = {name: water[name] for name in water if name not in ("ph", "alkalinity")}
    second = speciate(Solution(**ions, alkalinity=first.alkalinity, dic=first.dic, data=data))
    third = speciate(Solution(**ions, ph=second.ph, dic=first.dic, data=data))

    assert_allclose(second.ph, water["ph"], rtol=0, atol=1e-6)
    assert_allclose(third.alkalinity, water["alkalinity"], rtol=1e-5, atol=1e-6)


@given(waters(), waters(), waters(), st.floats(0.05, 0.9))
@FEW
def test_order_of_mixing_does_not_matter(one, other, third, share):
    """Three waters mixed at once, in any order or in two steps, are the same blend."""
    a, b, c = settled(one), settled(other), settled(third)
    rest = (1.0 - share) / 2
    at_once = mix([a, b, c], [share, rest, rest])
    turned = mix([c, a, b], [rest, share, rest])
    stepwise = mix([a, mix([b, c], [1, 1])], [share, 1.0 - share])

    for blend in (turned, stepwise):
        for name in ("temp_c", "ph", "ca", "na", "cl", "dic", "alkalinity"):
            assert_allclose(getattr(blend, name), getattr(at_once, name), rtol=1e-7, atol=1e-7)


@given(waters(), st.floats(0.0, 3.0), st.floats(0.0, 3.0))
@FEW
def test_reagents_commute(water, lime, soda_ash):
    """Lime then soda ash, soda ash then lime, or both at once leave the same water."""
    raw = settled(water)
    together = add(raw, lime=lime, soda_ash=soda_ash)
    one_way = add(add(raw, lime=lime), soda_ash=soda_ash)
    other_way = add(add(raw, soda_ash=soda_ash), lime=lime)

    for dosed in (one_way, other_way):
        assert_allclose([dosed.ph, dosed.ca, dosed.dic], [together.ph, together.ca, together.dic], rtol=1e-7, atol=1e-7)


@given(st.lists(waters(), min_size=2, max_size=6), SOLID_SETS, DATA)
@FEW
def test_scalar_equals_vector_element(several, solids, data):
    """A water gets the same answer alone as among others."""
    columns = {name: np.array([water[name] for water in several]) for name in several[0]}
    together = to_saturation(Solution(**columns, data=data), *solids)

    for i, water in enumerate(several):
        alone = to_saturation(Solution(**water, data=data), *solids)
        assert alone.why == together.why[i]
        for solid in solids:
            assert_allclose(together.by_solid[solid][i], alone.by_solid[solid], rtol=CLOSE, atol=CLOSE)
        assert_allclose(together.solution.ph[i], alone.solution.ph, rtol=0, atol=CLOSE)


@given(st.lists(waters(), min_size=3, max_size=5), st.sampled_from(["ph", "ca", "cl", "alkalinity", "temp_c"]))
@FEW
def test_unknown_stays_where_it_was(several, field):
    """A value that is not known spoils its own water only, and the reason says so."""
    columns = {name: np.array([water[name] for water in several]) for name in several[0]}
    holed = columns | {field: np.where(np.arange(len(several)) == 1, np.nan, columns[field])}
    whole, found = speciate(Solution(**columns)), speciate(Solution(**holed))

    assert np.isnan(found.si_calcite[1])
    assert "not known" in found.why[1]
    others = np.arange(len(several)) != 1
    assert_allclose(found.si_calcite[others], whole.si_calcite[others], rtol=0, atol=CLOSE)
    assert_allclose(found.ionic_strength[others], whole.ionic_strength[others], rtol=CLOSE)


@pytest.mark.parametrize("data", ["pb1982", "usgs2024"])
def test_more_carbonate_leaves_less_calcium(data):
    """Direction is pinned: warmth and soda ash both drive calcium out of a hard water."""
    water = {"ph": 7.3, "ca": 2.4, "mg": 0.8, "na": 0.9, "cl": 2.0, "so4": 0.6, "alkalinity": 4.1}
    warm = at_temperature(Solution(temp_c=12, **water, data=data), np.linspace(12.0, 90.0, 20))
    dosed = add(Solution(temp_c=12, **water, data=data), soda_ash=np.linspace(0.0, 5.0, 20))

    assert np.all(np.diff(to_saturation(warm).precipitated) > 0.0)
    assert np.all(np.diff(to_saturation(dosed).solution.ca) < 0.0)
