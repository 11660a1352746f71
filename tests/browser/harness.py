"""Serves a built site and drives Chromium at phone size; used by the browser tests and the start-up bench."""

from __future__ import annotations

import json
import os
import re
import shutil
import threading
import time
from collections.abc import Iterator
from contextlib import contextmanager
from http import HTTPStatus
from pathlib import Path
from typing import Any

from playwright.sync_api import BrowserContext, Page, Playwright, TimeoutError, Worker

from pwa.bundle import archives
from pwa.bundle.page import write_service_worker
from pwa.bundle.places import ROOT
from pwa.bundle.revisions import kept_files, revision_of
from pwa.bundle.server import SiteHandler, SiteServer

OUTPUT = ROOT / "test-output"
PHONE = {
    "viewport": {"width": 412, "height": 915},
    "device_scale_factor": 2,
    "is_mobile": True,
    "has_touch": True,
}
# Root has no sandbox; without the other flags the browser itself looks for its maker's hosts.
ARGUMENTS = [
    "--no-sandbox",
    "--disable-gpu",
    "--disable-quic",
    "--no-first-run",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
]
START = 60_000  # ms; a start takes about 5 s here, on a busy machine several times that
STEP = 20_000  # ms; for what follows an action
# What Chromium says about itself, not about the page.
NOT_OURS = re.compile(r"GPU stall|GroupMarkerNotSet|Automatic fallback to software WebGL")


def chromium() -> str | None:
    """The Chromium to drive: TAPWRIGHT_CHROMIUM, Debian's, or None for Playwright's own."""
    named = os.environ.get("TAPWRIGHT_CHROMIUM")
    return named or shutil.which("chromium") or shutil.which("chromium-browser")


class _CountingHandler(SiteHandler):
    server: CountingServer

    def _answer(self, *, with_body: bool) -> None:
        if self.server.down:
            self.close_connection = True
            return
        self.server.requests.append(self.path)
        if self.path in self.server.refused:
            self._send(HTTPStatus.SERVICE_UNAVAILABLE, {"Content-Type": "text/plain"}, b"")
            return
        super()._answer(with_body=with_body)

    def _send(self, status: HTTPStatus, headers: dict[str, str], body: bytes) -> None:
        if status is HTTPStatus.OK:
            self.server.sent.append(self.path)
        super()._send(status, headers, body)


class CountingServer(SiteServer):
    """A server that remembers what it was asked, can refuse paths, and can go down and come back."""

    def __init__(self, site: Path, base: str = "/") -> None:
        super().__init__(site, base=base, handler=_CountingHandler)
        self.requests: list[str] = []
        self.sent: list[str] = []  # answered with the file, not with "unchanged"
        self.refused: set[str] = set()
        self.down = False

    @property
    def url(self) -> str:
        """The address of the app."""
        return f"http://127.0.0.1:{self.port}{self.base}"


@contextmanager
def serving(site: Path, base: str = "/") -> Iterator[CountingServer]:
    """A running server for a site, closed at the end."""
    with CountingServer(site, base) as server:
        thread = threading.Thread(target=server.serve_forever, daemon=True)
        thread.start()
        yield server
        server.shutdown()
        thread.join()


@contextmanager
def phone(playwright: Playwright, profile: Path, *arguments: str, **options: Any) -> Iterator[BrowserContext]:
    """A Chromium at phone size that keeps its data in `profile` between starts."""
    context = playwright.chromium.launch_persistent_context(
        str(profile), executable_path=chromium(), args=[*ARGUMENTS, *arguments], **(PHONE | options)
    )
    try:
        yield context
    finally:
        context.close()


# "shown" once the app shows a text, the splash's words if it says that the start failed, else nothing yet.
SHOWS = """text => {
  const failure = document.querySelector("#splash-error:not([hidden])");
  if (failure) return `The app could not start: ${failure.textContent}`;
  const holds = (words) => Boolean(words?.trim()) && words.includes(text);
  return [...document.querySelectorAll("flt-semantics-host *")].some((node) =>
    holds(node.getAttribute("aria-label")) || (node.childElementCount === 0 && holds(node.textContent))) && "shown";
}"""


class Visit:
    """One page of the app: opens it, waits for what it shows, and notes what went wrong."""

    def __init__(self, context: BrowserContext) -> None:
        self.context = context
        self.page: Page = context.pages[0] if context.pages else context.new_page()
        self.errors: list[str] = []
        self.addresses: list[str] = []
        self.page.on("console", self._heard)
        self.page.on("pageerror", lambda error: self.errors.append(str(error)))
        context.on("request", lambda request: self.addresses.append(request.url))

    def _heard(self, message: Any) -> None:
        if message.type in {"error", "warning"} and not NOT_OURS.search(message.text):
            self.errors.append(f"{message.type}: {message.text}")

    def open(self, url: str, text: str = "") -> Visit:
        """Go to an address and wait until the app is up, and shows `text` if given."""
        self.page.goto(url, wait_until="commit")
        return self.wait_for(text, START)

    def reload(self, text: str = "") -> Visit:
        """Reload, and wait until the app is up."""
        self.page.reload(wait_until="commit")
        return self.wait_for(text, START)

    def wait_for(self, text: str, timeout: float = STEP) -> Visit:
        """Wait until the semantics tree shows something, and holds `text` as text or label."""
        try:
            outcome = self.page.wait_for_function(SHOWS, arg=text, timeout=timeout).json_value()
        except TimeoutError as error:
            raise AssertionError(f"{text!r} did not appear. There is: {self.texts()}; {self.errors}") from error
        assert outcome == "shown", f"{outcome} {self.errors}"
        return self

    def texts(self) -> list[str]:
        """All texts and labels in the semantics tree."""
        return self.page.evaluate(
            """() => [...document.querySelectorAll("flt-semantics-host *")].flatMap(node =>
                [node.getAttribute("aria-label"), node.childElementCount === 0 ? node.textContent : null]
            ).filter(Boolean)"""
        )

    def foreign(self, server: SiteServer) -> list[str]:
        """Addresses asked for that are not the server's."""
        own = ("data:", "blob:", f"http://127.0.0.1:{server.port}/")
        return [address for address in self.addresses if not address.startswith(own)]

    @property
    def worker(self) -> Worker:
        """The worker that runs Python."""
        return next(worker for worker in self.page.workers if "/worker.js" in worker.url)

    def python(self, code: str) -> Any:
        """The value of the last line of a Python text, run beside the app."""
        return self.worker.evaluate("code => self.pyodide.runPythonAsync(code)", code)

    def host(self, call: str) -> Any:
        """The answer of the page's Python module: host("offline_state()")."""
        return self.python(f"import tapwright_host\ntapwright_host.{call}")

    def wait_until_offline_ready(self) -> Visit:
        """Wait until the service worker has stored the app."""
        self.page.evaluate("navigator.serviceWorker.ready.then(() => true)")
        return self.wait_until("navigator.serviceWorker.controller !== null")

    def wait_until(self, condition: str) -> Visit:
        """Wait until a JavaScript expression, which may be a promise, holds on the page."""
        # Asked anew each time: Playwright's own waiting neither awaits promises nor passes the page's policy.
        deadline = time.monotonic() + STEP / 1000
        while not self.page.evaluate(condition):
            assert time.monotonic() < deadline, f"{condition} does not hold. {self.errors}"
            self.page.wait_for_timeout(200)
        return self

    def caches(self) -> list[str]:
        """The names of the stored versions."""
        return self.page.evaluate("caches.keys()")

    def screenshot(self, name: str) -> Path:
        """Save what is on the screen under test-output/."""
        path = OUTPUT / f"{name}.png"
        self.page.screenshot(path=path)
        return path


CONFIG = re.compile(r"(?<=^const CONFIG = ).*(?=;$)", re.MULTILINE)


def changed_site(site: Path, out: Path, *, main: str | None = None, **config: Any) -> Path:
    """A copy of a site as another version: another `pwa/main.py`, other entries in the worker's config."""
    shutil.copytree(site, out, copy_function=os.link)
    worker = out / "worker.js"
    text = worker.read_text(encoding="utf-8")
    found = CONFIG.search(text)
    assert found, "worker.js holds its config on one line"
    entries = json.loads(found[0]) | config
    if main is not None:
        source = out.parent / f"{out.name}-app"
        (source / "pwa").mkdir(parents=True)
        (source / "pwa" / "__init__.py").touch()
        (source / "pwa" / "main.py").write_text(main, encoding="utf-8")
        archive = out.parent / f"{out.name}-app.zip"
        archives.zip_folder(source, archive)
        entries["app"] = f"python/{archives.pack(archive.read_bytes(), 'app', out / 'python')}"
    for stale in out.glob("worker.js*"):
        stale.unlink()
    worker.write_text(CONFIG.sub(lambda _: json.dumps(entries), text), encoding="utf-8")
    (out / "sw.js").unlink()
    files = kept_files(out)
    write_service_worker(out, files, revision_of(files))
    return out
