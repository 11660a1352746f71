"""Sentences about how the app stands: another tab writes, a new version waits, something could not be saved."""

from __future__ import annotations

from typing import Any

import flet as ft

from pwa import theme
from pwa.components.guard import guarded
from pwa.components.tone import ToneLine

READ_ONLY = (
    "The app is open in another tab, which does the saving. Jobs can be read here, not changed. "
    "Close the other one and this one takes over."
)


@guarded
def Banners(standing: Any, workspace: Any) -> ft.Control:
    """All that there is to say; nothing takes no room."""
    rows: list[ft.Control] = []
    if standing.read_only:
        rows.append(ToneLine("care", READ_ONLY))
    if standing.trouble:
        rows.append(ToneLine("danger", standing.trouble))
    if standing.update_waits:
        rows.append(
            ft.Row(
                alignment=ft.MainAxisAlignment.SPACE_BETWEEN,
                controls=[
                    ft.Text("A new version is ready.", expand=True),
                    ft.FilledTonalButton("Change to it", on_click=workspace.update),
                ],
            )
        )
    if not rows:
        return ft.Container(height=0)
    return ft.Container(
        margin=ft.Margin.only(left=theme.PAD, right=theme.PAD, top=theme.PAD),
        padding=theme.PAD,
        border_radius=theme.RADIUS,
        border=ft.Border.all(1, ft.Colors.OUTLINE),
        content=ft.Column(controls=rows),
    )
