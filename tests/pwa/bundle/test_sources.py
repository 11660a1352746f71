"""What goes into the bundle and what a build depends on."""

from __future__ import annotations

import pytest

from pwa.bundle import sources
from pwa.bundle.places import Choices


def test_the_app_is_whole_and_nothing_else():
    """Core, app, tables, samples and the PDF's font go in; tests, the builder and its tools stay out."""
    places = set(sources.app_files())

    assert {"core/__init__.py", "core/units/__init__.py", "pwa/main.py", "pwa/theme.py"} <= places
    assert "pwa/assets/fonts/tapwright-sans.ttf" in places
    assert any(place.startswith("core/data/") and place.endswith(".tsv") for place in places)
    assert any(place.startswith("sample_tests/") and place.endswith(".json") for place in places)
    assert not [place for place in places if place.startswith(("tests/", "pwa/bundle/", "pwa/__main__"))]
    assert not [place for place in places if "__pycache__" in place or place.endswith((".pyc", ".png"))]


def test_libraries_are_pure_python():
    """The browser gets flet and what it imports, without compiled parts, tests or servers."""
    places = sources.library_files()

    assert {"flet/__init__.py", "msgpack/fallback.py", "repath.py", "six.py", "segno/__init__.py"} <= set(places)
    assert "flet/controls/material/icons.json" in places
    assert not [place for place in places if place.endswith((".so", ".pyd")) or "testing/" in place]


def test_a_build_depends_on_sources_and_choices(tmp_path, monkeypatch):
    """Another path, another base or Node's absence makes another build; asking twice does not."""
    plain = sources.build_digest(Choices(), "node")

    assert sources.build_digest(Choices(), "node") == plain
    assert sources.build_digest(Choices(base="/app/"), "node") != plain
    assert sources.build_digest(Choices(), None) != plain

    extra = tmp_path / "extra.py"
    extra.write_text("", encoding="utf-8")
    monkeypatch.setattr(sources, "_own_files", lambda: iter([("extra.py", extra)]))
    before = sources.build_digest(Choices(), "node")
    extra.write_text("changed = True", encoding="utf-8")
    assert sources.build_digest(Choices(), "node") != before


@pytest.mark.parametrize(
    ("text", "found"),
    [
        ("ft.Icons.WATER_DROP", {"WATER_DROP"}),
        ("x = flet.Icons.ADD if y else Icons.REMOVE", {"ADD", "REMOVE"}),
        ("ft.Colors.RED", set()),
    ],
)
def test_icons_are_found_as_they_are_written(text, found):
    """An icon counts as used where it stands as Icons.NAME."""
    assert set(sources._attributes_of(text, "Icons")) == found
