"""Tones: a word and a sign for good, watch and bad, so that colour never speaks alone."""

from __future__ import annotations

from dataclasses import dataclass

import flet as ft

from pwa import theme
from pwa.components.words import Note


@dataclass(frozen=True, slots=True)
class Tone:
    """How a tone looks and what it is called."""

    word: str
    icon: ft.IconData
    colour: str


TONES = {
    "plain": Tone("", ft.Icons.CIRCLE_OUTLINED, ft.Colors.ON_SURFACE),
    "good": Tone("Good", ft.Icons.CHECK, ft.Colors.SECONDARY),
    "watch": Tone("Watch", ft.Icons.PRIORITY_HIGH, ft.Colors.TERTIARY),
    "bad": Tone("Problem", ft.Icons.CLOSE, ft.Colors.ERROR),
    "missing": Tone("Missing", ft.Icons.EDIT_OUTLINED, ft.Colors.ON_SURFACE_VARIANT),
    "note": Tone("Note", ft.Icons.INFO_OUTLINE, ft.Colors.ON_SURFACE_VARIANT),
    "care": Tone("Care", ft.Icons.PRIORITY_HIGH, ft.Colors.TERTIARY),
    "danger": Tone("Danger", ft.Icons.WARNING_AMBER, ft.Colors.ERROR),
}


def ToneLine(tone: str, text: str) -> ft.Control:
    """A sentence led by the sign of its tone; the tone's word is part of what is read aloud."""
    look = TONES[tone]
    if tone == "plain":
        return Note(text)
    return ft.Row(
        spacing=theme.GAP,
        vertical_alignment=ft.CrossAxisAlignment.START,
        controls=[
            ft.Icon(look.icon, size=20, color=look.colour),
            ft.Text(
                text,
                expand=True,
                color=look.colour if tone in ("watch", "bad", "care", "danger") else ft.Colors.ON_SURFACE_VARIANT,
                semantics_label=f"{look.word}: {text}" if look.word else text,
            ),
        ],
    )
