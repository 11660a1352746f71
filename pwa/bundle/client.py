"""Takes from the prebuilt client and Pyodide what this app uses, cured of every request to other hosts."""

from __future__ import annotations

import json
import re
import shutil
from pathlib import Path

from pwa.bundle.icon_font import write_icon_font
from pwa.bundle.places import ASSETS, CLIENT, PYODIDE
from pwa.bundle.sources import icon_names

FONT = "tapwright-sans.woff2"
COPIED = (
    "flutter.js",
    "version.json",
    "assets/AssetManifest.bin",
    "assets/AssetManifest.bin.json",
    "assets/NOTICES",
    "canvaskit/canvaskit.js",
    "canvaskit/canvaskit.wasm",
    "canvaskit/chromium/canvaskit.js",
    "canvaskit/chromium/canvaskit.wasm",
)
PYODIDE_COPIED = ("pyodide.mjs", "pyodide.asm.mjs", "pyodide.asm.wasm", "python_stdlib.zip")
# The client appends a script from here at start, for an animation runtime; ours answers in its place.
FOREIGN_RUNTIME = re.compile(r'"https://[^"]*/@rive-app/flutter-native-wasm@[^"]*/"')
LOCAL_RUNTIME = "rive-off/"


class ClientChangedError(RuntimeError):
    """The prebuilt client is not as this build knows it: another version of flet-web needs another look."""


def _copy(source: Path, target: Path) -> None:
    target.parent.mkdir(parents=True, exist_ok=True)
    shutil.copyfile(source, target)


def _without_source_map(script: str) -> str:
    return re.sub(r"\n//# sourceMappingURL=\S+", "", script)


def _write_main(site: Path) -> None:
    """The compiled client, its one foreign address replaced."""
    script = (CLIENT / "main.dart.js").read_text(encoding="utf-8")
    script, replaced = FOREIGN_RUNTIME.subn(f'"{LOCAL_RUNTIME}"', script)
    if replaced != 1:
        raise ClientChangedError(f"Expected one foreign script address in the client, found {replaced}.")
    (site / "main.dart.js").write_text(_without_source_map(script), encoding="utf-8")


def _write_fonts(site: Path) -> None:
    """One text font under the name Flutter looks for, and the icons in use."""
    fonts = site / "assets" / "fonts"
    write_icon_font(CLIENT / "assets/fonts/MaterialIcons-Regular.otf", icon_names(), fonts / "icons.otf")
    _copy(ASSETS / "fonts" / FONT, fonts / FONT)
    for licence in (ASSETS / "fonts").glob("LICENSE-*.txt"):
        _copy(licence, fonts / licence.name)
    manifest = [
        {"family": "MaterialIcons", "fonts": [{"asset": "fonts/icons.otf"}]},
        {"family": "Roboto", "fonts": [{"asset": f"fonts/{FONT}"}]},
    ]
    (site / "assets" / "FontManifest.json").write_text(json.dumps(manifest), encoding="utf-8")


def engine_revision() -> str:
    """The revision of the Flutter engine the client was built with."""
    found = re.search(r'"engineRevision":"(\w+)"', (CLIENT / "flutter_bootstrap.js").read_text(encoding="utf-8"))
    if not found:
        raise ClientChangedError("The client does not say which Flutter engine it was built with.")
    return found[1]


def pyodide_lock() -> str:
    """The list of packages Pyodide may load, emptied: everything comes from this site."""
    lock = json.loads((PYODIDE / "pyodide-lock.json").read_text(encoding="utf-8"))
    return json.dumps({"info": lock["info"], "packages": {}})


def write_client(site: Path) -> None:
    """Write the client and Pyodide into the site."""
    for name in COPIED:
        _copy(CLIENT / name, site / name)
    shutil.copytree(CLIENT / "assets/shaders", site / "assets/shaders")
    loader = site / "flutter.js"
    loader.write_text(_without_source_map(loader.read_text(encoding="utf-8")), encoding="utf-8")
    for name in PYODIDE_COPIED:
        _copy(PYODIDE / name, site / "pyodide" / name)
    _write_main(site)
    _write_fonts(site)
