"""The dense solver: by hand, against a general solver on a thousand random problems, and the laws of prices."""

from collections import Counter

import numpy as np
import pytest
from numpy.testing import assert_allclose
from scipy.optimize import linprog

from core.errors import InputError
from core.treatment.linear_program import Optimum, program, solve

SEEDS = range(1000)
HIGHS_SAYS = {0: "optimal", 2: "infeasible", 3: "unbounded"}
SAME = 1e-8  # of the cost, relative to its size or one


def problem(seed):
    """A random problem: real or whole coefficients, some unknowns free, some rows equal, some contradicting."""
    draw = np.random.default_rng(seed)
    n, m = int(draw.integers(1, 13)), int(draw.integers(0, 17))
    whole = seed % 3 == 1  # whole numbers make ties, and so degenerate corners
    rows = draw.integers(-3, 4, size=(m, n)).astype(float) if whole else draw.normal(size=(m, n))
    cost = draw.integers(-3, 4, size=n).astype(float) if whole else draw.normal(size=n)
    if seed % 3 == 2:
        rows, cost = np.abs(rows), np.abs(cost)
    low = np.where(draw.random(n) < 0.85, 0.0, -np.inf)
    high = np.where(draw.random(n) < 0.8, draw.integers(1, 4, size=n).astype(float), np.inf)
    inside = np.clip(draw.integers(0, 3, size=n).astype(float), np.where(np.isfinite(low), low, -1.0), high)
    activity = rows @ inside
    room = draw.integers(0, 2, size=m) if whole else np.where(draw.random(m) < 0.5, 0.0, draw.random(m))
    row_low = np.where(draw.random(m) < 0.5, activity - room, -np.inf)
    row_high = np.where(draw.random(m) < 0.6, activity + room, np.inf)
    if m and draw.random() < 0.45:  # a row that asks for the impossible, or nearly so
        row = draw.integers(m)
        row_high[row], row_low[row] = activity[row] - 3.0 * draw.random(), -np.inf
    if m > 1 and draw.random() < 0.3:
        rows[-1], row_low[-1], row_high[-1] = rows[0], row_low[0], row_high[0]
    return cost, rows, row_low, row_high, low, high


def highs(cost, rows, row_low, row_high, low, high):
    """The same problem by HiGHS; its presolve cannot always tell infeasible from unbounded, so it is left out."""
    above, below = np.isfinite(row_high), np.isfinite(row_low)
    sides = np.concatenate([row_high[above], -row_low[below]])
    return linprog(
        cost,
        A_ub=np.vstack([rows[above], -rows[below]]) if sides.size else None,
        b_ub=sides if sides.size else None,
        bounds=list(zip(low, high, strict=True)),
        method="highs",
        options={"presolve": False},
    )


def test_a_thousand_random_problems_against_highs():
    """Same verdict and same cost as a general solver: feasible, infeasible, unbounded and degenerate problems."""
    seen, degenerate, different = Counter(), 0, []
    for seed in SEEDS:
        given = problem(seed)
        ours, theirs = solve(program(*given)), highs(*given)
        if theirs.status not in HIGHS_SAYS:
            # It gave up: then a problem without cost says at least whether there is a point at all.
            theirs = highs(np.zeros_like(given[0]), *given[1:])
            assert (theirs.status == 2) == (ours.verdict == "infeasible")
            continue
        verdict = HIGHS_SAYS[theirs.status]
        seen[verdict] += 1
        degenerate += ours.degenerate
        if ours.verdict != verdict:
            different.append((seed, ours.verdict, verdict))
        elif verdict == "optimal" and abs(ours.cost - theirs.fun) > SAME * max(1.0, abs(theirs.fun)):
            different.append((seed, ours.cost, theirs.fun))

    assert different == []
    assert sum(seen.values()) > 990
    assert min(seen["optimal"], seen["infeasible"], seen["unbounded"]) > 50  # all kinds were met
    assert degenerate > 100


def answered(verdict):
    """The random problems with this verdict of ours, and our answers."""
    for seed in range(0, 1000, 7):
        given = problem(seed)
        found = solve(program(*given))
        if found.verdict == verdict:
            yield given, found


def test_optimum_keeps_every_limit():
    """What is called optimal lies within rows and bounds, and its cost is that of its point."""
    tried = 0
    for (cost, rows, row_low, row_high, low, high), found in answered("optimal"):
        tried += 1
        slack = 1e-8 * (1.0 + np.abs(np.concatenate([found.activity, found.x])).max())
        assert_allclose(found.activity, rows @ found.x, atol=1e-9)
        assert np.all((found.activity >= row_low - slack) & (found.activity <= row_high + slack))
        assert np.all((found.x >= low - slack) & (found.x <= high + slack))
        assert found.cost == pytest.approx(cost @ found.x, abs=1e-12)
    assert tried > 50


def test_contradiction_contradicts_itself():
    """The rows and bounds named in a contradiction are infeasible without all the others, says HiGHS too."""
    tried = 0
    for (cost, rows, row_low, row_high, low, high), found in answered("infeasible"):
        tried += 1
        kept, bound = list(found.conflict), np.zeros(len(low), dtype=bool)
        bound[list(found.conflict_bounds)] = True
        low, high = np.where(bound, low, -np.inf), np.where(bound, high, np.inf)
        alone = (np.zeros_like(cost), rows[kept], row_low[kept], row_high[kept], low, high)
        assert solve(program(*alone)).verdict == "infeasible"
        assert highs(*alone).status == 2
    assert tried > 10


def test_by_hand():
    """Cheapest mix of 1 and 3 a unit that sums to 1 with 4·x + 1·y at most 2: x = 1/3, cost 7/3, price -2/3."""
    found = solve(program([1.0, 3.0], [[1.0, 1.0], [4.0, 1.0]], [1.0, -np.inf], [1.0, 2.0], 0.0, 1.0))

    assert found.verdict == "optimal"
    assert_allclose(found.x, [1 / 3, 2 / 3], rtol=1e-14)
    assert found.cost == pytest.approx(7 / 3, rel=1e-14)
    assert found.price[1] == pytest.approx(-2 / 3, rel=1e-14)  # one more allowed: a third less of the dear one
    assert found.reduced.tolist() == [0.0, 0.0]
    assert not found.degenerate


def test_price_is_what_a_moved_limit_changes():
    """At a corner that is not degenerate the price of a row is the slope of the least cost over its limit."""
    tried, step = 0, 1e-6
    for (cost, rows, row_low, row_high, low, high), found in answered("optimal"):
        if found.degenerate or not found.price.any():
            continue
        tried += 1
        row = int(np.abs(found.price).argmax())
        for side in (row_low, row_high):
            if side[row] == pytest.approx(found.activity[row], abs=1e-9):
                side[row] += step
        moved = solve(program(cost, rows, row_low, row_high, low, high))
        assert (moved.cost - found.cost) / step == pytest.approx(found.price[row], abs=1e-6, rel=1e-6)
    assert tried > 20


def test_steps_without_gain_do_not_circle():
    """Beale's example, which sends the steepest price round in a circle for ever, is solved (cost -1/20)."""
    found = solve(
        program(
            [-0.75, 150.0, -0.02, 6.0],
            [[0.25, -60.0, -0.04, 9.0], [0.5, -90.0, -0.02, 3.0], [0.0, 0.0, 1.0, 0.0]],
            -np.inf,
            [0.0, 0.0, 1.0],
            0.0,
            np.inf,
        )
    )
    assert found.verdict == "optimal"
    assert found.cost == pytest.approx(-0.05, abs=1e-12)


def test_units_of_a_row_do_not_matter():
    """A row in µg and the same row in g have one answer; the price follows the unit."""
    base = ([1.0, 3.0], [[1.0, 1.0], [4.0, 1.0]], [1.0, -np.inf], [1.0, 2.0])
    grams = solve(program(*base, 0.0, 1.0))
    small = np.array([1.0, 1e-9])
    micro = solve(
        program(base[0], np.array(base[1]) * small[:, None], np.array(base[2]) * small, np.array(base[3]) * small, 0, 1)
    )

    assert_allclose(micro.x, grams.x, rtol=1e-12)
    assert micro.price[1] == pytest.approx(grams.price[1] * 1e9, rel=1e-12)


@pytest.mark.parametrize(
    ("arguments", "verdict"),
    [
        (([1.0], np.zeros((0, 1)), [], [], 0.0, np.inf), "optimal"),
        (([-1.0], np.zeros((0, 1)), [], [], 0.0, np.inf), "unbounded"),
        (([1.0], [[1.0]], [2.0], [1.0], 0.0, 1.0), "infeasible"),
        (([1.0], [[1.0]], [0.0], [1.0], 3.0, 2.0), "infeasible"),
        (([0.0], [[0.0]], [1.0], [1.0], 0.0, 1.0), "infeasible"),
        (([0.0, 0.0], [[1.0, -1.0]], [0.0], [0.0], -np.inf, np.inf), "optimal"),
    ],
)
def test_edges(arguments, verdict):
    """No rows, crossed limits, a row of zeros, unknowns without bounds."""
    found = solve(program(*arguments))

    assert isinstance(found, Optimum)
    assert found.verdict == verdict


def test_missing_numbers_are_refused():
    """A NaN would spread through the table in silence: it is refused at the door."""
    with pytest.raises(InputError, match="coefficient"):
        program([1.0], [[np.nan]], [0.0], [1.0], 0.0, 1.0)
    with pytest.raises(InputError, match="limit"):
        program([1.0], [[1.0]], [np.nan], [1.0], 0.0, 1.0)
