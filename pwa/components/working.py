"""How an answer came about: what was read, then each step with its formula, numbers, result, source and validity."""

from __future__ import annotations

import flet as ft

from core.job.answers import Answer
from core.references import REFERENCES
from core.working import Step
from pwa import theme
from pwa.components.words import Heading, Note
from pwa.state.display import Display, unit_shown
from pwa.text import format_number

DIGITS = 4  # that count, in working: one more than answers show


def Working(answer: Answer, display: Display) -> ft.Control:
    """The answer, the readings it began from, then its steps in order."""
    readings = [step for step in answer.steps if "reading" in step.inputs]
    steps = [step for step in answer.steps if "reading" not in step.inputs]
    return ft.Column(
        spacing=theme.PAD,
        controls=[
            ft.Text(answer.label, theme_style=ft.TextThemeStyle.TITLE_MEDIUM),
            ft.Text(display.say(answer.words)),
            Heading("From"),
            ft.Column(spacing=theme.GAP, controls=[ReadingLine(step, display) for step in readings]),
            *[StepBlock(number, step, display) for number, step in enumerate(steps, start=1)],
        ],
    )


def ReadingLine(step: Step, display: Display) -> ft.Control:
    """One reading: as it was entered, what that is in the unit of the formulas, and where it comes from."""
    card = step.card
    read = amount(step.inputs["reading"], card.takes["reading"], display)
    reckoned = amount(step.result, card.unit, display)
    same = card.takes["reading"] == card.unit
    return ft.Column(
        spacing=0,
        controls=[
            ft.Text(f"{card.quantity} = {read}" + ("" if same else f" = {reckoned}")),
            Note(step.note),
        ],
    )


def StepBlock(number: int, step: Step, display: Display) -> ft.Control:
    """One step of working."""
    card = step.card
    lines: list[ft.Control] = [
        ft.Text(f"{number}. {card.quantity}", theme_style=ft.TextThemeStyle.TITLE_SMALL),
        ft.Text(card.expression, italic=True),
        *[
            ft.Text(f"{name.replace('_', ' ')} = {amount(value, card.takes.get(name, ''), display)}")
            for name, value in step.inputs.items()
            if _is_number(value) or isinstance(value, str)
        ],
    ]
    if _is_number(step.result):
        result = amount(step.result, card.unit, display)
        lines.append(ft.Text(f"= {result}", weight=ft.FontWeight.W_600, color=ft.Colors.PRIMARY))
    lines += [Note(text) for text in (step.note, card.validity, source_of(card.source)) if text]
    return ft.Column(spacing=2, controls=lines)


def amount(value: object, unit: str, display: Display) -> str:
    """A number of the working with its unit; a share of one is shown as a plain number."""
    if _is_number(value):
        number = format_number(float(value), digits=DIGITS, decimal=display.decimal)
        return number if unit == "1" else f"{number} {unit_shown(unit)}".rstrip()
    from core.chemistry import Solution  # numpy is in by the time anything has been worked out

    if isinstance(value, Solution):
        ions = {"Ca": value.ca, "Mg": value.mg, "Na": value.na, "Cl": value.cl, "SO4": value.so4}
        held = ", ".join(f"{name} {format_number(float(mmol), DIGITS, display.decimal)}" for name, mmol in ions.items())
        return unit_shown(f"{held} mmol/kg; pH {format_number(float(value.ph), DIGITS, display.decimal)}")
    return f"{value}" if isinstance(value, str | bool) else "as worked out above"


def _is_number(value: object) -> bool:
    """Whether it can be written as a figure; whole waters and tables stand for themselves in the words above."""
    return isinstance(value, int | float) and not isinstance(value, bool)


def source_of(key: str) -> str:
    """A source in full, with how well it was checked."""
    reference = REFERENCES.get(key)
    return f"Source: {reference.citation} ({reference.status})" if reference else f"Source: {key}"
