"""A row of bars to touch: each says what it means, and can be taken over into its entry."""

from __future__ import annotations

from collections.abc import Callable

import flet as ft

from core.job.answers import Bar, Picture
from pwa import theme
from pwa.components.guard import guarded
from pwa.components.words import Heading, Note, Tappable
from pwa.state.display import Display
from pwa.state.sheet import Sheet

HEIGHT = 120.0  # of the highest bar
LEAST = 4.0  # so that the lowest is still to be seen


@guarded
def BarPicture(picture: Picture, sheet: Sheet, shown: Callable[[], Display]) -> ft.Control:
    """The bars; the one touched tells its words, and the one in use is filled."""
    display = shown()
    chosen = next((index for index, bar in enumerate(picture.bars) if bar.chosen), 0)
    touched, touch = ft.use_state(None)
    at = chosen if touched is None or touched >= len(picture.bars) else touched
    bar = picture.bars[at]
    highest = max(bar.height.value for bar in picture.bars) or 1.0

    def use(event: ft.ControlEvent) -> None:
        number, _ = display.figure(bar.at)
        sheet.set_unit(picture.sets, display.unit_of(bar.at))
        sheet.type(picture.sets, number)
        touch(None)

    return ft.Column(
        spacing=theme.GAP,
        controls=[
            Heading(picture.title),
            ft.Row(
                spacing=2,
                vertical_alignment=ft.CrossAxisAlignment.END,
                controls=[
                    _bar(each, index == at, highest, display, lambda event, index=index: touch(index))
                    for index, each in enumerate(picture.bars)
                ],
            ),
            ft.Text(f"{display.show(bar.at)}: {display.say(bar.words)}"),
            *(
                []
                if bar.chosen or not picture.sets
                else [ft.OutlinedButton("Use this setting", height=theme.TOUCH, on_click=use)]
            ),
            Note(f"Height: {picture.up}; along: {picture.along}. Hollow bars break a limit."),
        ],
    )


def _bar(bar: Bar, is_touched: bool, highest: float, display: Display, tap: Callable) -> ft.Control:
    height = max(LEAST, HEIGHT * bar.height.value / highest)
    colour = ft.Colors.PRIMARY if is_touched else ft.Colors.OUTLINE
    fill = None if not bar.fits else ft.Colors.PRIMARY if is_touched else ft.Colors.PRIMARY_CONTAINER
    return Tappable(
        f"{display.show(bar.at)}: {display.show(bar.height)}" + (", in use" if bar.chosen else ""),
        tap,
        ft.Column(
            spacing=2,
            alignment=ft.MainAxisAlignment.END,
            horizontal_alignment=ft.CrossAxisAlignment.STRETCH,
            height=HEIGHT + 24,
            controls=[
                ft.Container(
                    height=height, bgcolor=fill, border=ft.Border.all(2 if bar.chosen else 1, colour), border_radius=3
                ),
                ft.Text(
                    display.figure(bar.at)[0],
                    text_align=ft.TextAlign.CENTER,
                    theme_style=ft.TextThemeStyle.LABEL_SMALL,
                    no_wrap=True,
                    color=ft.Colors.ON_SURFACE if bar.chosen or is_touched else ft.Colors.ON_SURFACE_VARIANT,
                ),
            ],
        ),
        selected=is_touched,
        expand=True,
    )
