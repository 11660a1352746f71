"""Run-out: what a simulated year says of a reserve."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from core.treatment.running import Habits, compare_reserves, draw_use, reserve_for, run_out

STEADY = Habits(day_to_day=0.0, weekend=1.0, guest_days=0.0, away_days=0.0, unknown=0.0)
SMALL = {"households": 200}


def test_the_same_seed_gives_the_same_year():
    """Nothing is random without a seed, and a generator may be handed in."""
    first, second = draw_use(2.0, seed=7, **SMALL), draw_use(2.0, seed=7, **SMALL)
    np.testing.assert_array_equal(first, second)
    np.testing.assert_array_equal(first, draw_use(2.0, seed=np.random.default_rng(7), **SMALL))
    assert (draw_use(2.0, seed=8, **SMALL) != first).any()


def test_habits_give_the_year_they_describe():
    """Mean, days away and the weekend come out as they were put in, within the noise of 2000 households."""
    use = draw_use(2.0, Habits(guest_days=0.0, away_days=30.0))
    away = (use == 0.0).mean() * 365.0
    assert away == pytest.approx(30.0, rel=0.03)
    assert use[use > 0.0].mean() == pytest.approx(2.0, rel=0.02)
    weekend = use[5::7].mean() / use[0::7].mean()
    assert weekend == pytest.approx(1.2, rel=0.03)


def test_steady_days_by_hand():
    """2 mol a day, 10 mol of capacity, 2 in reserve: spent 8 after four days, so it regenerates every fourth night."""
    use = draw_use(2.0, STEADY, days=364, **SMALL)
    run = run_out(use, 10.0, 2.0)
    assert run.hard_days == 0.0
    assert run.households_spared == 1.0
    assert run.regenerations * 364 / 365 == pytest.approx(91.0)
    assert run.unused == pytest.approx(0.2)


def test_no_reserve_and_a_capacity_of_half_days_is_hard_each_time():
    """By hand: 9 mol, 2 a day: on the fifth day 1 of 2 mol is hard, so one day in five and a tenth of the water."""
    use = draw_use(2.0, STEADY, days=365, **SMALL)
    run = run_out(use, 9.0, 0.0)
    assert run.hard_days == pytest.approx(73.0)
    assert run.hard_share == pytest.approx(0.1)
    assert run.households_spared == 0.0


def test_the_calendar_regenerates_in_time():
    """With four days at most, a bed for ten days regenerates after four."""
    use = draw_use(2.0, STEADY, days=364, **SMALL)
    run = run_out(use, 20.0, 2.0, longest=4.0)
    assert run.regenerations * 364 / 365 == pytest.approx(91.0)


@settings(max_examples=10, deadline=None)
@given(st.floats(1.0, 4.0), st.integers(0, 1000))
def test_more_reserve_is_never_hard_more_often_on_the_whole(load, seed):
    """Hard days fall, regenerations rise and waste rises with the reserve, over many households."""
    use = draw_use(load, seed=seed, households=400)
    run = run_out(use, 13.0, np.linspace(0.0, 9.0, 4))
    assert np.all(np.diff(run.hard_days) <= 0.0)
    assert np.all(np.diff(run.regenerations) >= 0.0)
    assert np.all((run.hard_share >= 0.0) & (run.hard_share <= 1.0))


def test_array_of_reserves_equals_single_ones():
    """Each reserve of an array is the reserve asked alone; a single one gives floats."""
    use = draw_use(2.0, **SMALL)
    together = run_out(use, 12.0, [[0.5, 2.0], [3.0, 4.0]])
    alone = run_out(use, 12.0, 3.0)
    assert together.hard_days.shape == (2, 2)
    assert together.hard_days[1, 0] == alone.hard_days
    assert type(alone.unused) is float


def test_the_reserve_found_keeps_to_the_days_allowed():
    """The reserve computed allows no more hard days than asked, and a 32nd less of the capacity would."""
    use = draw_use(2.0)
    reserve = reserve_for(use, 13.0, allowed=2.0)
    assert run_out(use, 13.0, reserve).hard_days <= 2.0
    assert run_out(use, 13.0, reserve - 13.0 / 32.0).hard_days > 2.0
    assert reserve_for(draw_use(0.0, **SMALL), 13.0) == 0.0
    assert np.isnan(reserve_for(use, 1.0, allowed=0.1))


def test_rules_of_thumb_stand_beside_the_computed_reserve():
    """All three reserves are judged on the same days."""
    use = draw_use(2.0, **SMALL)
    three = compare_reserves(use, 13.0, 2.0, allowed=1.0)
    assert list(three) == ["computed", "one day", "a quarter"]
    assert three["one day"].reserve == 2.0
    assert three["a quarter"].reserve == 3.25
    assert three["computed"].hard_days <= 1.0


def test_two_tanks_hardly_run_out():
    """The second tank takes over at once: only a day above what both hold is hard."""
    use = draw_use(2.0, **SMALL)
    assert run_out(use, 13.0, 0.4, twin=True).hard_days == 0.0
    assert run_out(use, 1.0, 0.0, twin=True).hard_days > 10.0


def test_the_short_count_of_the_search_is_the_full_count():
    """Looking for a reserve counts the same hard days as following the whole year, with and without a calendar."""
    use = draw_use(2.0, **SMALL)
    for longest in (np.inf, 4.0):
        reserve = reserve_for(use, 13.0, allowed=3.0, longest=longest)
        assert run_out(use, 13.0, reserve, longest=longest).hard_days <= 3.0
        if reserve > 0.0:
            assert run_out(use, 13.0, reserve - 13.0 / 64.0, longest=longest).hard_days > 3.0
