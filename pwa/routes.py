"""The route tree: one view for each level, so that back, swipe and deep links work.

/                  jobs
/settings          settings
/job/ID            the sheet of a job
/job/ID/SECTION    one of its sections; beside the sheet on a wide screen
/job/ID/paste      a report pasted, on its way into the job
/job/ID/share      the ways to hand a job over
/job/ID/sheet      the customer's sheet as a PDF
/job/ID/signoff    what was read after commissioning, against what was promised
/job/ID/sources/3  one of its sources
/join/PART         a job on its way in, by a link or a code
"""

from __future__ import annotations

import flet as ft

from pwa import theme
from pwa.screens.customer_sheet import CustomerSheetView
from pwa.screens.handover import JoinView, ShareView
from pwa.screens.job import JobView, SectionView, SourceView
from pwa.screens.jobs import JobsView
from pwa.screens.paste import PasteView
from pwa.screens.settings import SettingsView
from pwa.screens.signoff import SignOffView
from pwa.state.settings import Settings
from pwa.state.workspace import Notice, Preferences, Workspace


@ft.component
def App(workspace: Workspace, preferences: Preferences, notice: Notice) -> ft.Control:
    """The whole app: looks, notices, and the views of the route."""
    page = ft.context.page
    seen, set_seen = ft.use_state(0)

    async def begin() -> None:
        page.on_resize = lambda event: workspace.resized(event.width)
        workspace.resized(page.width)
        await workspace.open()

    ft.use_effect(begin, [])
    ft.use_effect(lambda: put_on(page, preferences.settings), [preferences.settings])
    ft.use_dialog(_snack_bar(notice, lambda: set_seen(notice.turn)) if notice.turn > seen else None)
    return ft.Router(_routes(workspace), manage_views=True, not_found=Lost)


def Lost() -> ft.Control:
    """What stands at an address that leads nowhere: the way home."""
    return ft.SafeArea(
        content=ft.Column(
            controls=[
                ft.Text("There is nothing at this address."),
                ft.FilledButton("To the jobs", height=theme.TOUCH, on_click=lambda: ft.context.page.navigate("/")),
            ]
        )
    )


def _routes(workspace: Workspace) -> list[ft.Route]:
    standing, preferences = workspace.standing, workspace.preferences
    source = ft.Route(path=":source", component=lambda: SourceView(workspace, standing, preferences))
    section = ft.Route(
        path=":section", component=lambda: SectionView(workspace, standing, preferences), children=[source]
    )
    paste = ft.Route(path="paste", component=lambda: PasteView(workspace))
    share = ft.Route(path="share", component=lambda: ShareView(workspace, standing))
    signed = ft.Route(path="signoff", component=lambda: SignOffView(workspace, standing, preferences))
    leave = ft.Route(path="sheet", component=lambda: CustomerSheetView(workspace, standing))
    job = ft.Route(
        path="job/:job_id",
        component=lambda: JobView(workspace, standing, preferences),
        children=[paste, share, signed, leave, section],
    )
    joins = [
        ft.Route(path=path, component=lambda: JoinView(workspace, workspace.jobs)) for path in ("join", "join/:part")
    ]
    settings = ft.Route(path="settings", component=lambda: SettingsView(workspace, preferences))
    return [ft.Route(path="/", component=lambda: JobsView(workspace), children=[settings, job, *joins])]


def put_on(page: ft.Page, settings: Settings) -> None:
    """Dress the page in the looks of the settings."""
    scale = theme.SCALES[settings.text]
    page.theme = theme.theme(theme.palette(dark=False, contrast=settings.contrast), scale)
    page.dark_theme = theme.theme(theme.palette(dark=True, contrast=settings.contrast), scale)
    page.theme_mode = ft.ThemeMode(settings.ground)
    page.update()


def _snack_bar(notice: Notice, close) -> ft.SnackBar:
    undo = notice.undo
    return ft.SnackBar(
        content=ft.Text(notice.text),
        action=ft.SnackBarAction(label="Undo", on_click=undo) if undo else None,
        duration=8000,
        on_dismiss=lambda event: close(),
    )
