"""Jobs and settings in one SQLite database: schema, its versions, and every statement of SQL there is.

Whatever holds the database (a file, the memory of a web page) hands in the connection. Nothing here waits,
and nothing reads a clock.
"""

from __future__ import annotations

import sqlite3
import unicodedata
from collections.abc import Iterator, Sequence
from contextlib import contextmanager

from pwa.services.changes import Change, DropJob, PutJob, PutSetting
from pwa.services.storage import JobRow, NewerDataError, StoredJob, UnknownJobError

# Step n brings a database from version n to n + 1. A released step is never edited: another is added.
MIGRATIONS: tuple[tuple[str, ...], ...] = (
    (
        """
        create table job (
            id       text primary key,
            name     text not null,
            place    text not null,
            summary  text not null,
            words    text not null,
            changed  text not null,
            deleted  text not null,
            search   text not null,
            document text not null
        )
        """,
        "create index job_by_change on job (deleted, changed desc, id)",
        "create table setting (name text primary key, value text not null) without rowid",
    ),
)
# SQLite's result codes for trouble with the machine, not with what is in the file: no permission, busy, locked, out of
# memory, read-only, interrupted, input or output, full, cannot open.
NOT_DAMAGE = frozenset({3, 5, 6, 7, 8, 9, 10, 13, 14})
COLUMNS = "id, document, name, place, summary, words, changed, deleted"


class DamagedDatabaseError(Exception):
    """The database cannot be read as what it should be."""


class JobDatabase:
    """The jobs and settings behind one SQLite connection, which it takes over."""

    def __init__(self, connection: sqlite3.Connection) -> None:
        connection.isolation_level = None  # transactions are begun and ended below, in one place
        connection.text_factory = _decoded
        self.connection = connection

    def prepare(self, migrations: Sequence[Sequence[str]] = MIGRATIONS) -> bool:
        """Check the database and bring it to the present version; True where that changed it.

        DamagedDatabaseError where it is not sound, NewerDataError where a later version of the app wrote it.
        """
        with damage_noticed():
            found = self._one("pragma integrity_check(1)")
            if found != "ok":
                raise DamagedDatabaseError(str(found))
            version = int(str(self._one("pragma user_version")))
            if version > len(migrations):
                raise NewerDataError(version, len(migrations))
            if version < 0:
                raise DamagedDatabaseError(f"version {version}")
            for step in range(version, len(migrations)):
                self._migrate(migrations[step], step + 1)
            self._look_at_tables()
            return version < len(migrations)

    def _migrate(self, statements: Sequence[str], version: int) -> None:
        with self._transaction():
            for statement in statements:
                self.connection.execute(statement)
            self.connection.execute(f"pragma user_version = {version:d}")

    def _look_at_tables(self) -> None:
        # A sound SQLite file without our tables is not ours any more.
        self.connection.execute(f"select {COLUMNS}, search from job limit 1").fetchone()
        self.connection.execute("select name, value from setting limit 1").fetchone()

    @contextmanager
    def _transaction(self) -> Iterator[None]:
        self.connection.execute("begin immediate")
        try:
            yield
            self.connection.execute("commit")
        except BaseException:
            if self.connection.in_transaction:
                self.connection.execute("rollback")
            raise

    def _one(self, query: str, arguments: Sequence[str] = ()) -> object:
        row = self.connection.execute(query, arguments).fetchone()
        return row[0] if row else None

    def apply(self, changes: Sequence[Change]) -> None:
        """Make all the changes, or none of them where one fails."""
        with self._transaction():
            for change in changes:
                self._apply(change)

    def _apply(self, change: Change) -> None:
        if isinstance(change, PutJob):
            job = change.job
            self.connection.execute(
                f"insert or replace into job ({COLUMNS}, search) values (?, ?, ?, ?, ?, ?, ?, ?, ?)",
                (*(getattr(job, name) for name in COLUMNS.split(", ")), searched(job)),
            )
        elif isinstance(change, DropJob):
            self.connection.execute("delete from job where id = ?", (change.id,))
        elif isinstance(change, PutSetting):
            self.connection.execute("insert or replace into setting values (?, ?)", (change.name, change.value))

    def list_jobs(self, search: str, limit: int, offset: int) -> list[JobRow]:
        """The jobs in which every word of the search occurs, the last changed first; no deleted ones."""
        where, words = _condition(search)
        rows = self.connection.execute(
            f"select id, name, place, changed, summary from job where {where}"
            " order by changed desc, id limit ? offset ?",
            (*words, limit, offset),
        )
        return [JobRow(*map(_text, row)) for row in rows]

    def count_jobs(self, search: str) -> int:
        """How many jobs `list_jobs` would give in all."""
        where, words = _condition(search)
        return int(str(self._one(f"select count(*) from job where {where}", words)))

    def find(self, job_id: str) -> StoredJob | None:
        """A job, deleted or not; None where there is none."""
        row = self.connection.execute(f"select {COLUMNS} from job where id = ?", (job_id,)).fetchone()
        return StoredJob(*map(_text, row)) if row else None

    def load(self, job_id: str) -> StoredJob:
        """A job that is not deleted; UnknownJobError where there is none."""
        job = self.find(job_id)
        if job is None or job.deleted:
            raise UnknownJobError(job_id)
        return job

    def job_ids(self) -> list[str]:
        """The ids of all jobs that are not deleted, the last changed first."""
        rows = self.connection.execute("select id from job where deleted = '' order by changed desc, id")
        return [_text(row[0]) for row in rows]

    def deleted_before(self, moment: str) -> list[str]:
        """The ids of the jobs that were deleted before a moment."""
        rows = self.connection.execute("select id from job where deleted <> '' and deleted < ?", (moment,))
        return [_text(row[0]) for row in rows]

    def setting(self, name: str) -> str | None:
        """A setting as JSON text; None where it was never set."""
        value = self._one("select value from setting where name = ?", (name,))
        return None if value is None else str(value)

    def settings(self) -> dict[str, str]:
        """All settings, in the order of their names."""
        rows = self.connection.execute("select name, value from setting order by name")
        return {_text(name): _text(value) for name, value in rows}

    def image(self) -> bytes:
        """The whole database as the bytes of a SQLite file."""
        return self.connection.serialize()

    def close(self) -> None:
        """Let go of the connection."""
        self.connection.close()


def _decoded(stored: bytes) -> str:
    # A damaged letter must not make the whole list unreadable.
    return stored.decode("utf-8", "replace")


def _text(value: object) -> str:
    # Damage can turn a text into another kind of value.
    return value if isinstance(value, str) else "" if value is None else str(value)


@contextmanager
def damage_noticed() -> Iterator[None]:
    """Turn what SQLite says of a file on opening it into DamagedDatabaseError, unless it is about the machine."""
    try:
        yield
    except UnicodeError as error:  # Python could not even read what SQLite complains of
        raise DamagedDatabaseError(str(error)) from error
    except sqlite3.DatabaseError as error:
        if error.sqlite_errorcode & 0xFF in NOT_DAMAGE:
            raise
        raise DamagedDatabaseError(str(error)) from error


def searched(job: StoredJob) -> str:
    """The text in which a search looks for a job."""
    return folded(f"{job.name} {job.place} {job.summary} {job.words}")


def folded(text: str) -> str:
    """A text as it is searched: small letters without accents, so that "Müller" is found by "muller"."""
    parts = unicodedata.normalize("NFKD", text.casefold())
    return "".join(letter for letter in parts if not unicodedata.combining(letter))


def _condition(search: str) -> tuple[str, list[str]]:
    words = folded(search).split()
    return " and ".join(["deleted = ''", *["instr(search, ?) > 0"] * len(words)]), words


def rescued(connection: sqlite3.Connection) -> list[Change]:
    """All that can still be read from a damaged database, row by row."""
    found: dict[str, Change] = {}
    for number in sorted(_readable_numbers(connection)):
        query = f"select {COLUMNS} from job where rowid = {number:d}"
        for row in _readable_rows(connection, query, str):
            change = PutJob(StoredJob(*row))
            found[change.key] = change
    for order in ("", " desc"):
        for row in _readable_rows(connection, f"select name, value from setting order by name{order}", str):
            change = PutSetting(*row)
            found[change.key] = change
    return list(found.values())


def _readable_numbers(connection: sqlite3.Connection) -> set[int]:
    # A scan ends at the first damaged page, so the table and its two indexes are read from both ends.
    queries = [
        f"select rowid from job {way}{order}"
        for way in ("not indexed order by rowid", "order by id", "indexed by job_by_change order by deleted")
        for order in ("", " desc")
    ]
    return {row[0] for query in queries for row in _readable_rows(connection, query, int)}


def _readable_rows(connection: sqlite3.Connection, query: str, kind: type) -> Iterator[tuple]:
    try:
        for row in connection.execute(query):
            if all(isinstance(part, kind) for part in row):
                yield row
    except (sqlite3.Error, UnicodeError):
        return
