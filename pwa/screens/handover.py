"""Handing a job over: to another phone by codes, a link or a file, and as a message; and taking one in."""

from __future__ import annotations

import flet as ft

from core.job.fields import field_for
from core.job.record import Job
from pwa import theme
from pwa.components.box import Box
from pwa.components.guard import guarded
from pwa.components.job_row import named
from pwa.components.tone import ToneLine
from pwa.components.words import Heading, Note
from pwa.screens.job import use_sheet
from pwa.services.handover import HandoverError, file_of, links
from pwa.services.sharing import FletShare, SharingError, copy_action, share_action
from pwa.services.summary import summary_text
from pwa.state.display import unit_shown
from pwa.state.handover import Came, join, take_in
from pwa.state.sheet import Sheet
from pwa.state.workspace import JobList, Standing, Workspace
from pwa.text import format_quantity

MOST_SHOWN = 12  # entries of a job that arrived
LONGEST = 200  # characters of its name and place


@guarded
def ShareView(workspace: Workspace, standing: Standing) -> ft.View:
    """The ways to hand a job over."""
    job_id = ft.use_route_params().get("job_id", "")
    sheet = use_sheet(workspace, job_id)
    body = ft.Container() if sheet is None else SharePane(sheet, workspace, standing)
    return view(f"/job/{job_id}/share", "Hand over", body)


def view(route: str, title: str, body: ft.Control) -> ft.View:
    """A view with a title and the way back."""
    return ft.View(
        route=route,
        padding=0,
        spacing=0,
        appbar=ft.AppBar(title=ft.Text(title), bgcolor=ft.Colors.SURFACE),
        controls=[ft.SafeArea(expand=True, content=body)],
    )


@guarded
def SharePane(sheet: Sheet, workspace: Workspace, standing: Standing) -> ft.Control:
    """Codes, file, message."""
    page = ft.context.page

    async def save() -> None:
        await workspace.save_job_file(sheet.job.id)

    async def send() -> None:
        name, data = file_of(sheet.job)
        try:
            await FletShare().share_file(name, data, "application/json")
        except SharingError as error:
            workspace.notice.say(str(error))

    buttons = [
        ft.OutlinedButton("Save as a file", icon=ft.Icons.DOWNLOAD, height=theme.TOUCH, on_click=save),
        ft.OutlinedButton("Send the file", icon=ft.Icons.SHARE, height=theme.TOUCH, on_click=send),
    ]
    controls = [
        Codes(sheet, page.url or ""),
        ft.Divider(),
        Heading("As a file"),
        Note("On the other phone it is opened with “Open a file”."),
        ft.Row(wrap=True, controls=buttons),
        ft.Divider(),
        Heading("As a message"),
        *(_message(sheet, workspace) if standing.computing else [Note("Getting the calculator ready …")]),
    ]
    return ft.ListView(expand=True, padding=theme.PAD, spacing=theme.PAD, controls=controls)


@guarded
def Codes(sheet: Sheet, address: str) -> ft.Control:
    """The codes that carry the job, one at a time."""
    at, set_at = ft.use_state(0)
    made, why_not = ft.use_memo(lambda: _links(sheet, address), [sheet.job, address])
    place = min(at, max(len(made) - 1, 0))
    code = ft.use_memo(lambda: _drawn(*made[place]) if made else b"", [made, place])
    head = [
        Heading("To another phone, without a network"),
        Note("The other phone reads the code with its camera. This app must have been opened there once before."),
    ]
    if not made:
        return ft.Column(spacing=theme.GAP, controls=[*head, ToneLine("watch", why_not)])
    count = len(made)
    words = f"Code {place + 1} of {count}" if count > 1 else "One code holds the whole job"
    picture = ft.Semantics(
        container=True,
        image=True,
        label=f"QR code {place + 1} of {count}",
        content=ft.Image(src=code, width=theme.CODE, height=theme.CODE, fit=ft.BoxFit.CONTAIN),
    )
    steps = [
        ft.OutlinedButton(
            "Previous code", height=theme.TOUCH, disabled=not place, on_click=lambda event: set_at(place - 1)
        ),
        ft.FilledTonalButton(
            "Next code", height=theme.TOUCH, disabled=place == count - 1, on_click=lambda event: set_at(place + 1)
        ),
    ]
    copy = ft.TextButton(
        "Copy the links" if count > 1 else "Copy the link",
        icon=ft.Icons.LINK,
        height=theme.TOUCH,
        action=copy_action("\n".join(prefix + part for prefix, part in made)),
    )
    centred = {"horizontal_alignment": ft.CrossAxisAlignment.CENTER}
    lines = [picture, ft.Text(words, weight=ft.FontWeight.W_600)]
    lines += [ft.Row(alignment=ft.MainAxisAlignment.CENTER, wrap=True, controls=steps)] if count > 1 else []
    return ft.Column(
        spacing=theme.GAP,
        horizontal_alignment=ft.CrossAxisAlignment.STRETCH,
        controls=[*head, ft.Column(spacing=theme.GAP, controls=[*lines, copy], **centred)],
    )


def _links(sheet: Sheet, address: str) -> tuple[list[tuple[str, str]], str]:
    try:
        return links(sheet.job, address), ""
    except HandoverError as error:
        return [], str(error)


def _drawn(prefix: str, part: str) -> bytes:
    from pwa.services.handover_qr import qr_code  # the drawing of codes is loaded when it is asked for

    return qr_code(prefix, part).png


def _message(sheet: Sheet, workspace: Workspace) -> list[ft.Control]:
    text = summary_text(sheet.job, workspace.assessed(sheet.job), workspace.display(sheet))
    buttons = [
        ft.OutlinedButton("Copy the text", icon=ft.Icons.CONTENT_COPY, height=theme.TOUCH, action=copy_action(text)),
        ft.OutlinedButton(
            "Share the text", icon=ft.Icons.SHARE, height=theme.TOUCH, action=share_action(text, named(sheet.job.name))
        ),
    ]
    return [ft.Row(wrap=True, controls=buttons), ft.Semantics(container=True, content=ft.Text(text, selectable=True))]


@guarded
def JoinView(workspace: Workspace, jobs: JobList) -> ft.View:
    """What a link or a code brought, and the button that puts it on the list."""
    part = ft.use_route_params().get("part", "")
    came, set_came = ft.use_state(None)
    pasted, set_pasted = ft.use_state("")

    async def read() -> None:
        if part and jobs.opened:
            set_came(await take_in(workspace, part))

    async def read_pasted() -> None:
        found = None
        for link in pasted.split():
            found = await take_in(workspace, link)
            set_came(found)
        if found is not None and found.usable:
            set_pasted("")

    ft.use_effect(read, [part, jobs.opened])
    controls = [
        *_came(came, workspace),
        Heading("Links by hand"),
        Note("Where codes came as links in a message, paste them here, all of them or one after the other."),
        Box("Links of a job", pasted, set_pasted, lines=3, grows=False),
        ft.Row(
            controls=[
                ft.OutlinedButton(
                    "Read the links", height=theme.TOUCH, disabled=not pasted.strip(), on_click=read_pasted
                )
            ]
        ),
    ]
    body = ft.ListView(expand=True, padding=theme.PAD, spacing=theme.PAD, controls=controls)
    return view(f"/join/{part}" if part else "/join", "A job handed over", body)


def _came(came: Came | None, workspace: Workspace) -> list[ft.Control]:
    if came is None:
        return []
    if came.arrival is None:
        return [ToneLine("note" if came.usable else "bad", came.sentence)]
    arrived = came.arrival
    job = arrived.job

    async def add() -> None:
        job_id = await join(workspace, job)
        if job_id:
            ft.context.page.navigate(f"/job/{job_id}")

    count = len(job.entries)
    cut = {"max_lines": 2, "overflow": ft.TextOverflow.ELLIPSIS}  # whatever was sent, the button stays near
    lines: list[ft.Control] = [ft.Text(named(job.name)[:LONGEST], theme_style=ft.TextThemeStyle.TITLE_MEDIUM, **cut)]
    lines += [ft.Text(job.place[:LONGEST], **cut)] if job.place else []
    lines += [Note(f"{count} {'entry' if count == 1 else 'entries'}."), *_entries(job, workspace)]
    lines.append(Note(arrived.sentence, max_lines=6, overflow=ft.TextOverflow.ELLIPSIS))
    label = "Open it" if arrived.kind == "same" else "Add to the list"
    lines.append(ft.Row(controls=[ft.FilledButton(label, expand=True, height=theme.TOUCH + 8, on_click=add)]))
    return [
        ft.Container(
            bgcolor=ft.Colors.SURFACE,
            border_radius=theme.RADIUS,
            border=ft.Border.all(1, ft.Colors.OUTLINE_VARIANT),
            padding=theme.PAD,
            content=ft.Column(spacing=theme.GAP, controls=lines),
        )
    ]


def _entries(job: Job, workspace: Workspace) -> list[ft.Control]:
    """The first entries of a job that arrived, as they were entered there."""
    decimal = workspace.display().decimal
    shown = []
    for key in list(job.entries)[:MOST_SHOWN]:
        field, entry = field_for(key), job.entries[key]
        if field is not None and entry.value is not None:
            shown.append(
                ft.Text(f"{field.label}: {unit_shown(format_quantity(entry.value, entry.unit[:20], decimal))}")
            )
    return shown
