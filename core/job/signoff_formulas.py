"""The arithmetic of a sign-off, each formula with its card.

leak_share(softened, raw, base=0) -> share        raw water that gets past the resin
hardness_met(water [L], raw [mmol/L]) -> mol      what the bed has had to take up
water_until_spent(capacity [mol], raw) -> L       how far the bed lasts on this water
part_of(one, other) -> share                      salt used of the salt set, water counted of the water drawn
chance_above(value, limit, doubt) -> 0 to 1       that the truth lies above a limit
doubt_that_tells(value, limit) -> same unit       standard deviation that would settle a reading
"""

from __future__ import annotations

from math import erfc, sqrt

import numpy as np

from core.treatment.broadcast import Number, broadcasts, either, larger, ratio
from core.working import formula

BAND = 1.2815515655446004  # standard deviations on either side that hold 8 cases of 10 of a normal doubt


@formula(
    "Raw water past the resin",
    "leak = (outlet − what the resin itself lets through) ÷ (raw − what the resin itself lets through)",
    unit="",
    takes={"softened": "mmol/L", "raw": "mmol/L", "base": "mmol/L"},
    source="definition",
    validity="With the blending valve closed, and only where the bed is fresh: later an exhausted bed adds to it.",
)
@broadcasts
def leak_share(softened: Number, raw: Number, base: Number = 0.0) -> Number:
    """Part of the water that reaches the outlet without having met the resin; none where the outlet is softer."""
    return larger(ratio(softened - base, raw - base), 0.0)


@formula(
    "Hardness met since the regeneration",
    "met = water × raw hardness ÷ 1000",
    unit="mol",
    takes={"water": "L", "raw": "mmol/L"},
    source="definition",
)
@broadcasts
def hardness_met(water: Number, raw: Number) -> Number:
    """Hardness that has come to the bed since it was regenerated. [mol]"""
    return water * raw / 1000.0


@formula(
    "Water until the bed is used up",
    "water = capacity × 1000 ÷ raw hardness",
    unit="L",
    takes={"capacity": "mol", "raw": "mmol/L"},
    source="definition",
    validity="The capacity figures of the trade hold to about 10 to 15 %.",
)
@broadcasts
def water_until_spent(capacity: Number, raw: Number) -> Number:
    """Water the bed softens between two regenerations if run to its end. [L]"""
    return ratio(1000.0 * capacity, raw)


@formula("Part", "part = found ÷ expected", unit="", takes={"found": "", "expected": ""}, source="definition")
@broadcasts
def part_of(found: Number, expected: Number) -> Number:
    """What was found as a part of what was expected; NaN where nothing was expected."""
    return ratio(found, expected)


@formula(
    "Chance that the truth lies above a limit",
    "chance = Φ((reading − limit) ÷ doubt)",
    unit="",
    takes={"value": "as the limit", "limit": "as the reading", "doubt": "as the reading"},
    source="definition",
    validity="Φ is the normal distribution; the doubt is a standard deviation.",
)
@broadcasts
def chance_above(value: Number, limit: Number, doubt: Number) -> Number:
    """Chance, 0 to 1, that the true value lies above a limit; without a doubt 0, 1, or a half on the limit itself."""
    apart = value - limit
    sharp = either(np.equal(apart, 0.0) if np.ndim(apart) else apart == 0.0, 0.5, either(apart > 0.0, 1.0, 0.0))
    scaled = ratio(apart, doubt)
    soft = _normal_below(scaled)
    certain = np.equal(doubt, 0.0) if np.ndim(scaled) else doubt == 0.0
    return either(certain, sharp + 0.0 * apart, soft)


def _normal_below(scaled: Number) -> Number:
    if type(scaled) is float:
        return 0.5 * erfc(-scaled / sqrt(2.0))
    return np.vectorize(lambda one: 0.5 * erfc(-one / sqrt(2.0)), otypes=[float])(scaled)


@formula(
    "Doubt that would settle it",
    "doubt = |reading − limit| ÷ 1.28",
    unit="as the reading",
    takes={"value": "as the limit", "limit": "as the reading"},
    source="definition",
    validity="Then the band of 8 cases of 10 just no longer reaches the limit, if the reading stays what it is.",
)
@broadcasts
def doubt_that_tells(value: Number, limit: Number) -> Number:
    """Standard deviation of a reading with which it would lie clearly on its side of a limit. [its unit]"""
    return abs(value - limit) / BAND
