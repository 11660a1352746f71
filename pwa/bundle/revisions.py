"""What the service worker keeps, how much a phone fetches, and the precompressed copies beside the files."""

from __future__ import annotations

import gzip
import hashlib
import json
import shutil
from dataclasses import dataclass
from pathlib import Path

import brotli

from pwa.bundle.places import cache, made_once

COMPRESSED = {".html", ".js", ".mjs", ".json", ".wasm", ".otf", ".bin", ".txt", ""}
NOT_KEPT = ("sw.js", "build.json", "version.json", "assets/NOTICES", "assets/fonts/LICENSE")
WORTH_IT = 0.95  # a copy that is not at least this much smaller is not written
BROTLI_QUALITY = 9


def kept_files(site: Path) -> dict[str, str]:
    """Path -> content hash of every file that the app needs without a network."""
    files = {}
    for path in sorted(site.rglob("*")):
        place = path.relative_to(site).as_posix()
        if path.is_file() and path.suffix not in {".gz", ".br"} and not place.startswith(NOT_KEPT):
            files[place] = hashlib.sha256(path.read_bytes()).hexdigest()[:16]
    return files


def revision_of(files: dict[str, str]) -> str:
    """A short name for a set of files with these contents."""
    return hashlib.sha256(json.dumps(files, sort_keys=True).encode()).hexdigest()[:12]


def _compressed(content: bytes, kind: str) -> Path:
    """The compressed form of a content, from the cache if it was made before."""

    def make(target: Path) -> None:
        gz = kind == "gz"
        target.write_bytes(
            gzip.compress(content, 9, mtime=0) if gz else brotli.compress(content, quality=BROTLI_QUALITY)
        )

    return made_once(cache("compressed") / f"{hashlib.sha256(content).hexdigest()}.{kind}", make)


def write_compressed(site: Path) -> None:
    """Write FILE.gz and FILE.br beside each file that gets smaller by it."""
    for path in [path for path in site.rglob("*") if path.is_file() and path.suffix in COMPRESSED]:
        if path.with_name(f"{path.name}.gz").exists():
            continue
        content = path.read_bytes()
        for kind in ("gz", "br"):
            made = _compressed(content, kind)
            if made.stat().st_size < WORTH_IT * len(content):
                shutil.copyfile(made, path.with_name(f"{path.name}.{kind}"))


@dataclass(frozen=True, slots=True)
class Sizes:
    """What a phone keeps, and what it fetches the first time from a host that compresses. [bytes]"""

    kept: int
    fetched: int


def sizes(site: Path, *, without: tuple[str, ...] = ()) -> Sizes:
    """The sizes for Chromium over https, leaving out paths that begin with one of `without`."""
    kept = fetched = 0
    for place in kept_files(site):
        other_engine = place.startswith("canvaskit/") and not place.startswith("canvaskit/chromium/")
        if other_engine or place.startswith(without):
            continue
        path = site / place
        copies = (path.with_name(f"{path.name}.{ending}") for ending in ("br", "gz"))
        kept += path.stat().st_size
        fetched += min(copy.stat().st_size for copy in (path, *copies) if copy.exists())
    return Sizes(kept, fetched)
