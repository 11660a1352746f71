"""Handing a job to another phone without a network: as QR codes or as a file.

Any camera app reads a code, for it is a link to this very app at its own address, the job behind the "#": the app is
installed there on both phones and opens without a network. What stands behind "#" never reaches a server.

    codes = qr_codes(job, "https://example.org/app/")     shown one after the other
    arrivals = Arrivals()                                  on the other phone
    progress = arrivals.add("…#/join/0K3F…")               for each link that is opened
    progress.job                                           once all parts are there; checked, to be shown and joined
    await arrival(job, find)                               what joining it means: nothing here is overwritten

    file_of(job), read_file(data)                          the same by a file
"""

from __future__ import annotations

import json
import re
from collections.abc import Awaitable, Callable
from dataclasses import dataclass, replace
from hashlib import sha256
from typing import TYPE_CHECKING

from core.errors import TapwrightError
from core.job.record import LARGEST_FILE, Job
from pwa.services.backup import same_content
from pwa.services.files import file_name
from pwa.services.handover_code import CodeError, Pool, encode

if TYPE_CHECKING:
    from pwa.services.handover_qr import QrCode

ROUTE = "join"
ENDING = "json"
DEEPEST = 40  # tables within tables; a job file has six
LONGEST_LINK = 4000  # characters
_PART = re.compile(r"(?:.*[#/?=]|\s*)([0-9A-Za-z]{14,})\s*", re.ASCII | re.DOTALL)
_ID = re.compile(r"[0-9A-Za-z_-]{1,64}", re.ASCII)
_BRACKETS = re.compile(r'"(?:[^"\\]|\\.)*"|[\[\]{}]', re.DOTALL)


class HandoverError(Exception):
    """A job that cannot be handed over or taken in; its text is a sentence."""


@dataclass(frozen=True, slots=True)
class Received:
    """What a link added: how far the job is, and the job once it is whole."""

    have: int
    total: int
    sentence: str
    job: Job | None = None


@dataclass(frozen=True, slots=True)
class Arrival:
    """What joining a job to the list means."""

    kind: str  # new · same (already here, nothing to do) · beside (another content here: it comes in beside it)
    job: Job  # as it is to be kept; for "same" the one that came
    sentence: str


def links(job: Job, address: str) -> list[tuple[str, str]]:
    """The links that carry a job: for each the address with its route, and the part. HandoverError if too large."""
    base = address.partition("#")[0]
    try:
        return [(f"{base}#/{ROUTE}/", part) for part in encode(compact(job))]
    except CodeError as error:
        raise HandoverError(str(error)) from None


def qr_codes(job: Job, address: str) -> list[QrCode]:
    """The QR codes that carry a job, in their order."""
    from pwa.services.handover_qr import qr_code  # the drawing of codes is needed by few; it is loaded when asked for

    return [qr_code(prefix, part) for prefix, part in links(job, address)]


def compact(job: Job) -> str:
    """The job file without a needless sign."""
    return json.dumps(json.loads(job.to_text()), ensure_ascii=False, separators=(",", ":"))


class Arrivals:
    """The links opened so far. Keep `to_text` between two starts: each link may start the app anew."""

    def __init__(self, kept: str = "") -> None:
        self._pool = Pool.from_text(kept) if kept else Pool()

    def add(self, link: str) -> Received:
        """Take in a link, or the part alone; HandoverError says why it cannot be used."""
        found = _PART.fullmatch(link) if len(link) <= LONGEST_LINK else None
        if not found:
            raise HandoverError("This is no link of this app: the part that holds the job is missing.")
        try:
            progress = self._pool.add(found[1])
        except CodeError as error:
            raise HandoverError(str(error)) from None
        job = None if progress.text is None else _job(progress.text)
        return Received(progress.have, progress.total, progress.sentence(), job)

    def to_text(self) -> str:
        """What is collected, to be kept."""
        return self._pool.to_text()


def file_of(job: Job) -> tuple[str, bytes]:
    """Name and content of the file that hands a job over."""
    return file_name(job.name or "job", ENDING), job.to_text().encode("utf-8")


def read_file(data: bytes) -> Job:
    """The job in a file; HandoverError says why there is none."""
    if len(data) > 4 * LARGEST_FILE:
        raise HandoverError("The file is far too large for a job.")
    try:
        return _job(data.decode("utf-8-sig"))
    except UnicodeDecodeError:
        raise HandoverError("This is not a job file: it is no text.") from None


def _job(text: str) -> Job:
    if _depth(text) > DEEPEST:
        raise HandoverError("This is not a job file: it is nested too deeply.")
    try:
        job = Job.from_text(text)
    except (TapwrightError, ValueError, RecursionError) as error:
        said = (
            str(error) if isinstance(error, TapwrightError) else "This is not a job file: a number in it is too long."
        )
        raise HandoverError(said) from None
    return job if _ID.fullmatch(job.id) else replace(job, id=_id_of(job))


def _depth(text: str) -> int:
    depth = deepest = 0
    for found in _BRACKETS.finditer(text):
        sign = found[0]
        if sign in "[{":
            depth += 1
            deepest = max(deepest, depth)
            if deepest > DEEPEST:
                return deepest
        elif sign in "]}":
            depth -= 1
    return deepest


def _id_of(job: Job) -> str:
    """An id that follows from the content, so that the same job always comes in under the same one."""
    return sha256(compact(replace(job, changed="")).encode("utf-8", "surrogatepass")).hexdigest()[:32]


async def arrival(job: Job, find: Callable[[str], Awaitable[str | None]]) -> Arrival:
    """What joining a job means; `find` gives the job file kept here under an id, None where there is none."""
    document = job.to_text()
    here = await find(job.id)
    if here is None:
        return Arrival("new", job, f"“{_called(job)}” is new here.")
    if same_content(here, document):
        return Arrival("same", job, f"“{_called(job)}” is already here, with the same content.")
    beside = replace(job, id=_id_of(job), name=f"{job.name} (handed over)".strip())
    if await find(beside.id) is not None:
        return Arrival("same", beside, f"“{_called(beside)}” is already here, with the same content.")
    text = f"Another version of “{_called(job)}” is here. This one comes in beside it; nothing is overwritten."
    return Arrival("beside", beside, text)


def _called(job: Job) -> str:
    return job.name or job.place or "Job without a name"
