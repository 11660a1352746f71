"""The database itself: versions and their migration, damage and what can be rescued, names of files."""

from __future__ import annotations

import sqlite3
from collections.abc import Iterator
from pathlib import Path

import pytest

from pwa.services.changes import DropJob, PutJob, PutSetting
from pwa.services.clock import HandClock
from pwa.services.job_database import MIGRATIONS, DamagedDatabaseError, JobDatabase, folded, rescued
from pwa.services.native_storage import NativeStorage
from pwa.services.storage import NewerDataError, StorageError, StorageFullError, StoredJob
from tests.pwa.services.loops import run

# The database as version 1 made it, typed in full: whatever comes later must still open it.
VERSION_1 = """
create table job (id text primary key, name text not null, place text not null, summary text not null,
    words text not null, changed text not null, deleted text not null, search text not null, document text not null);
create index job_by_change on job (deleted, changed desc, id);
create table setting (name text primary key, value text not null) without rowid;
insert into job values ('a', 'Mill', 'Lane', '12', '', '2030-01-01T00:00:00.000Z', '', 'mill lane 12 ', '{"n": 1}');
insert into setting values ('theme', '"dark"');
pragma user_version = 1;
"""
ONE_MORE = (*MIGRATIONS, ("alter table job add column colour text not null default 'grey'",))


@pytest.fixture
def connection() -> Iterator[sqlite3.Connection]:
    """A database that knows nothing yet."""
    connection = sqlite3.connect(":memory:")
    yield connection
    connection.close()


def job(number: int, fill: str = "") -> StoredJob:
    """A job to be kept."""
    return StoredJob(f"id{number}", f'{{"n": {number}, "fill": "{fill}"}}', f"Mill {number}", changed=f"{number:06d}")


def test_version_1_is_still_read(connection):
    """A database made by the first version opens with all that is in it."""
    connection.executescript(VERSION_1)
    database = JobDatabase(connection)
    database.prepare()
    assert database.load("a") == StoredJob("a", '{"n": 1}', "Mill", "Lane", "12", changed="2030-01-01T00:00:00.000Z")
    assert database.setting("theme") == '"dark"'
    assert [row.id for row in database.list_jobs("mill", 9, 0)] == ["a"]


def test_a_migration_keeps_what_is_there(connection):
    """An older database is brought up to date once, with its jobs in it."""
    database = JobDatabase(connection)
    assert database.prepare() is True
    assert database.prepare() is False
    database.apply([PutJob(job(1))])
    assert database.prepare(ONE_MORE) is True
    assert connection.execute("select colour, id from job").fetchall() == [("grey", "id1")]
    assert connection.execute("pragma user_version").fetchone() == (2,)


def test_a_failed_migration_leaves_the_old_version(connection):
    """A step that fails half-way is undone: version and tables are as before."""
    database = JobDatabase(connection)
    database.prepare()
    database.apply([PutJob(job(1))])
    broken = (*MIGRATIONS, ("alter table job add column colour text", "insert into nowhere values (1)"))
    with pytest.raises(DamagedDatabaseError):
        database.prepare(broken)
    assert connection.execute("pragma user_version").fetchone() == (1,)
    assert database.load("id1") == job(1)
    assert "colour" not in {row[1] for row in connection.execute("pragma table_info(job)")}


def test_a_newer_database_is_refused(connection):
    """A database of a later version is not touched; the sentence says what to do."""
    database = JobDatabase(connection)
    database.prepare(ONE_MORE)
    with pytest.raises(NewerDataError, match="newer version of the app"):
        database.prepare()
    assert connection.execute("pragma user_version").fetchone() == (2,)


def test_changes_are_made_all_or_none(connection):
    """Where one of several changes fails, none is made."""
    database = JobDatabase(connection)
    database.prepare()
    database.apply([PutJob(job(1)), PutSetting("theme", "1")])
    with pytest.raises(sqlite3.Error):
        database.apply([DropJob("id1"), PutSetting("theme", None)])  # type: ignore[arg-type]
    assert (database.load("id1"), database.setting("theme")) == (job(1), "1")


@pytest.mark.parametrize(
    ("text", "searched"),
    [("MÜLLER", "muller"), ("Straße", "strasse"), ("Ørsted", "ørsted"), ("é à ç", "e a c"), ("10 ³", "10 3"), ("", "")],
)
def test_search_text_has_no_capitals_and_no_accents(text, searched):
    """Names are found by who has no key for their accents."""
    assert folded(text) == searched


def filled(path: Path, count: int) -> None:
    """A file with jobs of 3 KB each."""
    with_all = JobDatabase(sqlite3.connect(path))
    with_all.prepare()
    with_all.apply([PutJob(job(number, "f" * 3000)) for number in range(count)])
    with_all.apply([PutSetting("theme", '"dark"')])
    with_all.close()


def reopened(path: Path) -> tuple[set[str], tuple[str, ...], list[bytes]]:
    """The ids, the notes and the files set aside of a native storage, which then works as a fresh one does."""

    async def scenario():
        storage = NativeStorage(HandClock(), path)
        await storage.open()
        ids = {row.id for row in await storage.list_jobs(limit=1000)}
        for job_id in ids:
            await storage.load(job_id)
        aside = [await storage.read_set_aside(found.name) for found in await storage.set_aside()]
        await storage.save("new", "{}", "New")
        await storage.close()
        again = NativeStorage(HandClock(), path)
        await again.open()
        assert again.notes == ()
        assert await again.count_jobs() == len(ids) + 1
        await again.close()
        return ids, storage.notes, aside

    return run(scenario())


def test_a_damaged_page_costs_only_what_is_on_it(tmp_path):
    """With one page of the file damaged, the jobs of the other pages are there and the file is kept aside."""
    path = tmp_path / "jobs.sqlite3"
    filled(path, 60)
    broken = bytearray(path.read_bytes())
    broken[0x10000:0x11000] = b"\xee" * 0x1000
    path.write_bytes(broken)
    ids, notes, aside = reopened(path)
    assert len(ids) >= 58
    assert aside == [bytes(broken)]
    assert len(notes) == 1
    assert "was damaged" in notes[0]


@pytest.mark.parametrize(
    "damage",
    [
        lambda data: b"no database at all " * 300,
        lambda data: b"x" * 20 + data[20:],
        lambda data: data[: len(data) // 2],
        lambda data: data[:60] + b"\0\0\0\0" + data[64:],  # version 0, with tables that version 0 has not
        lambda data: data[:60] + b"\xff\xff\xff\xff" + data[64:],  # version -1
    ],
    ids=["text", "head", "half", "version 0", "version -1"],
)
def test_whatever_the_damage_the_app_starts(tmp_path, damage):
    """Any damage leads to a fresh database, a note and the damaged file kept as it was."""
    path = tmp_path / "jobs.sqlite3"
    filled(path, 20)
    broken = damage(path.read_bytes())
    path.write_bytes(broken)
    ids, notes, aside = reopened(path)
    assert ids <= {f"id{number}" for number in range(20)}
    assert aside == [broken]
    assert len(notes) == 1


def test_wrong_version_number_costs_no_job(tmp_path):
    """Where only the version number is damaged, every job is rescued."""
    path = tmp_path / "jobs.sqlite3"
    filled(path, 20)
    data = path.read_bytes()
    path.write_bytes(data[:60] + b"\0\0\0\0" + data[64:])
    assert len(reopened(path)[0]) == 20


def test_another_programs_database_is_set_aside(tmp_path):
    """A sound database that is not ours is kept aside, not written into."""
    path = tmp_path / "jobs.sqlite3"
    other = sqlite3.connect(path)
    other.executescript("create table recipe (title text); insert into recipe values ('soup'); pragma user_version = 1")
    other.close()
    data = path.read_bytes()
    assert reopened(path)[2] == [data]


def test_what_is_rescued_comes_as_changes(connection):
    """Of a sound database everything is rescued, deleted jobs and settings too."""
    database = JobDatabase(connection)
    database.prepare()
    deleted = StoredJob("gone", "{}", deleted="2031")
    changes = [PutJob(job(1)), PutJob(job(2)), PutJob(deleted), PutSetting("theme", "1")]
    database.apply(changes)
    assert sorted(rescued(connection), key=lambda change: change.key) == sorted(changes, key=lambda change: change.key)


def test_a_newer_file_is_left_as_it_is(tmp_path):
    """A file of a later version is refused and not changed by a single byte."""
    path = tmp_path / "jobs.sqlite3"
    database = JobDatabase(sqlite3.connect(path))
    database.prepare(ONE_MORE)
    database.close()
    data = path.read_bytes()

    async def scenario():
        with pytest.raises(NewerDataError):
            await NativeStorage(HandClock(), path).open()

    run(scenario())
    assert path.read_bytes() == data
    assert [found.name for found in tmp_path.iterdir()] == ["jobs.sqlite3"]


def test_a_full_disk_is_said_so(tmp_path):
    """Where the file may not grow, a save says that there is no room, keeps the old state, and works again later."""

    async def scenario():
        storage = NativeStorage(HandClock(), tmp_path / "jobs.sqlite3")
        await storage.open()
        await storage.save("a", "{}", "Before")
        connection = storage._keeper.database.connection
        connection.execute("pragma max_page_count = 6")
        with pytest.raises(StorageFullError):
            await storage.save("a", "f" * 50_000, "After")
        assert (await storage.load("a")).name == "Before"
        connection.execute("pragma max_page_count = 1000")
        await storage.save("a", "f" * 50_000, "After")
        assert (await storage.load("a")).name == "After"
        await storage.close()

    run(scenario())


def test_a_folder_that_cannot_be_made_is_said_so(tmp_path):
    """Where the folder cannot be made, opening says so in a sentence."""
    (tmp_path / "file").write_text("in the way")

    async def scenario():
        with pytest.raises(StorageError, match="folder for the jobs"):
            await NativeStorage(HandClock(), tmp_path / "file" / "jobs.sqlite3").open()

    run(scenario())


def test_two_programs_share_the_file(tmp_path):
    """Two sessions of the development server see each other's jobs."""

    async def scenario():
        one, two = (NativeStorage(HandClock(), tmp_path / "jobs.sqlite3") for _ in range(2))
        await one.open()
        await two.open()
        await one.save("a", "{}", "A")
        await two.save("b", "{}", "B")
        assert await one.count_jobs() == await two.count_jobs() == 2
        await one.close()
        await two.close()

    run(scenario())
