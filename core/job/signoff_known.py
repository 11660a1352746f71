"""The causes of a miss as they are known beforehand: which signs each shows, and how surely.

Judgement on how softeners behave (common practice, no source); the reading and the weighing stand in `signoff_causes`.
A sign that a cause does not speak of counts for nobody where it is a pattern of hardness, and as unlikely where it is
something out of order: two faults at once are rarer than one.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

YES, LIKELY, OPEN, UNLIKELY, NO = 0.95, 0.8, 0.5, 0.2, 0.05  # how surely a cause shows a sign

# Signs of something out of order; all others are patterns of hardness.
FAULTS = frozenset(
    {
        "entered_low",
        "flow_high",
        "flow_low",
        "little_salt",
        "nearly_raw",
        "outlasts",
        "overdue",
        "ran_out",
        "raw_differs",
        "share_off",
        "short_count",
    }
)

GROUPS = {
    "bypass": "Raw water leaks past the resin",
    "valve": "The blending valve is not set right",
    "raw": "The raw water is not what was entered",
    "exhausted": "The bed is exhausted before it is regenerated",
    "no_brine": "The last regeneration failed",
    "fast": "The flow is too high",
    "slow": "The flow is too low",
}


@dataclass(frozen=True, slots=True)
class Known:
    """A cause as it is known beforehand: what it says of the signs."""

    group: str
    label: str
    says: Mapping[str, float]

    def expects(self, sign: str) -> float:
        """How surely the cause shows a sign, 0 to 1."""
        return self.says.get(sign, UNLIKELY if sign in FAULTS else OPEN)


_SPENT = {"fresh_hard": NO, "late_hard": YES, "grows": YES}  # a bed that ran out, whatever the reason

SOFT_MISSED = {
    "bypass": Known(
        "bypass",
        "A bypass at the softener or a seal inside its valve leaks",
        {
            "closed_hard": YES,
            "fresh_hard": YES,
            "late_hard": YES,
            "grows": NO,
            "fast_harder": NO,
            "slow_harder": UNLIKELY,
        },
    ),
    "leak_after": Known(
        "bypass",
        "The closed blending valve, or a bypass behind it, leaks",
        {"closed_hard": YES, "fresh_hard": NO, "late_hard": NO, "grows": NO, "fast_harder": NO, "slow_harder": NO},
    ),
    "overdue": Known(
        "exhausted",
        "The bed ran out: its regeneration is overdue",
        {**_SPENT, "ran_out": YES, "overdue": YES},
    ),
    "entered": Known(
        "exhausted",
        "The bed ran out: the valve head is set for softer water",
        {**_SPENT, "ran_out": LIKELY, "overdue": NO, "entered_low": YES, "outlasts": LIKELY},
    ),
    "miscount": Known(
        "exhausted",
        "The bed ran out: the meter counts too little",
        {**_SPENT, "overdue": NO, "short_count": YES},
    ),
    "weak": Known(
        "exhausted",
        "The bed ran out early: it holds less than reckoned",
        {**_SPENT, "fresh_hard": UNLIKELY, "ran_out": NO, "overdue": NO, "short_count": NO},
    ),
    "no_brine": Known(
        "no_brine",
        "No brine was drawn: a salt bridge, an empty tank or a blocked injector",
        {
            "fresh_hard": YES,
            "late_hard": YES,
            "grows": UNLIKELY,
            "little_salt": YES,
            "nearly_raw": LIKELY,
            "fast_harder": UNLIKELY,
            "slow_harder": NO,
        },
    ),
    "fast": Known(
        "fast",
        "More flow than the bed carries: hardness slips through",
        {"fast_harder": YES, "slow_harder": NO, "flow_high": YES, "grows": UNLIKELY, "nearly_raw": NO},
    ),
    "slow": Known(
        "slow",
        "Too little flow: water finds channels through the bed",
        {"slow_harder": YES, "fast_harder": NO, "flow_low": YES, "grows": UNLIKELY, "nearly_raw": NO},
    ),
}
BLEND_MISSED = {
    "valve": Known(
        "valve",
        "The blending valve lets through another share than wanted",
        {"share_off": YES, "fresh_hard": NO, "late_hard": NO, "closed_hard": UNLIKELY},
    ),
    "raw": Known(
        "raw",
        "The share is right, the raw water has another hardness than entered",
        {
            "share_off": NO,
            "raw_differs": YES,
            "entered_low": OPEN,
            "fresh_hard": NO,
            "late_hard": NO,
            "closed_hard": NO,
        },
    ),
}
SOFT_CHECKS = ("fresh", "late", "closed")
