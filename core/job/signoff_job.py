"""The sign-off of a job: what its design promises against the readings that are entered in it.

found = sign_off_job(job, assess(job).softener, own_kits)
found.result       the checks and what may be behind a miss
found.part         the same as a part of the assessment, with what is wrong with an entry beside it
is_begun(job)      whether there is a reading at all
"""

from __future__ import annotations

from dataclasses import dataclass, replace

from core.job.answers import Part
from core.job.doubts import doubt
from core.job.fields import field_for
from core.job.kits import Kit
from core.job.ledger import Ledger
from core.job.record import Job
from core.job.signoff import SignOff, sign_off, signoff_part
from core.job.signoff_fields import READINGS, SECTION
from core.job.signoff_readings import Measured, Readings, promised_of
from core.units import convert


@dataclass(frozen=True, slots=True)
class SignedJob:
    """The sign-off of a job."""

    result: SignOff
    part: Part


def is_begun(job: Job) -> bool:
    """Whether the job holds a reading of the sign-off."""
    return any(f"{SECTION}.{name}" in job.entries for name in READINGS)


def sign_off_job(job: Job, softener: Part, own: tuple[Kit, ...] = ()) -> SignedJob:
    """What the softener part of the job's assessment promises, against the readings in the job.

    A reading that cannot be used (no number, outside what is accepted) counts as not read and is named in the part.
    `own` are the user's own kits, which give the readings their doubts.
    """
    ledger = Ledger(job)
    promised = promised_of(
        softener,
        softened=ledger.read(f"{SECTION}.soft"),
        raw=_measured(ledger, "water.hardness", own),
        blend=ledger.read("blend.target"),
    )
    readings = Readings(**{name: _measured(ledger, f"{SECTION}.{name}", own) for name in READINGS})
    result = sign_off(promised, readings)
    part = replace(
        signoff_part(result),
        problems=tuple(problem for key, problem in ledger.problems.items() if key.startswith(f"{SECTION}.")),
        assumptions=tuple(ledger.assumptions.values()),
    )
    return SignedJob(result, part)


def _measured(ledger: Ledger, key: str, own: tuple[Kit, ...]) -> Measured | None:
    """A reading with the doubt that its kit leaves, as a standard deviation; in the unit of the core."""
    field, entry = field_for(key), ledger.job.entries.get(key)
    value = ledger.read(key)
    if field is None or entry is None or value is None:
        return None
    found = doubt(entry, field, own)
    if found.is_none:
        return Measured(value)
    one, zero = (convert(end, entry.unit, field.core_unit, quantity=field.quantity) for end in (found.sd, 0.0))
    return Measured(value, one - zero)
