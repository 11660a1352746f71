"""The archives hold what they should, the same bytes each time."""

from __future__ import annotations

import gzip
import os
import zipfile

import pytest

from pwa.bundle import archives
from pwa.bundle.places import made_once


@pytest.fixture(autouse=True)
def _own_cache(tmp_path, monkeypatch):
    monkeypatch.setenv("TAPWRIGHT_CACHE", str(tmp_path / "cache"))


@pytest.fixture
def files(tmp_path):
    """A module and a sample, as places and files."""
    module, sample = tmp_path / "a.py", tmp_path / "b.json"
    module.write_text("VALUE = 3\n", encoding="utf-8")
    sample.write_text("{}", encoding="utf-8")
    return {"package/a.py": module, "sample_tests/b.json": sample}


def test_same_files_give_the_same_bytes(tmp_path, files):
    """Neither dates nor the order of writing reach the archive: unchanged parts are not fetched again."""
    for name in ("one", "two"):
        archives.stage(files if name == "one" else dict(reversed(files.items())), tmp_path / name)
        os.utime(tmp_path / name / "package" / "a.py", (1e9, 1e9 if name == "one" else 2e9))
        archives.zip_folder(tmp_path / name, tmp_path / f"{name}.zip")

    assert (tmp_path / "one.zip").read_bytes() == (tmp_path / "two.zip").read_bytes()


def test_archive_without_node_holds_sources(files):
    """Without Node the browser gets sources; a folder of data alone is made a package, to be found by import."""
    with zipfile.ZipFile(archives.python_archive("app", files, None)) as archive:
        assert set(archive.namelist()) == {"package/a.py", "sample_tests/__init__.py", "sample_tests/b.json"}
        assert {entry.compress_type for entry in archive.infolist()} == {zipfile.ZIP_STORED}


def test_another_file_makes_another_archive(files):
    """A changed source is packed anew; an unchanged one is taken from the cache."""
    first = archives.python_archive("app", files, None)
    again = archives.python_archive("app", files, None)
    files["package/a.py"].write_text("VALUE = 4\n", encoding="utf-8")

    assert again == first
    assert archives.python_archive("app", files, None) != first


def test_pack_is_named_by_its_content(tmp_path):
    """A pack's name changes with its content, so that an old page is never handed a new version's part."""
    one, two, same = (archives.pack(content, "app", tmp_path) for content in (b"one", b"two", b"one"))

    assert one == same != two
    assert gzip.decompress((tmp_path / one).read_bytes()) == b"one"


def test_a_cached_file_is_whole_or_absent(tmp_path):
    """When making a file fails half-way, nothing is left in its place."""

    def fail(target):
        target.write_bytes(b"half")
        raise OSError("no room")

    with pytest.raises(OSError, match="no room"):
        made_once(tmp_path / "file", fail)

    assert list(tmp_path.iterdir()) == []
