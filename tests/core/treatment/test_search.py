"""The search over beds, salt doses and arrangements, what it costs, and the settings of the valve."""

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from core.constants import CUBIC_FOOT, POUND, US_GALLON
from core.treatment import cost, resin, rules, softener
from core.treatment.cost import Prices
from core.treatment.regeneration import brine_tank_volume, drain_flow, regeneration_water, salt_storage
from core.treatment.search import ARRANGEMENTS, Demand, Limits, Pick, search
from core.treatment.valve import valve_settings

GPG = softener.GRAIN_PER_GALLON
LOAD_US = 4 * 60 * US_GALLON * 24 * GPG / 1000  # mol/day, worked example S-US
US = Demand(LOAD_US, 24 * GPG, 10 * US_GALLON * 0.999, 12.0)
PRICES = Prices(salt=0.4, water=4.0, vessel=12.0, resin=8.0, valve=500.0)


def test_worked_example_among_the_candidates():
    """S-US by hand: 1.5 ft³ at 6 lb/ft³ lasts 4.208 days, 780.6 lb of salt a year, 2693 of 3333 gr/lb in use."""
    found = search(US)
    bed = next(i for i, b in enumerate(found.beds) if abs(b.resin_volume - 1.5 * CUBIC_FOOT) < 1e-6)
    dose = int(np.argmin(abs(found.doses - 6 * resin.POUND_PER_CUBIC_FOOT)))
    figures = found.figures(Pick(0, bed, dose))
    assert figures["interval"] == pytest.approx(4.208, rel=1e-3)
    assert figures["salt_per_year"] * 1000 / POUND == pytest.approx(780.6, rel=1e-3)
    assert figures["efficiency"] / rules.GRAIN_PER_POUND == pytest.approx(2693, rel=1e-3)
    assert figures["rated_efficiency"] / rules.GRAIN_PER_POUND == pytest.approx(3333, rel=1e-3)


def test_recommendation_and_its_neighbours():
    """The best fits, its neighbours fit and are a smaller and a larger bed of the same arrangement."""
    found = search(replace(US, load=0.8 * LOAD_US))
    assert found.best is not None
    for neighbour, way in ((found.smaller, -1), (found.larger, 1)):
        if neighbour is not None:
            assert neighbour.arrangement == found.best.arrangement
            assert found.fits[neighbour]
            step = found.beds[neighbour.bed].resin_volume - found.beds[found.best.bed].resin_volume
            assert step * way > 0
    assert found.larger is not None
    assert found.reasons(found.best) == ()


def test_cheapest_wins_where_prices_are_known():
    """With prices nothing that fits and has a price costs less than the recommendation."""
    found = search(US, prices=PRICES)
    assert found.arrangements[found.best.arrangement].key == "single"  # no price was given for the others
    assert found.cost[found.best] == np.nanmin(found.cost[found.fits])
    both = search(US, prices=replace(PRICES, counter_current=0.0, second_tank=0.0))
    assert both.arrangements[both.best.arrangement].key == "counter-current"


def test_cost_by_hand():
    """500 + 1 x 40 x 20 = 1300; 300 kg x 0.4 + 20 m³ x 4 + 60 = 260 a year; ten years 3900."""
    bought = cost.purchase(40.0, 1, 500.0, 12.0, 8.0)
    running = cost.running_cost(300.0, 20_000.0, 0.4, 4.0, 60.0)
    assert (bought, running) == (1300.0, pytest.approx(260.0))
    assert cost.total_cost(bought, running) == pytest.approx(3900.0)


CASES = [
    (Limits(pressure_loss=5.0), "pressure"),
    (Limits(shortest=300.0), "wanted"),
    (Limits(least_depth=3.0), "shallower"),
    (Limits(least_efficiency=8.0), "efficiency rule"),
    (Limits(specific_peak=1.0), "Too little resin"),
    (Limits(surface_peak=1.0), "too narrow"),
]


@pytest.mark.parametrize(("limits", "word"), CASES, ids=[word for _, word in CASES])
def test_each_limit_rules_out_with_its_reason(limits, word):
    """A limit nobody can keep leaves no recommendation, and each candidate says this reason."""
    found = search(US, limits, arrangements=ARRANGEMENTS[:1])
    assert found.best is found.smaller is found.larger is None
    middle = Pick(0, 7, 4)
    assert word in " ".join(found.reasons(middle))


def test_dose_without_known_capacity_says_so():
    """The counter-current table ends at 80 g/L: above it nothing is claimed."""
    found = search(US)
    assert found.reasons(Pick(2, 10, 10)) == ("No capacity is known for this salt dose.",)
    unknown = search(replace(US, load=float("nan")))
    assert unknown.best is None
    assert "missing" in unknown.reasons(Pick(0, 8, 4))[0]


def test_trade_off_shows_what_salt_buys():
    """More salt in the same bed lasts longer and uses the salt worse."""
    found = search(US)
    line = found.trade_off(found.best)
    assert np.all(np.diff(line["interval"]) >= 0.0)
    assert np.all(np.diff(line["rated_efficiency"]) <= 1e-12)
    assert line["fits"][found.best.dose]


def test_twin_needs_no_days_reserve_but_carries_the_peak_alone():
    """A tank of a twin uses 97 % of its capacity; its peak margin is that of one tank."""
    found = search(US)
    single, twin = Pick(0, 8, 4), Pick(1, 8, 4)
    assert found.usable[twin] == pytest.approx(0.97 * found.capacity[twin])
    assert found.margin[twin] == found.margin[single]
    assert ARRANGEMENTS[1].tanks == 2


def test_own_curve_fittings_and_reserve_are_used():
    """A supplier's curve, the maker's pressure point and a computed reserve replace the defaults."""
    own = resin.capacity_table([60, 160], [0.6, 1.3])
    found = search(US, table=own, reserve=1.0, fittings=(40.0, 50.0))
    plain = search(US)
    at = Pick(0, 8, 4)
    assert found.capacity[at] == pytest.approx(
        found.beds[8].resin_volume / 2 * resin.trade_capacity(plain.doses[4], own)
    )
    assert found.reserve[at] == 1.0
    lost = 50.0 * (US.peak_flow / 40.0) ** 2
    assert found.pressure_loss[at] == pytest.approx(plain.pressure_loss[at] + lost)


@settings(max_examples=25, deadline=None)
@given(st.floats(0.3, 20.0), st.floats(10.0, 120.0), st.floats(2.0, 25.0))
def test_laws_of_the_search(load, peak, temperature):
    """More salt never less capacity; colder water never less pressure; what fits keeps every limit."""
    limits = Limits(longest=7.0)
    found = search(Demand(load, 4.0, peak, temperature), limits)
    colder = search(Demand(load, 4.0, peak, temperature - 1.0), limits)
    assert np.all(np.diff(found.capacity[:2], axis=2) >= -1e-12)
    assert np.all(colder.pressure_loss >= found.pressure_loss)
    fits = found.fits
    assert np.all(found.interval[fits] <= 7.0)
    assert np.all(found.interval_full[0][fits[0]] >= limits.shortest)
    assert np.all(found.margin[fits] >= -1e-12)
    assert np.all(found.pressure_loss[fits] <= limits.pressure_loss)
    stoichiometric = resin.STOICHIOMETRIC_EFFICIENCY["NaCl"]
    assert not np.any(found.efficiency > stoichiometric)


def test_valve_settings_agree_with_the_candidate():
    """The meter passes the usable capacity, the refill dissolves the salt, the steps are those of the sizing."""
    found = search(US)
    head = valve_settings(found, found.best)
    figures = found.figures(found.best)
    assert head.meter * US.hardness / 1000.0 == pytest.approx(figures["usable"])
    assert head.refill_minutes * 0.5 * US_GALLON == pytest.approx(head.refill_water)
    assert regeneration_water(head.steps) == pytest.approx(figures["water"])
    assert drain_flow(head.steps) == max(step.flow for step in head.steps[:-1])
    assert head.override == 14.0


def test_brine_tank_by_hand():
    """365 kg a year for 8 weeks is 56 kg; at 1.05 kg/L 53.3 L, and 10 L of water on top."""
    assert salt_storage(365.0, 8.0) == pytest.approx(56.0)
    assert brine_tank_volume(56.0, 10.0) == pytest.approx(63.33, abs=0.01)
