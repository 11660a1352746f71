"""One entry of the sheet: what was read, in which unit, and where it comes from."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import flet as ft

from core.job.answers import Amount
from core.job.fields import Field, field_for
from pwa import theme
from pwa.components.box import Box
from pwa.components.guard import guarded
from pwa.state.display import Display, unit_shown
from pwa.state.sheet import ChoiceState, FieldState, Sheet


@dataclass(frozen=True, slots=True)
class Provenance:
    """How a source is named and which shape it has."""

    word: str
    icon: ft.IconData
    explained: str


PROVENANCE = {
    "measured": Provenance("measured", ft.Icons.SCIENCE_OUTLINED, "measured here, with a kit or a meter"),
    "report": Provenance("from a report", ft.Icons.DESCRIPTION_OUTLINED, "read from a laboratory or supplier report"),
    "told": Provenance("told", ft.Icons.CHAT_BUBBLE_OUTLINE, "told by the customer"),
    "assumed": Provenance("assumed", ft.Icons.HELP_OUTLINE, "assumed, to be checked"),
}


@guarded
def EntryField(state: FieldState, sheet: Sheet, display: Display) -> ft.Control:
    """A field with its unit and its provenance; what is wrong stands under it."""
    field = field_for(state.key)
    if field is None:
        raise KeyError(state.key)
    return ft.Column(
        spacing=4,
        controls=[
            ft.Row(
                spacing=theme.GAP,
                vertical_alignment=ft.CrossAxisAlignment.START,
                controls=[
                    _box(field, state, sheet, display),
                    *_unit(field, state, sheet),
                ],
            ),
            _below(field, state, sheet, display),
        ],
    )


def _box(field: Field, state: FieldState, sheet: Sheet, display: Display) -> ft.Control:
    return Box(
        field.label,
        state.typed,
        lambda text: sheet.type(state.key, text),
        number=True,
        error=state.refused or (state.remark if state.level == "error" else ""),
        size=theme.TITLE * display.text_scale,
        expand=True,
    )


def _unit(field: Field, state: FieldState, sheet: Sheet) -> list[ft.Control]:
    if not field.units:
        return []
    if len(field.units) == 1:
        return [ft.Container(height=56, alignment=ft.Alignment.CENTER, content=ft.Text(unit_shown(state.unit)))]
    return [
        Menu(
            tooltip=f"Unit of {field.label}",
            shown=unit_shown(state.unit),
            options=[(unit, unit_shown(unit)) for unit in field.units],
            chosen=state.unit,
            choose=lambda unit: sheet.set_unit(state.key, unit),
            height=56,
        )
    ]


def Menu(
    *,
    tooltip: str,
    shown: str,
    options: list[tuple[str, str]],
    chosen: str,
    choose: Callable[[str], None],
    icon: ft.IconData | None = None,
    height: int = theme.TOUCH,
) -> ft.Control:
    """A button that opens a list to pick from."""
    content: list[ft.Control] = [ft.Icon(icon, size=18, color=ft.Colors.ON_SURFACE_VARIANT)] if icon else []
    content += [ft.Text(shown), ft.Icon(ft.Icons.ARROW_DROP_DOWN, color=ft.Colors.ON_SURFACE_VARIANT)]
    button = ft.PopupMenuButton(
        tooltip=tooltip,
        padding=0,
        content=ft.Container(
            height=height,
            padding=ft.Padding.only(left=10, right=2),
            border_radius=4,
            border=ft.Border.all(1, ft.Colors.OUTLINE_VARIANT),
            content=ft.Row(spacing=4, tight=True, controls=content),
        ),
        items=[
            ft.PopupMenuItem(content=words, checked=value == chosen, on_click=lambda event, value=value: choose(value))
            for value, words in options
        ],
    )
    return ft.Semantics(container=True, content=button)


def _below(field: Field, state: FieldState, sheet: Sheet, display: Display) -> ft.Control:
    if not state.typed.strip():
        return _hint(field, display)
    source = PROVENANCE[state.source]
    controls: list[ft.Control] = [
        Menu(
            tooltip=f"Where {field.label} comes from",
            shown=source.word,
            icon=source.icon,
            options=[(key, p.explained) for key, p in PROVENANCE.items()],
            chosen=state.source,
            choose=lambda value: sheet.set_source(state.key, value),
        )
    ]
    if state.remark and state.level == "warning":
        controls.append(_small(state.remark, ft.Colors.TERTIARY))
    elif state.note:
        controls.append(_small(state.note, ft.Colors.ON_SURFACE_VARIANT))
    return ft.Row(spacing=theme.GAP, controls=controls)


def _small(text: str, colour: str) -> ft.Control:
    return ft.Text(text, expand=True, theme_style=ft.TextThemeStyle.BODY_SMALL, color=colour)


def _hint(field: Field, display: Display) -> ft.Control:
    if field.default is None:
        return ft.Text(field.help, theme_style=ft.TextThemeStyle.BODY_SMALL, color=ft.Colors.ON_SURFACE_VARIANT)
    default = field.default
    amount = display.show(Amount(default.value, default.unit, field.quantity, field.role))
    return ft.Row(
        spacing=6,
        vertical_alignment=ft.CrossAxisAlignment.START,
        controls=[
            ft.Icon(PROVENANCE["assumed"].icon, size=18, color=ft.Colors.ON_SURFACE_VARIANT),
            ft.Text(
                f"Assumed {amount}. {default.why}",
                expand=True,
                theme_style=ft.TextThemeStyle.BODY_SMALL,
                color=ft.Colors.ON_SURFACE_VARIANT,
            ),
        ],
    )


@guarded
def ChoiceField(
    state: ChoiceState, label: str, help: str, options: tuple[tuple[str, str], ...], sheet: Sheet
) -> ft.Control:
    """A decision among a few named options."""
    words = dict(options)
    return ft.Column(
        spacing=4,
        controls=[
            ft.Row(
                alignment=ft.MainAxisAlignment.SPACE_BETWEEN,
                wrap=True,
                controls=[
                    ft.Text(label, theme_style=ft.TextThemeStyle.TITLE_SMALL),
                    Menu(
                        tooltip=label,
                        shown=words.get(state.value, state.value),
                        options=list(options),
                        chosen=state.value,
                        choose=lambda value: sheet.choose(state.key, value),
                        icon=None if state.made else PROVENANCE["assumed"].icon,
                    ),
                ],
            ),
            *(
                [ft.Text(help, theme_style=ft.TextThemeStyle.BODY_SMALL, color=ft.Colors.ON_SURFACE_VARIANT)]
                if help
                else []
            ),
        ],
    )
