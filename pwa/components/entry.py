"""One entry of the sheet: what was read, in which unit, and where it comes from."""

from __future__ import annotations

from collections.abc import Callable

import flet as ft

from core.job.answers import Amount
from core.job.fields import Field, field_for
from core.job.record import Entry
from pwa import theme
from pwa.components.box import Box
from pwa.components.field_test import FieldTestSheet
from pwa.components.guard import guarded
from pwa.components.menu import Menu
from pwa.components.source import PROVENANCE, SourceButton, SourceSheet, offered_kits
from pwa.components.tone import ToneLine
from pwa.state.display import Display, formulas_shown, unit_shown
from pwa.state.field_test import FieldTest, kits_to_test
from pwa.state.sheet import ChoiceState, FieldState, Sheet

Opener = Callable[[str], None]


@guarded
def EntryField(state: FieldState, sheet: Sheet, display: Display) -> ft.Control:
    """A field with its unit and its provenance; what is wrong stands under it."""
    field = field_for(state.key)
    if field is None:
        raise KeyError(state.key)
    opened, open_ = ft.use_state("")  # "source" or "test": the sheet that lies over the screen
    test, _ = ft.use_state(FieldTest)
    ft.use_dialog(_laid_over(opened, open_, test, field, state, sheet, display))
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
            *_below(field, state, sheet, display, open_),
        ],
    )


def _laid_over(
    opened: str, open_: Opener, test: FieldTest, field: Field, state: FieldState, sheet: Sheet, display: Display
) -> ft.BottomSheet | None:
    own = sheet.own_kits

    def close() -> None:
        open_("")

    def choose(source: str, kit: str) -> None:
        sheet.set_source(state.key, source, kit)
        close()

    def take_over(entry: Entry) -> None:
        sheet.put_entry(state.key, entry)
        close()

    countable = kits_to_test(field, own)
    if opened == "source":
        entry = Entry(None, state.unit, state.source, state.kit)
        entry = sheet.job.entries.get(state.key, entry)
        count = (lambda: open_("test")) if countable else None
        return SourceSheet(field, entry, own, sheet.doubt_of, display, choose, count, close)
    if opened == "test" and countable:
        return FieldTestSheet(test, field, state, own, display, take_over, close)
    return None


def _box(field: Field, state: FieldState, sheet: Sheet, display: Display) -> ft.Control:
    return Box(
        field.label,
        state.typed,
        lambda text: sheet.type(state.key, text),
        number=True,
        error=state.refused or (state.remark if state.level == "error" else ""),
        size=theme.TITLE * display.text_scale,
        expand=True,
        locked=sheet.locked,
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


def _below(field: Field, state: FieldState, sheet: Sheet, display: Display, open_: Opener) -> list[ft.Control]:
    if not state.typed.strip():
        if not any(kit.kind == "drops" for kit in kits_to_test(field, sheet.own_kits)):
            return [_hint(field, display)]
        count = ft.TextButton(
            "Count drops",
            tooltip=f"Count drops: {field.label}",
            height=theme.TOUCH,
            on_click=lambda event: open_("test"),
        )
        return [ft.Row(spacing=theme.GAP, controls=[ft.Container(expand=True, content=_hint(field, display)), count])]
    said = display.say_as_read(state.doubt) if state.doubt else ""
    words = " ".join(filter(None, (state.note, said)))
    beside = [_small(words, ft.Colors.ON_SURFACE_VARIANT)] if words else []
    origin = [] if field.chosen else [_source(field, state, sheet, open_)]
    controls: list[ft.Control] = [ft.Row(spacing=theme.GAP, controls=[*origin, *beside])] if origin or beside else []
    if state.remark and state.level == "warning":
        controls.append(ToneLine("watch", state.remark))
    controls += [ToneLine("watch", formulas_shown(text)) for text in state.odd if text != state.remark]
    return controls


def _source(field: Field, state: FieldState, sheet: Sheet, open_: Opener) -> ft.Control:
    if offered_kits(field, sheet.own_kits):
        return SourceButton(field, state.source, lambda: open_("source"))
    source = PROVENANCE[state.source]
    return Menu(
        tooltip=f"Where {field.label} comes from",
        shown=source.word,
        icon=source.icon,
        options=[(key, p.explained) for key, p in PROVENANCE.items()],
        chosen=state.source,
        choose=lambda value: sheet.set_source(state.key, value),
    )


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
