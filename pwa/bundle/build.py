"""Builds the site: a folder of static files that any web server can send."""

from __future__ import annotations

import json
import shutil
import tempfile
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

from pwa.bundle import archives, numpy_wheel
from pwa.bundle.client import pyodide_lock, write_client
from pwa.bundle.node import OLDEST, NodeError, find_node
from pwa.bundle.page import write_page, write_service_worker, write_worker
from pwa.bundle.places import DEFAULT_SITE, Choices
from pwa.bundle.revisions import kept_files, revision_of, sizes, write_compressed
from pwa.bundle.snapshot import Snapshot, make_snapshot
from pwa.bundle.sources import PDF_LIBRARIES, app_files, build_digest, library_files

PYTHON = "python"  # the folder of the packs
LIBRARY_FILE = "/library.zip"  # where the archives lie in the browser's file system
APP_FILE = "/app.zip"
PDF_FILE = "/pdf.zip"
SITE_PACKAGES = "/lib/python3.14/site-packages"
RECORD = "build.json"

Say = Callable[[str], None]


@dataclass(frozen=True, slots=True)
class Built:
    """A finished site: its folder, and whether this call made it or found it up to date."""

    site: Path
    made: bool


def _print(text: str) -> None:
    print(text, flush=True)


def _megabytes(count: int) -> str:
    return f"{count / 1e6:.1f} MB"


def _try_snapshot(library: Path, node: str, say: Say) -> Snapshot | None:
    try:
        return make_snapshot(library, LIBRARY_FILE, node)
    except NodeError as error:
        say(f"No memory image: the app starts without it, only slower. {error}")
        return None


def _write_python(site: Path, node: str | None, version: str, say: Say) -> None:
    """Write the Python side: archives, memory image, numpy, and the worker that knows them."""
    say("Packing Python: flet, the app, numpy, what draws the PDF.")
    library = archives.python_archive("library", library_files(), node)
    app = archives.python_archive("app", app_files(), node)
    pdf = archives.python_archive("pdf", library_files(PDF_LIBRARIES), node)
    numpy = numpy_wheel.numpy_archive(node, say)
    folder = site / PYTHON
    config: dict[str, object] = {
        "version": version,
        "library": f"{PYTHON}/{archives.pack(library.read_bytes(), 'library', folder)}",
        "app": f"{PYTHON}/{archives.pack(app.read_bytes(), 'app', folder)}",
        "numpy": f"{PYTHON}/{archives.pack(numpy.read_bytes(), 'numpy', folder)}",
        "numpyVersion": numpy_wheel.VERSION,
        "pdf": f"{PYTHON}/{archives.pack(pdf.read_bytes(), 'pdf', folder)}",
        "libraryFile": LIBRARY_FILE,
        "appFile": APP_FILE,
        "pdfFile": PDF_FILE,
        "sitePackages": SITE_PACKAGES,
        "lock": pyodide_lock(),
        "snapshot": None,
    }
    if node:
        say("Making the memory image, from which Python starts faster.")
        if image := _try_snapshot(library, node, say):
            path = f"{PYTHON}/{archives.pack(image.content, 'snapshot', folder)}"
            config["snapshot"] = {"path": path, "memory": image.memory}
    else:
        say(
            f"No Node {OLDEST} or newer here: left out are the bytecode and the memory image. "
            "The app is complete, and starts slower."
        )
    write_worker(site, config)


def is_current(site: Path, digest: str) -> bool:
    """Whether a finished site was built from these very sources and choices."""
    try:
        record = json.loads((site / RECORD).read_text(encoding="utf-8"))
    except (OSError, ValueError):
        return False
    return record.get("digest") == digest


def build(
    site: Path = DEFAULT_SITE, choices: Choices | None = None, say: Say = _print, *, force: bool = False
) -> Built:
    """Build the site unless it is up to date; the former one stays in place until the new one is complete."""
    choices = choices or Choices()
    node = find_node(choices.node)
    digest = build_digest(choices, node)
    if not force and is_current(site, digest):
        say(f"The app in {site} is up to date.")
        return Built(site, made=False)

    say(f"Building the app in {site}.")
    site.parent.mkdir(parents=True, exist_ok=True)
    work = Path(tempfile.mkdtemp(dir=site.parent, prefix=f"{site.name}.new-"))
    try:
        _write_site(work, choices, node, digest, say)
        _put_in_place(work, site)
    finally:
        shutil.rmtree(work, ignore_errors=True)
    return Built(site, made=True)


def _put_in_place(work: Path, site: Path) -> None:
    """Change the former site for the new one, leaving next to no time between them."""
    work.chmod(0o755)
    former = Path(tempfile.mkdtemp(dir=site.parent, prefix=f"{site.name}.old-"))
    if site.exists():
        site.rename(former / "site")
    work.rename(site)
    shutil.rmtree(former)


def _write_site(work: Path, choices: Choices, node: str | None, digest: str, say: Say) -> None:
    """Write all files of the site."""
    say("Taking the client and Pyodide from flet-web.")
    write_client(work)
    _write_python(work, node, digest[:12], say)
    say("Compressing.")
    write_compressed(work)
    stored, started = (round(sizes(work, without=left_out).fetched / 1e6) for left_out in ((), (f"{PYTHON}/pdf",)))
    write_page(work, choices.base, stored_mb=stored, started_mb=started)
    write_compressed(work)
    total = sizes(work)
    files = kept_files(work)
    write_service_worker(work, files, revision_of(files))
    record = {"digest": digest, "revision": revision_of(files), "kept": total.kept, "fetched": total.fetched}
    (work / RECORD).write_text(json.dumps(record, indent=2), encoding="utf-8")
    say(f"Done. A phone fetches {_megabytes(total.fetched)} once and keeps {_megabytes(total.kept)}.")
