"""The Sources section: the list of sources, the limits for their blend; and the screen of one source."""

from __future__ import annotations

from collections.abc import Callable

import flet as ft

from core.job.answers import Part
from core.job.fields import SECTIONS, choice_for, field_for
from core.job.source_fields import (
    CHEMISTRY,
    LIMITED_BY_CHEMISTRY,
    MORE_PARAMETERS,
    MOST,
    parameter_label,
)
from pwa import theme
from pwa.components.answer import AnswerStrip
from pwa.components.box import Box
from pwa.components.entry import ChoiceField, EntryField
from pwa.components.guard import guarded
from pwa.components.menu import Menu
from pwa.components.words import Disclosure, Heading, Note, Tappable
from pwa.state.display import Display, unit_shown
from pwa.state.sheet import ChoiceState, Layout, PartState, Sheet
from pwa.state.workspace import Preferences, Workspace

SIDES = (("high", "at most"), ("low", "at least"), ("target", "wanted"))


@guarded
def SourceList(layout: Layout, sheet: Sheet, shown: Callable[[], Display]) -> ft.Control:
    """Every source with what it gives, and a way to add one."""

    def add(event: ft.ControlEvent) -> None:
        number = sheet.add_source()
        if number is not None:
            ft.context.page.navigate(f"/job/{sheet.job.id}/sources/{number}")

    rows = [
        SourceRow(
            sheet.choices[f"sources.{number}.name"],
            sheet.choices[f"sources.{number}.on"],
            sheet.parts["sources"],
            number,
            sheet,
            shown,
            key=f"source-{number}",
        )
        for number in layout.sources
    ]
    button = ft.OutlinedButton("Add a source", icon=ft.Icons.ADD, height=theme.TOUCH, on_click=add)
    return ft.Column(
        spacing=0,
        horizontal_alignment=ft.CrossAxisAlignment.STRETCH,
        controls=[
            Heading("Wells and streams"),
            *rows,
            ft.Container(height=theme.GAP),
            *([button] if len(rows) < MOST else [Note(f"{MOST} sources are as many as can be blended.")]),
        ],
    )


@guarded
def SourceRow(
    name: ChoiceState, on: ChoiceState, state: PartState, number: int, sheet: Sheet, shown: Callable[[], Display]
) -> ft.Control:
    """One source: what it gives now; a tap opens it, the switch beside it takes it off."""
    runs, words = on.value != "off", name.value or f"Source {number}"
    said = _flow_said(state.part, number, shown()) if runs else "switched off"

    def open_(event: ft.ControlEvent) -> None:
        ft.context.page.navigate(f"/job/{sheet.job.id}/sources/{number}")

    def switch(event: ft.ControlEvent) -> None:
        sheet.choose(on.key, "off" if runs else "on")

    colour = ft.Colors.PRIMARY if runs else ft.Colors.ON_SURFACE_VARIANT
    opener = Tappable(
        f"{words}: {said}",
        open_,
        ft.Row(
            controls=[
                ft.Column(expand=True, spacing=0, controls=[ft.Text(words), Note(said)]),
                ft.Icon(ft.Icons.CHEVRON_RIGHT, color=ft.Colors.ON_SURFACE_VARIANT),
            ]
        ),
        expand=True,
        padding=ft.Padding.symmetric(vertical=theme.GAP),
    )
    switcher = Tappable(
        f"Switch {words} {'off' if runs else 'on'}",
        switch,
        ft.Row(
            spacing=4,
            tight=True,
            controls=[
                ft.Icon(ft.Icons.TOGGLE_ON if runs else ft.Icons.TOGGLE_OFF_OUTLINED, size=32, color=colour),
                ft.Text("on" if runs else "off", width=28),
            ],
        ),
        height=theme.TOUCH + theme.GAP,
        alignment=ft.Alignment.CENTER,
    )
    return ft.Container(
        border=ft.Border.only(bottom=ft.BorderSide(1, ft.Colors.OUTLINE_VARIANT)),
        content=ft.Row(spacing=theme.GAP, controls=[switcher, opener]),
    )


def _flow_said(part: Part | None, number: int, display: Display) -> str:
    answer = part.answers.get(f"flow_{number}") if part is not None else None
    if answer is None:
        return "no answer yet"
    return f"{display.show(answer.amount)}. {display.say(answer.words)}"


@guarded
def Limits(layout: Layout, sheet: Sheet, display: Display) -> ft.Control:
    """What is looked at in the blend: for each a line that opens to its limits."""
    offered = [p for p in (*MORE_PARAMETERS, *LIMITED_BY_CHEMISTRY) if p not in layout.parameters]

    def take(parameter: str) -> None:
        sheet.choose("sources.parameters", " ".join((*layout.parameters, parameter)))

    more = Menu(
        tooltip="Look at something else too",
        shown="Look at something else too",
        options=[(p, parameter_label(p)) for p in offered],
        chosen="",
        choose=take,
        icon=ft.Icons.ADD,
    )
    return ft.Column(
        spacing=0,
        horizontal_alignment=ft.CrossAxisAlignment.STRETCH,
        controls=[
            Heading("Limits for the blend"),
            *[LimitRow(p, sheet.parts["sources"], sheet, display, key=f"limit-{p}") for p in layout.parameters],
            ft.Container(height=theme.GAP),
            *([ft.Row(controls=[more])] if offered else []),
        ],
    )


@guarded
def LimitRow(parameter: str, state: PartState, sheet: Sheet, display: Display) -> ft.Control:
    """One parameter: its limits in a line, its entries on a tap; redrawn with every new answer."""
    opened, set_opened = ft.use_state(False)
    keys = [f"sources.{side}.{parameter}" for side, _ in SIDES]
    keys = [key for key in keys if field_for(key) is not None]
    fields = [EntryField(sheet.fields[key], sheet, display, key=key) for key in keys] if opened else []
    return ft.Column(
        spacing=theme.GAP,
        horizontal_alignment=ft.CrossAxisAlignment.STRETCH,
        controls=[
            Disclosure(
                parameter_label(parameter),
                _limits_said(parameter, state.part, sheet, display),
                opened,
                lambda event: set_opened(not opened),
            ),
            *fields,
        ],
    )


def _limits_said(parameter: str, part: Part | None, sheet: Sheet, display: Display) -> str:
    """The limits as typed; else those of the rules, as the assessment has them."""
    typed = []
    for side, words in SIDES:
        key = f"sources.{side}.{parameter}"
        state = sheet.fields[key] if field_for(key) is not None else None
        if state is not None and state.typed.strip():
            typed.append(f"{words} {state.typed} {unit_shown(state.unit)}".rstrip())
    if typed:
        return ", ".join(typed)
    answer = part.answers.get(f"limit_{parameter}") if part is not None else None
    marks = [f"{mark.name} {display.show(mark.at)}" for mark in answer.marks] if answer is not None else []
    return f"{', '.join(marks)}, by the rules" if marks else "no limit"


@guarded
def SourcePane(sheet: Sheet, number: int, layout: Layout, workspace: Workspace, preferences: Preferences) -> ft.Control:
    """One source: the answer in sight, its name, what it gives, what is in it."""
    own = f"sources.{number}."
    display = workspace.display(sheet)
    opened, set_opened = ft.use_state(lambda: any(sheet.fields[own + name].typed for name in _rare(layout)))
    ft.use_effect(lambda: ft.context.page.run_task(workspace.look, sheet, "sources"), [number])
    if number not in layout.sources:
        return ft.Container(padding=theme.PAD, content=Note("This source is no longer part of the job."))
    fields = ["flow_high", "cost", *_looked_at(layout)]
    return ft.Column(
        expand=True,
        spacing=0,
        horizontal_alignment=ft.CrossAxisAlignment.STRETCH,
        controls=[
            AnswerStrip(sheet.parts["sources"], SECTIONS["sources"], lambda: workspace.display(sheet)),
            ft.ListView(
                expand=True,
                padding=theme.PAD,
                spacing=theme.PAD,
                controls=[
                    SourceName(sheet.choices[own + "name"], sheet),
                    _choice(sheet, own + "on"),
                    *[EntryField(sheet.fields[own + name], sheet, display, key=own + name) for name in fields],
                    Disclosure(
                        "Least flow, pH and lime",
                        "pH, alkalinity and temperature of every source give the pH and the lime of the blend",
                        opened,
                        lambda event: set_opened(not opened),
                    ),
                    *(
                        [
                            _choice(sheet, own + "may_stop"),
                            *[
                                EntryField(sheet.fields[own + name], sheet, display, key=own + name)
                                for name in _rare(layout)
                            ],
                        ]
                        if opened
                        else []
                    ),
                    ft.Row(controls=[_remover(sheet, number, workspace)]),
                ],
            ),
            _NextSource(sheet, number, layout),
        ],
    )


def _looked_at(layout: Layout) -> list[str]:
    return [name for name in layout.parameters if name != "saturation"]


def _rare(layout: Layout) -> list[str]:
    return ["flow_low", *(name for name in CHEMISTRY if name not in layout.parameters)]


def _choice(sheet: Sheet, key: str) -> ft.Control:
    choice = choice_for(key)
    if choice is None:
        raise KeyError(key)
    return ChoiceField(sheet.choices[key], choice.label, choice.help, choice.options, sheet, key=key)


@guarded
def SourceName(state: ChoiceState, sheet: Sheet) -> ft.Control:
    """What a source is called."""
    return Box("Name of the source", state.value, lambda text: sheet.choose(state.key, text))


def _remover(sheet: Sheet, number: int, workspace: Workspace) -> ft.Control:
    def remove(event: ft.ControlEvent) -> None:
        put_back = sheet.remove_source(number)

        async def undo() -> None:
            put_back()

        ft.context.page.navigate(f"/job/{sheet.job.id}/sources")
        workspace.notice.say("Source removed.", undo)

    return ft.TextButton("Remove this source", icon=ft.Icons.DELETE_OUTLINE, height=theme.TOUCH, on_click=remove)


def _NextSource(sheet: Sheet, number: int, layout: Layout) -> ft.Control:
    """On to the next source, or back to the list after the last."""
    after = next((other for other in layout.sources if other > number), None)
    name = sheet.choices[f"sources.{after}.name"].value if after is not None else ""
    label = f"Next: {name or f'Source {after}'}" if after is not None else "Back to the sources"
    route = f"/job/{sheet.job.id}/sources" + (f"/{after}" if after is not None else "")
    return ft.Container(
        padding=ft.Padding.symmetric(horizontal=theme.PAD, vertical=theme.GAP),
        border=ft.Border.only(top=ft.BorderSide(1, ft.Colors.OUTLINE_VARIANT)),
        bgcolor=ft.Colors.SURFACE,
        content=ft.Row(
            controls=[
                ft.FilledTonalButton(
                    label,
                    expand=True,
                    height=theme.TOUCH,
                    on_click=lambda event: ft.context.page.navigate(route),
                )
            ]
        ),
    )
