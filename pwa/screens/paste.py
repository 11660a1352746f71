"""A report pasted: each value beside the words it came from, questions, and what was not understood."""

from __future__ import annotations

from typing import TYPE_CHECKING

import flet as ft

from core.job.fields import FIELDS
from pwa import theme
from pwa.components.box import Box
from pwa.components.guard import guarded
from pwa.components.source import PROVENANCE
from pwa.components.tone import ToneLine
from pwa.components.words import Disclosure, Heading, Note, Tappable
from pwa.screens.job import use_sheet
from pwa.state.display import Display, formulas_shown, unit_shown
from pwa.state.paste import PasteState, held_already
from pwa.state.sheet import Sheet
from pwa.state.workspace import Workspace
from pwa.text import format_quantity

if TYPE_CHECKING:
    from core.job.readings import Found, Left, Question

LINES = 6  # of the box; a longer text scrolls in it
HINT = "Calcium 92 mg/l, Magnesium 18,4 mg/l, pH 7.4 …"


@guarded
def PasteView(workspace: Workspace) -> ft.View:
    """The screen, with the way back to the job."""
    job_id = ft.use_route_params().get("job_id", "")
    sheet = use_sheet(workspace, job_id)
    body = ft.Container() if sheet is None else PastePane(sheet, workspace)
    return ft.View(
        route=f"/job/{job_id}/paste",
        padding=0,
        spacing=0,
        appbar=ft.AppBar(title=ft.Text("Paste a report"), bgcolor=ft.Colors.SURFACE),
        controls=[ft.SafeArea(expand=True, content=body)],
    )


@guarded
def PastePane(sheet: Sheet, workspace: Workspace) -> ft.Control:
    """The box, what was found, and the button that takes it over."""
    state, _ = ft.use_state(PasteState)
    display = workspace.display(sheet)

    async def from_file() -> None:
        text = await workspace.read_text()
        if text is not None:
            state.type(text, sheet.job)

    controls: list[ft.Control] = [
        Note("Paste the text of an e-mail, a PDF or a table. English, German and French names are known."),
        Box(
            "Text of the report",
            state.text,
            lambda text: state.type(text, sheet.job),
            hint=HINT,
            lines=LINES,
            grows=False,
        ),
        ft.Row(
            controls=[
                ft.TextButton("From a file", icon=ft.Icons.FILE_OPEN_OUTLINED, height=theme.TOUCH, on_click=from_file)
            ]
        ),
        *_found(state, sheet, display),
    ]
    return ft.Column(
        expand=True,
        spacing=0,
        horizontal_alignment=ft.CrossAxisAlignment.STRETCH,
        controls=[
            ft.ListView(expand=True, padding=theme.PAD, spacing=theme.PAD, controls=controls),
            _take_over(state, sheet, workspace),
        ],
    )


def _found(state: PasteState, sheet: Sheet, display: Display) -> list[ft.Control]:
    report = state.report
    if report is None:
        return []
    if report.refusal:
        return [ToneLine("bad", report.refusal)]
    if not (report.found or report.questions):
        return [ToneLine("watch", "No value was found in this text."), *_left(state)]
    rows = [_found_row(place, item, state, sheet, display) for place, item in enumerate(report.found)]
    asked = [_question(place, item, state, display) for place, item in enumerate(report.questions)]
    return [
        *([ft.Column(spacing=0, controls=[Heading(f"Found: {len(rows)}"), *rows])] if rows else []),
        *([Heading("To be answered")] if asked else []),
        *asked,
        *_left(state),
    ]


def _found_row(place: int, item: Found, state: PasteState, sheet: Sheet, display: Display) -> ft.Control:
    ticked = place not in state.refused
    label, value = FIELDS[item.field].label, _value(item, display)
    held = held_already(sheet.job, item)
    lines: list[ft.Control] = [
        ft.Text(f"{label}: {value}", weight=ft.FontWeight.W_600),
        Note(f"from “{item.words}”"),
    ]
    if _says_more(item):
        lines.append(Note(formulas_shown(_how(item))))
    if held is not None:
        now = unit_shown(format_quantity(held.value, held.unit, display.decimal, digits=4))
        lines.append(ToneLine("watch", f"The job holds {now}, {PROVENANCE[held.source].word}."))
    return Tappable(
        f"{label}: {value}, from “{item.words}”" + ("" if ticked else ", not taken over"),
        lambda event: state.toggle(place),
        ft.Row(
            spacing=12,
            vertical_alignment=ft.CrossAxisAlignment.START,
            controls=[
                ft.Icon(
                    ft.Icons.CHECK_BOX if ticked else ft.Icons.CHECK_BOX_OUTLINE_BLANK,
                    color=ft.Colors.PRIMARY if ticked else ft.Colors.ON_SURFACE_VARIANT,
                ),
                ft.Column(expand=True, spacing=2, controls=lines),
            ],
        ),
        selected=ticked,
        padding=ft.Padding.symmetric(vertical=12),
        border=ft.Border.only(bottom=ft.BorderSide(1, ft.Colors.OUTLINE_VARIANT)),
    )


def _question(place: int, question: Question, state: PasteState, display: Display) -> ft.Control:
    chosen = state.chosen.get(place)
    several = len({choice.field for choice in question.choices}) > 1
    rows = [
        _choice_row(
            f"{FIELDS[choice.field].label}: {_value(choice, display)}" if several else _value(choice, display),
            number == chosen,
            lambda event, number=number: state.answer(place, number),
        )
        for number, choice in enumerate(question.choices)
    ]
    label = "" if several or not question.choices else f"{FIELDS[question.choices[0].field].label}. "
    leave = _choice_row("Leave it out", chosen is None, lambda event: state.answer(place, None))
    return ft.Container(
        bgcolor=ft.Colors.SURFACE,
        border_radius=theme.RADIUS,
        border=ft.Border.all(1, ft.Colors.OUTLINE_VARIANT),
        padding=theme.PAD,
        content=ft.Column(
            spacing=0,
            controls=[
                ft.Text(f"“{question.words}”", weight=ft.FontWeight.W_600),
                Note(f"{label}{question.text}"),
                *rows,
                leave,
            ],
        ),
    )


def _choice_row(words: str, chosen: bool, tap) -> ft.Control:
    return Tappable(
        words,
        tap,
        ft.Row(
            spacing=12,
            height=theme.TOUCH,
            controls=[
                ft.Icon(
                    ft.Icons.RADIO_BUTTON_CHECKED if chosen else ft.Icons.RADIO_BUTTON_UNCHECKED,
                    color=ft.Colors.PRIMARY if chosen else ft.Colors.ON_SURFACE_VARIANT,
                ),
                ft.Text(words, expand=True),
            ],
        ),
        selected=chosen,
    )


def _left(state: PasteState) -> list[ft.Control]:
    report = state.report
    if report is None or not report.left:
        return []
    again = report.not_understood
    rest = tuple(item for item in report.left if item not in again)
    return [
        *([ft.Column(spacing=6, controls=[Heading("Not understood"), *map(_left_line, again)])] if again else []),
        *([Rest(rest)] if rest else []),
    ]


@guarded
def Rest(items: tuple[Left, ...]) -> ft.Control:
    """What is known to be of no use here, behind a tap: limits, methods, repeats."""
    opened, set_opened = ft.use_state(False)
    lines = [_left_line(item) for item in items] if opened else []
    title = f"Left out: {len(items)}"
    return ft.Column(
        spacing=6,
        controls=[
            Disclosure(title, "Limits, methods, headings, repeats", opened, lambda event: set_opened(not opened)),
            *lines,
        ],
    )


def _left_line(item: Left) -> ft.Control:
    words = " ".join(item.words.split())
    return Note(f"“{words}”: {item.why}")


def _take_over(state: PasteState, sheet: Sheet, workspace: Workspace) -> ft.Control:
    wanted = state.wanted()
    count = len(wanted)

    def take(event: ft.ControlEvent) -> None:
        workspace.take_over(sheet, wanted)
        ft.context.page.navigate(f"/job/{sheet.job.id}/water")

    return ft.Container(
        padding=ft.Padding.symmetric(horizontal=theme.PAD, vertical=theme.GAP),
        border=ft.Border.only(top=ft.BorderSide(1, ft.Colors.OUTLINE_VARIANT)),
        bgcolor=ft.Colors.SURFACE,
        content=ft.Row(
            controls=[
                ft.FilledButton(
                    f"Take over {count} {'entry' if count == 1 else 'entries'}" if count else "Take over",
                    expand=True,
                    height=theme.TOUCH + 8,
                    disabled=not count,
                    on_click=take,
                )
            ]
        ),
    )


def _value(item: Found, display: Display) -> str:
    shown = unit_shown(format_quantity(item.entry.value, item.entry.unit, display.decimal, digits=4))
    return f"{'below ' if item.below else 'at least ' if item.above else ''}{shown}"


def _says_more(item: Found) -> bool:
    return ";" in item.how or "column" in item.how


def _how(item: Found) -> str:
    """How it was understood, beyond the value."""
    more = item.how.partition("; ")[2] or item.how
    return more[:1].upper() + more[1:]
