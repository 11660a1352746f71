"""The sign-off: what was read after commissioning, against what was promised, and what may be behind a miss."""

from __future__ import annotations

from typing import TYPE_CHECKING

import flet as ft

from core.job.answers import Amount, Answer
from core.job.signoff_fields import SECTION, SIGNOFF_FIELDS
from pwa import theme
from pwa.components.box import Box
from pwa.components.entry import EntryField
from pwa.components.guard import guarded
from pwa.components.tone import ToneLine
from pwa.components.words import Disclosure, Heading, Note
from pwa.components.working import StepBlock
from pwa.screens.handover import view
from pwa.screens.job import use_sheet
from pwa.state.display import Display
from pwa.state.sheet import ChoiceState, Sheet, Turn
from pwa.state.signoff import DATE, NAME, sign_today, signed_job
from pwa.state.workspace import Preferences, Standing, Workspace

if TYPE_CHECKING:
    from core.job.signoff_causes import Cause, Explanation

MOST_CAUSES = 4  # shown: the others weigh next to nothing


@guarded
def SignOffView(workspace: Workspace, standing: Standing, preferences: Preferences) -> ft.View:
    """The screen, with the way back to the job."""
    job_id = ft.use_route_params().get("job_id", "")
    sheet = use_sheet(workspace, job_id)
    body = ft.Container() if sheet is None else SignOffPane(sheet, workspace, standing, preferences)
    return view(f"/job/{job_id}/signoff", "Sign-off", body)


@guarded
def SignOffPane(sheet: Sheet, workspace: Workspace, standing: Standing, preferences: Preferences) -> ft.Control:
    """Readings, verdicts, causes, name and date."""
    display = workspace.display(sheet)
    ft.use_effect(lambda: sheet.say_doubts(SECTION), [standing.computing])
    often = [key for key, field in SIGNOFF_FIELDS.items() if field.often]
    controls = [
        Note("Read after commissioning. Only what was read is judged; the kit of each reading counts."),
        *_entries(often, sheet, display),
        More(sheet, display),
        Verdicts(sheet.signoff, sheet, workspace, standing),
        Heading("Signed off"),
        Words(sheet.choices[NAME], "Name", sheet),
        Words(sheet.choices[DATE], "Date, such as 2031-05-04", sheet),
        ft.Row(
            controls=[
                ft.OutlinedButton(
                    "Today", icon=ft.Icons.TODAY, height=theme.TOUCH, on_click=lambda event: sign_today(sheet)
                )
            ]
        ),
        Note("The sign-off stands on the customer’s sheet."),
    ]
    return ft.ListView(expand=True, padding=theme.PAD, spacing=theme.PAD, controls=controls)


def _entries(keys: list[str], sheet: Sheet, display: Display) -> list[ft.Control]:
    return [EntryField(sheet.fields[key], sheet, display, key=key) for key in keys]


@guarded
def More(sheet: Sheet, display: Display) -> ft.Control:
    """Readings that are needed now and then, behind one tap."""
    rare = [key for key, field in SIGNOFF_FIELDS.items() if not field.often]
    opened, set_opened = ft.use_state(lambda: any(sheet.fields[key].typed for key in rare))
    return ft.Column(
        spacing=theme.PAD,
        controls=[
            Disclosure(
                "Fewer readings" if opened else "More readings", "", opened, lambda event: set_opened(not opened)
            ),
            *(_entries(rare, sheet, display) if opened else []),
        ],
    )


@guarded
def Words(state: ChoiceState, label: str, sheet: Sheet) -> ft.Control:
    """A text that is kept in the job."""
    return Box(label, state.value, lambda text: sheet.choose(state.key, text))


@guarded
def Verdicts(turn: Turn, sheet: Sheet, workspace: Workspace, standing: Standing) -> ft.Control:
    """Each promise: met, not met, cannot tell; what may be behind a miss."""
    found = signed_job(workspace, sheet)
    display = workspace.display(sheet)
    if found is None:
        return ft.Container(height=0)
    part = found.part
    controls: list[ft.Control] = [Heading("Against what was promised")]
    controls += [ToneLine("bad", problem.text) for problem in part.problems]
    controls += [_verdict(answer, display) for answer in part.answers.values()]
    if found.result.explanation is not None:
        controls += _explained(found.result.explanation, display)
    if part.missing:
        controls.append(Heading("Not read"))
        controls += [Note(missing.text) for missing in part.missing]
    return ft.Column(spacing=12, controls=controls)


def _verdict(answer: Answer, display: Display) -> ft.Control:
    return ft.Column(
        spacing=2,
        controls=[
            ft.Row(
                alignment=ft.MainAxisAlignment.SPACE_BETWEEN,
                controls=[
                    ft.Text(answer.label, expand=True, weight=ft.FontWeight.W_600),
                    ft.Text(display.show(answer.amount), weight=ft.FontWeight.W_600),
                ],
            ),
            ToneLine(answer.tone, display.say(answer.words)),
        ],
    )


def _explained(explanation: Explanation, display: Display) -> list[ft.Control]:
    first = explanation.groups[0]
    likely = display.show(Amount(first.weight, "1", "share"))
    lead = f"{first.label}: {likely} of the weight of all causes looked at."
    if not explanation.clear:
        lead = f"No cause stands out yet. In front: {lead[:1].lower()}{lead[1:]}"
    asked = [ToneLine("missing", text) for text in explanation.next_readings]
    causes = [
        CauseBlock(cause, number, display, key=cause.key)
        for number, cause in enumerate(explanation.causes[:MOST_CAUSES], start=1)
    ]
    return [
        Heading("What may be behind it"),
        ToneLine("watch", lead),
        *([Note("To tell the causes apart:"), *asked] if asked else []),
        *causes,
    ]


@guarded
def CauseBlock(cause: Cause, number: int, display: Display) -> ft.Control:
    """One cause: what it amounts to and what to check first; what speaks for it and the arithmetic a tap away."""
    opened, set_opened = ft.use_state(False)
    share = display.show(Amount(cause.weight, "1", "share"))
    more: list[ft.Control] = []
    if opened:
        more += [ToneLine("good", text) for text in cause.speaks_for]
        more += [ToneLine("bad", text) for text in cause.speaks_against]
        more += [StepBlock(place, step, display) for place, step in enumerate(cause.steps, start=1)]
    return ft.Container(
        bgcolor=ft.Colors.SURFACE,
        border_radius=theme.RADIUS,
        border=ft.Border.all(1, ft.Colors.OUTLINE_VARIANT),
        padding=theme.PAD,
        content=ft.Column(
            spacing=theme.GAP,
            controls=[
                ft.Text(f"{number}. {cause.label} ({share})", weight=ft.FontWeight.W_600),
                ft.Text(display.say(cause.words)),
                ft.Text(f"First: {display.say(cause.first)}"),
                Disclosure("Why, and the arithmetic", "", opened, lambda event: set_opened(not opened)),
                *more,
            ],
        ),
    )
