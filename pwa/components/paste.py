"""The way to paste a report."""

from __future__ import annotations

import flet as ft

from pwa import theme


def PasteButton(job_id: str) -> ft.Control:
    """A button to the screen on which a report is pasted."""
    button = ft.OutlinedButton(
        "Paste a report",
        icon=ft.Icons.CONTENT_PASTE,
        height=theme.TOUCH,
        on_click=lambda event: ft.context.page.navigate(f"/job/{job_id}/paste"),
    )
    return ft.Row(controls=[button])
