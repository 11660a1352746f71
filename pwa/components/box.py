"""The box to type in. Every text field of the app is one of these."""

from __future__ import annotations

from collections.abc import Callable

import flet as ft

LONGEST_ERROR = 6  # lines; a sentence that says what is accepted needs room


def Box(
    label: str,
    value: str,
    change: Callable[[str], None],
    *,
    number: bool = False,
    error: str = "",
    size: float | None = None,
    weight: ft.FontWeight | None = None,
    hint: str = "",
    lines: int = 1,
    grows: bool = True,
    expand: bool = False,
    locked: bool = False,
) -> ft.Control:
    """A field that shows `value` and calls `change` with the new text; `number` asks for the decimal keypad.

    With `lines` above 1 it takes several; unless it `grows`, a longer text scrolls in it.

    It is a semantics node of its own. Without that its node takes in the text beside it, and is made anew when that
    text gives way to something to tap: the browser's input then loses what was typed.
    """
    return ft.Semantics(
        container=True,
        expand=expand,
        content=ft.TextField(
            label=label,
            value=value,
            read_only=locked,
            hint_text=hint or None,
            keyboard_type=ft.KeyboardType.PHONE if number else ft.KeyboardType.TEXT,
            autocorrect=not number,
            enable_suggestions=not number,
            multiline=lines > 1,
            min_lines=lines if lines > 1 else None,
            max_lines=None if grows else lines,
            error=error or None,
            error_max_lines=LONGEST_ERROR,
            text_style=ft.TextStyle(size=size, weight=weight),
            on_change=lambda event: change(event.control.value),
        ),
    )
