"""Home: a converter that needs no tap, and the list of jobs."""

from __future__ import annotations

from collections.abc import Awaitable, Callable
from typing import Any

import flet as ft

from core.job.answers import Amount
from pwa import theme
from pwa.components.banner import Banners
from pwa.components.box import Box
from pwa.components.converter import Converter
from pwa.components.guard import guarded
from pwa.components.job_row import JobCard
from pwa.components.words import Disclosure, Heading, Note, Tappable
from pwa.samples import SAMPLES, load_sample
from pwa.state.workspace import JobList, Preferences, Workspace

SEARCH_FROM = 6  # jobs; below that the list is its own search


@guarded
def JobsView(workspace: Workspace) -> ft.View:
    """The first screen."""
    return ft.View(
        route="/",
        padding=0,
        appbar=ft.AppBar(
            title=ft.Text("Tapwright", theme_style=ft.TextThemeStyle.TITLE_LARGE),
            bgcolor=ft.Colors.SURFACE,
            actions=[
                ft.IconButton(
                    ft.Icons.TUNE, tooltip="Settings", on_click=lambda event: ft.context.page.navigate("/settings")
                )
            ],
        ),
        controls=[
            ft.SafeArea(
                expand=True,
                content=ft.Column(
                    spacing=0,
                    horizontal_alignment=ft.CrossAxisAlignment.STRETCH,
                    controls=[
                        Banners(workspace.standing, workspace),
                        ft.ListView(
                            expand=True,
                            padding=theme.PAD,
                            spacing=theme.PAD,
                            controls=[
                                HardnessCard(workspace.preferences, workspace),
                                Jobs(workspace.jobs, workspace),
                            ],
                        ),
                    ],
                ),
            )
        ],
    )


@guarded
def HardnessCard(preferences: Preferences, workspace: Workspace) -> ft.Control:
    """The converter with what was typed in it."""
    display = workspace.display()
    start = display.unit_of(Amount(0.0, "mmol/L", "hardness"))
    (typed, unit), set_reading = ft.use_state(("", start))
    return ft.Container(
        bgcolor=ft.Colors.SURFACE,
        padding=theme.PAD,
        border_radius=theme.RADIUS,
        border=ft.Border.all(1, ft.Colors.OUTLINE_VARIANT),
        content=Converter(display, typed, unit, lambda new, new_unit: set_reading((new, new_unit))),
    )


@guarded
def Jobs(jobs: JobList, workspace: Workspace) -> ft.Control:
    """The jobs, with a search once there are many, and the ways to begin one."""

    async def begin() -> None:
        job_id = await workspace.new()
        if job_id:
            ft.context.page.navigate(f"/job/{job_id}/water")

    async def open_file() -> None:
        job_id = await workspace.open_file()
        if job_id:
            ft.context.page.navigate(f"/job/{job_id}")

    controls: list[ft.Control] = [
        ft.Row(
            alignment=ft.MainAxisAlignment.SPACE_BETWEEN,
            controls=[
                Heading("Jobs", 1),
                ft.TextButton("Open a file", icon=ft.Icons.FILE_OPEN_OUTLINED, on_click=open_file),
            ],
        ),
        ft.FilledButton("New job", icon=ft.Icons.ADD, height=theme.TOUCH + 8, on_click=begin),
    ]
    if jobs.search or jobs.total >= SEARCH_FROM:
        page = ft.context.page
        controls.append(Box("Search", jobs.search, lambda text: page.run_task(workspace.list_again, text)))
    controls += [JobCard(row, workspace, key=row.id) for row in jobs.rows]
    if len(jobs.rows) < jobs.total:
        controls.append(ft.TextButton(f"Show more of {jobs.total}", on_click=workspace.more))
    if jobs.opened and not jobs.rows:
        none = "No job holds these words." if jobs.search else "No jobs yet. Begin one, or open an example below."
        controls.append(Note(none))
    controls.append(Samples(workspace))
    return ft.Column(spacing=theme.GAP, horizontal_alignment=ft.CrossAxisAlignment.STRETCH, controls=controls)


@guarded
def Samples(workspace: Workspace) -> ft.Control:
    """Invented jobs to try the app on."""
    opened, set_opened = ft.use_state(False)

    def loader(name: str) -> Callable[[Any], Awaitable[None]]:
        async def load(event: Any) -> None:
            job_id = await workspace.add_copy(load_sample(name))
            if job_id:
                ft.context.page.navigate(f"/job/{job_id}")

        return load

    rows = [
        Tappable(
            title,
            loader(name),
            ft.Column(spacing=2, controls=[ft.Text(title), Note(story)]),
            padding=ft.Padding.symmetric(vertical=12),
            border=ft.Border.only(bottom=ft.BorderSide(1, ft.Colors.OUTLINE_VARIANT)),
        )
        for name, title, story in (SAMPLES() if opened else ())
    ]
    words = "Invented places; each opens as a job of its own"
    return ft.Column(
        spacing=0, controls=[Disclosure("Examples", words, opened, lambda event: set_opened(not opened)), *rows]
    )
