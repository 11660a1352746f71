"""The memory image runs where it is restored, not only where it was made."""

from __future__ import annotations

import subprocess
from pathlib import Path

import flet
import pytest

from pwa.bundle import archives, snapshot
from pwa.bundle.node import find_node
from pwa.bundle.places import PYODIDE
from pwa.bundle.sources import library_files

LIBRARY_FILE = "/library.zip"


@pytest.fixture(scope="module")
def node() -> str:
    """The Node of the build extra."""
    found = find_node()
    assert found, "the build extra brings Node"
    return found


def test_image_runs_on_an_engine_without_the_makers_features(node, tmp_path):
    """Restored as on an iPhone, Python calls, and flet is there without being imported."""
    library = archives.python_archive("library", library_files(), node)
    image = snapshot.make_snapshot(library, LIBRARY_FILE, node)
    (tmp_path / "image.bin").write_bytes(image.content)
    script = Path(__file__).with_name("restore.mjs")
    parts = [PYODIDE, tmp_path / "image.bin", library, LIBRARY_FILE, image.memory]
    done = subprocess.run([node, script, *map(str, parts)], capture_output=True, text=True, timeout=120)

    assert done.stdout.strip() == "Hardness 0", done.stderr[-2000:]


def test_image_is_made_once(node):
    """The same library gives the same image, from the cache: a phone does not fetch it again without need."""
    library = archives.python_archive("library", library_files(), node)
    images = [snapshot.make_snapshot(library, LIBRARY_FILE, node) for _ in range(2)]

    assert images[0].content == images[1].content
    assert images[0].memory % 65536 == 0


def test_what_goes_into_the_image_exists():
    """Every name listed for the image is one of flet's, listed once."""
    names = snapshot.controls()

    assert [name for name in names if not hasattr(flet, name)] == []
    assert len(set(names)) == len(names)
