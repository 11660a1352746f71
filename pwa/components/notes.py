"""What stands under the answers: what was assumed, what to be careful about, and working a tap away."""

from __future__ import annotations

from collections.abc import Callable

import flet as ft

from core.job.answers import Answer, Assumption, Part
from core.job.fields import ON_DEMAND, choice_for, field_for
from core.references import REFERENCES
from pwa import theme
from pwa.components.guard import guarded
from pwa.components.picture import BarPicture
from pwa.components.tone import ToneLine
from pwa.components.words import Heading, Tappable
from pwa.components.working import Working
from pwa.state.display import Display
from pwa.state.sheet import PartState, Sheet


@guarded
def Answers(
    state: PartState, shown: Callable[[], Display], title: str = "Answers, each opening to its working"
) -> ft.Control:
    """All answers of a part, each opening to its working."""
    opened, set_opened = ft.use_state("")
    part, display = state.part, shown()
    answer = part.answers.get(opened) if part and opened else None
    ft.use_dialog(_working_sheet(answer, display, lambda: set_opened("")) if answer else None)
    if part is None or not part.answers:
        return ft.Container(height=0)
    return ft.Column(
        spacing=0,
        controls=[Heading(title), *[AnswerRow(answer, display, set_opened) for answer in part.answers.values()]],
    )


@guarded
def Remarks(state: PartState, shown: Callable[[], Display]) -> ft.Control:
    """What to be careful about in a part, and what was assumed for it."""
    part, display = state.part, shown()
    if part is None:
        return ft.Container(height=0)
    return ft.Column(spacing=theme.PAD, controls=[*_cautions(part), *_assumptions(part, display)])


@guarded
def Further(
    state: PartState,
    title: str,
    sheet: Sheet,
    shown: Callable[[], Display],
    work_out: Callable[[Sheet, str], None],
) -> ft.Control:
    """A part that a section shows after its own answers: its picture and its answers, or the button that makes it."""
    part = state.part
    if part is None and state.key in ON_DEMAND:
        button = ft.OutlinedButton(
            ON_DEMAND[state.key], height=theme.TOUCH, on_click=lambda event: work_out(sheet, state.key)
        )
        return ft.Column(controls=[Heading(title), button])
    if part is not None and part.missing:
        lacks = [ToneLine("missing", missing.text) for missing in part.missing]
        return ft.Column(controls=[Heading(title), *lacks])
    if part is None or not part.answers:
        return ft.Container(height=0)
    picture = [BarPicture(part.picture, sheet, shown)] if part.picture else []
    return ft.Column(spacing=theme.PAD, controls=[Answers(state, shown, title), *picture])


def _working_sheet(answer: Answer, display: Display, close) -> ft.BottomSheet:
    return ft.BottomSheet(
        show_drag_handle=True,
        scrollable=True,
        on_dismiss=lambda event: close(),
        content=ft.Container(
            padding=ft.Padding.only(left=theme.PAD, right=theme.PAD, bottom=theme.PAD),
            content=ft.Column(
                tight=True,
                scroll=ft.ScrollMode.AUTO,
                controls=[Working(answer, display), ft.TextButton("Close", on_click=lambda event: close())],
            ),
        ),
    )


def AnswerRow(answer: Answer, display: Display, open_) -> ft.Control:
    """One answer in a list: its name, its number, its words; a tap opens the working."""
    return Tappable(
        f"{answer.label}: {display.show(answer.amount)}. Show working",
        lambda event: open_(answer.key),
        ft.Column(
            spacing=2,
            controls=[
                ft.Row(
                    alignment=ft.MainAxisAlignment.SPACE_BETWEEN,
                    controls=[
                        ft.Text(answer.label, expand=True),
                        ft.Text(display.show(answer.amount), weight=ft.FontWeight.W_600),
                        ft.Icon(ft.Icons.CHEVRON_RIGHT, color=ft.Colors.ON_SURFACE_VARIANT),
                    ],
                ),
                ToneLine(answer.tone, display.say(answer.words)),
            ],
        ),
        padding=ft.Padding.symmetric(vertical=12),
        border=ft.Border.only(bottom=ft.BorderSide(1, ft.Colors.OUTLINE_VARIANT)),
    )


def _cautions(part: Part) -> list[ft.Control]:
    if not part.cautions:
        return []
    return [
        Heading("Mind"),
        *[ToneLine(caution.level, f"{caution.text} {_cited(caution.source)}") for caution in part.cautions],
    ]


def _assumptions(part: Part, display: Display) -> list[ft.Control]:
    if not part.assumptions:
        return []
    return [
        Heading("Assumed, not measured"),
        *[ToneLine("note", _assumed(assumption, display)) for assumption in part.assumptions],
    ]


def _assumed(assumption: Assumption, display: Display) -> str:
    named = field_for(assumption.field) or choice_for(assumption.field)
    name = named.label if named else "Other ions"
    value = f": {display.show(assumption.amount)}." if assumption.amount else "."
    return f"{name}{value} {assumption.why} {_cited(assumption.source)}"


def _cited(key: str) -> str:
    reference = REFERENCES.get(key)
    return f"[{reference.citation}, {reference.status}]" if reference else f"[{key}]"
