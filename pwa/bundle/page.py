"""Writes our own part of the site: page, scripts, worker, manifest, icons."""

from __future__ import annotations

import html
import json
import shutil
from pathlib import Path

from pwa.bundle.client import FONT, engine_revision
from pwa.bundle.identity import COLOURS, DESCRIPTION, NAME, mark_svg
from pwa.bundle.places import ASSETS, WEB

# All from this site, nothing from elsewhere; Flutter sets styles on elements, Pyodide compiles WebAssembly.
CONTENT_SECURITY_POLICY = "; ".join(
    (
        "default-src 'none'",
        "script-src 'self' 'wasm-unsafe-eval'",
        "style-src 'self' 'unsafe-inline'",
        "img-src 'self' data: blob:",
        "font-src 'self' data:",
        "connect-src 'self' data: blob:",
        "worker-src 'self'",
        "manifest-src 'self'",
        "base-uri 'self'",
        "form-action 'none'",
    )
)


def _filled(name: str, values: dict[str, str]) -> str:
    """One of our files with its __PLACEHOLDERS__ filled in."""
    text = (WEB / name).read_text(encoding="utf-8")
    for placeholder, value in values.items():
        text = text.replace(f"__{placeholder}__", value)
    return text


def normal_base(base: str) -> str:
    """An address path with a slash at both ends; "./" and "" mean wherever the page stands."""
    path = base.strip().strip("/")
    return "./" if path == "." or not base.strip() else f"/{path}/".replace("//", "/")


def write_worker(site: Path, config: dict[str, object]) -> None:
    """Write the Python worker, with what the build found out."""
    files = {"LIBRARY_FILE": str(config["libraryFile"]), "APP_FILE": str(config["appFile"])}
    complete = config | {"boot": _filled("boot.py", files)}
    (site / "worker.js").write_text(_filled("worker.js", {"CONFIG": json.dumps(complete)}), encoding="utf-8")


def write_page(site: Path, base: str, *, stored_mb: int, started_mb: int) -> None:
    """Write the page with its scripts, the manifest and the icons.

    The splash names what a first start fetches: all that is stored, or what one start alone takes. [MB as sent]
    """
    values = COLOURS | {
        "NAME": html.escape(NAME),
        "DESCRIPTION": html.escape(DESCRIPTION),
        "BASE": html.escape(normal_base(base)),
        "CSP": CONTENT_SECURITY_POLICY,
        "MARK": mark_svg('class="ink"', 'class="drop"', attributes=' aria-hidden="true"'),
        "STORED_MB": str(stored_mb),
        "STARTED_MB": str(started_mb),
        "ENGINE_REVISION": engine_revision(),
        "FONT": FONT,
    }
    for name in (
        "index.html",
        "manifest.json",
        "splash.js",
        "bridge.js",
        "semantics.js",
        "updates.js",
        "start.js",
    ):
        (site / name).write_text(_filled(name, values), encoding="utf-8")
    runtime = site / "rive-off" / "wasm"
    runtime.mkdir(parents=True)
    shutil.copyfile(WEB / "rive_native.js", runtime / "rive_native.js")
    icons = site / "icons"
    icons.mkdir()
    for icon in (ASSETS / "icons").glob("*.png"):
        shutil.copyfile(icon, icons / icon.name)


def write_service_worker(site: Path, files: dict[str, str], revision: str) -> None:
    """Write the service worker with the list of files it keeps."""
    values = {"FILES": json.dumps(files, indent=0), "REVISION": revision}
    (site / "sw.js").write_text(_filled("sw.js", values), encoding="utf-8")
