"""Where things stand: the sources, the outside packages, the cache and the finished site."""

from __future__ import annotations

import os
import tempfile
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

import flet_web

ROOT = Path(__file__).resolve().parents[2]
WEB = Path(__file__).parent / "web"  # our page, scripts and worker
ASSETS = ROOT / "pwa" / "assets"
CLIENT = Path(flet_web.__file__).parent / "web"  # the prebuilt Flutter client
PYODIDE = CLIENT / "pyodide"
DEFAULT_SITE = ROOT / "build" / "site"


def cache(*parts: str) -> Path:
    """A folder for what is slow to get or make; safe to delete. TAPWRIGHT_CACHE moves it."""
    folder = Path(os.environ.get("TAPWRIGHT_CACHE") or ROOT / ".cache").joinpath(*parts)
    folder.mkdir(parents=True, exist_ok=True)
    return folder


def made_once(path: Path, make: Callable[[Path], None]) -> Path:
    """A cached file: `make(target)` writes it if it is not there; whole or not at all, also with two builds at once."""
    if not path.exists():
        with tempfile.TemporaryDirectory(dir=path.parent) as work:
            target = Path(work) / path.name
            make(target)
            target.replace(path)
    return path


@dataclass(frozen=True, slots=True)
class Choices:
    """What a build can be told.

    base: the address path the site will stand under, such as "/app/"; "./" lets it stand under any.
    node: None finds Node by itself; "" builds without it; anything else is the path of the program.
    """

    base: str = "./"
    node: str | None = None
