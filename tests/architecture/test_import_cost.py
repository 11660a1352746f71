"""What is imported when: a phone waits for every module."""

import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]

WITHOUT = [  # statements, modules that they must not have brought in
    ("import core", {"numpy", "core.units", "core.chemistry"}),
    ("import core.units", {"numpy", "core.chemistry", "core.data"}),
    ("from core.units import convert; convert(14, 'gr/gal', '°d'); convert(1.0, 'psi', 'bar')", {"numpy"}),
    ("from core.units import convert\ntry: convert(1, 'gal', 'L')\nexcept ValueError: pass", {"numpy"}),
    ("import pwa.text, pwa.unit_words; pwa.text.parse_quantity('22 gpg', 'hardness')", {"numpy", "flet"}),
    ("import core.working, core.errors, core.references", {"numpy", "core.units"}),
]


def brought_in(statements: str) -> set[str]:
    """Modules loaded in a fresh interpreter after these statements."""
    code = f"{statements}\nimport sys; print('\\n'.join(sys.modules))"
    done = subprocess.run([sys.executable, "-c", code], cwd=ROOT, capture_output=True, text=True, check=True)
    return set(done.stdout.split())


@pytest.mark.parametrize(("statements", "unwanted"), WITHOUT, ids=[f"{s[:40]}" for s, _ in WITHOUT])
def test_nothing_heavy_comes_along(statements, unwanted):
    """A plain conversion, or a typed reading, loads neither numpy nor the interface."""
    assert brought_in(statements) & unwanted == set()


def test_the_watch_works():
    """An array does bring numpy in: the test above can fail."""
    assert "numpy" in brought_in("from core.units import convert; convert([14.0], 'gpg', '°dH')")
