"""The assembly that flet itself makes of an app showing one text: what our start-up is measured against."""

from __future__ import annotations

import shutil
import tarfile
from pathlib import Path

from flet.controls.types import RouteUrlStrategy, WebRenderer
from flet_web import patch_font_manifest_json, patch_index_html

from pwa.bundle.places import CLIENT
from pwa.bundle.sources import library_files

TEXT = "stock"
MAIN = f"""
import flet as ft

def main(page: ft.Page):
    page.add(ft.Text("{TEXT}"))

ft.run(main)
"""


def stock_site(out: Path, work: Path) -> Path:
    """Write the stock assembly: flet's page, worker and fonts unchanged, the app in a .tar.gz, nothing from a CDN.

    Two things differ from what flet publishes. The address of Pyodide gets the "./" without which its own worker
    cannot load it. And msgpack is its pure Python form, as in our bundle.
    """
    shutil.copytree(CLIENT, out)
    (work / "main.py").write_text(MAIN, encoding="utf-8")
    with tarfile.open(out / "app.tar.gz", "w:gz") as archive:
        archive.add(work / "main.py", "main.py")
        for place, path in library_files().items():
            archive.add(path, f"__pypackages__/{place}")
    index = out / "index.html"
    patch_index_html(
        str(index),
        "/",
        app_name=TEXT,
        pyodide=True,
        pyodide_script_path="main.py",
        pyodide_version="bundled",
        app_package_url="app.tar.gz",
        web_renderer=WebRenderer.CANVAS_KIT,
        route_url_strategy=RouteUrlStrategy.HASH,
        no_cdn=True,
    )
    page = index.read_text(encoding="utf-8")
    index.write_text(page.replace('="pyodide/pyodide.mjs"', '="./pyodide/pyodide.mjs"'), encoding="utf-8")
    patch_font_manifest_json(str(out / "assets" / "FontManifest.json"))
    return out
