"""The backup file, and joining it to what is there without overwriting anything."""

from __future__ import annotations

import json

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from pwa.services import backup
from pwa.services.clock import HandClock
from pwa.services.memory_storage import MemoryStorage
from pwa.services.storage import BackupError, RestoreReport
from tests.pwa.services.fake_disk import FakeTab, Store
from tests.pwa.services.loops import run


async def opened(**jobs: str) -> MemoryStorage:
    """A storage in memory with some jobs: id and document."""
    storage = MemoryStorage(HandClock())
    await storage.open()
    for job_id, document in jobs.items():
        await storage.save(job_id, document, job_id.upper())
    return storage


async def contents(storage: MemoryStorage) -> dict[str, str]:
    """Name and document of each job."""
    rows = await storage.list_jobs(limit=1000)
    return {row.name: (await storage.load(row.id)).document for row in rows}


def test_the_file_can_be_read_by_people():
    """A backup is JSON with its form and version in front, the job files in it as they are, one job a line."""

    async def scenario():
        storage = await opened(a='{"id": "a", "name": "°dH ß"}', b="{}")
        await storage.delete("b")
        await storage.set_setting("units", '{"hardness": "gpg"}')
        return (await storage.backup()).decode()

    text = run(scenario())
    whole = json.loads(text)
    assert list(whole) == ["format", "version", "made", "settings", "jobs"]
    assert (whole["format"], whole["version"], whole["made"]) == ("tapwright-backup", 1, HandClock().now())
    assert whole["settings"] == {"units": {"hardness": "gpg"}}
    assert [job["job"] for job in whole["jobs"]] == [{"id": "a", "name": "°dH ß"}]
    assert "°dH ß" in text
    assert sum('"id": "a"' in line for line in text.splitlines()) == 1


def test_an_empty_device_gets_all():
    """On a device without jobs a restore brings jobs, times and settings as they were."""

    async def scenario():
        old = await opened(a='{"n": 1}', b='{"n": 2}')
        await old.set_setting("theme", '"dark"')
        new = MemoryStorage(HandClock("2040-01-01T00:00:00.000Z"))
        await new.open()
        report = await new.restore(await old.backup())
        assert report == RestoreReport(added=2, settings_added=1)
        assert await new.list_jobs() == await old.list_jobs()
        assert await contents(new) == await contents(old)
        assert await new.get_setting("theme") == '"dark"'

    run(scenario())


def test_same_content_is_skipped():
    """The same job with the same content is skipped, whatever the layout of its file and the time noted in it."""

    async def scenario():
        old = await opened(a='{"n": 1, "m": [1, 2], "changed": "2030"}')
        new = await opened(a='{"m":[1,2],\n"changed":"2031","n":1}')
        before = await contents(new)
        assert await new.restore(await old.backup()) == RestoreReport(same=1)
        assert await contents(new) == before

    run(scenario())


def test_differing_content_is_kept_twice_but_not_thrice():
    """The same job with other content comes in beside it, with an id and a note of its own; once, however often."""

    async def scenario():
        old = await opened(a='{"id": "a", "name": "A", "n": 1}')
        new = await opened(a='{"id": "a", "name": "A", "n": 2}')
        data = await old.backup()
        assert await new.restore(data) == RestoreReport(kept_both=1)
        rows = {row.name: row.id for row in await new.list_jobs()}
        assert set(rows) == {"A", "A (backup of 2031-05-04)"}
        copy = json.loads((await new.load(rows["A (backup of 2031-05-04)"])).document)
        assert copy == {"id": rows["A (backup of 2031-05-04)"], "name": "A (backup of 2031-05-04)", "n": 1}
        assert copy["id"] != "a"
        assert json.loads((await new.load("a")).document)["n"] == 2
        assert await new.restore(data) == RestoreReport(same=1)
        assert await new.count_jobs() == 2

    run(scenario())


def test_a_changed_copy_is_left_alone():
    """A copy that came in by a restore and was worked on since is not touched by restoring again."""

    async def scenario():
        old = await opened(a='{"n": 1}')
        new = await opened(a='{"n": 2}')
        await new.restore(await old.backup())
        [copy] = [row.id for row in await new.list_jobs() if row.id != "a"]
        await new.save(copy, '{"n": 3}', "Mine")
        report = await new.restore(await old.backup())
        assert (report.kept_both, report.added) == (0, 0)
        assert sorted((await contents(new)).values()) == ['{"n": 2}', '{"n": 3}']

    run(scenario())


def test_a_deleted_job_is_brought_back():
    """A job that was deleted here comes back if it is the same; if it differs, beside the deleted one."""

    async def scenario():
        old = await opened(a='{"n": 1}', b='{"n": 1}')
        new = await opened(a='{"n": 1}', b='{"n": 2}')
        await new.delete("a")
        await new.delete("b")
        assert await new.restore(await old.backup()) == RestoreReport(brought_back=1, kept_both=1)
        assert sorted(await contents(new)) == ["A", "B (backup of 2031-05-04)"]
        await new.undelete("b")
        assert (await new.load("b")).document == '{"n": 2}'

    run(scenario())


def test_settings_here_stay():
    """A setting that is here keeps its value; the report counts those that differ."""

    async def scenario():
        old, new = await opened(), await opened()
        for storage, theme in ((old, '"dark"'), (new, '"light"')):
            await storage.set_setting("theme", theme)
            await storage.set_setting("same", "1")
        await old.set_setting("units", '"gpg"')
        assert await new.restore(await old.backup()) == RestoreReport(settings_added=1, settings_kept=1)
        assert await new.get_setting("theme") == '"light"'

    run(scenario())


def test_a_document_that_is_no_json_survives():
    """What is no JSON object is kept as a text and comes back letter by letter."""

    async def scenario():
        texts = {"a": "not json {", "b": '"quoted"', "c": "[1, 2]", "d": "", "e": "17"}
        old, new = await opened(**texts), await opened()
        assert (await new.restore(await old.backup())).added == 5
        assert await contents(new) == {key.upper(): text for key, text in texts.items()}
        assert (await new.restore(await old.backup())).same == 5

    run(scenario())


def test_damaged_entries_are_counted_and_the_rest_comes_in():
    """Entries that cannot be read are left out and counted; a newer file or one without jobs is refused."""
    entries = [
        {"id": "a", "name": "A", "job": {}},
        {"id": "", "job": {}},
        {"id": "b", "job": 3},
        7,
        {"id": 5, "job": {}},
    ]
    entries += [{"id": "c", "name": ["C"], "job": {}}, {"id": "d"}]
    whole = {"format": "tapwright-backup", "version": 1, "jobs": entries}

    async def scenario():
        storage = await opened()
        assert await storage.restore(json.dumps(whole).encode("utf-8-sig")) == RestoreReport(added=1, unreadable=6)
        with pytest.raises(BackupError, match="newer version"):
            await storage.restore(json.dumps({**whole, "version": 2}).encode())
        for broken in ({"version": 0}, {"version": True}, {"version": "1"}, {"jobs": {}}, {"settings": []}):
            with pytest.raises(BackupError, match="damaged"):
                await storage.restore(json.dumps({**whole, **broken}).encode())

    run(scenario())


def test_the_report_is_a_sentence():
    """The report says in words what became of the jobs, and nothing of what did not occur."""
    assert RestoreReport().sentence() == "The backup holds no jobs."
    assert RestoreReport(added=2, same=1).sentence() == "Jobs of the backup: 2 added; 1 already here."


def test_a_restore_is_down_as_a_whole():
    """In a browser a large restore is one step: it is there as a whole after the next start."""

    async def scenario():
        old = await opened(**{f"job{n}": json.dumps({"n": n}) for n in range(500)})
        data = await old.backup()
        store = Store()
        tab = FakeTab(HandClock(), store)
        await tab.open()
        assert (await tab.restore(data)).added == 500
        assert (tab.disk.writes, store.lines) == (1, {})
        other = FakeTab(HandClock(), store)
        await other.open()
        assert await other.count_jobs() == 500

    run(scenario())


documents = st.dictionaries(st.sampled_from("mn"), st.integers(0, 2), max_size=2).map(json.dumps)
devices = st.dictionaries(st.sampled_from("abcd"), documents, max_size=4)


@settings(deadline=None)
@given(here=devices, there=devices, deleted=st.sets(st.sampled_from("abcd")))
def test_a_restore_loses_nothing_on_either_side(here, there, deleted):
    """After a restore every document of either side is there, those here under their own ids; twice is once."""

    async def scenario():
        old, new = await opened(**there), await opened(**here)
        for job_id in deleted & set(here):
            await new.delete(job_id)
        data = await old.backup()
        report = await new.restore(data)
        assert report.added + report.same + report.kept_both + report.brought_back == len(there)
        after = await contents(new)
        for document in there.values():
            assert any(backup.same_content(document, held) for held in after.values())
        for job_id, document in here.items():
            await new.undelete(job_id)
            assert (await new.load(job_id)).document == document
        before = await contents(new)
        assert (await new.restore(data)).same == len(there)
        assert await contents(new) == before

    run(scenario())


@settings(deadline=None)
@given(data=st.binary(max_size=60) | st.text(max_size=60).map(str.encode))
def test_any_other_file_is_refused(data):
    """Whatever is handed in as a backup, the answer is a sentence."""
    with pytest.raises(BackupError, match=r"Nothing was changed\."):
        backup.read(data)
