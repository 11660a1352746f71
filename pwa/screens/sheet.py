"""A job as one sheet: a card for each section, in the order of the visit."""

from __future__ import annotations

from collections.abc import Callable

import flet as ft

from core.job.fields import SECTIONS
from pwa import theme
from pwa.components.answer import AnswerBlock, spoken
from pwa.components.banner import Banners
from pwa.components.box import Box
from pwa.components.guard import guarded
from pwa.components.words import Tappable
from pwa.state.display import Display
from pwa.state.sheet import Heading, PartState, Sheet
from pwa.state.workspace import Preferences, Workspace


@guarded
def SheetPane(sheet: Sheet, workspace: Workspace, preferences: Preferences, chosen: str = "") -> ft.Control:
    """Name, place, and the cards."""
    cards = [
        SectionCard(sheet.parts[key], title, sheet.job.id, lambda: workspace.display(sheet), chosen == key, key=key)
        for key, title in SECTIONS.items()
    ]
    return ft.Column(
        expand=True,
        spacing=0,
        horizontal_alignment=ft.CrossAxisAlignment.STRETCH,
        controls=[
            Banners(workspace.standing, workspace),
            ft.ListView(
                expand=True,
                padding=theme.PAD,
                spacing=theme.PAD,
                controls=[HeadingFields(sheet.heading, sheet), *cards],
            ),
        ],
    )


@guarded
def HeadingFields(heading: Heading, sheet: Sheet) -> ft.Control:
    """What the job is called and where it is."""
    return ft.Column(
        spacing=theme.GAP,
        horizontal_alignment=ft.CrossAxisAlignment.STRETCH,
        controls=[
            Box("Name of the job", heading.name, lambda text: sheet.rename(name=text)),
            Box("Place", heading.place, lambda text: sheet.rename(place=text)),
        ],
    )


@guarded
def SectionCard(state: PartState, title: str, job_id: str, shown: Callable[[], Display], chosen: bool) -> ft.Control:
    """One section: its answer in words and one figure; a tap opens it."""

    def open_(event: ft.ControlEvent) -> None:
        ft.context.page.navigate(f"/job/{job_id}/{state.key}")

    part = state.part
    body = ft.Text("Getting the calculator ready …") if part is None else AnswerBlock(part, shown())
    return Tappable(
        f"{title}: {spoken(part, shown()) if part else 'not ready yet'}",
        open_,
        ft.Column(
            spacing=theme.GAP,
            controls=[
                ft.Row(
                    alignment=ft.MainAxisAlignment.SPACE_BETWEEN,
                    controls=[
                        ft.Text(title, theme_style=ft.TextThemeStyle.TITLE_MEDIUM),
                        ft.Icon(ft.Icons.CHEVRON_RIGHT, color=ft.Colors.ON_SURFACE_VARIANT),
                    ],
                ),
                body,
            ],
        ),
        bgcolor=ft.Colors.SURFACE,
        border_radius=theme.RADIUS,
        border=ft.Border.all(2 if chosen else 1, ft.Colors.PRIMARY if chosen else ft.Colors.OUTLINE_VARIANT),
        padding=theme.PAD,
    )
