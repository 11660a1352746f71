"""Who may import whom: arrows point down only."""

import ast
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
GROUND = ["constants", "errors", "references", "working", "units", "data"]  # of core, below the three storeys

# What the files of a folder (or one file) never import, by the name a module starts with.
FORBIDDEN = {
    **{f"core/{name}": ("core.chemistry", "core.treatment", "core.job") for name in GROUND},
    "core/chemistry": ("core.treatment", "core.job"),
    "core/treatment": ("core.job",),
    "core": ("pwa", "tests", "flet", "js", "pyodide"),
    "pwa": ("tests",),
    "pwa/text.py": ("flet", "numpy", "pwa.state", "pwa.services", "pwa.components", "pwa.screens"),
    "pwa/unit_words.py": ("flet", "numpy", "core.chemistry", "core.treatment", "core.job"),
    "pwa/state": ("pwa.screens", "pwa.components"),
    "pwa/components": ("pwa.screens", "pwa.routes", "pwa.services"),
    "pwa/services": ("pwa.screens", "pwa.components", "pwa.routes"),
}

DATA_ONLY = {"pwa.services.storage.JobRow"}  # a record without behaviour, which a piece may show

# Numbers only: no clock, no chance, no surroundings, no network, no storage of a job behind the caller's back.
IMPURE = ("time", "datetime", "random", "secrets", "uuid", "socket", "urllib", "http", "asyncio", "threading")
IMPURE += ("subprocess", "sqlite3", "locale", "logging", "platform", "multiprocessing", "tempfile")
CORE_PACKAGES = {"numpy"}  # the one package the core may lean on


def modules(place: str) -> list[Path]:
    """Python files of a folder, or the file itself, also where the name is given without its ending."""
    for path in (ROOT / place, ROOT / f"{place}.py"):
        if path.is_file():
            return [path]
    return sorted((ROOT / place).rglob("*.py"))


def imports(path: Path) -> list[str]:
    """Every module a file imports, at its top or inside a function; relative imports keep their dots."""
    found: list[str] = []
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            found += [alias.name for alias in node.names]
        elif isinstance(node, ast.ImportFrom):
            module = "." * node.level + (node.module or "")
            found += [f"{module}.{alias.name}" for alias in node.names]
    return found


def starting_with(names: list[str], starts: tuple[str, ...]) -> list[str]:
    """Those of the names that are one of the modules, or lie inside one."""
    return [name for name in names if any(f"{name}.".startswith(f"{start}.") for start in starts)]


@pytest.mark.parametrize("place", FORBIDDEN)
def test_nothing_looks_up(place):
    """A lower layer does not import a higher one."""
    found = {path: set(starting_with(imports(path), FORBIDDEN[place])) - DATA_ONLY for path in modules(place)}

    assert {str(path.relative_to(ROOT)): names for path, names in found.items() if names} == {}


def test_the_places_exist():
    """A rule about a folder that is gone would pass for ever."""
    assert [place for place in FORBIDDEN if not modules(place)] == []


@pytest.mark.parametrize("path", modules("core"), ids=lambda path: str(path.relative_to(ROOT)))
def test_core_is_numbers_only(path):
    """The core imports the standard library, numpy and itself; no clock, no chance, no network."""
    names = imports(path)
    outside = {name.partition(".")[0] for name in names} - {"core"}

    assert starting_with(names, IMPURE) == []
    assert outside - CORE_PACKAGES <= sys.stdlib_module_names
    assert not [name for name in names if name.startswith(".")], "say core.x, not .x"
