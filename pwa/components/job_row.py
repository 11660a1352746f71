"""One job of the list: its name, its place, its answer."""

from __future__ import annotations

from typing import Any

import flet as ft

from pwa import theme
from pwa.services.storage import JobRow


def JobCard(row: JobRow, workspace: Any, key: str) -> ft.Control:
    """A job to tap on, with a menu for the rest."""

    async def delete() -> None:
        await workspace.delete(row.id)

    async def save() -> None:
        await workspace.save_job_file(row.id)

    def open_(event: ft.ControlEvent) -> None:
        ft.context.page.navigate(f"/job/{row.id}")

    return ft.Container(
        key=key,
        ink=True,
        on_click=open_,
        bgcolor=ft.Colors.SURFACE,
        border_radius=theme.RADIUS,
        border=ft.Border.all(1, ft.Colors.OUTLINE_VARIANT),
        padding=ft.Padding.only(left=theme.PAD, top=12, bottom=12, right=4),
        content=ft.Row(
            vertical_alignment=ft.CrossAxisAlignment.START,
            controls=[
                ft.Column(
                    expand=True,
                    spacing=2,
                    controls=[
                        ft.Text(named(row.name), theme_style=ft.TextThemeStyle.TITLE_MEDIUM),
                        *([ft.Text(row.place, color=ft.Colors.ON_SURFACE_VARIANT)] if row.place else []),
                        *([ft.Text(row.summary)] if row.summary else []),
                    ],
                ),
                ft.PopupMenuButton(
                    icon=ft.Icons.MORE_VERT,
                    tooltip=f"More for {named(row.name)}",
                    items=[
                        ft.PopupMenuItem(content="Save as a file", on_click=save),
                        ft.PopupMenuItem(content="Delete", on_click=delete),
                    ],
                ),
            ],
        ),
    )


def named(name: str) -> str:
    """The name of a job, or what stands in its place."""
    return name.strip() or "Job without a name"
