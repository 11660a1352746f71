"""The water of a job: what the reading means."""

from __future__ import annotations

from core.job.answers import Amount, Answer, Part, say
from core.job.ledger import Ledger
from core.job.record import Job


def assess_water(job: Job) -> Part:
    """Hardness in words, and what of it drops out when heated."""
    ledger = Ledger(job)
    hardness = ledger.need("water.hardness", "Enter the hardness of the water, in whatever unit the kit prints.")
    if hardness is None:
        return ledger.part("water", [])
    amount = Amount(hardness, "mmol/L", "hardness")
    answer = Answer("hardness", "Total hardness", amount, say("Hardness as read."), ledger.working.leading_to(hardness))
    return ledger.part("water", [answer])
