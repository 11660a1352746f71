"""The small services: clock, platform, files, clipboard and share, and the choice of a storage."""

from __future__ import annotations

import ast
import sys
from pathlib import Path
from types import SimpleNamespace
from typing import Any

import flet as ft
import pytest
from hypothesis import given
from hypothesis import strategies as st

from pwa.services import clock, device_storage, platform
from pwa.services.clock import HandClock, SystemClock, as_moment, as_text, days_before
from pwa.services.files import LONGEST_NAME, FilesError, FletFiles, PickedFile, file_name
from pwa.services.native_storage import NativeStorage
from pwa.services.sharing import FletClipboard, FletShare, SharingError, copy_action, share_action
from pwa.services.storage import NothingKeptError
from tests.pwa.fake_page import FakePage
from tests.pwa.services.loops import run

SERVICES = Path(platform.__file__).parent


class Recorder:
    """Stands for a service of Flet: notes calls, gives what it was told to give, or raises it."""

    def __init__(self, result: Any = None) -> None:
        self.result = result
        self.calls: list[tuple[str, tuple, dict]] = []

    def __call__(self, **options: Any) -> Recorder:
        self.options = options
        return self

    def __getattr__(self, name: str) -> Any:
        async def method(*arguments: Any, **options: Any) -> Any:
            self.calls.append((name, arguments, options))
            if isinstance(self.result, Exception):
                raise self.result
            return self.result

        return method


def test_times_sort_as_they_pass():
    """Times as texts sort in time's order, and go to moments and back; 30 days before is 30 days before."""
    hand = HandClock()
    times = [hand.now()]
    for amount in ({"milliseconds": 1}, {"seconds": 59}, {"days": 200}, {"days": 300}):
        hand.turn(**amount)
        times.append(hand.now())
    assert times == sorted(times)
    assert [as_text(as_moment(time)) for time in times] == times
    assert days_before("2031-03-01T00:00:00.000Z", 1) == "2031-02-28T00:00:00.000Z"
    assert as_text(as_moment("2031-03-01T02:00:00+02:00")) == "2031-03-01T00:00:00.000Z"
    assert as_text(as_moment("2031-03-01T02:00:00")) == "2031-03-01T02:00:00.000Z"
    assert hand.today() == hand.now()[:10]


def test_the_system_clock_speaks_the_same_language():
    """The clock of the device gives texts of the same form."""
    now = SystemClock().now()
    assert as_text(as_moment(now)) == now
    assert len(SystemClock().today()) == 10


def test_only_the_clock_reads_the_time():
    """No other module of the services asks the machine for the time."""
    for path in SERVICES.glob("*.py"):
        names = {
            node.id for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))) if isinstance(node, ast.Name)
        }
        if path.name != Path(clock.__file__).name:
            assert not names & {"datetime", "time", "date"}, path.name


def test_only_browser_modules_import_the_browser():
    """Only the two modules that speak to the browser need one to be imported."""
    needing = set()
    for path in SERVICES.glob("*.py"):
        for node in ast.parse(path.read_text(encoding="utf-8")).body:
            roots = [alias.name for alias in node.names] if isinstance(node, ast.Import) else []
            roots += [node.module or ""] if isinstance(node, ast.ImportFrom) else []
            if {root.split(".")[0] for root in roots} & {"js", "pyodide", "pyodide_js"}:
                needing.add(path.name)
    assert needing == {"indexed_db.py", "web_lock.py"}


def test_the_folder_is_the_systems_own(monkeypatch):
    """Data goes where programs of the system keep theirs."""
    monkeypatch.setenv("XDG_DATA_HOME", "/data")
    monkeypatch.setenv("LOCALAPPDATA", "/local")
    for system, folder in (("linux", "/data/tapwright"), ("win32", "/local/Tapwright")):
        monkeypatch.setattr(sys, "platform", system)
        assert platform.data_folder() == Path(folder)
    monkeypatch.setattr(sys, "platform", "darwin")
    assert platform.data_folder().parts[-3:] == ("Library", "Application Support", "Tapwright")


def test_files_are_handed_to_the_picker():
    """A file is saved under its name with its bytes; an empty one and a refusal are sentences."""
    picker = Recorder()
    run(FletFiles(picker).save("a.json", b"{}"))
    assert picker.calls == [("save_file", (), {"file_name": "a.json", "src_bytes": b"{}"})]
    with pytest.raises(FilesError, match="empty"):
        run(FletFiles(picker).save("a.json", b""))
    with pytest.raises(FilesError, match="could not be saved"):
        run(FletFiles(Recorder(RuntimeError("refused"))).save("a.json", b"{}"))


def test_a_file_is_picked_with_its_bytes():
    """Picking asks for the bytes and the endings; nothing picked is None; a file without bytes is a sentence."""
    picker = Recorder([SimpleNamespace(name="a.json", bytes=b"{}")])
    assert run(FletFiles(picker).pick(["json"])) == PickedFile("a.json", b"{}")
    options = {"with_data": True, "file_type": ft.FilePickerFileType.CUSTOM, "allowed_extensions": ["json"]}
    assert picker.calls == [("pick_files", (), options)]
    assert run(FletFiles(Recorder([])).pick([])) is None
    for result in ([SimpleNamespace(name="a", bytes=None)], RuntimeError("refused")):
        with pytest.raises(FilesError):
            run(FletFiles(Recorder(result)).pick([]))


def test_a_file_is_picked_by_an_action():
    """The action for a button asks for the bytes, and hands over the file that was picked, if there is one."""
    picked: list[PickedFile] = []
    action = FletFiles().pick_action(["json"], picked.append)
    assert (action.method, action.args["with_data"], action.args["allowed_extensions"]) == (
        "pick_files",
        True,
        ["json"],
    )
    action.file_picker.on_result(SimpleNamespace(files=[]))
    action.file_picker.on_result(SimpleNamespace(files=[SimpleNamespace(name="a", bytes=b"1")]))
    assert picked == [PickedFile("a", b"1")]


def test_texts_and_files_are_shared():
    """Texts and files reach the clipboard and the share sheet; a refusal is a sentence with another way."""
    board, share = Recorder("pasted"), Recorder()
    run(FletClipboard(board).copy("12 °dH"))
    assert run(FletClipboard(board).paste()) == "pasted"
    assert run(FletClipboard(Recorder(None)).paste()) == ""
    assert [call[:2] for call in board.calls] == [("set", ("12 °dH",)), ("get", ())]
    run(FletShare(share).share_text("text", "subject"))
    run(FletShare(share).share_file("a.pdf", b"1", "application/pdf"))
    assert share.calls[0] == ("share_text", ("text",), {"subject": "subject"})
    [file] = share.calls[1][1][0]
    assert (file.name, file.data, file.mime_type) == ("a.pdf", b"1", "application/pdf")
    refused = Recorder(RuntimeError("refused"))
    for call in (FletClipboard(refused).copy("x"), FletClipboard(refused).paste(), FletShare(refused).share_text("x")):
        with pytest.raises(SharingError, match="refused"):
            run(call)


def test_known_texts_are_shared_inside_the_tap():
    """What is known beforehand is copied or shared by the client itself, as Safari wants it."""

    async def scenario():
        page = FakePage()  # actions belong to a page, which must live
        copy, share = copy_action("12 °dH"), share_action("12 °dH", "Mill")
        assert (copy.method, copy.args) == ("set", {"data": "12 °dH"})
        assert share.method == "share_text"
        assert {"text": "12 °dH", "subject": "Mill"}.items() <= share.args.items()
        assert page.page.route == "/"

    run(scenario())


@pytest.mark.parametrize(
    ("title", "name"),
    [
        ("Mill Lane 3", "Mill Lane 3.json"),
        ("a/b\\c:d*e?f", "a b c d e f.json"),
        ("  ..  ", "job.json"),
        ("", "job.json"),
        ("Müller, Straße 4", "Müller, Straße 4.json"),
    ],
)
def test_file_names(title, name):
    """A title becomes a name that every system takes."""
    assert file_name(title, "json") == name


@given(title=st.text())
def test_any_title_gives_a_name(title):
    """No title leads to a name with a separator, a control sign, a point in front, or without length."""
    stem = file_name(title, "json").removesuffix(".json")
    assert 0 < len(stem) <= LONGEST_NAME
    assert not set(stem) & set('\\/:*?"<>|\0\n\t')
    assert not stem.startswith(".")


def test_the_machine_gets_a_file(monkeypatch, tmp_path):
    """Outside a browser jobs go into a file in the user's folder."""
    monkeypatch.setattr("pwa.services.native_storage.data_folder", lambda: tmp_path)

    async def scenario():
        storage = await device_storage.open_storage(HandClock())
        await storage.save("a", "{}")
        await storage.close()

    run(scenario())
    assert (tmp_path / "jobs.sqlite3").exists()


def test_where_nothing_is_kept_it_is_said_so(monkeypatch):
    """Where nothing can be kept the app works in memory, with a note to show."""

    async def refuse(self):
        raise NothingKeptError("private window")

    monkeypatch.setattr(NativeStorage, "open", refuse)

    async def scenario():
        storage = await device_storage.open_storage(HandClock())
        await storage.save("a", "{}")
        return storage.notes, await storage.count_jobs()

    notes, count = run(scenario())
    assert count == 1
    assert "save a backup file" in notes[0]
