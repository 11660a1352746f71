"""What every storage promises, whatever keeps it: memory, a file, a browser (here over a faked disk)."""

from __future__ import annotations

import json
from collections.abc import Callable, Coroutine
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from pwa.services.clock import HandClock
from pwa.services.memory_storage import MemoryStorage
from pwa.services.native_storage import NativeStorage
from pwa.services.sqlite_storage import SqliteStorage
from pwa.services.storage import BackupError, ReadOnlyError, StorageError, StorageFullError, UnknownJobError
from tests.pwa.services.fake_disk import FakeTab, Store
from tests.pwa.services.loops import run

Maker = Callable[[HandClock], SqliteStorage]


LASTING: dict[str, Callable[[Path, Store], Maker]] = {
    "file": lambda folder, store: lambda clock: NativeStorage(clock, folder / "data" / "jobs.sqlite3"),
    "browser": lambda folder, store: lambda clock: FakeTab(clock, store),
}
ALL = {"memory": lambda folder, store: MemoryStorage, **LASTING}


@pytest.fixture(params=ALL)
def make(request: pytest.FixtureRequest, tmp_path: Path) -> Maker:
    """Makes a storage of each kind."""
    return ALL[request.param](tmp_path, Store())


@pytest.fixture(params=LASTING)
def make_lasting(request: pytest.FixtureRequest, tmp_path: Path) -> Maker:
    """Makes a storage of each kind that lasts; it finds what an earlier one of the same test kept."""
    return LASTING[request.param](tmp_path, Store())


def with_storage(make: Maker, scenario: Callable[[SqliteStorage, HandClock], Coroutine[Any, Any, Any]]) -> Any:
    """Run a scenario with an open storage, and close it."""

    async def whole() -> Any:
        clock = HandClock()
        storage = make(clock)
        await storage.open()
        try:
            return await scenario(storage, clock)
        finally:
            await storage.close()

    return run(whole())


def test_a_saved_job_is_listed_and_loaded(make):
    """What was saved comes back letter by letter, with the time that was noted."""

    async def scenario(storage, clock):
        changed = await storage.save("a", '{"x": "°dH ₃ Ω"}', "Müller", "Lane 3", "14 °dH", "softener")
        [row] = await storage.list_jobs()
        assert (row.id, row.name, row.place, row.summary, row.changed) == ("a", "Müller", "Lane 3", "14 °dH", changed)
        job = await storage.load("a")
        assert (job.document, job.words, job.changed) == ('{"x": "°dH ₃ Ω"}', "softener", clock.now())

    with_storage(make, scenario)


def test_the_last_changed_comes_first(make):
    """A change moves a job to the top; saving it unchanged does not."""

    async def scenario(storage, clock):
        for job_id in "abc":
            clock.turn(minutes=1)
            await storage.save(job_id, "{}", job_id)
        clock.turn(minutes=1)
        await storage.save("a", "{}", "a")
        assert [row.id for row in await storage.list_jobs()] == ["c", "b", "a"]
        await storage.save("a", '{"more": 1}', "a")
        assert [row.id for row in await storage.list_jobs()] == ["a", "c", "b"]
        assert [row.id for row in await storage.list_jobs(limit=1, offset=1)] == ["c"]

    with_storage(make, scenario)


SEARCHES = [
    ("", {"a", "b", "c"}),
    ("muller", {"a"}),
    ("MÜLLER lane", {"a"}),
    ("lane", {"a", "b"}),
    ("strasse", {"c"}),
    ("100%", {"b"}),
    ("_", set()),
    ("%", {"b"}),
    ("hidden", {"c"}),
    ("lane muller nothing", set()),
    ("  ", {"a", "b", "c"}),
]


@pytest.mark.parametrize(("search", "found"), SEARCHES)
def test_search_finds_every_word_anywhere(make, search, found):
    """Every word of a search must occur, in any order, capitals and accents aside; no sign is special."""

    async def scenario(storage, clock):
        await storage.save("a", "{}", "Müller", "Mill Lane")
        await storage.save("b", "{}", "Farm", "Lane 4", "100% soft")
        await storage.save("c", "{}", "Müßig", "Hohe Straße", words="hidden word")
        await storage.save("d", "{}", "muller lane 100% hidden strasse")
        await storage.delete("d")
        assert {row.id for row in await storage.list_jobs(search)} == found
        assert await storage.count_jobs(search) == len(found)

    with_storage(make, scenario)


def test_a_deleted_job_is_gone_and_comes_back(make):
    """A deleted job is in no list and cannot be loaded; undelete brings it back, with what was saved since."""

    async def scenario(storage, clock):
        await storage.save("a", "{}", "A")
        await storage.delete("a")
        await storage.delete("a")
        assert (await storage.list_jobs(), await storage.count_jobs()) == ([], 0)
        with pytest.raises(UnknownJobError):
            await storage.load("a")
        await storage.save("a", '{"late": 1}', "A")
        assert await storage.list_jobs() == []
        await storage.undelete("a")
        await storage.undelete("a")
        assert (await storage.load("a")).document == '{"late": 1}'

    with_storage(make, scenario)


def test_an_unknown_job_is_refused(make):
    """What is not here cannot be loaded, deleted or brought back, and the error is a sentence."""

    async def scenario(storage, clock):
        for action in (storage.load, storage.delete, storage.undelete):
            with pytest.raises(UnknownJobError, match=r"not on this device"):
                await action("nowhere")
        with pytest.raises(ValueError, match="needs an id"):
            await storage.save("", "{}")

    with_storage(make, scenario)


def test_all_of_it_lasts(make_lasting):
    """Jobs, deletions and settings are there after the next start; a job is dropped 30 days after it was deleted."""

    async def scenario():
        clock = HandClock()
        storage = make_lasting(clock)
        await storage.open()
        await storage.save("a", '{"n": 1}', "A")
        await storage.save("b", "{}", "B")
        await storage.delete("b")
        await storage.set_setting("units", '"gpg"')
        await storage.close()
        clock.turn(days=30)
        storage = make_lasting(clock)
        await storage.open()
        assert [row.id for row in await storage.list_jobs()] == ["a"]
        assert await storage.get_setting("units") == '"gpg"'
        await storage.undelete("b")
        await storage.delete("b")
        clock.turn(days=20)
        await storage.delete("b")  # deleted it was already: the 30 days run on
        await storage.close()
        clock.turn(days=10, minutes=1)
        storage = make_lasting(clock)
        await storage.open()
        with pytest.raises(UnknownJobError):
            await storage.undelete("b")
        assert (await storage.load("a")).document == '{"n": 1}'
        await storage.close()

    run(scenario())


def test_settings_are_json(make):
    """A setting is None until set, then the text that was set; a text that is no JSON is a mistake of ours."""

    async def scenario(storage, clock):
        assert await storage.get_setting("theme") is None
        await storage.set_setting("theme", '"dark"')
        await storage.set_setting("theme", '"light"')
        assert await storage.get_setting("theme") == '"light"'
        with pytest.raises(ValueError, match="Expecting"):
            await storage.set_setting("theme", "light")

    with_storage(make, scenario)


@settings(deadline=None)
@given(texts=st.lists(st.text(st.characters()), min_size=5, max_size=5), key=st.text(st.characters(), min_size=1))
def test_any_text_comes_back(texts, key):
    """Any text lasts, be it empty, with zeros or signs of any script; only halves of characters become "?"."""
    whole = [text.encode("utf-8", "replace").decode() for text in texts]

    async def scenario():
        store = Store()
        tab = FakeTab(HandClock(), store)
        await tab.open()
        await tab.save(key, *texts)
        await tab.set_setting(key, json.dumps(texts[0]))
        await tab.close()
        tab = FakeTab(HandClock(), store)
        await tab.open()
        assert tab.notes == ()
        job = await tab.load(key)
        assert [job.document, job.name, job.place, job.summary, job.words] == whole
        assert json.loads(await tab.get_setting(key) or "") == json.loads(json.dumps(texts[0]))
        await tab.close()

    run(scenario())


def test_a_second_tab_may_only_read():
    """While another tab writes, each change is refused with a sentence, and reading works."""

    async def scenario():
        storage = MemoryStorage(HandClock())
        await storage.open()
        await storage.save("a", "{}", "A")
        storage.keeper.can_write = False
        calls = []
        storage.on_writable(lambda: calls.append(storage.can_write))
        for change in (
            storage.save("b", "{}"),
            storage.delete("a"),
            storage.set_setting("x", "1"),
            storage.restore(await backup_of("c")),
        ):
            with pytest.raises(ReadOnlyError, match="another tab"):
                await change
        assert [row.id for row in await storage.list_jobs()] == ["a"]
        assert len(await storage.backup()) > 0
        storage.keeper.let_write()
        assert calls == [True]
        await storage.save("b", "{}")

    run(scenario())


async def backup_of(*job_ids: str, document: str = "{}") -> bytes:
    """A backup with some jobs."""
    storage = MemoryStorage(HandClock())
    await storage.open()
    for job_id in job_ids:
        await storage.save(job_id, document, job_id)
    return await storage.backup()


def test_trouble_changes_nothing():
    """Where a change cannot be kept, the one before it stays, and the same call works once it can."""

    async def scenario():
        storage = MemoryStorage(HandClock())
        await storage.open()
        await storage.save("a", '{"n": 1}', "A")
        storage.keeper.trouble = StorageFullError()
        with pytest.raises(StorageError, match="no room left"):
            await storage.save("a", '{"n": 2}', "A")
        assert (await storage.load("a")).document == '{"n": 1}'
        storage.keeper.trouble = None
        await storage.save("a", '{"n": 2}', "A")
        assert (await storage.load("a")).document == '{"n": 2}'

    run(scenario())


def test_only_a_backup_is_restored(make):
    """A file that is no backup is refused with a sentence, and nothing is changed."""

    async def scenario(storage, clock):
        await storage.save("a", "{}", "A")
        for data in (b"", b"\xff\xfe\x00", b"{}", b"[1]", b'"text"', (await storage.backup())[:-4]):
            with pytest.raises(BackupError, match=r"Nothing was changed\."):
                await storage.restore(data)
        assert await storage.count_jobs() == 1

    with_storage(make, scenario)
