"""Where the app runs; the only place that asks."""

from __future__ import annotations

import os
import sys
from pathlib import Path

IN_BROWSER = sys.platform == "emscripten"  # Python inside a web page; otherwise the development server or a test


def data_folder() -> Path:
    """Our folder among the data of this user's programs; it may not exist yet."""
    home = Path.home()
    if sys.platform == "win32":
        return Path(os.environ.get("LOCALAPPDATA") or home / "AppData" / "Local") / "Tapwright"
    if sys.platform == "darwin":
        return home / "Library" / "Application Support" / "Tapwright"
    return Path(os.environ.get("XDG_DATA_HOME") or home / ".local" / "share") / "tapwright"
