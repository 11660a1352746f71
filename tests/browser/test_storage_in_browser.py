"""Storage in a real browser: IndexedDB, locks between tabs, killed tabs, a full disk, damage."""

from __future__ import annotations

import http.server
import os
import random
import signal
import threading
from collections.abc import Iterator
from pathlib import Path

import pytest
from playwright.sync_api import Browser, BrowserContext, Playwright

from tests.browser.harness import ARGUMENTS, chromium
from tests.browser.storage_page import Site, Tab

FLAGS = [*ARGUMENTS, "--host-resolver-rules=MAP plain.test 127.0.0.1"]  # a name not trusted as 127.0.0.1 is


@pytest.fixture(scope="module")
def port() -> Iterator[int]:
    """Where the test page is served."""
    with http.server.ThreadingHTTPServer(("127.0.0.1", 0), Site) as server:
        thread = threading.Thread(target=server.serve_forever)
        thread.start()
        yield server.server_port
        server.shutdown()
        thread.join()


@pytest.fixture(scope="module")
def browser(playwright: Playwright) -> Iterator[Browser]:
    """One browser for all tests that do not kill it."""
    browser = playwright.chromium.launch(executable_path=chromium(), args=FLAGS)
    yield browser
    browser.close()


@pytest.fixture
def context(browser: Browser) -> Iterator[BrowserContext]:
    """A browser profile that has kept nothing yet."""
    context = browser.new_context()
    yield context
    context.close()


@pytest.fixture
def url(port: int) -> str:
    """The test page."""
    return f"http://127.0.0.1:{port}/"


@pytest.fixture(scope="module")
def shared(browser: Browser, port: int) -> Iterator[Tab]:
    """One tab for the tests that need no tab of their own; each uses storage under another name."""
    context = browser.new_context()
    yield Tab(context, f"http://127.0.0.1:{port}/")
    context.close()


def test_a_change_among_5000_jobs_writes_one_line(shared):
    """However many jobs there are, a change writes that job alone; after a new start all is there."""
    shared.open("many")
    found = shared.run("""
    from pwa.services.changes import PutJob
    from pwa.services.storage import StoredJob
    fill = "f" * 3000
    jobs = [StoredJob(f"id{n}", json.dumps([n, fill]), f"Mill {n}", changed="2001") for n in range(5000)]
    await storage._keeper.keep([PutJob(job) for job in jobs])
    before = await storage._keeper._disk.read()
    for n in range(3):
        await storage.save("id77", json.dumps({"n": n}), "Mill 77", "by the river")
    await storage.save("new", "{}", "Farm")
    after = await storage._keeper._disk.read()
    await storage.close()
    storage = await opened("many")
    rows = [(row.id, row.place) for row in await storage.list_jobs("mill", limit=2)]
    whole = [await storage.count_jobs(), (await storage.load("id77")).document]
    await storage.close()
    [len(before.lines), len(after.lines), before.image == after.image, len(after.image) > 15e6, rows[0], whole]
    """)
    assert found == [0, 2, True, True, ["id77", "by the river"], [5001, '{"n": 2}']]


def test_writing_the_image_anew_loses_nothing(shared):
    """When many changes have gathered they go into the image, and the next start finds the same jobs."""
    shared.open("gather")
    found = shared.run("""
    storage._keeper._checkpoint_at = 4
    sizes = []
    for n in range(10):
        await storage.save(f"id{n}", json.dumps({"n": n}), f"Mill {n}")
        sizes.append(len((await storage._keeper._disk.read()).lines))
        storage._keeper._checkpoint_at = 4
    await storage.delete("id0")
    await storage.set_setting("theme", '"dark"')
    await storage.close()
    storage = await opened("gather")
    ids = sorted(row.id for row in await storage.list_jobs())
    setting = await storage.get_setting("theme")
    await storage.close()
    [sizes, ids, setting]
    """)
    assert found == [[1, 2, 3, 0, 1, 2, 3, 0, 1, 2], [f"id{n}" for n in range(1, 10)], '"dark"']


def test_image_and_changes_are_replaced_together_or_not_at_all(shared):
    """Where writing the image fails half-way, image, changes and revision are all as before."""
    shared.open("together")
    found = shared.run("""
    await storage.save("a", "{}", "First")
    disk = storage._keeper._disk
    before = await disk.read()
    try:
        await disk.replace(b"not to be kept", before.revision, {"what no store can hold": object()})
        said = "kept"
    except StorageError as error:
        said = str(error)
    same = await disk.read() == before
    await storage.save("b", "{}", "Second")
    await storage.close()
    storage = await opened("together")
    names = sorted(row.name for row in await storage.list_jobs())
    await storage.close()
    [said[:39], same, names]
    """)
    assert found == ["The browser could not save or read (Abo", True, ["First", "Second"]]


def test_a_full_disk_is_a_sentence_and_loses_nothing(context, url):
    """With no room left a save says so and changes nothing; with room again the same save works."""
    tab = Tab(context, url)
    session = context.new_cdp_session(tab.page)
    session.send("Storage.overrideQuotaForOrigin", {"origin": url, "quotaSize": 300_000})
    tab.open()
    refused = tab.run("""
    from pwa.services.autosave import Autosave
    told = []
    autosave = Autosave(storage, told.append)
    await storage.save("a", "{}", "Before")
    autosave.touch("a", json.dumps("f" * 1_000_000), "After")
    down = await autosave.flush()
    name = (await storage.load("a")).name
    [down, [sentence[:22] for sentence in told], name, autosave.unsaved]
    """)
    assert refused == [False, ["There is no room left "], "Before", True]
    session.send("Storage.overrideQuotaForOrigin", {"origin": url})
    taken = tab.run("""
    down = await autosave.flush()
    await storage.close()
    storage = await opened()
    [down, told[1:], (await storage.load("a")).name]
    """)
    assert taken == [True, [""], "After"]


def test_a_damaged_image_is_kept_aside(shared):
    """A damaged image is kept under another name; what can be read of it and the changes since are there."""
    shared.open("damaged")
    found = shared.run("""
    for n in range(40):
        await storage.save(f"id{n}", json.dumps({"n": n, "fill": "f" * 3000}), f"Mill {n}")
    await storage._keeper._checkpoint()
    await storage.save("since", "{}", "Since")
    disk = storage._keeper._disk
    kept = await disk.read()
    broken = bytearray(kept.image)
    for place in range(0x8000, 0x9000):
        broken[place] = 0xEE
    revision = await disk.replace(bytes(broken), kept.revision, {})
    await disk.add({"job since": kept.lines[0]}, revision)
    await storage.close()
    storage = await opened("damaged")
    aside = await storage.set_aside()
    whole = bytes(broken) == await storage.read_set_aside(aside[0].name)
    ids = {row.id for row in await storage.list_jobs(limit=100)}
    notes = storage.notes
    await storage.close()
    storage = await opened("damaged")
    again = [len(storage.notes), len(await storage.set_aside()), await storage.count_jobs() == len(ids)]
    await storage.close()
    [len(aside), whole, len(ids), "since" in ids, len(notes), again]
    """)
    assert found[:2] == [1, True]
    assert 35 <= found[2] <= 41, "of 40 jobs a damaged page holds one or two"
    assert found[3:] == [True, 1, [0, 1, True]]


def test_a_dropped_connection_is_made_anew(shared):
    """Browsers drop the connection of a page that slept: the next save connects again."""
    shared.open("dropped")
    found = shared.run("""
    await storage.save("a", "{}", "Before")
    storage._keeper._disk._connection.close()
    await storage.save("a", "{}", "After")
    await storage.close()
    storage = await opened("dropped")
    name = (await storage.load("a")).name
    await storage.close()
    name
    """)
    assert found == "After"


def test_what_the_browser_cleared_is_written_back(shared):
    """If the browser clears its data while the app is open, the next save writes all of it back."""
    shared.open("cleared")
    found = shared.run("""
    await storage.save("a", "{}", "First")
    await storage.save("b", "{}", "Second")
    storage._keeper._disk._connection.close()
    gone = asyncio.get_running_loop().create_future()
    from pyodide.ffi import create_proxy
    js.indexedDB.deleteDatabase("cleared").onsuccess = create_proxy(lambda event: gone.set_result(None))
    await gone
    await storage.save("b", "{}", "Third")
    await storage.close()
    storage = await opened("cleared")
    names = sorted(row.name for row in await storage.list_jobs())
    await storage.close()
    names
    """)
    assert found == ["First", "Third"]


def test_a_browser_that_keeps_nothing_is_said_so(shared):
    """Where the browser has no IndexedDB for us, the app runs in memory and says that jobs will be lost."""
    found = shared.run("""
    from pwa.services.clock import SystemClock
    from pwa.services.device_storage import open_storage
    from js import Object, self as worker
    from pyodide.ffi import to_js
    real = js.indexedDB
    def put(value):
        told = to_js({"value": value, "configurable": True}, dict_converter=Object.fromEntries)
        Object.defineProperty(worker, "indexedDB", told)
    put(None)
    storage = await open_storage(SystemClock())
    put(real)
    await storage.save("a", "{}", "Mill Lane")
    [storage.can_write, storage.notes, (await storage.load("a")).name]
    """)
    assert found[0] is True
    assert "does not let the app keep anything" in found[1][0]
    assert found[2] == "Mill Lane"


def test_a_second_tab_reads_and_takes_over(context, url):
    """The second tab reads what is kept and refuses to write; when the first is closed it takes over."""
    first = Tab(context, url).open()
    first.run("""
    await storage.save("a", "{}", "First")
    None
    """)
    second = Tab(context, url).open()
    refused = second.run("""
    calls = []
    storage.on_writable(lambda: (calls.append(1), js.postMessage("writable")))
    try:
        await storage.save("b", "{}")
    except StorageError as error:
        said = str(error)
    [storage.can_write, said[:32], [row.name for row in await storage.list_jobs()]]
    """)
    assert refused == [False, "The app is open in another tab o", ["First"]]
    first.run("""
    await storage.save("a", "{}", "Changed since")
    None
    """)
    first.page.close()
    second.page.wait_for_function("globalThis.heard.includes('writable')", timeout=20_000)
    taken = second.run("""
    await storage.save("b", "{}", "Second")
    [storage.can_write, calls, sorted(row.name for row in await storage.list_jobs())]
    """)
    assert taken == [True, [1], ["Changed since", "Second"]]


def test_without_locks_two_tabs_undo_nothing(context, port):
    """A page without TLS has no locks: both tabs write, and each finds what the other wrote."""
    url = f"http://plain.test:{port}/"
    first, second = Tab(context, url).open(), Tab(context, url).open()
    assert first.page.evaluate("isSecureContext") is False
    for number in range(3):
        for tab, name in ((first, "one"), (second, "two")):
            tab.run(f"""
            await storage.save("{name} {number}", "{{}}", "{name}")
            None
            """)
    found = first.run("""
    await storage.set_setting("theme", '"dark"')
    kept = await storage._keeper._disk.read()
    [storage.can_write, len(kept.lines), await storage.count_jobs()]
    """)
    assert found == [True, 7, 6]


WRITE_ON = """
storage._keeper._checkpoint_at = 3  # so that it is nearly always in the middle of something
import pwa.services.browser_keeper
pwa.services.browser_keeper.CHECKPOINT_AT = 3
number = {start}
while True:
    number += 1
    document = json.dumps({{"n": number, "fill": "f" * 200_000}})
    await storage.save(f"job {{number % 5}}", document, f"Mill {{number}}")
    js.postMessage(number)
"""
NUMBERS = """
documents = [(await storage.load(row.id)).document for row in await storage.list_jobs()]
names = {row.id: row.name for row in await storage.list_jobs()}
[storage.notes, names, [json.loads(text)["n"] for text in documents]]
"""


def last_acknowledged(heard: list[int]) -> dict[str, int]:
    """The last number that was acknowledged for each job."""
    return {f"job {number % 5}": number for number in heard}


def check_kept(tab: Tab, acknowledged: dict[str, int]) -> int:
    """All that was acknowledged is there, or something newer; gives the newest number there is."""
    notes, names, numbers = tab.run(NUMBERS)
    assert notes == []
    kept = {job: int(name.removeprefix("Mill ")) for job, name in names.items()}
    missing = {job: number for job, number in acknowledged.items() if kept.get(job, 0) < number}
    assert not missing
    assert sorted(numbers) == sorted(kept.values())
    return max(numbers)


def write_until(tab: Tab, start: int, chance: random.Random) -> dict[str, int]:
    """Let the tab write for a random while; gives what it acknowledged, just before it is killed."""
    tab.start(WRITE_ON.format(start=start))
    tab.page.wait_for_function("globalThis.heard.length > 12", timeout=60_000)
    tab.page.wait_for_timeout(chance.uniform(0, 300))
    return last_acknowledged(tab.heard())


def test_a_closed_tab_loses_nothing_acknowledged(context, url):
    """Whatever save had returned when the tab was closed is there in the next one."""
    chance = random.Random(1)
    tab = Tab(context, url).open()
    acknowledged = write_until(tab, 0, chance)
    tab.page.close()
    check_kept(Tab(context, url).open(), acknowledged)


def browser_process(profile: Path) -> int:
    """The number of the browser process that we started with this profile."""
    wanted = f"--user-data-dir={profile}".encode()
    for entry in Path("/proc").glob("[0-9]*"):
        try:
            arguments = (entry / "cmdline").read_bytes().split(b"\0")
        except OSError:
            continue
        if wanted in arguments and not any(argument.startswith(b"--type=") for argument in arguments):
            return int(entry.name)
    raise AssertionError("The browser is not among the processes.")


def test_a_killed_browser_loses_nothing_acknowledged(playwright, url, tmp_path):
    """Whatever save had returned when the whole browser was killed is there after it is started again."""
    chance = random.Random(2)
    start, acknowledged = 0, {}
    for last in (False, True):
        context = playwright.chromium.launch_persistent_context(tmp_path, executable_path=chromium(), args=FLAGS)
        tab = Tab(context, url).open()
        if acknowledged:
            start = check_kept(tab, acknowledged)
        if last:
            context.close()
            break
        acknowledged = write_until(tab, start, chance)
        os.kill(browser_process(tmp_path), signal.SIGKILL)
        context.close()
