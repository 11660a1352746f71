"""Makes the archives that Python imports from: plain zips with bytecode, gzipped as a whole into packs.

A zip holds its files uncompressed, so that importing from it costs nothing extra; the pack round it is gzip,
so that a host without compression sends little. Same files in, same bytes out.
"""

from __future__ import annotations

import gzip
import hashlib
import shutil
import tempfile
import zipfile
from pathlib import Path

from pwa.bundle.node import run_script
from pwa.bundle.places import PYODIDE, WEB, cache, made_once
from pwa.bundle.sources import digest_of

EPOCH = (1980, 1, 1, 0, 0, 0)  # the earliest date a zip can hold: archives must not depend on the day


def zip_folder(folder: Path, out: Path) -> None:
    """Write all files under a folder into an uncompressed zip, sorted, without dates."""
    with zipfile.ZipFile(out, "w", zipfile.ZIP_STORED) as archive:
        for path in sorted(folder.rglob("*")):
            if path.is_file():
                archive.writestr(zipfile.ZipInfo(path.relative_to(folder).as_posix(), EPOCH), path.read_bytes())


def stage(files: dict[str, Path], folder: Path) -> None:
    """Copy files to their places under a folder; a folder of data alone becomes a package, to be found."""
    for place, path in files.items():
        target = folder / place
        target.parent.mkdir(parents=True, exist_ok=True)
        shutil.copyfile(path, target)
    for data_only in ("sample_tests",):
        if (folder / data_only).is_dir():
            (folder / data_only / "__init__.py").touch()


def python_archive(name: str, files: dict[str, Path], node: str | None) -> Path:
    """A zip of Python files; bytecode with Node, sources without. Made once for the same files."""
    scripts = [("compile.mjs", WEB / "compile.mjs"), ("pyodide", PYODIDE / "pyodide.asm.wasm")]
    key = digest_of([*files.items(), *scripts])[:16]
    out = cache("archives") / f"{name}-{key}-{'pyc' if node else 'py'}.zip"

    def make(target: Path) -> None:
        with tempfile.TemporaryDirectory() as work:
            folder = Path(work)
            stage(files, folder)
            if node:
                run_script(node, "compile.mjs", folder)
            zip_folder(folder, target)

    return made_once(out, make)


def pack(content: bytes, name: str, folder: Path) -> str:
    """Write content gzipped as NAME.HASH.pack into a folder; returns the file's name.

    The hash in the name keeps an old page from being handed the parts of a new version.
    """
    packed = made_once(
        cache("packs") / f"{hashlib.sha256(content).hexdigest()}.gz",
        lambda target: target.write_bytes(gzip.compress(content, 9, mtime=0)),
    )
    file_name = f"{name}.{packed.stem[:12]}.pack"
    folder.mkdir(parents=True, exist_ok=True)
    shutil.copyfile(packed, folder / file_name)
    return file_name
