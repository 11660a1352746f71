"""The views of one job: its sheet, a section of it, or both side by side."""

from __future__ import annotations

import flet as ft

from core.job.fields import SECTIONS
from pwa import theme
from pwa.components.guard import guarded
from pwa.components.job_row import named
from pwa.screens.section import SectionPane
from pwa.screens.sheet import SheetPane
from pwa.screens.sources import SourcePane
from pwa.state.sheet import Heading, Sheet
from pwa.state.workspace import Preferences, Standing, Workspace

LEAVING = {
    "sheet": "Customer’s sheet (PDF)",
    "signoff": "Sign-off",
    "share": "To another phone, or as a message",
}  # route below the job: what the menu calls it


@guarded
def JobView(workspace: Workspace, standing: Standing, preferences: Preferences) -> ft.View:
    """The sheet; on a wide screen with its first section beside it."""
    job_id = ft.use_route_params().get("job_id", "")
    sheet = use_sheet(workspace, job_id)

    def pane(sheet: Sheet) -> ft.Control:
        return _sheet(workspace, standing, preferences, sheet, sheet.layout.sections[0])

    return _view(f"/job/{job_id}", sheet, pane)


@guarded
def SectionView(workspace: Workspace, standing: Standing, preferences: Preferences) -> ft.View:
    """A section; on a wide screen beside the sheet."""
    params = ft.use_route_params()
    job_id, section = params.get("job_id", ""), params.get("section", "")
    section = section if section in SECTIONS else next(iter(SECTIONS))
    sheet = use_sheet(workspace, job_id)

    def panes(sheet: Sheet) -> ft.Control:
        if standing.wide:
            return _sheet(workspace, standing, preferences, sheet, section)
        return SectionPane(sheet, section, workspace, preferences, key=section)

    title = None if standing.wide else SECTIONS[section]
    return _view(f"/job/{job_id}/{section}", sheet, panes, title)


@guarded
def SourceView(workspace: Workspace, standing: Standing, preferences: Preferences) -> ft.View:
    """One source of the Sources section; on a wide screen beside the sheet."""
    params = ft.use_route_params()
    job_id, place = params.get("job_id", ""), params.get("source", "")
    number = int(place) if place.isascii() and place.isdigit() else 0
    sheet = use_sheet(workspace, job_id)

    def panes(sheet: Sheet) -> ft.Control:
        pane = SourcePane(sheet, number, sheet.layout, workspace, preferences, key=f"source-{number}")
        return _beside(workspace, preferences, sheet, "sources", pane) if standing.wide else pane

    return _view(f"/job/{job_id}/sources/{place}", sheet, panes, None if standing.wide else "Source")


def use_sheet(workspace: Workspace, job_id: str) -> Sheet | None:
    """The open sheet of a job; None while it is being read."""
    sheet, set_sheet = ft.use_state(workspace.sheets.get(job_id))

    async def read() -> None:
        set_sheet(await workspace.sheet(job_id))

    ft.use_effect(read, [job_id, workspace.jobs.turn])
    return sheet if sheet is not None and sheet.job.id == job_id else workspace.sheets.get(job_id)


def _sheet(
    workspace: Workspace, standing: Standing, preferences: Preferences, sheet: Sheet, section: str
) -> ft.Control:
    if not standing.wide:
        return SheetPane(sheet, workspace, preferences)
    pane = SectionPane(sheet, section, workspace, preferences, key=section)
    return _beside(workspace, preferences, sheet, section, pane)


def _beside(workspace: Workspace, preferences: Preferences, sheet: Sheet, section: str, pane: ft.Control) -> ft.Control:
    return ft.Row(
        expand=True,
        spacing=0,
        vertical_alignment=ft.CrossAxisAlignment.STRETCH,
        controls=[
            ft.Container(
                width=theme.SHEET_WIDTH,
                border=ft.Border.only(right=ft.BorderSide(1, ft.Colors.OUTLINE_VARIANT)),
                content=SheetPane(sheet, workspace, preferences, section),
            ),
            ft.Container(expand=True, content=pane),
        ],
    )


def _view(route: str, sheet: Sheet | None, content, title: str | None = None) -> ft.View:
    body = ft.Container() if sheet is None else content(sheet)
    bar = ft.Text(title) if title or sheet is None else JobTitle(sheet.heading)
    return ft.View(
        route=route,
        padding=0,
        spacing=0,
        appbar=ft.AppBar(title=bar, bgcolor=ft.Colors.SURFACE, actions=[] if title else leave_menu(sheet)),
        controls=[ft.SafeArea(expand=True, content=body)],
    )


def leave_menu(sheet: Sheet | None) -> list[ft.Control]:
    """The ways in which a job leaves the phone."""
    if sheet is None:
        return []

    def opener(place: str):
        return lambda event: ft.context.page.navigate(f"/job/{sheet.job.id}/{place}")

    menu = ft.PopupMenuButton(
        tooltip="Sheet, sign-off, other phone",
        content=ft.Container(
            height=theme.TOUCH,
            padding=ft.Padding.symmetric(horizontal=theme.PAD),
            content=ft.Row(
                spacing=theme.GAP,
                tight=True,
                controls=[
                    ft.Icon(ft.Icons.IOS_SHARE, color=ft.Colors.PRIMARY),
                    ft.Text("Hand over", color=ft.Colors.PRIMARY),
                ],
            ),
        ),
        items=[ft.PopupMenuItem(content=words, on_click=opener(place)) for place, words in LEAVING.items()],
    )
    return [ft.Semantics(container=True, content=menu)]


@guarded
def JobTitle(heading: Heading) -> ft.Control:
    """The name of the job in the bar."""
    return ft.Text(
        named(heading.name), theme_style=ft.TextThemeStyle.TITLE_MEDIUM, max_lines=1, overflow=ft.TextOverflow.ELLIPSIS
    )
