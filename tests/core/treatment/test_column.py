"""The column against printed runs and a general geochemistry code, and the laws it must keep."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from core.chemistry import Solution
from core.constants import ATOMIC_WEIGHTS, MOLAR_MASS_CACO3, MOLAR_MASS_NACL
from core.errors import InputError
from core.treatment.column import FeedWater, Resin, feed_water, fresh, regenerate, serve
from core.treatment.column_run import capacity_roads, run_column
from core.treatment.exchange import CHARGE, equilibrate, exchange_constants
from core.treatment.resin import PRACTICE_RANGE, practice_capacity, trade_table
from tests.core.treatment.phreeqc_column import BRINE, PORE_PER_BED, Water, advection
from tests.published import rows

W3 = Water(15.0, 7.15, 120, 25, 15, 2, 330, 60, 25)  # hard limestone
W5 = Water(12.0, 7.40, 220, 45, 60, 4, 210, 560, 5)  # gypsum
SALTY = Water(15.0, 7.50, 80, 20, 400, 8, 300, 200, 10)  # sodium six times the hardness
MAGNESIAN = Water(15.0, 7.40, 40, 60, 20, 3, 250, 40, 5)  # magnesium above calcium
WATERS = {"limestone": W3, "gypsum": W5, "salty": SALTY, "magnesian": MAGNESIAN}


def _feed(water: Water) -> FeedWater:
    return feed_water(Solution(**water.solution()))


def _dose(shifts, cells):
    """Salt in so many cell volumes of 10 % brine. [g/L]"""
    return np.multiply(shifts, PORE_PER_BED / cells) * BRINE * MOLAR_MASS_NACL


def _breakthrough(cells, percent):
    curve = serve(fresh(_feed(W3), cells=cells), _feed(W3), 270.0)
    level = percent / 100 * (W3.ca + W3.mg)
    return {"bv": np.interp(level, curve.hardness[0], curve.volume[0])}


def _ceiling(cells, shifts):
    run = run_column(_feed(W3), _dose(shifts, int(cells)), cells=int(cells), slow_rinse=79 * 0.038, fast_rinse=0.0)
    return {
        "eq_l": (run.bed_volumes + 79 * 0.038) * 2 * (W3.ca + W3.mg) / 1000,
        "mg_l": run.hardness_at(20.0) * MOLAR_MASS_CACO3,
    }


def _left(cells, shifts):
    run = run_column(_feed(W3), _dose(shifts, int(cells)), cells=int(cells), slow_rinse=0.0, fast_rinse=0.0)
    hard = run.resin[:, :2].sum(-1)
    return {"mean": hard.mean(), "top": hard[0], "bottom": hard[-1]}


PRINTED = {
    "breakthrough": lambda cells, percent: _breakthrough(int(cells), percent),
    "exchange constants": lambda capacity: dict(
        zip(("ca", "mg", "na", "k"), np.log10(exchange_constants(capacity)), strict=True)
    ),
    "ceiling": _ceiling,
    "leakage": _ceiling,
    "hardness left": _left,
    "theory": lambda capacity: {"bv": capacity / (2 * (W3.ca + W3.mg) / 1000)},
}


@pytest.mark.parametrize("row", rows("column"), ids=lambda row: row.id)
def test_check_value(row):
    """What the column gives is what the source has, within the tolerance of the row."""
    row.check(**PRINTED[row.what](**row.inputs))


@pytest.mark.parametrize("name", WATERS)
def test_regeneration_and_leakage_agree_with_phreeqc(name):
    """Five salt doses: the resin within 2 % of capacity, the first leakage within 10 % (in fact far
    closer).
    """
    shifts = [16, 20, 26, 38, 76]
    run = run_column(_feed(WATERS[name]), _dose(shifts, 10), cells=10, slow_rinse=79 * 0.038, fast_rinse=0.0)
    for case, brine in enumerate(shifts):
        outside = advection(WATERS[name], cells=10, brine=brine, rinse=79)
        np.testing.assert_allclose(run.resin[case], outside.resin, atol=0.001)
        assert run.hardness[case, 0] == pytest.approx(outside.hardness[0], rel=0.02)


@pytest.mark.parametrize(("name", "brine"), [("gypsum", 14), ("salty", 14), ("magnesian", 10)])
def test_service_agrees_with_phreeqc(name, brine):
    """Breakthrough at 5, 50 and 90 % within 1 % of bed volumes and leakage along the run within 10 %."""
    water = WATERS[name]
    run = run_column(_feed(water), _dose(brine, 5), cells=5, slow_rinse=40 * 0.076, fast_rinse=0.0)
    shifts = int(run.breakthrough(0.95) * 1.02 / 0.076)
    outside = advection(water, cells=5, brine=brine, rinse=40, service=shifts)
    for fraction in (0.05, 0.50, 0.90):
        assert run.breakthrough(fraction) == pytest.approx(
            outside.breakthrough(fraction, water.ca + water.mg), rel=0.01
        )
    for volume in (5.0, 20.0, 40.0):
        there = np.interp(volume, outside.volume, outside.hardness)
        assert run.hardness_at(volume) == pytest.approx(there, rel=0.10)


concentrations = st.floats(0.2, 12.0)  # mmol/L: together above the end point of 0.171
doses = st.floats(40.0, 400.0)


@settings(max_examples=20, deadline=None)
@given(concentrations, concentrations, st.floats(0.0, 40.0), st.floats(0.0, 1.0), doses, st.booleans())
def test_mass_is_kept_and_salt_never_does_more_than_its_stoichiometry(ca, mg, na, k, dose, counter_current):
    """No ion is lost or made (1e-9), and no more hardness is taken up than the salt has equivalents for."""
    run = run_column(FeedWater(ca, mg, na, k), [dose, 1.1 * dose], cells=8, steps=120, counter_current=counter_current)
    assert run.balance < 1e-9
    np.testing.assert_allclose(run.resin.sum(-1), 1.0, atol=1e-9)
    assert np.all(run.capacity <= run.salt_dose / MOLAR_MASS_NACL + 1e-12)


@settings(max_examples=15, deadline=None)
@given(concentrations, concentrations, st.floats(0.0, 10.0), st.booleans())
def test_more_salt_never_less_capacity(ca, mg, na, counter_current):
    """Capacity never falls with the dose, nor does the lowest leakage rise."""
    run = run_column(
        FeedWater(ca, mg, na), np.linspace(60.0, 360.0, 7), cells=8, steps=160, counter_current=counter_current
    )
    assert np.all(np.diff(run.capacity) >= -1e-9)
    assert np.all(np.diff(run.leakage_least) <= 1e-12)


def test_array_equals_scalar_and_a_missing_case_is_alone():
    """Each case of an array is the case asked alone; a case without an answer is NaN and disturbs nobody."""
    water = FeedWater(2.5, 1.0, 0.6)
    run = run_column(water, [96.0, np.nan, 0.0, 160.0])
    single = run_column(water, 160.0)
    assert np.isnan(run.capacity).tolist() == [False, True, True, False]
    assert type(single.capacity) is float
    assert type(single.breakthrough(0.5)) is float
    assert run.capacity[3] == pytest.approx(single.capacity, rel=1e-9)
    assert run.breakthrough(0.5)[3] == pytest.approx(single.breakthrough(0.5), rel=1e-9)
    waters = run_column(FeedWater([2.5, 3.0], 1.0, 0.6), [[96.0], [160.0]])
    assert waters.capacity.shape == (2, 2)
    assert waters.capacity[1, 0] == pytest.approx(single.capacity, rel=1e-9)
    assert waters.resin.shape == (2, 2, 20, 4)


def test_pairs_per_case_are_the_pairs_of_that_case():
    """Two waters with their own ion pairs, asked together, answer as each alone."""
    both = Solution(**{key: np.array([value, W5.solution()[key]]) for key, value in W3.solution().items()})
    doses = [96.0, 160.0]  # the second runs longest, so inside the cases are taken in another order
    together = run_column(feed_water(both), doses, cells=8)
    alone = [run_column(_feed(water), dose, cells=8).leakage for water, dose in zip((W3, W5), doses, strict=True)]
    np.testing.assert_allclose(together.leakage, alone, rtol=1e-9)


def test_counter_current_leaks_less_for_the_same_salt():
    """Brine from the outlet end leaves the outlet cleanest: leakage falls by more than ten times."""
    water = _feed(W3)
    co, counter = (run_column(water, 96.0, counter_current=way).leakage for way in (False, True))
    assert counter < co / 10.0


def test_potassium_chloride_regenerates_by_equivalents():
    """As many equivalents of potassium chloride give about the capacity of common salt, and potassium in
    the water.
    """
    water = FeedWater(3.0, 1.0, 0.7)
    sodium, potassium = run_column(water, 120.0), run_column(water, 120.0 * 1.27564, salt="KCl")
    assert potassium.capacity == pytest.approx(sodium.capacity, rel=0.15)
    assert potassium.sodium[100] < 1.0 < sodium.sodium[100]
    with pytest.raises(InputError, match="NaCl, KCl"):
        run_column(water, 120.0, salt="MgCl2")


def test_waste_holds_what_the_resin_gave_up_and_all_the_chloride():
    """By hand: chloride of the salt 120 / 58.44 = 2.053 mol/L of bed, over the volume of the waste."""
    run = run_column(FeedWater(3.0, 1.0, 0.7), 120.0)
    chloride = 120.0 / MOLAR_MASS_NACL * ATOMIC_WEIGHTS["Cl"] * 1000.0
    assert run.waste_chloride * run.waste_volume == pytest.approx(chloride, rel=1e-9)
    assert run.waste_hardness_peak > 4 * run.waste_hardness > 400.0
    assert run.waste_hardness * run.waste_volume / 500.0 > run.capacity


def test_trades_table_lies_where_the_factor_says():
    """The trade's capacities over the equilibrium ceiling lie within the range that leads to practice."""
    table = trade_table()
    doses, trade = np.array(table.salt_doses[1:]), np.array(table.capacities[1:])
    ceiling = run_column(_feed(W3), doses).capacity
    share = trade / ceiling
    assert np.all((share > PRACTICE_RANGE[0] - 0.01) & (share < PRACTICE_RANGE[1] + 0.01)), share
    low, high = (practice_capacity(ceiling, factor) for factor in PRACTICE_RANGE)
    assert np.all(low < practice_capacity(ceiling))
    assert np.all(practice_capacity(ceiling) < high)


@settings(max_examples=40, deadline=None)
@given(st.lists(st.floats(1e-6, 3.0), min_size=4, max_size=4), st.floats(0.05, 5.0), st.floats(-12.0, 12.0))
def test_equilibrium_from_any_guess(amounts, water, guess):
    """Whatever the first guess, the resin is full, no ion is lost and the law of exchange holds."""
    totals = np.array(amounts)[:, None] + np.array([0.0, 0.0, 2.0, 0.0])[:, None]
    constants = exchange_constants()[:, None]
    found = equilibrate(totals, 2.0, water, constants, np.array([guess]))
    fractions = found.resin / 2.0
    np.testing.assert_allclose(fractions.sum(0), 1.0, rtol=1e-12)
    np.testing.assert_allclose(found.resin + CHARGE[:, None] * water * found.molality, totals, rtol=1e-12)
    exchange = fractions[0] * found.molality[2] ** 2 / (fractions[2] ** 2 * found.molality[0])
    np.testing.assert_allclose(exchange, constants[0], rtol=1e-8)


def test_water_softer_than_the_end_point_has_no_end():
    """Where the feed itself is below the end point the run never ends, so there is no capacity to tell."""
    assert np.isnan(run_column(FeedWater(0.1, 0.05, 1.0), 100.0).capacity)


def test_a_column_can_start_where_another_ended():
    """A column given to start from is not changed, and a fresh one takes up more than an exhausted one."""
    water = FeedWater(3.0, 1.0, 0.7)
    start = fresh(water)
    before = start.resin.copy()
    first = run_column(water, 96.0, start=start)
    np.testing.assert_array_equal(start.resin, before)
    assert first.capacity > run_column(water, 96.0).capacity


def test_other_constants_replace_the_standard_ones():
    """A resin that holds hardness harder gives up less of it to the same brine."""
    water = FeedWater(3.0, 1.0, 0.7)
    strong = Resin(constants=(*(4.0 * exchange_constants()[:2]), 1.0, 1.46))
    assert run_column(water, 240.0, resin=strong).waste_hardness < run_column(water, 240.0).waste_hardness
    waste = regenerate(fresh(water), water, 100.0)
    assert waste.ions[:2].sum() < 0.05


def test_both_roads_stand_side_by_side():
    """Trade's table, ceiling and practice for the same doses; the table is silent outside its range."""
    roads = capacity_roads(_feed(W3), [50.0, 96.2, 160.0])
    assert np.isnan(roads.trade).tolist() == [True, False, False]
    np.testing.assert_allclose(roads.practice, practice_capacity(roads.ceiling))
    assert np.all(roads.trade[1:] < roads.ceiling[1:])


def test_a_water_without_potassium_has_a_feed():
    """An ion that is not in the water has no species either; its pairs are one."""
    water = Solution(temp_c=12, ph=7.3, alkalinity=5.0, ca=2.9, mg=1.0, cl=1.4, so4=0.7)

    pairing = feed_water(water).pairing

    assert np.isfinite(pairing).all()
    assert pairing[0, 3].item() == 1.0
