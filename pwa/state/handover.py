"""Jobs on their way to another phone and from one: what a link brings, and what joining it means."""

from __future__ import annotations

from dataclasses import dataclass

from core.job.record import Job
from pwa.services.handover import Arrival, Arrivals, HandoverError, arrival
from pwa.services.storage import StorageError
from pwa.state.workspace import Workspace

SETTING = "arrivals"  # the parts of jobs that are not whole yet: each link may start the app anew


@dataclass(frozen=True, slots=True)
class Came:
    """What a link brought: a sentence on how far it is, and once it is whole what joining it means."""

    sentence: str
    usable: bool = True
    arrival: Arrival | None = None


async def take_in(workspace: Workspace, link: str) -> Came:
    """Take in a link, or the part of a job that stands in it."""
    try:
        arrivals = Arrivals(await workspace.storage.get_setting(SETTING) or "")
        received = arrivals.add(link)
        if received.job is None:
            await workspace.storage.set_setting(SETTING, arrivals.to_text())
            return Came(received.sentence)
        # The earlier parts stay until the job is joined, so that the last link may be opened twice.
        return Came(received.sentence, arrival=await arrival(received.job, workspace.kept))
    except (HandoverError, StorageError) as error:
        return Came(str(error), usable=False)


async def join(workspace: Workspace, job: Job) -> str | None:
    """Put a job that arrived on the list; gives its id, None where it could not be kept."""
    try:
        job_id = await workspace.join(job)
        await workspace.storage.set_setting(SETTING, "{}")
    except StorageError as error:
        workspace.notice.say(str(error))
        return None
    return job_id
