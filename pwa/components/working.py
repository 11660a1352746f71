"""How an answer came about: each step with its formula, the numbers put in, the result, the source, the validity."""

from __future__ import annotations

import flet as ft

from core.job.answers import Answer
from core.references import REFERENCES
from core.working import Step
from pwa import theme
from pwa.state.display import Display
from pwa.text import format_number


def Working(answer: Answer, display: Display) -> ft.Control:
    """The answer, then its steps in order."""
    return ft.Column(
        scroll=ft.ScrollMode.AUTO,
        spacing=theme.PAD,
        controls=[
            ft.Text(answer.label, theme_style=ft.TextThemeStyle.TITLE_MEDIUM),
            ft.Text(display.say(answer.words)),
            *[StepBlock(number, step, display) for number, step in enumerate(answer.steps, start=1)],
        ],
    )


def StepBlock(number: int, step: Step, display: Display) -> ft.Control:
    """One step of working."""
    card = step.card
    lines: list[ft.Control] = [
        ft.Text(f"{number}. {card.quantity}", theme_style=ft.TextThemeStyle.TITLE_SMALL),
        ft.Text(card.expression, italic=True),
        *[_input(name, value, card.takes.get(name, ""), display) for name, value in step.inputs.items()],
        ft.Text(f"= {_number(step.result, card.unit, display)}", weight=ft.FontWeight.W_600, color=ft.Colors.PRIMARY),
    ]
    lines += [_small(text) for text in (step.note, card.validity, _source(card.source)) if text]
    return ft.Column(spacing=2, controls=lines)


def _input(name: str, value: object, unit: str, display: Display) -> ft.Control:
    return ft.Text(f"{name.replace('_', ' ')} = {_number(value, unit, display)}")


def _number(value: object, unit: str, display: Display) -> str:
    if isinstance(value, int | float) and not isinstance(value, bool):
        return f"{format_number(float(value), digits=4, decimal=display.decimal)} {unit}".rstrip()
    return f"{value}"


def _source(key: str) -> str:
    reference = REFERENCES.get(key.partition(" ")[0])
    return f"Source: {reference.citation} ({reference.status})" if reference else f"Source: {key}"


def _small(text: str) -> ft.Control:
    return ft.Text(text, theme_style=ft.TextThemeStyle.BODY_SMALL, color=ft.Colors.ON_SURFACE_VARIANT)
