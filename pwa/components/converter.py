"""Hardness in every unit at once: type a number, tap the unit it was read in."""

from __future__ import annotations

import flet as ft

from core.errors import UnitError
from core.units import convert
from pwa import theme
from pwa.components.box import Box
from pwa.components.guard import guarded
from pwa.components.words import Tappable
from pwa.state.display import Display, unit_shown
from pwa.text import format_number, parse_quantity

SHOWN = ("gpg", "°dH", "mg/L CaCO3", "mmol/L", "°fH", "°e", "meq/L", "mg/L Ca")


@guarded
def Converter(display: Display, typed: str, unit: str, change) -> ft.Control:
    """A field and a tile for each unit; `change(typed, unit)` when either changes."""
    value, message = None, ""
    if typed.strip():
        try:
            reading = parse_quantity(typed, quantity="hardness", unit=unit)
            value, unit = reading.value, reading.unit
        except UnitError as error:
            message = str(error)
    tiles = [Tile(name, unit, value, display, lambda name=name: change(typed, name)) for name in SHOWN]
    return ft.Column(
        spacing=theme.GAP,
        horizontal_alignment=ft.CrossAxisAlignment.STRETCH,
        controls=[
            Box(
                "Hardness reading",
                typed,
                lambda text: change(text, unit),
                number=True,
                error=message,
                size=theme.LEAD * display.text_scale,
                weight=ft.FontWeight.W_600,
                hint="type a number, tap its unit below",
            ),
            *[ft.Row(spacing=theme.GAP, controls=tiles[at : at + 2]) for at in range(0, len(tiles), 2)],
        ],
    )


def Tile(name: str, chosen: str, value: float | None, display: Display, choose) -> ft.Control:
    """One unit with the reading in it; the one the number was read in is marked."""
    is_chosen = name == chosen
    unit = unit_shown(name)
    shown = "–" if value is None else format_number(convert(value, chosen, name), unit=name, decimal=display.decimal)
    return Tappable(
        f"{shown} {unit}" + (", as read" if is_chosen else ""),
        lambda event: choose(),
        ft.Column(
            spacing=0,
            controls=[
                ft.Text(shown, theme_style=ft.TextThemeStyle.TITLE_LARGE),
                ft.Text(
                    f"{unit} · as read" if is_chosen else unit,
                    theme_style=ft.TextThemeStyle.BODY_SMALL,
                    color=ft.Colors.ON_SURFACE_VARIANT,
                ),
            ],
        ),
        selected=is_chosen,
        expand=True,
        padding=ft.Padding.symmetric(horizontal=12, vertical=6),
        border_radius=theme.RADIUS,
        border=ft.Border.all(2 if is_chosen else 1, ft.Colors.PRIMARY if is_chosen else ft.Colors.OUTLINE_VARIANT),
        bgcolor=ft.Colors.PRIMARY_CONTAINER if is_chosen else None,
    )
