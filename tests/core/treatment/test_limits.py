"""Limits by rule set: the printed ones, the units they come in, and who keeps them."""

from math import inf, nan

import pytest

from core.errors import InputError
from core.treatment import limits
from core.treatment.blending import sodium_limits
from core.treatment.limits import Limit, limits_of, rule_sets, typed_limit
from core.units import convert
from tests.published import rows


def _limit(rule_set, parameter):
    return next(limit for limit in limits_of(rule_set) if limit.parameter == parameter)


def _verdict(parameter, value, unit):
    analysis = {parameter: convert(value, unit, limits.PARAMETERS[parameter].unit, parameter)}
    return {key: "exceeded" if limits.exceeded(analysis, limits_of(key)) else "kept" for key in rule_sets()}


def _high(rule_set, parameter, unit):
    return {"high": convert(_limit(rule_set, parameter).high, limits.PARAMETERS[parameter].unit, unit, parameter)}


def _calcite(ccpp, ph, mixed):
    verdict = limits.calcite_rule(-ccpp, ph, mixed=mixed)
    return {"met": verdict.met, "by_ph": verdict.by_ph, "limit": verdict.limit}


def _efficiency(grains_per_lb):
    return {"allowed": limits.efficiency_allowed(grains_per_lb * limits.GRAIN_PER_POUND)}


COMPUTED = {"verdict": _verdict, "limit": _high, "calcite rule": _calcite, "efficiency": _efficiency}


@pytest.mark.parametrize("row", rows("limits"), ids=lambda row: row.id)
def test_check_value(row):
    """What we say of a limit is what its source says."""
    row.check(**COMPUTED[row.what](**row.inputs))


def test_one_sodium():
    """The sodium of a rule set is the sodium that the softener's own table has."""
    mine = {(limit.words, limit.high) for key in rule_sets() for limit in limits_of(key, advice=True)}

    assert {(limit.words, limit.value) for limit in sodium_limits()} - mine == set()


def test_advice_is_asked_for():
    """Advice for some people does not bind everybody: it comes only on request, and then besides the rest."""
    plain, all_ = limits_of("US"), limits_of("US", advice=True)

    assert {limit.kind for limit in plain} == {"regulation", "guideline"}
    assert set(all_) > set(plain)
    assert [limit.high for limit in all_ if limit.parameter == "sodium"] == [60.0, 20.0]


@pytest.mark.parametrize("key", ["WHO", "EU", "DE", "DE mixed", "US"])
def test_rule_sets_are_sound(key):
    """Every limit is of a known parameter, has a number, a source and a status."""
    assert rule_sets()[key]
    for limit in limits_of(key, advice=True):
        assert limit.parameter in limits.PARAMETERS
        assert limit.low < limit.high
        assert limit.low > 0 or limit.high < inf
        assert limit.source
        assert limit.status
        assert not limit.typed


@pytest.mark.parametrize(
    ("value", "low", "high", "share"),
    [(150.0, -inf, 200.0, 0.25), (220.0, -inf, 200.0, -0.1), (6.6, 6.0, inf, 0.1), (7.0, 6.5, 8.5, 0.5 / 6.5)],
)
def test_margin_by_hand(value, low, high, share):
    """The margin is the distance to the nearer side, as a share of that side."""
    assert limits.margin(value, Limit("sodium", low, high)) == pytest.approx(share, rel=1e-12)


def test_unknown_is_never_kept():
    """What was not measured neither keeps nor exceeds a limit: it is listed as unknown."""
    rules = limits_of("EU")
    sour = {"sodium": 10.0, "iron": nan}

    assert limits.exceeded(sour, rules) == ()
    assert {limit.parameter for limit in limits.unknown(sour, rules)} == {r.parameter for r in rules} - {"sodium"}
    assert limits.margin(nan, rules[0]) != limits.margin(nan, rules[0])  # NaN
    assert not limits.keeps(nan, rules[0])


def test_the_limit_itself_is_kept_and_a_hair_more_is_not():
    """Rounding of a float is forgiven, a thousandth of a thousandth above is not."""
    assert limits.keeps(200.0 * (1 + 1e-12), Limit("sodium", high=200.0))
    assert not limits.keeps(200.0 * (1 + 1e-6), Limit("sodium", high=200.0))
    assert not limits.keeps(1e-6, Limit("lead", high=0.0))


@pytest.mark.parametrize(
    ("arguments", "word"),
    [
        (("mercury", 0.0, 1.0), "cannot be limited"),
        (("sodium",), "no number"),
        (("sodium", nan, 3.0), "no number"),
        (("sodium", 5.0, 3.0), "which is which"),
    ],
)
def test_impossible_limits_are_refused(arguments, word):
    """A limit that cannot be one is refused in a sentence."""
    with pytest.raises(InputError, match=word):
        typed_limit(*arguments)
    with pytest.raises(InputError, match="known are"):
        limits_of("Atlantis")
