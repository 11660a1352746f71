"""The sign-off as the screen and the sheet need it."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pwa.services.clock import SystemClock
from pwa.state.sheet import Sheet
from pwa.state.workspace import Workspace

if TYPE_CHECKING:
    from core.job.signoff_job import SignedJob

NAME, DATE = "signoff.name", "signoff.date"


def signed_job(workspace: Workspace, sheet: Sheet) -> SignedJob | None:
    """What was promised against what was read; None until there is a reading and the calculator is in."""
    assessment = workspace.assessed(sheet.job)
    if assessment is None:
        return None
    from core.job.signoff_job import is_begun, sign_off_job  # they need numpy

    if not is_begun(sheet.job):
        return None
    return sign_off_job(sheet.job, assessment.softener, sheet.own_kits)


def sign_today(sheet: Sheet) -> None:
    """Put today's date under the sign-off."""
    sheet.choose(DATE, SystemClock().today())
