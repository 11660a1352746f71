"""Several sources blended: by hand, against general solvers, what blocks, what a limit costs, what is not known."""

from dataclasses import replace
from math import inf, isnan, nan

import numpy as np
import pytest
from scipy.optimize import Bounds, LinearConstraint, linprog, milp

from core.errors import InputError
from core.treatment.limits import Limit, limits_of, typed_limit
from core.treatment.sources import Source, Target, Turn, blend_sources, one_off, schedule
from tests.bench import blending as bench
from tests.core.treatment.wells import FIELD, HARD, SOFT, WELLS

PARAMETERS = ("hardness", "sodium", "nitrate", "chloride")
SAME = 1e-8


def question(seed):
    """Random sources, limits and a demand; about half of them cannot be met."""
    draw = np.random.default_rng(seed)
    n = int(draw.integers(2, 13))
    content = draw.uniform(0.1, 5.0, size=(n, len(PARAMETERS)))
    if seed % 4 == 0:
        content = np.round(content)  # ties, and so degenerate corners
    most, least = draw.uniform(10.0, 60.0, size=n), draw.uniform(0.0, 9.0, size=n)
    least[draw.random(n) < 0.5] = 0.0
    cost = np.round(draw.uniform(0.05, 0.5, size=n), 2 if seed % 4 else 1)
    wells = [
        Source(f"s{i}", dict(zip(PARAMETERS, content[i], strict=True)), most[i], least[i], cost[i], may_stop=False)
        for i in range(n)
    ]
    demand = float(draw.uniform(0.3, 1.05) * most.sum())
    mean = content.mean(axis=0)
    limits = [
        Limit(name, -inf if draw.random() < 0.7 else 0.7 * mean[j], mean[j] * draw.uniform(0.85, 1.3))
        for j, name in enumerate(PARAMETERS)
        if draw.random() < 0.8
    ]
    return wells, demand, limits


def rows(wells, limits):
    """Limits as rows over shares, both sides."""
    matrix = np.array([[well.analysis[limit.parameter] for well in wells] for limit in limits])
    return matrix.reshape(len(limits), len(wells))


def general(wells, demand, limits, cost=None):
    """Least cost by a general solver, in flows instead of shares."""
    matrix = rows(wells, limits)
    sides = [(row, limit.high, 1.0) for row, limit in zip(matrix, limits, strict=True) if limit.high < inf]
    sides += [(row, limit.low, -1.0) for row, limit in zip(matrix, limits, strict=True) if limit.low > -inf]
    return linprog(
        [well.cost for well in wells] if cost is None else cost,
        A_ub=np.array([sign * (row - side) for row, side, sign in sides]) if sides else None,
        b_ub=np.zeros(len(sides)) if sides else None,
        A_eq=np.ones((1, len(wells))),
        b_eq=[demand],
        bounds=[(well.least, well.most) for well in wells],
        method="highs",
    )


def test_least_cost_as_a_general_solver_finds_it():
    """Verdict and cost of 150 random questions agree with HiGHS, which was asked in flows instead of shares."""
    seen = {"fits": 0, "none fits": 0}
    for seed in range(150):
        wells, demand, limits = question(seed)
        ours, theirs = blend_sources(wells, demand, limits), general(wells, demand, limits)
        seen[ours.verdict] += 1
        assert (theirs.status == 0) == (ours.verdict == "fits"), seed
        if ours.verdict == "fits":
            assert ours.cost * demand == pytest.approx(theirs.fun, rel=SAME), seed
    assert min(seen.values()) > 25


def test_most_margin_as_a_general_solver_finds_it():
    """The largest smallest margin of random questions agrees with HiGHS."""
    tried = 0
    for seed in range(80):
        wells, demand, limits = question(seed)
        if not limits:
            continue
        ours = blend_sources(wells, demand, limits, aim="margin")
        if ours.verdict != "fits":
            continue
        tried += 1
        n, matrix = len(wells), rows(wells, limits)
        sides = [[*row, limit.high] for row, limit in zip(matrix, limits, strict=True)]
        right = [limit.high for limit in limits]
        for row, limit in zip(matrix, limits, strict=True):
            if limit.low > -inf:
                sides.append([*-row, limit.low])
                right.append(-limit.low)
        theirs = linprog(
            [0.0] * n + [-1.0],
            A_ub=sides,
            b_ub=right,
            A_eq=[[1.0] * n + [0.0]],
            b_eq=[1.0],
            bounds=[*((well.least / demand, well.most / demand) for well in wells), (0.0, 1.0)],
            method="highs",
        )
        assert ours.margin == pytest.approx(-theirs.fun, abs=1e-7), seed
    assert tried > 20


def test_nearest_to_targets_as_a_general_solver_finds_it():
    """The sum of deviations, as shares of the targets, agrees with HiGHS; what can be hit is hit."""
    tried = hit = 0
    for seed in range(80):
        wells, demand, limits = question(seed)
        targets = [Target("hardness", 2.3), Target("sodium", 2.4 if seed % 2 else 1.2)]
        ours = blend_sources(wells, demand, limits, targets, aim="target")
        if ours.verdict != "fits":
            continue
        tried += 1
        n = len(wells)
        matrix = rows(wells, limits)
        wish = np.array([[well.analysis[target.parameter] for well in wells] for target in targets])
        both = np.array([target.value for target in targets])
        constraints = [
            LinearConstraint([[1.0] * n + [0.0] * 4], 1.0, 1.0),
            LinearConstraint(np.hstack([wish, np.kron(np.eye(2), [[-1.0, 1.0]])]), both, both),
        ]
        if limits:
            low, high = [x.low for x in limits], [x.high for x in limits]
            constraints.append(LinearConstraint(np.hstack([matrix, np.zeros((len(limits), 4))]), low, high))
        found = milp(
            np.concatenate([np.zeros(n), np.repeat(1.0 / both, 2)]),
            constraints=constraints,
            bounds=Bounds(
                [*(well.least / demand for well in wells), *[0.0] * 4],
                [*(well.most / demand for well in wells), *[inf] * 4],
            ),
        )
        deviation = sum(abs(state.value - state.target.value) / state.target.value for state in ours.targets)
        assert deviation == pytest.approx(found.fun, abs=1e-7), seed
        hit += deviation < 1e-7
    assert tried > 20
    assert hit > 3


def test_standing_sources_as_a_mixed_integer_solver_finds_them():
    """Sources that stand still or give at least so much: cost agrees with HiGHS' branch and bound."""
    tried = stopped = 0
    for seed in range(60):
        wells, demand, limits = question(seed)
        wells = [replace(well, least=0.35 * well.most, may_stop=True) for well in wells]
        ours = blend_sources(wells, demand, limits)
        n, matrix = len(wells), rows(wells, limits)
        constraints = [LinearConstraint([[1.0] * n + [0.0] * n], 1.0, 1.0)]
        if limits:
            low, high = [x.low for x in limits], [x.high for x in limits]
            constraints.append(LinearConstraint(np.hstack([matrix, np.zeros_like(matrix)]), low, high))
        for bound, lower, upper in (("least", 0.0, inf), ("most", -inf, 0.0)):
            ends = np.diag([getattr(well, bound) / demand for well in wells])
            constraints.append(LinearConstraint(np.hstack([np.eye(n), -ends]), lower, upper))
        theirs = milp(
            [*(well.cost for well in wells), *[0.0] * n],
            constraints=constraints,
            integrality=[0] * n + [1] * n,
            bounds=Bounds(0.0, [inf] * n + [1.0] * n),
            options={"mip_rel_gap": 0.0},
        )
        assert (theirs.status == 0) == (ours.verdict == "fits"), seed
        if ours.verdict == "fits":
            tried += 1
            stopped += any(flow.stands == "stopped" for flow in ours.flows)
            assert ours.cost == pytest.approx(theirs.fun, rel=1e-7), seed
            for flow, well in zip(ours.flows, wells, strict=True):
                assert flow.flow == 0.0 or well.least * (1 - 1e-6) <= flow.flow <= well.most * (1 + 1e-6)
    assert tried > 12
    assert stopped > 6


def test_two_wells_by_hand():
    """Hardness 4 and 1 to 2 mmol/L: a third of the hard one; it costs 0.1/3 + 2·0.4/3 = 0.3 a m³."""
    hard = Source("hard", {"hardness": 4.0}, most=100.0, cost=0.1)
    soft = Source("soft", {"hardness": 1.0}, most=100.0, cost=0.4)
    blend = blend_sources([hard, soft], 60.0, [typed_limit("hardness", high=2.0)])
    limit = blend.limits[0]

    assert blend.verdict == "fits"
    assert [flow.flow for flow in blend.flows] == pytest.approx([20.0, 40.0], rel=1e-12)
    assert blend.cost == pytest.approx(0.3, rel=1e-12)
    assert blend.cost_per_day == pytest.approx(0.3 * 60 * 1.44, rel=1e-12)
    assert (limit.holds, limit.kept) == ("high", True)
    assert limit.price == pytest.approx(0.1, rel=1e-9)  # 0.3 dearer water replaced by a third of a share
    assert limit.eased_to == pytest.approx(2.2)
    assert limit.eased_saves == pytest.approx(0.02, rel=1e-9)


def test_blend_conserves_mass_and_meets_the_demand():
    """Flows sum to the demand, lie in their ranges, and carry as much of everything as the blend holds."""
    for seed in range(60):
        wells, demand, limits = question(seed)
        blend = blend_sources(wells, demand, limits)
        if blend.verdict != "fits":
            continue
        flows = np.array([flow.flow for flow in blend.flows])
        assert flows.sum() == pytest.approx(demand, rel=1e-12)
        assert sum(flow.share for flow in blend.flows) == pytest.approx(1.0, rel=1e-12)
        for flow, well in zip(flows, wells, strict=True):
            assert well.least - 1e-5 <= flow <= well.most + 1e-5
        for name in PARAMETERS:
            carried = flows @ [well.analysis[name] for well in wells]
            assert blend.values[name] * demand == pytest.approx(carried, rel=1e-9)
        assert all(state.kept for state in blend.limits)


def test_order_of_sources_does_not_matter():
    """The same wells in another order give the same cost."""
    for seed in range(40):
        wells, demand, limits = question(seed)
        one, other = blend_sources(wells, demand, limits), blend_sources(wells[::-1], demand, limits[::-1])
        assert one.verdict == other.verdict
        assert one.cost == pytest.approx(other.cost, rel=1e-9)


def test_what_blocks_is_irreducible_and_would_fit_where_it_says():
    """Blocking limits cannot be kept together, by HiGHS; each is needed; eased to what is said, the rest fits."""
    tried = eased = 0
    for seed in range(60):
        wells, demand, limits = question(seed)
        blend = blend_sources(wells, demand, limits)
        if blend.verdict != "none fits" or blend.conflict.short_by or blend.conflict.over_by:
            continue
        tried += 1
        conflict = blend.conflict
        free = [
            replace(
                well,
                most=well.most if well.name in conflict.at_most else 10.0 * demand,
                least=well.least if well.name in conflict.at_least else 0.0,
            )
            for well in wells
        ]
        sides = [_one_side(block) for block in conflict.limits]
        assert general(free, demand, sides).status == 2, seed
        for left_out in range(len(sides)):
            rest = sides[:left_out] + sides[left_out + 1 :]
            assert general(free, demand, rest).status == 0, seed
        for block in conflict.limits:
            if isnan(block.would_fit_at):
                continue
            eased += 1
            for beyond, status in ((1e-6, 0), (-1e-3, 2)):
                at = block.would_fit_at + (beyond if block.side == "high" else -beyond)
                other = [replace(x, **{block.side: at}) if x == block.limit else x for x in limits]
                assert general(wells, demand, other).status == status, seed
    assert tried > 10
    assert eased > 5


def _one_side(block):
    other = {"high": "low", "low": "high"}[block.side]
    return replace(block.limit, **{other: -inf if other == "low" else inf})


def test_nearest_blend_has_the_least_excess():
    """The sum of excesses, as shares of the limits, is the least there is, by HiGHS."""
    tried = 0
    for seed in range(60):
        wells, demand, limits = question(seed)
        blend = blend_sources(wells, demand, limits)
        if blend.verdict != "none fits" or blend.conflict.short_by or blend.conflict.over_by:
            continue
        tried += 1
        n, k = len(wells), len(limits)
        matrix = rows(wells, limits)
        sides = [
            np.concatenate([row, -x.high * np.eye(k)[i]]) for i, (row, x) in enumerate(zip(matrix, limits, strict=True))
        ]
        right = [x.high for x in limits]
        for i, (row, x) in enumerate(zip(matrix, limits, strict=True)):
            if x.low > -inf:  # one excess for both sides will do: only one can be passed
                sides.append(np.concatenate([-row, -x.low * np.eye(k)[i]]))
                right.append(-x.low)
        theirs = linprog(
            [0.0] * n + [1.0] * k,
            A_ub=sides,
            b_ub=right,
            A_eq=[[1.0] * n + [0.0] * k],
            b_eq=[1.0],
            bounds=[*((well.least / demand, well.most / demand) for well in wells), *[(0.0, None)] * k],
        )
        assert sum(excess.share for excess in blend.conflict.excess) == pytest.approx(theirs.fun, abs=1e-6), seed
    assert tried > 10


def test_most_water_within_the_limits():
    """A little less than the most water fits, a little more does not."""
    tried = 0
    for seed in range(60):
        wells, demand, limits = question(seed)
        wells = [replace(well, least=0.0) for well in wells]
        blend = blend_sources(wells, demand, limits)
        if blend.verdict != "none fits" or blend.conflict.most_water < 1e-3 * demand:
            continue
        tried += 1
        most = blend.conflict.most_water
        assert blend_sources(wells, most * (1 - 1e-6), limits).verdict == "fits"
        assert blend_sources(wells, most * (1 + 1e-3), limits).verdict == "none fits"
    assert tried > 10


def test_too_little_water_is_said_first():
    """Where the wells cannot give the demand, that is the reason, whatever the limits; the rest is blended."""
    blend = blend_sources(WELLS, 3000.0, limits_of("EU"))

    assert blend.verdict == "none fits"
    assert blend.conflict.short_by == pytest.approx(600.0)
    assert blend.conflict.limits == ()
    assert blend.given == pytest.approx(2400.0)
    assert all(state.kept for state in blend.limits)


def test_price_is_what_easing_saves():
    """A price is the slope of the cost over the limit, also where several limits meet in one corner."""
    tried = 0
    for seed in range(60):
        wells, demand, limits = question(seed)
        blend = blend_sources(wells, demand, limits)
        for i, state in enumerate(blend.limits):
            if not state.holds or blend.verdict != "fits":
                continue
            tried += 1
            at = getattr(limits[i], state.holds)
            for share, saved in ((1e-4, state.price * 1e-4 * at), (0.1, state.eased_saves)):
                step = share * at * (1.0 if state.holds == "high" else -1.0)
                eased = [*limits[:i], replace(limits[i], **{state.holds: at + step}), *limits[i + 1 :]]
                cheaper = blend_sources(wells, demand, eased)
                assert blend.cost - cheaper.cost == pytest.approx(saved, abs=2e-9), (seed, share)
    assert tried > 12


def test_gap_says_when_a_source_begins_to_pay():
    """A source that stands still runs once its water is cheaper by the gap, and not before."""
    blend = blend_sources(WELLS, 1000.0, limits_of("EU"))
    gap = blend.flows[2].gap

    assert blend.flows[2].stands == "stopped"
    assert gap > 0.0
    for fall, stands in ((gap - 1e-4, "stopped"), (gap + 1e-4, "between")):
        cheaper = replace(SOFT, cost=SOFT.cost - fall)
        assert blend_sources([HARD, FIELD, cheaper], 1000.0, limits_of("EU")).flows[2].stands == stands


def test_three_wells_for_a_target():
    """Hardness wanted, sodium and nitrate held: nitrate binds, and with the soft well off it cannot be done."""
    limits = [*limits_of("EU"), typed_limit("sodium", high=60.0)]
    wish = [Target("hardness", 2.0)]
    blend = blend_sources(WELLS, 1000.0, limits, wish, aim="target")
    holds = {state.limit.parameter for state in blend.limits if state.holds}
    without = blend_sources(WELLS, 1000.0, [*limits, typed_limit("hardness", high=2.0)], off=["soft well"])

    assert blend.verdict == "fits"
    assert blend.targets[0].value == pytest.approx(2.0, rel=1e-9)
    assert holds == {"nitrate"}
    assert blend.targets[0].price < 0.0  # harder water would be cheaper
    assert without.verdict == "none fits"
    assert [block.limit.parameter for block in without.conflict.limits] == ["hardness"]
    assert without.flows[2].stands == "off"


def test_unknown_is_never_taken_for_kept():
    """What somebody asked for and nobody measured stops the answer; what a rule set asks for is listed as unchecked."""
    bare = Source("bare", {"hardness": 3.0, "sodium": nan}, most=100.0)
    asked = blend_sources([bare, HARD], 50.0, [typed_limit("sodium", high=20.0)])
    ruled = blend_sources([bare, HARD], 50.0, limits_of("EU"))

    assert asked.verdict == "missing"
    assert asked.missing == (("bare", "sodium"),)
    assert np.isnan(asked.cost)
    assert ruled.verdict == "fits"
    unchecked = {limit.parameter: names for limit, names in ruled.unchecked}
    assert unchecked["sodium"] == ("bare",)
    assert unchecked["arsenic"] == ("bare", "hard well")
    assert unchecked["ph"] == ("bare",)
    assert "sodium" not in {state.limit.parameter for state in ruled.limits}


def test_a_well_that_is_off_needs_no_analysis():
    """What is off is not asked about."""
    bare = Source("bare", {}, most=100.0)
    blend = blend_sources([bare, HARD], 50.0, [typed_limit("sodium", high=20.0)], off=["bare"])

    assert blend.verdict == "fits"
    assert blend.flows[0].stands == "off"


def test_equal_costs_take_the_most_margin():
    """Where no cost was entered, the blend farthest from its limits is taken, and nothing is priced."""
    wells = [replace(well, cost=0.0) for well in WELLS]
    limits = [typed_limit("nitrate", high=0.8), typed_limit("sodium", high=60.0)]
    plain, roomy = blend_sources(wells, 500.0, limits), blend_sources(wells, 500.0, limits, aim="margin")

    assert plain.margin == pytest.approx(roomy.margin, rel=1e-9)
    assert all(np.isnan(state.price) for state in plain.limits)


def test_everything_off():
    """With every source off nothing is given, and the whole demand is short."""
    blend = blend_sources(WELLS, 100.0, limits_of("EU"), off=[well.name for well in WELLS])

    assert blend.verdict == "none fits"
    assert blend.conflict.short_by == pytest.approx(100.0)
    assert blend.given == 0.0


def test_schedule_gives_a_blend_for_each_turn():
    """Each turn has its sources off, its demand and its hours; volumes and costs follow."""
    turns = [Turn("night", off=("hard well",), demand=400.0, hours=8.0), Turn("day", hours=16.0)]
    night, day = schedule(WELLS, 1000.0, turns, limits_of("EU"))

    assert night.blend.flows[0].stands == "off"
    assert night.volume == pytest.approx(400 * 60 * 8)
    assert day.volume == pytest.approx(1000 * 60 * 16)
    assert day.cost == pytest.approx(day.blend.cost * 960.0, rel=1e-12)
    assert [turn.off for turn in one_off(WELLS)] == [(), ("hard well",), ("field well",), ("soft well",)]


@pytest.mark.parametrize(
    ("change", "field", "word"),
    [
        ({"sources": []}, "sources", "1 to 12"),
        ({"sources": [HARD] * 13}, "sources", "1 to 12"),
        ({"sources": [HARD, HARD]}, "sources", "own name"),
        ({"sources": [replace(HARD, least=5.0, most=1.0)]}, "flow", "range of hard well"),
        ({"sources": [replace(HARD, cost=nan)]}, "cost", "not a number"),
        ({"sources": [replace(HARD, analysis={"salt": 1.0})]}, "analysis", "not known"),
        ({"sources": [replace(HARD, analysis={"sodium": -1.0})]}, "analysis", "cannot be"),
        ({"demand": 0.0}, "demand", "above zero"),
        ({"demand": nan}, "demand", "above zero"),
        ({"aim": "fame"}, "aim", "not known"),
        ({"aim": "target"}, "target", "what the blend is to have"),
        ({"aim": "margin", "limits": []}, "limit", "Choose limits"),
        ({"targets": [Target("ph", 7.0)]}, "target", "cannot be aimed at"),
        ({"targets": [Target("sodium", nan)]}, "target", "missing"),
        ({"limits": [Limit("sodium", 3.0, 1.0)]}, "limit", "cannot be one"),
        ({"off": ["nobody"]}, "off", "No source is called"),
    ],
)
def test_impossible_questions_are_refused(change, field, word):
    """What cannot be asked is refused in a sentence, with its field."""
    asked = {"sources": WELLS, "demand": 100.0, "limits": limits_of("EU"), "targets": [], "aim": "cost", "off": []}
    asked |= change
    with pytest.raises(InputError, match=word) as refusal:
        blend_sources(
            asked["sources"], asked["demand"], asked["limits"], asked["targets"], aim=asked["aim"], off=asked["off"]
        )
    assert refusal.value.field == field
    with pytest.raises(InputError, match="hours"):
        schedule(WELLS, 10.0, [Turn("never", hours=0.0)])


@pytest.mark.parametrize("case", ["least cost", "nearest to a target", "most margin", "nothing fits"])
def test_twelve_sources_and_fifteen_limits_are_quick(case):
    """A full question takes less than 50 ms of processor time, so that a phone answers while one types."""
    assert len(bench.sources()) == 12
    assert len(bench.limits()) == 15
    assert bench.CASES[case]().verdict == ("none fits" if case == "nothing fits" else "fits")
    assert bench.milliseconds(case) < 50.0
