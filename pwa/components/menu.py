"""A button that opens a list to pick from."""

from __future__ import annotations

from collections.abc import Callable

import flet as ft

from pwa import theme


def Menu(
    *,
    tooltip: str,
    shown: str,
    options: list[tuple[str, str]],
    chosen: str,
    choose: Callable[[str], None],
    icon: ft.IconData | None = None,
    height: int = theme.TOUCH,
) -> ft.Control:
    """A button that opens a list to pick from."""
    content: list[ft.Control] = [ft.Icon(icon, size=18, color=ft.Colors.ON_SURFACE_VARIANT)] if icon else []
    content += [ft.Text(shown), ft.Icon(ft.Icons.ARROW_DROP_DOWN, color=ft.Colors.ON_SURFACE_VARIANT)]
    button = ft.PopupMenuButton(
        tooltip=tooltip,
        padding=0,
        content=ft.Container(
            height=height,
            padding=ft.Padding.only(left=10, right=2),
            border_radius=4,
            border=ft.Border.all(1, ft.Colors.OUTLINE_VARIANT),
            content=ft.Row(spacing=4, tight=True, controls=content),
        ),
        items=[
            ft.PopupMenuItem(content=words, checked=value == chosen, on_click=lambda event, value=value: choose(value))
            for value, words in options
        ],
    )
    return ft.Semantics(container=True, content=button)
