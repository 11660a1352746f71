"""The job: the record of one place, and its assessment.

`assess` needs numpy; the record does not. So that a list of jobs can be shown before numpy is there, `assess` and
`Assessment` are fetched when they are first asked for.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from core.job.record import Entry, Job

if TYPE_CHECKING:
    from core.job.assessment import Assessment, assess

__all__ = ["Assessment", "Entry", "Job", "assess"]


def __getattr__(name: str) -> Any:
    if name in ("Assessment", "assess"):
        from core.job import assessment as module

        return getattr(module, name)
    raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
