"""The app's entry."""

from __future__ import annotations

import flet as ft

from pwa.routes import App
from pwa.services.clock import SystemClock
from pwa.services.device_storage import open_storage
from pwa.services.files import FletFiles
from pwa.services.host import host
from pwa.state.workspace import Workspace


def main(page: ft.Page) -> None:
    """Put the services together and show the app."""
    page.title = "Tapwright"
    clock = SystemClock()
    workspace = Workspace(lambda: open_storage(clock), FletFiles(), host())
    page.render_views(App, workspace, workspace.preferences, workspace.notice)


if __name__ == "__main__":
    ft.run(main)
