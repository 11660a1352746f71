"""What a browser keeps: killed at any moment, damaged anywhere, two tabs, a full disk; over a faked disk."""

from __future__ import annotations

import asyncio
import json
import zlib
from contextlib import suppress
from dataclasses import replace

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from pwa.services import browser_keeper
from pwa.services.changes import Change, DamagedChangeError, DropJob, PutJob, PutSetting, as_line, from_line
from pwa.services.clock import HandClock
from pwa.services.storage import NewerDataError, ReadOnlyError, StorageError, StorageFullError, StoredJob
from tests.pwa.services.fake_disk import FakeTab, Killed, Room, Store
from tests.pwa.services.loops import run

texts = st.text(st.characters(exclude_categories=["Cs"]), max_size=20)
changes = st.one_of(
    st.builds(PutJob, st.builds(StoredJob, texts, texts, texts, texts, texts, texts, texts, texts)),
    st.builds(DropJob, texts),
    st.builds(PutSetting, texts, texts),
)


@pytest.fixture
def few(monkeypatch: pytest.MonkeyPatch) -> None:
    """The image is written anew all the time."""
    monkeypatch.setattr(browser_keeper, "CHECKPOINT_AT", 3)
    monkeypatch.setattr(browser_keeper, "TIDY_AT", 2)


async def opened(store: Store, room: Room | None = None) -> FakeTab:
    """A tab with its storage open."""
    tab = FakeTab(HandClock(), store, room)
    await tab.open()
    return tab


async def contents(tab: FakeTab) -> dict[str, str]:
    """The document of each job."""
    return {row.id: (await tab.load(row.id)).document for row in await tab.list_jobs(limit=1000)}


@settings(deadline=None)
@given(change=changes)
def test_a_line_gives_its_change_back(change: Change):
    """A change written as a line and read again is the same change."""
    assert from_line(as_line(change)) == change


@settings(deadline=None)
@given(change=changes, data=st.data())
def test_a_torn_or_altered_line_is_noticed(change: Change, data):
    """A line cut anywhere, or with any sign altered, is known to be damaged."""
    line = as_line(change)
    place = data.draw(st.integers(0, len(line) - 1))
    with pytest.raises(DamagedChangeError):
        from_line(line[:place])
    other = data.draw(st.characters(exclude_characters=line[place]))
    with pytest.raises(DamagedChangeError):
        from_line(line[:place] + other + line[place + 1 :])


@settings(deadline=None)
@given(text=st.text(st.characters()))
def test_any_other_text_is_no_line(text: str):
    """Whatever stands in place of a line, it is damaged, not an accident."""
    with pytest.raises(DamagedChangeError):
        from_line(text)


def checked(text: str) -> str:
    """A line with a checksum that fits."""
    return f"{zlib.crc32(text.encode()):08x} {text}"


@pytest.mark.parametrize(
    "text", ["", "[]", "{}", '{"v": 1}', '{"v": "1"}', '{"v": 1, "job": {}}', '{"v": 1, "setting": [1]}']
)
def test_a_line_that_makes_no_sense_is_damaged(text):
    """A line whose checksum fits but that says nothing we know is damaged."""
    with pytest.raises(DamagedChangeError):
        from_line(checked(text))


def test_a_line_of_a_later_version_is_refused():
    """A change written by a later version of the app stops the older one instead of being dropped."""
    with pytest.raises(NewerDataError):
        from_line(checked('{"v": 2, "future": 1}'))

    async def scenario():
        store = Store(lines={"x": checked('{"v": 2, "future": 1}')}, revision=1)
        room = Room()
        with pytest.raises(NewerDataError):
            await opened(store, room)
        assert store.lines
        assert room.queue == []

    run(scenario())


@settings(deadline=None)
@given(
    count=st.integers(1, 6),
    which=st.integers(0, 5),
    place=st.integers(0, 10_000),
    instead=st.sampled_from(["", "\0", "é", "{"]),
    cut=st.booleans(),
)
def test_damage_to_one_line_costs_that_change_alone(count, which, place, instead, cut):
    """Whichever stored change is damaged, wherever: it is kept aside and noted, and all others are there."""

    async def scenario():
        store = Store()
        tab = await opened(store)
        for number in range(count):
            await tab.save(f"id{number}", json.dumps(number), f"Mill {number}")
        key = f"job id{which % count}"
        line = store.lines[key]
        at = place % len(line)
        store.lines[key] = broken = line[:at] + instead + ("" if cut else line[at + 1 :])
        if broken == line:
            return  # a bracket in place of a bracket
        tab = await opened(store)
        others = {f"id{number}": json.dumps(number) for number in range(count) if f"job id{number}" != key}
        assert await contents(tab) == others
        assert len(tab.notes) == 1
        assert list(store.aside.values()) == [broken.encode()]
        again = await opened(store)
        assert (again.notes, await contents(again)) == ((), others)

    run(scenario())


@settings(deadline=None)
@given(place=st.integers(0, 40_000), junk=st.binary(min_size=1, max_size=300))
def test_damage_to_the_image_never_stops_the_app(place, junk):
    """Whatever bytes of the image are damaged, the app opens, lists and loads; what was damaged is kept."""
    run(damage_scenario(place, junk))


async def damage_scenario(place: int, junk: bytes) -> None:
    """Damage the image of a store with some jobs, and see that a tab can live with it."""
    store = Store()
    tab = await opened(store)
    for number in range(8):
        await tab.save(f"id{number}", json.dumps({"n": number, "fill": "f" * 2000}), f"Mill {number}")
    await tab.keeper._checkpoint()
    await tab.save("since", "{}", "Since")
    sound = store.image or b""
    at = place % len(sound)
    store.image = (sound[:at] + junk + sound[at + len(junk) :])[: len(sound)]
    broken = store.image
    try:
        tab = await opened(store)
    except NewerDataError:
        assert 60 - len(junk) <= at <= 63, "only the version number in the file can say that"
        return
    rows = await tab.list_jobs(limit=100)
    assert "since" in {row.id for row in rows}
    for row in rows:
        assert (await tab.load(row.id)).name == row.name
    if tab.notes:
        assert list(store.aside.values()) == [broken]
        assert [await tab.read_set_aside(aside.name) for aside in await tab.set_aside()] == [broken]
    await tab.save("after", "{}", "After")
    assert "after" in await contents(await opened(store))


@pytest.mark.parametrize(("place", "junk"), [(3487, b"\x80")])
def test_damage_that_once_stopped_the_app(place, junk):
    """A schema that holds no letters any more: SQLite's own complaint about it cannot be read as a text."""
    run(damage_scenario(place, junk))


def test_a_damaged_letter_stops_nothing():
    """One letter of a name that is none any more is shown as a sign for that, and all else is as it was."""

    async def scenario():
        store = Store()
        tab = await opened(store)
        await tab.save("a", "{}", "Mill Lane", "Lane")
        await tab.save("b", "{}", "Farm")
        await tab.keeper._checkpoint()
        store.image = (store.image or b"").replace(b"Mill Lane", b"Mill L\xffne")
        tab = await opened(store)
        assert [row.name for row in await tab.list_jobs()] == ["Mill L\ufffdne", "Farm"]
        assert (await tab.load("a")).place == "Lane"
        assert b"Mill L" in await tab.backup()

    run(scenario())


actions = st.lists(
    st.tuples(st.sampled_from(["save", "save", "delete", "undelete", "set", "restore"]), st.integers(0, 4)), max_size=14
)


@pytest.mark.usefixtures("few")
def test_a_tab_killed_at_any_moment_loses_nothing():
    """Whatever is done and whenever the tab is killed, the next one finds all that was acknowledged."""

    @settings(deadline=None)
    @given(actions=actions, kill_at=st.integers(1, 20), kill_after=st.booleans())
    def killed(actions, kill_at, kill_after):
        run(killed_scenario(actions, kill_at, kill_after))

    killed()


async def killed_scenario(actions: list[tuple[str, int]], kill_at: int, kill_after: bool) -> None:
    """Do what is asked until the kill; compare the next tab with what had been acknowledged before and after it."""
    store, known = Store(), {}
    tab = await opened(store)
    tab.disk.kill_at, tab.disk.kill_after = kill_at, kill_after
    before = after = dict(known)
    try:
        for step, (verb, number) in enumerate(actions):
            after = expected(known, verb, number, step)
            await act(tab, verb, number, step)
            known = before = after
    except Killed:
        pass
    found = await opened(store)
    assert found.notes == ()
    assert await state(found) in (before, after)


def expected(known: dict[str, str], verb: str, number: int, step: int) -> dict[str, str]:
    """What is there after an action: live jobs under "id", deleted ones under "-id", the setting under "set"."""
    live, gone = f"id{number}", f"-id{number}"
    changed = dict(known)
    if verb == "save":
        changed[gone if gone in known else live] = str(step)
    elif verb == "delete" and live in known:
        changed[gone] = changed.pop(live)
    elif verb == "undelete" and gone in known:
        changed[live] = changed.pop(gone)
    elif verb == "set":
        changed["set"] = str(step)
    elif verb == "restore":
        changed |= {f"r{step} {place}": str(step) for place in range(number)}
    return changed


async def act(tab: FakeTab, verb: str, number: int, step: int) -> None:
    """Do it."""
    if verb == "save":
        await tab.save(f"id{number}", str(step))
    elif verb == "set":
        await tab.set_setting("set", str(step))
    elif verb == "restore":
        jobs = [{"id": f"r{step} {place}", "text": str(step)} for place in range(number)]
        await tab.restore(json.dumps({"format": "tapwright-backup", "version": 1, "jobs": jobs}).encode())
    else:
        with suppress(StorageError):  # there may be no such job
            await (tab.delete if verb == "delete" else tab.undelete)(f"id{number}")


async def state(tab: FakeTab) -> dict[str, str]:
    """What is there, in the words of `expected`."""
    found = await contents(tab)
    for number in range(5):
        job = tab.keeper.database.find(f"id{number}")
        if job and job.deleted:
            found[f"-{job.id}"] = job.document
    setting = await tab.get_setting("set")
    return found if setting is None else {**found, "set": setting}


@pytest.mark.usefixtures("few")
def test_a_full_disk_loses_nothing():
    """With no room a change is refused and nothing else is; it works again as soon as there is room."""

    async def scenario():
        store = Store()
        tab = await opened(store)
        await tab.save("a", "1")
        await tab.save("b", "1")
        tab.disk.room = store.size() + 10
        for action in (tab.save("a", "f" * 500), tab.save("c", "1"), tab.delete("b"), tab.set_setting("x", "1")):
            with pytest.raises(StorageFullError):
                await action
        backup = {"format": "tapwright-backup", "version": 1, "jobs": [{"id": f"r{n}", "job": {}} for n in range(9)]}
        with pytest.raises(StorageFullError):
            await tab.restore(json.dumps(backup).encode())
        assert await contents(tab) == {"a": "1", "b": "1"}
        tab.disk.room = None
        await tab.save("a", "2")
        assert await contents(await opened(store)) == {"a": "2", "b": "1"}

    run(scenario())


@pytest.mark.usefixtures("few")
def test_no_room_for_the_image_does_not_hold_up_saving():
    """The image needs room for a moment; where there is none, changes go on gathering beside it."""

    async def scenario():
        store = Store()
        tab = await opened(store)
        tab.disk.room = 9_000  # less than an image, which has pages of 4096 bytes for each table and index
        for number in range(8):
            await tab.save(f"id{number}", str(number))
        assert (store.image, len(store.lines), tab.disk.replaced) == (None, 8, 0)
        assert tab.disk.writes == 8 + 2, "it is tried after 3 and after 6 changes, not after each"
        assert len(await contents(await opened(replace(store, lines=dict(store.lines))))) == 8
        tab.disk.room = None
        await tab.save("more", "1")
        assert (store.lines, tab.disk.replaced) == ({}, 1)
        assert len(await contents(await opened(store))) == 9

    run(scenario())


@pytest.mark.usefixtures("few")
def test_a_damaged_image_waits_for_room_to_be_kept_aside():
    """Where there is no room to keep a damaged image aside, it stays where it is until there is."""

    async def scenario():
        store = Store()
        tab = await opened(store)
        await tab.save("a", "1")
        await tab.keeper._checkpoint()
        store.image = broken = b"damaged" * 1000
        tab = FakeTab(HandClock(), store)
        tab.disk.room = store.size() + 1000
        await tab.open()
        await tab.save("b", "1")
        assert (store.image, store.aside) == (broken, {})
        tab.disk.room = None
        for number in range(6):
            await tab.save(f"id{number}", "1")
        assert list(store.aside.values()) == [broken]
        assert len(await contents(await opened(store))) == 7

    run(scenario())


def test_typing_writes_one_line_over_and_over():
    """A job changed again and again is one line beside the image, which is not written anew."""

    async def scenario():
        store = Store()
        tab = await opened(store)
        for number in range(browser_keeper.CHECKPOINT_AT * 2):
            await tab.save("a", str(number))
        assert (list(store.lines), tab.disk.replaced) == (["job a"], 0)

    run(scenario())


def test_the_second_tab_waits_for_its_turn():
    """One tab writes; the others read, and the next in the queue takes over with what was written meanwhile."""

    async def scenario():
        store, room, calls = Store(), Room(), []
        first = await opened(store, room)
        await first.save("a", "1")
        second, third = await opened(store, room), await opened(store, room)
        second.on_writable(lambda: calls.append("second"))
        third.on_writable(lambda: calls.append("third"))
        assert [tab.can_write for tab in (first, second, third)] == [True, False, False]
        with pytest.raises(ReadOnlyError):
            await second.save("a", "0")
        await first.save("a", "2")
        assert await contents(second) == {"a": "1"}
        await first.close()
        await asyncio.sleep(0.01)
        assert ([second.can_write, third.can_write], calls) == ([True, False], ["second"])
        assert await contents(second) == {"a": "2"}
        await second.save("b", "1")
        await third.close()
        await second.close()
        assert await contents(await opened(store, room)) == {"a": "2", "b": "1"}

    run(scenario(), virtual=True)


def test_without_a_lock_nothing_is_undone():
    """Where two tabs write at once, each builds on what the other wrote; of one job the later state stands."""

    async def scenario():
        store = Store()
        one, two = await opened(store), await opened(store)
        await asyncio.gather(
            *(tab.save(f"{name}{n}", name) for n in range(6) for tab, name in ((one, "1"), (two, "2")))
        )
        await one.save("same", "first")
        await two.save("same", "second")
        await one.set_setting("x", "1")
        expected = {f"{name}{n}": name for n in range(6) for name in "12"} | {"same": "second"}
        assert await contents(one) == await contents(await opened(store)) == expected

    run(scenario())


def test_what_was_cleared_is_written_back():
    """If the browser clears everything while the app is open, the next change puts all of it back."""

    async def scenario():
        store = Store()
        tab = await opened(store)
        await tab.save("a", "1")
        vars(store).update(vars(Store()))
        await tab.save("b", "1")
        assert await contents(await opened(store)) == {"a": "1", "b": "1"}

    run(scenario())


@pytest.mark.usefixtures("few")
def test_opening_tidies_up_only_for_the_one_that_writes():
    """The tab that writes puts gathered changes into the image on opening; one that reads writes nothing."""

    async def scenario():
        store, room = Store(), Room()
        first = await opened(store, room)
        await first.save("a", "1")
        await first.save("b", "1")
        reader = await opened(store, room)
        assert (len(store.lines), reader.disk.writes) == (2, 0)
        await reader.close()
        await first.close()
        writer = await opened(store, room)
        assert (store.lines, writer.disk.replaced) == ({}, 1)
        assert await contents(writer) == {"a": "1", "b": "1"}

    run(scenario())
