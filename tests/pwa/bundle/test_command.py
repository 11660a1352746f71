"""python -m pwa says what it does, and what to do when it cannot."""

from __future__ import annotations

import socket

import pytest

from pwa import __main__ as command
from pwa.bundle import node
from pwa.bundle.build import build, is_current
from pwa.bundle.places import PYODIDE


def test_serve_without_a_build_says_what_to_run(tmp_path, capsys):
    """Serving what was never built ends with the command that builds."""
    assert command.main(["serve", "--out", str(tmp_path), "--no-browser"]) == 1
    assert "python -m pwa build" in capsys.readouterr().err


def test_a_port_in_use_is_said(tmp_path, capsys):
    """When the port is taken, another is proposed."""
    (tmp_path / "build.json").write_text("{}", encoding="utf-8")
    with socket.create_server(("127.0.0.1", 0)) as taken:
        port = str(taken.getsockname()[1])
        status = command.main(["serve", "--out", str(tmp_path), "--host", "127.0.0.1", "--port", port, "--no-browser"])

    assert status == 1
    assert "--port" in capsys.readouterr().err


def test_address_is_printed_with_its_code(monkeypatch, capsys):
    """The address for a phone is printed as text and as a QR code, with what plain http cannot do."""
    monkeypatch.setattr(command, "lan_address", lambda: "192.0.2.7")
    here = command._print_addresses("0.0.0.0", 8600, "/")
    printed = capsys.readouterr().out

    assert here == "http://localhost:8600/"
    assert "http://192.0.2.7:8600/" in printed
    assert any(block in printed for block in "█▀▄")
    assert "https" in printed


def test_no_phone_address_where_only_this_machine_is_served(capsys):
    """Served to this machine alone, no address for phones is claimed."""
    command._print_addresses("127.0.0.1", 8600, "/")

    assert "phone" not in capsys.readouterr().out


def test_an_up_to_date_build_is_left_alone(tmp_path, monkeypatch):
    """A site whose record matches the sources is not built again, and a half-written one is not believed."""
    monkeypatch.setattr("pwa.bundle.build.build_digest", lambda *_: "same")
    (tmp_path / "build.json").write_text('{"digest": "same"}', encoding="utf-8")
    said = []

    assert build(tmp_path, say=said.append).made is False
    assert "up to date" in said[0]
    (tmp_path / "build.json").write_text('{"digest": "sa', encoding="utf-8")
    assert is_current(tmp_path, "same") is False


@pytest.mark.parametrize("wish", ["", "/no/such/node"])
def test_without_node_there_is_none(wish):
    """An empty or wrong Node is no Node, not an error."""
    assert node.find_node(wish) is None


def test_node_is_found_and_new_enough():
    """The build extra brings a Node that can run the bundled Pyodide."""
    found = node.find_node()

    assert found is not None
    assert node._major_version(found) >= node.OLDEST
    assert (PYODIDE / "pyodide.mjs").exists()
