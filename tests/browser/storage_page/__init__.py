"""A page with Python and the services of the app, to try storage in a real browser.

It holds no screens, no Flet and no numpy. Python runs in a worker there, as in the app.
"""

from __future__ import annotations

import http.server
import io
import json
import textwrap
import zipfile
from pathlib import Path
from typing import Any

import flet_web

HERE = Path(__file__).resolve().parent
ROOT = HERE.parents[2]
RUN = """async (code) => {
  try { return {value: await self.pyodide.runPythonAsync(code)} } catch (error) { return {error: String(error)} }
}"""
OPEN = """
import asyncio, json, js
from pwa.services.browser_storage import BrowserStorage
from pwa.services.clock import SystemClock
from pwa.services.storage import StorageError

async def opened(name={name!r}):
    storage = BrowserStorage(SystemClock(), name)
    await storage.open()
    return storage

storage = await opened()
None
"""


def services_archive() -> bytes:
    """The services as an archive from which Python imports."""
    buffer = io.BytesIO()
    with zipfile.ZipFile(buffer, "w") as archive:
        for path in [ROOT / "pwa" / "__init__.py", *sorted((ROOT / "pwa" / "services").glob("*.py"))]:
            archive.write(path, path.relative_to(ROOT))
    return buffer.getvalue()


class Site(http.server.SimpleHTTPRequestHandler):
    """The page, Pyodide as it ships with the web client, and the services."""

    archive = services_archive()

    def translate_path(self, path: str) -> str:
        """Where a file is: Pyodide in the web client, the rest beside this module."""
        relative = path.split("?")[0].lstrip("/") or "index.html"
        folder = Path(flet_web.get_package_web_dir()) if relative.startswith("pyodide/") else HERE
        return str(folder / relative)

    def guess_type(self, path: str) -> str:
        """The types that browsers insist on, whatever this machine thinks of the endings."""
        return {".mjs": "text/javascript", ".wasm": "application/wasm"}.get(Path(path).suffix) or super().guess_type(
            path
        )

    def do_GET(self) -> None:
        """Answer with a file, or with the archive."""
        if self.path != "/services.zip":
            super().do_GET()
            return
        self.send_response(200)
        self.send_header("Content-Length", str(len(self.archive)))
        self.end_headers()
        self.wfile.write(self.archive)

    def log_message(self, format: str, *args: Any) -> None:
        """Say nothing."""


class Tab:
    """A tab of the browser with Python in its worker."""

    def __init__(self, context: Any, url: str) -> None:
        self.page = context.new_page()
        self.page.goto(url)
        self.page.wait_for_function("document.title !== 'starting'", timeout=60_000)
        assert self.page.title() == "ready"

    def open(self, name: str = "tapwright") -> Tab:
        """Open a storage, which is then `storage` in the Python of this tab."""
        self.run(OPEN.format(name=name))
        return self

    def run(self, code: str) -> Any:
        """Run Python in the worker and give the value of its last line, by way of JSON."""
        *body, last = textwrap.dedent(code).strip().split("\n")
        answer = self.page.workers[0].evaluate(RUN, "\n".join([*body, f"import json; json.dumps({last})"]))
        assert "error" not in answer, answer["error"]
        return json.loads(answer["value"])

    def start(self, code: str) -> None:
        """Start Python in the worker and do not wait for its end."""
        self.page.workers[0].evaluate("(code) => { self.pyodide.runPythonAsync(code); }", textwrap.dedent(code))

    def heard(self) -> list[Any]:
        """What the worker has posted so far."""
        return self.page.evaluate("globalThis.heard")
