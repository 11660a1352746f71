"""Every way the app can start, and what is said when it cannot."""

from __future__ import annotations

import gzip
import json

import pytest

from tests.browser.harness import CONFIG, START, changed_site

MACHINE = """
import random, datetime
f"{random.random()} {datetime.datetime.now().astimezone().utcoffset()}"
"""


def _snapshot(site) -> dict:
    return json.loads(CONFIG.search((site / "worker.js").read_text(encoding="utf-8"))[0])["snapshot"]


def test_starts_from_the_memory_image(site, serve, visit):
    """The shipped site restores Python instead of starting it."""
    page = visit().open(serve(site).url)

    assert page.worker.evaluate("self.startedFrom") == "memory image"


def test_starts_without_node_having_built_it(plain_site, serve, visit):
    """A site built without Node has no memory image and no bytecode, and starts all the same."""
    server = serve(plain_site)
    page = visit().open(server.url)

    assert page.worker.evaluate("self.startedFrom") == "files"
    assert page.errors == []
    assert page.host("load_numpy()") == "2.4.3"


@pytest.mark.parametrize(
    "damaged",
    [gzip.compress(b"\0" * 4096), b"not gzip at all"],
    ids=["another content", "not gzip"],
)
def test_starts_plainly_if_the_image_is_useless(site, serve, visit, tmp_path, damaged):
    """A memory image that cannot be restored is set aside; the app starts from its files."""
    snapshot = _snapshot(site)
    broken = changed_site(site, tmp_path / "site", snapshot=snapshot | {"path": "python/broken.pack"})
    (broken / "python" / "broken.pack").write_bytes(damaged)
    page = visit().open(serve(broken).url)

    assert page.worker.evaluate("self.startedFrom") == "files"
    assert any("memory image could not be used" in text for text in page.errors)


def test_memory_image_leaves_no_trace_of_its_machine(probe_site, serve, visit):
    """Random numbers and the clock are the phone's, not those of the machine that made the image."""
    page = visit(timezone_id="Asia/Kolkata").open(serve(probe_site).url, "probe one")
    first = page.python(MACHINE).split()
    second = page.reload("probe one").python(MACHINE).split()

    assert first[0] != second[0]
    assert first[1:] == second[1:] == ["5:30:00"]


def test_runs_on_a_page_without_https(probe_site, serve, visit):
    """Over plain http from elsewhere there is no service worker: the app runs and promises no offline use."""
    server = serve(probe_site)
    page = visit("--host-resolver-rules=MAP tapwright.test 127.0.0.1")
    seen = []
    page.page.on("domcontentloaded", lambda: seen.append(page.page.locator("#splash-note").text_content()))
    page.open(f"http://tapwright.test:{server.port}/", "probe one")

    assert page.page.evaluate("isSecureContext") is False
    assert page.host("offline_state()") == "unavailable"
    assert page.host("persist_storage()") is False
    assert page.host("accept_update()") is False
    assert page.host("load_numpy()") == "2.4.3"
    assert page.errors == []
    assert "without a network" not in seen[0]


@pytest.mark.parametrize(
    ("missing", "word"),
    [("/worker.js", "worker"), ("/main.dart.js", "main.dart.js"), ("/pyodide/pyodide.asm.wasm", "")],
)
def test_a_failed_start_is_said_in_words(probe_site, serve, visit, missing, word):
    """When a part cannot be fetched, the splash says so and offers to reload, which then works."""
    server = serve(probe_site)
    server.refused = {missing}
    page = visit()
    page.page.goto(server.url, wait_until="commit")
    page.page.get_by_text("The app could not start.").wait_for(timeout=START)
    page.screenshot(f"failed-start-{word or 'wasm'}")
    assert word in page.page.locator("#splash-error").inner_text()

    server.refused = set()
    page.page.get_by_role("button", name="Reload").click()
    page.wait_for("probe one", START)


def test_an_error_in_the_apps_code_is_shown(probe_site, serve, visit, tmp_path):
    """Python that fails while it is loaded ends on the splash, with the error's own words."""
    broken = changed_site(probe_site, tmp_path / "site", main="raise RuntimeError('the valve is stuck')")
    page = visit()
    page.page.goto(serve(broken).url, wait_until="commit")
    page.page.get_by_text("The app could not start.").wait_for(timeout=START)

    assert "the valve is stuck" in page.page.locator("#splash-error").inner_text()


def test_splash_shows_our_mark_and_an_honest_note(probe_site, serve, visit):
    """Before the app draws there is our own mark, and the size of what is fetched."""
    server = serve(probe_site)
    page = visit()
    for script in ("worker", "flutter"):
        page.page.route(f"**/{script}.js", lambda route: None)  # never answered: the splash stays
    page.page.goto(server.url, wait_until="commit")
    page.page.locator("#splash-note", has_text="MB").wait_for(timeout=START)
    page.screenshot("splash")
    page.page.emulate_media(color_scheme="dark")
    page.screenshot("splash-dark")

    assert page.page.locator("#splash svg path").count() == 2
