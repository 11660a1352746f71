"""The built site, opened and looked into."""

from __future__ import annotations

import gzip
import hashlib
import io
import json
import re
import zipfile
from pathlib import Path

import brotli
import pytest

from pwa.bundle.revisions import kept_files, sizes
from tests.browser.harness import CONFIG

MB = 1e6
PYTHON_314 = (3627).to_bytes(2, "little") + b"\r\n"  # how bytecode of Python 3.14 begins
LATER = ("python/numpy", "python/pdf")  # fetched after the first screen
SNAPSHOT = "python/snapshot"


def _config(site: Path) -> dict:
    return json.loads(CONFIG.search((site / "worker.js").read_text(encoding="utf-8"))[0])


def _archive(site: Path, name: str) -> zipfile.ZipFile:
    return zipfile.ZipFile(io.BytesIO(gzip.decompress((site / _config(site)[name]).read_bytes())))


def test_app_archive_holds_core_and_app(site):
    """Core, app, tables and samples are in the bundle as bytecode of the browser's Python; tests are not."""
    archive = _archive(site, "app")
    names = set(archive.namelist())

    assert {"core/__init__.pyc", "core/chemistry/__init__.pyc", "core/job/__init__.pyc", "pwa/main.pyc"} <= names
    assert any(re.fullmatch(r"core/data/\w+\.tsv", name) for name in names)
    assert any(re.fullmatch(r"sample_tests/[^/]+\.json", name) for name in names)
    assert not [name for name in names if "test_" in name.split("/")[-1] or name.startswith(("tests/", "pwa/bundle"))]
    assert not [name for name in names if name.endswith(".py")]
    assert {archive.read(name)[:4] for name in names if name.endswith(".pyc")} == {PYTHON_314}


def test_site_without_node_holds_sources(plain_site):
    """Built without Node, the archives hold sources, and there is no memory image."""
    names = _archive(plain_site, "app").namelist()

    assert "pwa/main.py" in names
    assert _config(plain_site)["snapshot"] is None


def test_sizes_stay_within_budget(site):
    """What a phone stores without the image, and fetches up to the first screen with and without it, is bounded."""
    assert sizes(site, without=(SNAPSHOT,)).kept <= 45 * MB
    assert sizes(site, without=LATER).fetched <= 21 * MB
    assert sizes(site, without=(*LATER, SNAPSHOT)).fetched <= 13 * MB


def test_service_worker_lists_every_file_with_its_hash(site):
    """The list is complete and right: each file the app needs, with the hash of its content."""
    script = (site / "sw.js").read_text(encoding="utf-8")
    listed = json.loads(re.search(r"const FILES = (\{.*?\});", script, re.DOTALL)[1])

    assert listed == kept_files(site)
    for place, digest in listed.items():
        assert hashlib.sha256((site / place).read_bytes()).hexdigest().startswith(digest), place
    for name in ("index.html", "worker.js", "main.dart.js", "pyodide/pyodide.asm.wasm", _config(site)["numpy"]):
        assert name in listed


@pytest.mark.parametrize(("suffix", "unpack"), [(".gz", gzip.decompress), (".br", brotli.decompress)])
def test_precompressed_copies_are_true(site, suffix, unpack):
    """Each compressed copy unpacks to the file beside it, and the large files have one."""
    copies = list(site.rglob(f"*{suffix}"))

    assert {"main.dart.js", "pyodide.asm.wasm", "index.html"} <= {path.name.removesuffix(suffix) for path in copies}
    for copy in copies:
        assert unpack(copy.read_bytes()) == copy.with_name(copy.name.removesuffix(suffix)).read_bytes(), copy.name


def test_client_asks_no_foreign_host_for_code(site):
    """The animation runtime's address is gone from the client, and answered locally."""
    script = (site / "main.dart.js").read_text(encoding="utf-8")

    assert "cdn.jsdelivr.net" not in script
    assert (site / "rive-off" / "wasm" / "rive_native.js").exists()


def test_licences_ship(site):
    """The licence texts of fonts and client are in the site."""
    assert (site / "assets" / "NOTICES").stat().st_size > 100_000
    assert len(list((site / "assets" / "fonts").glob("LICENSE-*.txt"))) == 2
