"""A job as one sheet: a card for each section, in the order of the visit."""

from __future__ import annotations

from collections.abc import Callable

import flet as ft

from core.job.fields import SECTION_WORDS, SECTIONS
from pwa import theme
from pwa.components.answer import AnswerBlock, spoken
from pwa.components.banner import Banners
from pwa.components.box import Box
from pwa.components.findings import LookAgain
from pwa.components.guard import guarded
from pwa.components.how_sure import WhatNext
from pwa.components.paste import PasteButton
from pwa.components.words import Disclosure, Note, Tappable
from pwa.state.display import Display
from pwa.state.sheet import Findings, Heading, Layout, PartState, Sheet
from pwa.state.sureness import SureState
from pwa.state.workspace import Preferences, Workspace


@guarded
def SheetPane(sheet: Sheet, workspace: Workspace, preferences: Preferences, chosen: str = "") -> ft.Control:
    """Name, place, and the cards."""
    ft.use_effect(lambda: workspace.see_how_sure(sheet), [sheet.job.id])
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
                controls=[
                    HeadingFields(sheet.heading, sheet),
                    ToDo(sheet.findings, sheet.sure["softener"], sheet.job.id, lambda: workspace.display(sheet)),
                    Cards(sheet.layout, sheet, workspace, chosen),
                    SectionsShown(sheet.layout, sheet),
                ],
            ),
        ],
    )


@guarded
def ToDo(findings: Findings, sure: SureState, job_id: str, shown: Callable[[], Display]) -> ft.Control:
    """What there is to do about the job as a whole: a report to paste, what is odd, what to measure next."""
    return ft.Column(
        spacing=theme.PAD,
        horizontal_alignment=ft.CrossAxisAlignment.STRETCH,
        controls=[PasteButton(job_id), *LookAgain(findings, job_id), *WhatNext(sure, job_id, shown())],
    )


@guarded
def Cards(layout: Layout, sheet: Sheet, workspace: Workspace, chosen: str) -> ft.Control:
    """A card for each section on the sheet."""
    return ft.Column(
        spacing=theme.PAD,
        horizontal_alignment=ft.CrossAxisAlignment.STRETCH,
        controls=[
            SectionCard(
                sheet.parts[key], SECTIONS[key], sheet.job.id, lambda: workspace.display(sheet), chosen == key, key=key
            )
            for key in layout.sections
        ],
    )


@guarded
def SectionsShown(layout: Layout, sheet: Sheet) -> ft.Control:
    """Which sections the sheet carries: each put on or taken off with a tap, its entries kept either way."""
    opened, set_opened = ft.use_state(False)
    words = "Only what the job needs; what was entered is kept"
    rows = [_section_row(key, key in layout.sections, sheet) for key in SECTIONS] if opened else []
    return ft.Column(
        spacing=0,
        horizontal_alignment=ft.CrossAxisAlignment.STRETCH,
        controls=[Disclosure("Add or remove sections", words, opened, lambda event: set_opened(not opened)), *rows],
    )


def _section_row(section: str, shown: bool, sheet: Sheet) -> ft.Control:
    title = SECTIONS[section]
    return Tappable(
        f"{'Remove' if shown else 'Add'} {title}",
        lambda event: sheet.show_section(section, shown=not shown),
        ft.Row(
            controls=[
                ft.Icon(
                    ft.Icons.CHECK_BOX if shown else ft.Icons.CHECK_BOX_OUTLINE_BLANK,
                    color=ft.Colors.PRIMARY if shown else ft.Colors.ON_SURFACE_VARIANT,
                ),
                ft.Column(expand=True, spacing=0, controls=[ft.Text(title), Note(SECTION_WORDS[section])]),
            ]
        ),
        selected=shown,
        padding=ft.Padding.symmetric(vertical=theme.GAP),
        border=ft.Border.only(bottom=ft.BorderSide(1, ft.Colors.OUTLINE_VARIANT)),
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
