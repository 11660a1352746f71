"""What goes into the archives: our files, those of the libraries; and a digest of all that a build reads."""

from __future__ import annotations

import ast
import hashlib
import platform
from collections.abc import Iterable, Iterator
from importlib.metadata import distribution, version
from pathlib import Path

from pwa.bundle.places import ASSETS, ROOT, WEB, Choices

# What the browser's Python gets of the installed packages, as pure Python: for the app, and for the PDF.
LIBRARIES = ("flet", "repath", "six", "msgpack", "segno")
PDF_LIBRARIES = ("fpdf2", "fonttools", "defusedxml")
LIBRARY_SUFFIXES = {".py", ".json"}
# Parts that only a server, a desktop, a test or a maker of fonts can use.
LIBRARY_LEAVES_OUT = (
    *(f"flet/{part}/" for part in ("testing", "fastapi", "auth/providers", "__pyinstaller")),
    *(f"fontTools/{part}/" for part in ("cu2qu", "diff", "merge", "mtiLib", "qu2cu", "t1Lib", "ufoLib", "voltLib")),
    *(f"fontTools/{part}" for part in ("afmLib", "fontBuilder", "tfmLib", "ttx", "feaLib/builder", "feaLib/parser")),
    *(f"fontTools/varLib/{part}" for part in ("avar", "interpolat", "mutator", "plot")),
    *(f"fontTools/ttLib/{part}" for part in ("woff2", "scaleUpem", "removeOverlaps", "reorderGlyphs")),
)
BUILD_TOOLS = ("flet-web", "brotli")

APP_PACKAGES = ("core", "pwa")
APP_LEAVES_OUT = ("pwa/bundle/", "pwa/assets/icons/", "pwa/__main__.py")
APP_DATA = {".json", ".tsv", ".ttf", ".txt"}


def library_files(libraries: Iterable[str] = LIBRARIES) -> dict[str, Path]:
    """The Python files of installed packages: place in the archive -> file on this machine."""
    files = {}
    for name in libraries:
        installed = distribution(name)
        for entry in installed.files or ():
            place = entry.as_posix()
            wanted = entry.suffix in LIBRARY_SUFFIXES and ".dist-info/" not in place and not place.startswith("..")
            if wanted and not place.startswith(LIBRARY_LEAVES_OUT):
                files[place] = Path(str(installed.locate_file(entry)))
    return dict(sorted(files.items()))


def app_files() -> dict[str, Path]:
    """Our own code and data as the app sees them: place in the archive -> file in this project."""
    files = {}
    for package in APP_PACKAGES:
        for path in (ROOT / package).rglob("*"):
            place = path.relative_to(ROOT).as_posix()
            if path.suffix in {".py", *APP_DATA} and not place.startswith(APP_LEAVES_OUT):
                files[place] = path
    for path in (ROOT / "sample_tests").glob("*.json"):
        files[f"sample_tests/{path.name}"] = path
    return dict(sorted(files.items()))


def _attributes_of(source: str, owner: str) -> Iterator[str]:
    """The names X written as `owner.X` or `something.owner.X` in a Python text."""
    for node in ast.walk(ast.parse(source)):
        if isinstance(node, ast.Attribute):
            parent = node.value
            name = parent.id if isinstance(parent, ast.Name) else getattr(parent, "attr", None)
            if name == owner:
                yield node.attr


def icon_names() -> set[str]:
    """The names of the icons our code uses, as flet writes them: {"ADD", "WATER_DROP"}."""
    texts = (path.read_text(encoding="utf-8") for path in app_files().values() if path.suffix == ".py")
    return {name for text in texts for name in _attributes_of(text, "Icons")}


def digest_of(files: Iterable[tuple[str, Path]]) -> str:
    """A hash of the names and contents of files; the same files give the same hash on every machine."""
    total = hashlib.sha256()
    for place, path in files:
        total.update(f"{place}\0{hashlib.sha256(path.read_bytes()).hexdigest()}\n".encode())
    return total.hexdigest()


def _own_files() -> Iterator[tuple[str, Path]]:
    yield from app_files().items()
    for folder in (WEB, WEB.parent, ASSETS):
        for path in sorted(folder.rglob("*")):
            if path.is_file() and "__pycache__" not in path.parts:
                yield path.relative_to(ROOT).as_posix(), path


def build_digest(choices: Choices, node: str | None) -> str:
    """A hash of everything a build depends on; while it stays the same, the finished site is up to date."""
    tools = [f"{name}=={version(name)}" for name in (*LIBRARIES, *PDF_LIBRARIES, *BUILD_TOOLS)]
    settings = [choices.base, "with Node" if node else "without Node", platform.python_version()]
    text = "\n".join([*tools, *settings, digest_of(_own_files())])
    return hashlib.sha256(text.encode()).hexdigest()
