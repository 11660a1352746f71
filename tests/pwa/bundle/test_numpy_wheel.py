"""numpy for the browser: the hash decides, the sources are tried in turn, what is left out is not used."""

from __future__ import annotations

import ast
import hashlib
import tomllib

import pytest

from pwa.bundle import numpy_wheel
from pwa.bundle.places import ROOT

CONTENT = b"a wheel"


@pytest.fixture(autouse=True)
def _own_cache(tmp_path, monkeypatch):
    monkeypatch.setenv("TAPWRIGHT_CACHE", str(tmp_path / "cache"))
    monkeypatch.setattr(numpy_wheel, "SHA256", hashlib.sha256(CONTENT).hexdigest())


def _sources(monkeypatch, *answers):
    """Make these the sources: bytes are handed over, an exception is raised."""
    asked = []

    def source(number, answer):
        def fetch():
            asked.append(number)
            if isinstance(answer, Exception):
                raise answer
            return answer

        return f"source {number}", fetch

    monkeypatch.setattr(numpy_wheel, "SOURCES", tuple(source(*pair) for pair in enumerate(answers)))
    return asked


def test_next_source_is_asked_if_one_fails(monkeypatch):
    """A source that is down, or hands over something else, is passed over; the right file is kept."""
    asked = _sources(monkeypatch, OSError("no route"), b"something else", CONTENT)
    said = []

    assert numpy_wheel.wheel(said.append).read_bytes() == CONTENT
    assert asked == [0, 1, 2]
    assert len(said) == 3
    numpy_wheel.wheel(said.append)
    assert asked == [0, 1, 2]


def test_a_spoilt_cache_is_filled_anew(monkeypatch):
    """A cached file with another hash is not used."""
    _sources(monkeypatch, CONTENT)
    kept = numpy_wheel.wheel(print)
    kept.write_bytes(b"spoilt")

    assert numpy_wheel.wheel(print).read_bytes() == CONTENT


def test_without_any_source_it_says_what_to_do(monkeypatch):
    """When no source has it, the text names what was tried, and the file to put where."""
    _sources(monkeypatch, OSError("no route"), b"something else")

    with pytest.raises(numpy_wheel.NumpyMissingError) as caught:
        numpy_wheel.wheel(print)

    for part in ("no route", "another hash", numpy_wheel.FILE, numpy_wheel.SHA256):
        assert part in str(caught.value)


def test_browser_and_desk_compute_with_the_same_numpy():
    """The wheel for the browser is of the release that the project asks for."""
    project = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))["project"]

    assert f"numpy=={numpy_wheel.VERSION}" in project["dependencies"]


def _subjects(source: str) -> set[str]:
    """The parts of numpy a Python text names: np.NAME, numpy.NAME, from numpy.NAME, import numpy.NAME."""
    found = set()
    for node in ast.walk(ast.parse(source)):
        if isinstance(node, ast.Attribute) and isinstance(node.value, ast.Name) and node.value.id in {"np", "numpy"}:
            found.add(node.attr)
        elif isinstance(node, ast.ImportFrom) and node.module and node.module.split(".")[0] == "numpy":
            found |= {*node.module.split(".")[1:2], *(alias.name for alias in node.names)}
        elif isinstance(node, ast.Import):
            found |= {part for alias in node.names for part in alias.name.split(".")[1:2]}
    return found


def test_what_is_left_out_of_numpy_is_not_used():
    """The sources name no part of numpy that the bundle lacks."""
    left_out = set(numpy_wheel.SUBJECTS_LEFT_OUT)
    for folder in ("core", "pwa"):
        for path in (ROOT / folder).rglob("*.py"):
            assert not _subjects(path.read_text(encoding="utf-8")) & left_out, path
    assert _subjects("import numpy.fft\nnp.ma.masked\nfrom numpy.polynomial import Polynomial") >= {
        "fft",
        "ma",
        "polynomial",
    }
