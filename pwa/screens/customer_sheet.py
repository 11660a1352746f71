"""The customer's sheet: paper, the user's own firm, and the button that makes the PDF."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import flet as ft

from pwa import theme
from pwa.components.box import Box
from pwa.components.guard import guarded
from pwa.components.menu import Menu
from pwa.components.tone import ToneLine
from pwa.components.words import Disclosure, Heading, Note
from pwa.screens.handover import view
from pwa.screens.job import use_sheet
from pwa.services.clock import SystemClock
from pwa.services.files import FilesError
from pwa.services.sharing import FletShare, SharingError
from pwa.state.customer_sheet import (
    LARGEST_LOGO,
    PAPERS,
    FirmSetting,
    Made,
    keep_firm,
    make_pdf,
    paper_of,
    read_firm,
)
from pwa.state.sheet import Sheet
from pwa.state.workspace import Standing, Workspace

KIND = "application/pdf"


@guarded
def CustomerSheetView(workspace: Workspace, standing: Standing) -> ft.View:
    """The screen, with the way back to the job."""
    job_id = ft.use_route_params().get("job_id", "")
    sheet = use_sheet(workspace, job_id)
    body = ft.Container() if sheet is None else CustomerSheetPane(sheet, workspace, standing)
    return view(f"/job/{job_id}/sheet", "Customer’s sheet", body)


@guarded
def CustomerSheetPane(sheet: Sheet, workspace: Workspace, standing: Standing) -> ft.Control:
    """What goes on the sheet, and the PDF."""
    firm, set_firm = ft.use_state(None)
    busy, set_busy = ft.use_state("")
    made, set_made = ft.use_state(None)

    async def read() -> None:
        set_firm(await read_firm(workspace))

    async def make() -> None:
        set_made(None)
        done = await make_pdf(workspace, sheet, firm, SystemClock().today(), set_busy)
        set_busy("")
        set_made(done)
        if done.pdf:
            await workspace.give(done.name, done.pdf)

    def change(**parts: str) -> None:
        new = replace(firm, **parts)
        set_firm(new)
        ft.context.page.run_task(keep_firm, workspace, new)

    ft.use_effect(read, [])
    if firm is None:
        return ft.Container()
    return ft.Column(
        expand=True,
        spacing=0,
        horizontal_alignment=ft.CrossAxisAlignment.STRETCH,
        controls=[
            ft.ListView(
                expand=True,
                padding=theme.PAD,
                spacing=theme.PAD,
                controls=[
                    Note(
                        "One page that the customer reads, then the technical page: entries, settings, working, "
                        "sources, cautions. It is made on this device."
                    ),
                    ft.Row(
                        alignment=ft.MainAxisAlignment.SPACE_BETWEEN,
                        controls=[Heading("Paper"), _paper(paper_of(firm, workspace, sheet), change)],
                    ),
                    OwnFirm(firm, change, workspace),
                    *_made(made, busy, workspace),
                ],
            ),
            _make_bar(make, waits=not standing.computing or bool(busy)),
        ],
    )


def _paper(paper: str, change) -> ft.Control:
    return Menu(
        tooltip="Paper",
        shown=paper,
        options=[(name, name) for name in PAPERS],
        chosen=paper,
        choose=lambda name: change(paper=name),
    )


@guarded
def OwnFirm(firm: FirmSetting, change, workspace: Workspace) -> ft.Control:
    """Name, address, terms and logo of whoever hands the sheet over."""
    opened, set_opened = ft.use_state(not firm.name)

    async def pick() -> None:
        try:
            picked = await workspace.files.pick(["png", "jpg", "jpeg"])
        except FilesError as error:
            workspace.notice.say(str(error))
            return
        if picked is not None and len(picked.data) > LARGEST_LOGO:
            workspace.notice.say("The logo is larger than 1 MB. Pick a smaller picture.")
        elif picked is not None:
            change(logo=firm.with_logo(picked.data).logo)

    logo: list[ft.Control] = [
        ft.OutlinedButton(
            "Another logo" if firm.logo else "Pick a logo", icon=ft.Icons.IMAGE, height=theme.TOUCH, on_click=pick
        )
    ]
    if firm.logo:
        logo.append(ft.TextButton("No logo", height=theme.TOUCH, on_click=lambda event: change(logo="")))
    boxes = [
        Box("Name of the firm", firm.name, lambda text: change(name=text)),
        Box("Address, telephone, licence", firm.lines, lambda text: change(lines=text), lines=3),
        Box("Terms", firm.terms, lambda text: change(terms=text), lines=3),
        ft.Row(wrap=True, controls=logo),
        Note("The logo stands at the head of the sheet: a PNG or JPEG picture."),
    ]
    title, words = "Your firm", firm.name or "Stands at the head of each sheet"
    return ft.Column(
        spacing=theme.PAD,
        horizontal_alignment=ft.CrossAxisAlignment.STRETCH,
        controls=[
            Disclosure(title, words, opened, lambda event: set_opened(not opened)),
            *(boxes if opened else []),
        ],
    )


def _made(made: Made | None, busy: str, workspace: Workspace) -> list[ft.Control]:
    if busy:
        return [ft.Semantics(live_region=True, container=True, content=ft.Text(busy))]
    if made is None:
        return []
    if not made.pdf:
        return [ToneLine("bad", sentence) for sentence in made.said]

    async def save(event: Any) -> None:
        await workspace.give(made.name, made.pdf)

    async def send(event: Any) -> None:
        try:
            await FletShare().share_file(made.name, made.pdf, KIND)
        except SharingError as error:
            workspace.notice.say(str(error))

    return [
        ToneLine("good", f"“{made.name}” is ready and was saved among the downloads."),
        *[ToneLine("note", sentence) for sentence in made.said],
        ft.Row(
            wrap=True,
            controls=[
                ft.OutlinedButton("Send it", icon=ft.Icons.SHARE, height=theme.TOUCH, on_click=send),
                ft.OutlinedButton("Save it again", icon=ft.Icons.DOWNLOAD, height=theme.TOUCH, on_click=save),
            ],
        ),
        Note("To print it, open it in the viewer of this device."),
    ]


def _make_bar(make, *, waits: bool) -> ft.Control:
    return ft.Container(
        padding=ft.Padding.symmetric(horizontal=theme.PAD, vertical=theme.GAP),
        border=ft.Border.only(top=ft.BorderSide(1, ft.Colors.OUTLINE_VARIANT)),
        bgcolor=ft.Colors.SURFACE,
        content=ft.Row(
            controls=[
                ft.FilledButton("Make the PDF", expand=True, height=theme.TOUCH + 8, disabled=waits, on_click=make)
            ]
        ),
    )
