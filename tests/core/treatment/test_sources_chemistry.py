"""pH, saturation and lime of a blend: never by guess, found where a grid finds them, and said where they are not."""

from dataclasses import replace

import numpy as np
import pytest

from core.chemistry import Solution, at_temperature, mix, precipitation_potential, speciate
from core.treatment.limits import keeps, limits_of, typed_limit
from core.treatment.sources import Source, blend_sources
from core.treatment.sources_case import make_case
from core.treatment.sources_waters import Waters
from tests.core.treatment.wells import FIELD, HARD, SOFT, WELLS

STEPS = 50  # of the grid of shares: 1326 blends of three wells


def wells_of(seed):
    """Three random wells and a question about pH, saturation or lime; about half of them have no answer."""
    draw = np.random.default_rng(seed)
    wells = [
        Source(
            f"s{i}",
            {
                "calcium": draw.uniform(0.1, 4.0),
                "magnesium": draw.uniform(0.05, 1.2),
                "sodium": draw.uniform(5.0, 100.0),
                "alkalinity": draw.uniform(0.8, 7.0),
                "ph": draw.uniform(6.6, 8.1),
                "temperature": draw.uniform(8.0, 16.0),
                "nitrate": draw.uniform(0.05, 1.2),
                "chloride": 0.8,
            },
            most=draw.uniform(500.0, 1000.0),
            cost=draw.uniform(0.05, 0.5),
        )
        for i in range(3)
    ]
    index = draw.uniform(-0.3, 0.3)
    limits = (
        [typed_limit("saturation", index, index + draw.uniform(0.02, 0.3))],
        [typed_limit("ccpp", -12.0, draw.uniform(-8.0, 4.0)), typed_limit("ph", low=draw.uniform(6.9, 7.5))],
        [typed_limit("saturation", index, index + 0.2), typed_limit("saturation", high=index + 0.8, temperature=60.0)],
    )[seed % 3]
    return wells, [*limits, typed_limit("nitrate", high=0.9)]


def cheapest_on_a_grid(wells, limits):
    """Least cost among all blends in steps of 2 %; None where no such blend keeps the limits."""
    case = make_case(wells, 1000.0, limits)
    shares = [(i, j, STEPS - i - j) for i in range(STEPS + 1) for j in range(STEPS + 1 - i)]
    x = np.array(shares, dtype=float) / STEPS
    kept = np.all((x <= case.most + 1e-12) & (x >= case.least - 1e-12), axis=1)
    for limit in case.limits:
        kept &= x @ case.values(limit.parameter) <= limit.high
    for values, limit in zip(Waters(case).values(x, case.chemical), case.chemical, strict=True):
        kept &= (values <= limit.high) & (values >= limit.low)
    return float((x[kept] @ case.cost).min()) if kept.any() else None


def test_search_finds_what_a_grid_finds_and_no_dearer():
    """Whatever limits on pH, saturation or lime: where a grid of all blends has one, the search has one as cheap."""
    found = none = searched = 0
    for seed in range(12):
        wells, limits = wells_of(seed)
        blend, grid = blend_sources(wells, 1000.0, limits), cheapest_on_a_grid(wells, limits)
        if blend.verdict == "none fits":
            assert grid is None
            continue
        found += blend.verdict == "fits"
        none += blend.verdict == "none found"
        searched += blend.chemistry.tried > 1
        assert blend.chemistry.tried < 800
        assert grid is None or (blend.verdict == "fits" and blend.cost <= grid * (1 + 1e-6)), seed
    assert min(found, none, searched) >= 3


def test_what_is_called_met_is_met_by_the_chemistry():
    """Each blend that fits is mixed again, water by water, and keeps its limits; one that does not says so."""
    for seed in range(4):
        wells, limits = wells_of(seed)
        blend = blend_sources(wells, 1000.0, limits)
        if blend.chemistry is None or blend.verdict == "none fits":
            continue
        water = mix([_water(well) for well in wells], [flow.flow for flow in blend.flows])
        kept = []
        for state in blend.limits:
            if state.limit not in [limit for limit, _ in blend.chemistry.values]:
                continue
            value = _value(water, state.limit)
            assert state.value == pytest.approx(value, abs=1e-6 if state.limit.parameter != "ccpp" else 1e-4)
            kept.append(keeps(state.value, state.limit))
        assert all(kept) == (blend.verdict == "fits"), seed
        assert all(state.kept for state in blend.limits) == (blend.verdict == "fits")


def _water(well):
    of = well.analysis
    return Solution(
        temp_c=of["temperature"],
        ph=of["ph"],
        alkalinity=of["alkalinity"],
        ca=of["calcium"],
        mg=of["magnesium"],
        na=of["sodium"] / 22.98976928,
        cl=of["chloride"],
        no3=of["nitrate"],
    )


def _value(water, limit):
    if limit.temperature is not None:
        water = at_temperature(water, limit.temperature)
    if limit.parameter == "ccpp":
        return precipitation_potential(water)
    species = speciate(water)
    return species.ph if limit.parameter == "ph" else species.si_calcite


def test_chemistry_is_not_searched_where_the_cheapest_blend_keeps_it():
    """The linear optimum is the optimum, if it keeps the chemistry's limits too: then one blend was computed."""
    plain = blend_sources(WELLS, 1000.0, [typed_limit("nitrate", high=0.8)])
    same = blend_sources(WELLS, 1000.0, [typed_limit("nitrate", high=0.8), typed_limit("ph", 6.5, 9.5)])

    assert same.chemistry.tried == 1
    assert same.cost == plain.cost
    assert not np.isnan(same.limits[0].price)


def test_what_the_limits_cost_is_said():
    """A limit on saturation makes the water dearer by the difference of the two blends."""
    plain = blend_sources(WELLS, 1000.0)
    bound = blend_sources(WELLS, 1000.0, [typed_limit("saturation", low=0.0)])

    assert plain.chemistry.saturation < 0.0 <= bound.chemistry.saturation + 1e-8
    assert bound.chemistry.dearer_by == pytest.approx(bound.cost - plain.cost, abs=1e-9)
    assert bound.chemistry.dearer_by > 0.001
    assert bound.limits[0].holds == "low"


def test_none_found_is_not_rounded_into_found():
    """Where no blend reaches the pH the verdict says so, the limit is not kept, and the nearest blend is shown."""
    blend = blend_sources(WELLS, 1000.0, [typed_limit("ph", low=7.5)])

    assert blend.verdict == "none found"
    assert not blend.limits[0].kept
    assert blend.limits[0].margin < 0.0
    assert np.isnan(blend.chemistry.dearer_by)
    assert sum(flow.flow for flow in blend.flows) == pytest.approx(1000.0)
    assert blend.limits[0].value > max(7.4, blend_sources(WELLS, 1000.0).chemistry.ph)


def test_the_same_question_has_the_same_answer():
    """Nothing is drawn by chance."""
    asked = (WELLS, 1000.0, [typed_limit("saturation", low=0.0)])

    assert blend_sources(*asked).flows == blend_sources(*asked).flows


def test_unmeasured_ph_is_missing_or_unchecked():
    """Without the pH of each well that may run a limit on it is missing if asked for, else unchecked."""
    blind = replace(FIELD, analysis={k: v for k, v in FIELD.analysis.items() if k != "ph"})
    asked = blend_sources([HARD, blind, SOFT], 1000.0, [typed_limit("ph", low=7.0)])
    ruled = blend_sources([HARD, blind, SOFT], 1000.0, limits_of("EU"))

    assert asked.verdict == "missing"
    assert asked.missing == (("field well", "ph"),)
    assert "ph" in {limit.parameter for limit, _ in ruled.unchecked}
    assert ruled.chemistry is None  # the blind well runs, so nothing is said about pH


def test_chemistry_of_a_blend_leaves_out_what_stands_still():
    """A well that stands still need not be measured for the blend to be judged."""
    blind = replace(SOFT, analysis={k: v for k, v in SOFT.analysis.items() if k != "ph"})
    blend = blend_sources([HARD, FIELD, blind], 1000.0, [typed_limit("nitrate", high=0.9)])

    assert blend.flows[2].stands == "stopped"
    assert blend.chemistry.ph == pytest.approx(7.15, abs=0.1)


def test_lime_of_each_source_stands_beside_that_of_the_blend():
    """What each well would precipitate or dissolve by itself is told, so that the surprise of mixing shows."""
    blend = blend_sources(WELLS, 1000.0, [typed_limit("hardness", high=2.0)])
    giving = [flow for flow in blend.flows if flow.flow > 0.0]
    alone = dict(blend.chemistry.of_sources)

    assert set(alone) == {flow.name for flow in giving}
    assert alone["soft well"] == pytest.approx(precipitation_potential(_plain(SOFT)), abs=0.01)
    assert blend.chemistry.ccpp < sum(flow.share * alone[flow.name] for flow in giving)


def _plain(well):
    of = well.analysis
    totals = {"ca": "calcium", "mg": "magnesium", "cl": "chloride", "so4": "sulfate", "no3": "nitrate"}
    known = {name: of[parameter] for name, parameter in totals.items()}
    ph = {"temp_c": of["temperature"], "ph": of["ph"], "alkalinity": of["alkalinity"]}
    return Solution(**known, **ph, na=of["sodium"] / 22.98976928)


def test_german_rule_counts_as_kept_from_its_ph_on():
    """A soft water of pH 7.72 that dissolves more than 5 mg/L keeps the rule; at pH 7.6 it does not."""
    of = {"calcium": 0.8, "magnesium": 0.2, "alkalinity": 1.6, "temperature": 8.0}
    rule = [limit for limit in limits_of("DE") if limit.parameter == "calcite dissolution"]
    for ph, kept in ((7.72, True), (7.6, False)):
        well = Source("soft", {**of, "ph": ph}, most=100.0)
        blend = blend_sources([well], 50.0, rule)

        assert blend.chemistry.ccpp < -5.0
        assert blend.limits[0].kept is kept
        assert (blend.verdict == "fits") is kept


def test_hardness_alone_is_split_and_said():
    """Hardness without its calcium is split as elsewhere, a quarter magnesium, and the assumption is named."""
    kit = Source("kit", {"hardness": 4.0, "alkalinity": 6.0, "ph": 7.2, "temperature": 12.0}, most=100.0)
    judged = blend_sources([kit], 50.0).chemistry

    assert {"calcium", "magnesium", "sodium"} <= set(judged.assumed)
    assert (judged.water.ca, judged.water.mg) == pytest.approx((3.0, 1.0))


def test_aim_is_kept_while_the_chemistry_is_searched():
    """With a limit on saturation the margin is still the aim if it was, at a price."""
    limits = [typed_limit("nitrate", high=1.0), typed_limit("sodium", high=50.0), typed_limit("saturation", low=-0.05)]
    cheap, roomy = (blend_sources(WELLS, 1000.0, limits, aim=name) for name in ("cost", "margin"))

    assert cheap.verdict == roomy.verdict == "fits"
    linear = [min(state.margin for state in blend.limits[:2]) for blend in (cheap, roomy)]
    assert linear[0] < linear[1]
    assert cheap.cost < roomy.cost
