"""One job of the list: its name, its place, its answer."""

from __future__ import annotations

from typing import Any

import flet as ft

from pwa import theme
from pwa.components.words import Tappable
from pwa.services.storage import JobRow

SHORT: dict[str, Any] = {"max_lines": 2, "overflow": ft.TextOverflow.ELLIPSIS}


def JobCard(row: JobRow, workspace: Any, key: str) -> ft.Control:
    """A job to tap on, with a menu for the rest."""

    async def delete() -> None:
        await workspace.delete(row.id)

    async def save() -> None:
        await workspace.save_job_file(row.id)

    def open_(event: ft.ControlEvent) -> None:
        ft.context.page.navigate(f"/job/{row.id}")

    words: list[ft.Control] = [ft.Text(named(row.name), theme_style=ft.TextThemeStyle.TITLE_MEDIUM, **SHORT)]
    if row.place:
        words.append(ft.Text(row.place, color=ft.Colors.ON_SURFACE_VARIANT, **SHORT))
    if row.summary:
        words.append(ft.Text(row.summary))
    menu = ft.PopupMenuButton(
        icon=ft.Icons.MORE_VERT,
        tooltip=f"More for {named(row.name)}",
        items=[
            ft.PopupMenuItem(content="Save as a file", on_click=save),
            ft.PopupMenuItem(content="Delete", on_click=delete),
        ],
    )
    return ft.Container(
        key=key,
        bgcolor=ft.Colors.SURFACE,
        border_radius=theme.RADIUS,
        border=ft.Border.all(1, ft.Colors.OUTLINE_VARIANT),
        content=ft.Row(
            spacing=0,
            vertical_alignment=ft.CrossAxisAlignment.START,
            controls=[
                Tappable(
                    ". ".join(filter(None, (named(row.name), row.place, row.summary))),
                    open_,
                    ft.Column(spacing=2, controls=words),
                    expand=True,
                    padding=ft.Padding.only(left=theme.PAD, top=12, bottom=12),
                ),
                ft.Semantics(container=True, content=menu),
            ],
        ),
    )


def named(name: str) -> str:
    """The name of a job, or what stands in its place."""
    return name.strip() or "Job without a name"
