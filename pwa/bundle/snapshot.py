"""Makes the memory image: the browser's Python with flet imported, restored at start instead of made again.

It rests on options of Pyodide that are not public. The page therefore starts without the image too, only
slower. The app's own modules are not in it: a new version of the app leaves it as it is, and it is not
fetched again.
"""

from __future__ import annotations

import hashlib
from dataclasses import dataclass
from pathlib import Path

from pwa.bundle.node import run_script
from pwa.bundle.places import PYODIDE, WEB, cache, made_once


@dataclass(frozen=True, slots=True)
class Snapshot:
    """A memory image: its bytes, and the size of the memory they restore. [bytes]"""

    content: bytes
    memory: int


def controls() -> list[str]:
    """The names of flet that go into the image; any other is imported on first use."""
    return (WEB / "controls.txt").read_text(encoding="utf-8").split()


def preload_source(library_file: str) -> str:
    """The Python text that imports what belongs into the image."""
    text = (WEB / "preload.py").read_text(encoding="utf-8")
    return text.replace("__LIBRARY_FILE__", library_file).replace("__CONTROLS__", " ".join(controls()))


def make_snapshot(library_zip: Path, library_file: str, node: str) -> Snapshot:
    """The image for one library archive; made once, then cached, since two makings differ in some bytes."""
    preload = preload_source(library_file)
    parts = [library_zip.read_bytes(), preload.encode(), (WEB / "snapshot.mjs").read_bytes()]
    parts.append((PYODIDE / "pyodide.asm.wasm").read_bytes())
    key = hashlib.sha256(b"".join(hashlib.sha256(part).digest() for part in parts)).hexdigest()[:16]

    def make(target: Path) -> None:
        script = target.with_name("preload.py")
        script.write_text(preload, encoding="utf-8")
        run_script(node, "snapshot.mjs", library_zip, library_file, script, target)

    out = made_once(cache("snapshots") / f"{key}.bin", make)
    content = out.read_bytes()
    header = int.from_bytes(content[4:8], "little")  # the file begins with its magic word and the size of its header
    return Snapshot(content, len(content) - header)
