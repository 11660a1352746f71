"""Saving while somebody types, in a loop whose time is a number."""

from __future__ import annotations

import asyncio

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from pwa.services.autosave import PAUSE, RETRY, Autosave
from pwa.services.clock import HandClock
from pwa.services.memory_storage import MemoryStorage
from pwa.services.storage import StorageFullError
from tests.pwa.services.loops import run

LIMIT = 0.3  # seconds that a change may wait while storage works


class SlowStorage:
    """Takes its time, and notes what it was given and when it was done."""

    def __init__(self, takes: float = 0.0) -> None:
        self.takes = takes
        self.failures: list[Exception] = []
        self.under_way = 0
        self.most_at_once = 0
        self.began: list[tuple[float, str, str]] = []
        self.done: dict[str, str] = {}

    async def save(self, job_id, document, name="", place="", summary="", words=""):
        """Keep it after a while."""
        self.under_way += 1
        self.most_at_once = max(self.most_at_once, self.under_way)
        self.began.append((asyncio.get_running_loop().time(), job_id, document))
        await asyncio.sleep(self.takes)
        self.under_way -= 1
        if self.failures:
            raise self.failures.pop(0)
        self.done[job_id] = document
        return f"time of {document}"


def test_a_number_typed_quickly_is_one_save():
    """What is typed within the pause is saved once, with its last state."""

    async def scenario():
        storage, saved = SlowStorage(), []
        autosave = Autosave(storage, on_saved=lambda job_id, changed: saved.append((job_id, changed)))
        for document in ("1", "12", "12.5"):
            autosave.touch("a", document)
            assert autosave.draft("a").document == document
        assert autosave.unsaved
        await asyncio.sleep(1)
        assert storage.began == [(pytest.approx(PAUSE), "a", "12.5")]
        assert saved == [("a", "time of 12.5")]
        assert (autosave.unsaved, autosave.draft("a"), autosave.trouble) == (False, None, "")

    run(scenario(), virtual=True)


def test_the_newest_state_follows_at_once():
    """What changes during a slow save goes down right after it, and of several states only the newest."""

    async def scenario():
        storage = SlowStorage(takes=1.0)
        autosave = Autosave(storage)
        autosave.touch("a", "1")
        await asyncio.sleep(PAUSE + 0.5)
        for document in ("2", "3"):
            autosave.touch("a", document)
        assert await autosave.flush()
        assert [(round(at, 6), document) for at, _, document in storage.began] == [(PAUSE, "1"), (PAUSE + 1.0, "3")]
        assert storage.done == {"a": "3"}

    run(scenario(), virtual=True)


def test_flush_does_not_wait_for_the_pause():
    """Flush saves at once, waits until all is down, and with nothing to save does nothing."""

    async def scenario():
        storage = SlowStorage(takes=0.05)
        autosave = Autosave(storage)
        assert await autosave.flush()
        for job_id in "abc":
            autosave.touch(job_id, job_id)
        assert await autosave.flush()
        assert asyncio.get_running_loop().time() == pytest.approx(0.15)
        assert storage.done == {"a": "a", "b": "b", "c": "c"}
        await asyncio.sleep(5)
        assert len(storage.began) == 3

    run(scenario(), virtual=True)


def test_a_failed_save_is_told_and_tried_again():
    """A failure is a sentence, told once; the state is kept, tried again, and the end of the trouble is told too."""

    async def scenario():
        storage, told = SlowStorage(), []
        storage.failures = [StorageFullError(), StorageFullError(), StorageFullError()]
        autosave = Autosave(storage, told.append)
        autosave.touch("a", "1")
        await asyncio.sleep(PAUSE + 1)
        assert (len(told), autosave.trouble) == (1, told[0])
        assert told[0].startswith("There is no room left")
        autosave.touch("a", "2")
        assert await autosave.flush() is False
        assert autosave.unsaved
        await asyncio.sleep(2 * RETRY)
        assert (storage.done, told[1:], autosave.unsaved) == ({"a": "2"}, [""], False)

    run(scenario(), virtual=True)


def test_one_job_that_fails_does_not_hold_up_the_others():
    """A job that cannot be saved, even by a mistake of ours, leaves the others to be saved."""

    async def scenario():
        storage, told = SlowStorage(), []
        storage.failures = [ZeroDivisionError("ours")]
        autosave = Autosave(storage, told.append)
        autosave.touch("a", "1")
        autosave.touch("b", "1")
        assert await autosave.flush() is False
        assert storage.done == {"b": "1"}
        assert "Saving failed" in told[0]
        await asyncio.sleep(PAUSE + RETRY)
        assert storage.done == {"a": "1", "b": "1"}
        assert told[1:] == [""]

    run(scenario(), virtual=True)


def test_a_listener_that_fails_does_not_stop_saving(caplog):
    """A mistake in a function that is told of saving is logged, and saving goes on."""

    async def scenario():
        storage = SlowStorage()
        autosave = Autosave(storage, on_saved=lambda job_id, changed: 1 / 0)
        autosave.touch("a", "1")
        autosave.touch("b", "1")
        await asyncio.sleep(3 * RETRY)
        assert storage.done == {"a": "1", "b": "1"}
        assert not autosave.unsaved

    run(scenario(), virtual=True)
    assert "told about saving" in caplog.text


def test_it_works_with_a_storage():
    """Each part of the job arrives in its column."""

    async def scenario():
        storage = MemoryStorage(HandClock())
        await storage.open()
        autosave = Autosave(storage)
        autosave.touch("a", "{}", name="Mill", place="Lane", summary="12", words="w")
        assert await autosave.flush()
        job = await storage.load("a")
        assert (job.document, job.name, job.place, job.summary, job.words) == ("{}", "Mill", "Lane", "12", "w")

    run(scenario())


touches = st.lists(st.tuples(st.floats(0, 0.4), st.sampled_from("ab"), st.booleans()), min_size=1, max_size=25)


@settings(deadline=None)
@given(touches=touches, takes=st.floats(0, 0.15))
def test_order_and_waiting(touches, takes):
    """However it is typed: one save at a time, never an older state, no long wait, and the last state is down.

    A change may wait for the pause and for one save of each job that is under way or before it.
    """

    async def scenario():
        loop = asyncio.get_running_loop()
        storage, newest, since = SlowStorage(takes), {}, {}
        autosave = Autosave(storage)
        for number, (wait, job_id, flush) in enumerate(touches):
            await asyncio.sleep(wait)
            autosave.touch(job_id, str(number))
            newest[job_id], since[number] = str(number), loop.time()
            if flush:
                await autosave.flush()
        await asyncio.sleep(60)
        assert storage.done == newest
        assert storage.most_at_once == 1
        for job_id in newest:
            saved = [(at, int(document)) for at, job, document in storage.began if job == job_id]
            assert saved == sorted(saved)
            assert len({number for _, number in saved}) == len(saved)
            for number, at in since.items():
                if touches[number][1] == job_id:
                    begun = min(when for when, state in saved if state >= number)
                    assert begun - at <= max(LIMIT, PAUSE + 2 * takes + 1e-6)

    run(scenario(), virtual=True)
