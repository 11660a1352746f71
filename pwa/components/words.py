"""Headings and things to tap on, each a semantics node of its own, so that a reader can step from one to the next."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import flet as ft

from pwa import theme


def Heading(text: str, level: int = 2) -> ft.Control:
    """A heading: the name of a section, or of what follows in it."""
    style = ft.TextThemeStyle.HEADLINE_SMALL if level == 1 else ft.TextThemeStyle.TITLE_SMALL
    return ft.Semantics(container=True, header=True, content=ft.Text(text, theme_style=style))


def Note(text: str, **options: Any) -> ft.Control:
    """A quiet sentence."""
    return ft.Semantics(
        container=True,
        content=ft.Text(text, theme_style=ft.TextThemeStyle.BODY_SMALL, color=ft.Colors.ON_SURFACE_VARIANT, **options),
    )


def Tappable(
    label: str,
    tap: Callable[[Any], Any],
    content: ft.Control,
    *,
    selected: bool | None = None,
    expanded: bool | None = None,
    expand: bool = False,
    key: str | None = None,
    **looks: Any,
) -> ft.Control:
    """Something to tap on that is read aloud as one button with `label`; `looks` dress its container."""
    return ft.Semantics(
        key=key,
        container=True,
        button=True,
        label=label,
        selected=selected,
        expanded=expanded,
        exclude_semantics=True,
        expand=expand,
        on_tap=tap,
        content=ft.Container(ink=True, on_click=tap, content=content, **looks),
    )


def Disclosure(title: str, subtitle: str, opened: bool, toggle: Callable[[Any], Any]) -> ft.Control:
    """A line that opens or closes what stands under it."""
    words: list[ft.Control] = [ft.Text(title, theme_style=ft.TextThemeStyle.TITLE_SMALL)]
    if subtitle:
        words.append(ft.Text(subtitle, theme_style=ft.TextThemeStyle.BODY_SMALL, color=ft.Colors.ON_SURFACE_VARIANT))
    return Tappable(
        title,
        toggle,
        ft.Row(
            controls=[
                ft.Column(expand=True, spacing=0, controls=words),
                ft.Icon(ft.Icons.EXPAND_LESS if opened else ft.Icons.EXPAND_MORE, color=ft.Colors.PRIMARY),
            ]
        ),
        expanded=opened,
        padding=ft.Padding.symmetric(vertical=theme.GAP),
    )
