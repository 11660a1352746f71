"""The blend of a job: how much raw water goes back in, and what comes out of the tap, sodium included."""

from __future__ import annotations

from core.errors import InputError
from core.job.answers import Amount, Answer, Mark, Part, Problem, say
from core.job.cautions import blend_cautions
from core.job.ledger import Ledger
from core.job.record import Job
from core.treatment import blending
from core.treatment.blending import SodiumLimit
from core.working import Step

SAME = 0.02  # of the raw hardness: no kit tells the blend from the target more closely


def assess_blend(job: Job) -> Part:
    """Bypass share for the hardness wanted, the share a measured blend betrays, and sodium at the tap."""
    ledger = Ledger(job)
    raw = ledger.need("water.hardness", "Enter the hardness of the water.")
    softened = ledger.read("blend.softened")
    target = ledger.need("blend.target", "Enter the hardness wanted at the taps, to set the blending valve.")
    answers: list[Answer] = []
    if raw is not None and softened is not None:
        if target is not None and _possible(ledger, "blend.target", raw, softened, target):
            answers += _setting(ledger, raw, softened, target)
        answers += _measured(ledger, raw, softened, target)
    return ledger.part("blend", answers, blend_cautions(ledger.choice("softener.salt")))


def _possible(ledger: Ledger, field: str, raw: float, softened: float, target: float) -> bool:
    try:
        blending.check_blend(raw, softened, target)
    except InputError as error:
        where = "blend.softened" if error.field == "softened hardness" else field
        ledger.problems[where] = Problem(where, "error", str(error))
        return False
    return True


def _setting(ledger: Ledger, raw: float, softened: float, target: float) -> list[Answer]:
    w = ledger.working
    share = w.step(blending.raw_share, raw=raw, softened=softened, target=target)
    amount = Amount(share, "1", "share")
    return [
        Answer(
            "share",
            "Raw water in the blend",
            amount,
            say(
                "Set the valve until {target} comes out at the taps: {share} of the water then bypasses the resin.",
                target=Amount(target, "mmol/L", "hardness"),
                share=amount,
            ),
            w.leading_to(share),
        ),
        *sodium_answers(ledger, raw, target),
    ]


def sodium_answers(ledger: Ledger, raw: float, target: float | None) -> list[Answer]:
    """What the exchange adds to the water at the taps, and the sum where the raw water's sodium is known."""
    w = ledger.working
    removed = w.step(blending.hardness_removed, raw=raw, **({} if target is None else {"target": target}))
    if ledger.choice("softener.salt") == "kcl":
        added = w.step(blending.potassium_added, removed=removed)
        words = say("Potassium chloride adds potassium instead of sodium.")
        return [
            Answer(
                "potassium",
                "Potassium added",
                Amount(added, "mg/L K", "potassium"),
                words,
                w.leading_to(added),
            )
        ]
    sodium = ledger.read("water.sodium")
    if sodium is None:
        added = w.step(blending.sodium_added, removed=removed)
        words = say("The sodium of the raw water comes on top: enter it to hold the sum against the limits.")
        return [Answer("sodium_added", "Sodium added", Amount(added, "mg/L Na", "sodium"), words, w.leading_to(added))]
    total = w.step(blending.sodium_after, sodium=sodium, removed=removed)
    return [sodium_sum(total, w.leading_to(total))]


def sodium_sum(total: float, steps: tuple[Step, ...]) -> Answer:
    """Sodium at the taps held against limits and advice."""
    over = blending.sodium_limits_exceeded(total)
    binding = [limit for limit in over if limit.kind != "advice"]
    if binding:
        words, tone = f"Above the {binding[0].words} of {{limit}}.", "bad"
    elif over:
        words, tone = f"Above the {over[-1].words}: {{limit}}.", "watch"
    else:
        words, tone = "Below every limit and advice known here.", "good"
    shown = (binding or over or (None,))[0 if binding else -1]
    amounts = {"limit": _limit(shown)} if shown else {}
    marks = tuple(
        Mark(limit.key, _limit(limit), limit.source)
        for limit in blending.sodium_limits()
        if limit.key in ("eu", "epa-diet")
    )
    return Answer(
        "sodium",
        "Sodium at the taps",
        Amount(total, "mg/L Na", "sodium"),
        say(words, **amounts),
        steps,
        marks,
        tone=tone,
    )


def _limit(limit: SodiumLimit) -> Amount:
    return Amount(limit.value, "mg/L Na", "sodium")


def _measured(ledger: Ledger, raw: float, softened: float, target: float | None) -> list[Answer]:
    measured = ledger.read("blend.measured")
    if measured is None or not _possible(ledger, "blend.measured", raw, softened, measured):
        return []
    share = ledger.working.step(blending.raw_share, raw=raw, softened=softened, target=measured)
    amount = Amount(share, "1", "share")
    if target is None:
        words = "So much raw water goes past the resin now."
    elif abs(measured - target) <= SAME * raw:
        words = "So much raw water goes past the resin, as wanted: leave the valve as it is."
    elif measured > target:
        words = "So much raw water goes past the resin now: close the valve a little."
    else:
        words = "So much raw water goes past the resin now: open the valve a little."
    return [Answer("real_share", "Raw share by the reading", amount, say(words), ledger.working.leading_to(share))]
