"""The sheet of a test: drops counted, titrant used, readings repeated, and the entry they come to."""

from __future__ import annotations

from collections.abc import Callable

import flet as ft

from core.job.field import Field
from core.job.kits import Kit
from core.job.record import Entry
from pwa import theme
from pwa.components.box import Box
from pwa.components.menu import Menu
from pwa.components.tone import ToneLine
from pwa.components.words import Heading, Note
from pwa.state.display import Display, unit_shown
from pwa.state.field_test import FieldTest, Outcome, kits_to_test, what_is_read
from pwa.state.sheet import FieldState
from pwa.text import format_quantity

ACROSS = 3  # boxes of readings side by side


def FieldTestSheet(
    test: FieldTest,
    field: Field,
    state: FieldState,
    own: tuple[Kit, ...],
    display: Display,
    take_over: Callable[[Entry], None],
    close: Callable[[], None],
) -> ft.BottomSheet:
    """Readings in, an entry out; `state` is that of the entry so far."""
    kits = kits_to_test(field, own)
    kit = test.kit_in_use(kits, state.unit, state.kit)
    outcome = test.outcome(kit, field, state.unit)

    def choose(words: str) -> None:
        test.begin(next(known for known in kits if known.words == words), field)

    return ft.BottomSheet(
        show_drag_handle=True,
        scrollable=True,
        on_dismiss=lambda event: close(),
        content=ft.Container(
            padding=ft.Padding.only(left=theme.PAD, right=theme.PAD, bottom=theme.PAD),
            content=ft.Column(
                tight=True,
                scroll=ft.ScrollMode.AUTO,
                spacing=12,
                horizontal_alignment=ft.CrossAxisAlignment.STRETCH,
                controls=[
                    Heading(field.label),
                    ft.Row(
                        controls=[
                            Menu(
                                tooltip="Kit",
                                shown=kit.words,
                                options=[(known.words, known.words) for known in kits],
                                chosen=kit.words,
                                choose=choose,
                            )
                        ]
                    ),
                    *_titrant(test, kit),
                    *_readings(test, kit, display),
                    Box(
                        "Dilution",
                        test.dilution,
                        _setter(test, "dilution"),
                        number=True,
                        hint="2 where it is filled up to twice its volume",
                    ),
                    *_outcome(test, kit, outcome, display),
                    _buttons(outcome, display, take_over, close),
                ],
            ),
        ),
    )


def _setter(test: FieldTest, name: str) -> Callable[[str], None]:
    return lambda typed: setattr(test, name, typed)


def _titrant(test: FieldTest, kit: Kit) -> list[ft.Control]:
    if kit.kind != "titration":
        return []
    boxes = [
        Box("Titrant, mol/L", test.strength, _setter(test, "strength"), number=True, expand=True),
        Box("Sample, mL", test.sample, _setter(test, "sample"), number=True, expand=True),
    ]
    return [ft.Row(spacing=theme.GAP, controls=boxes)]


def _readings(test: FieldTest, kit: Kit, display: Display) -> list[ft.Control]:
    what = {"drops": "Drops", "titration": "mL used"}.get(kit.kind, "Reading")
    boxes: list[ft.Control] = [
        Box(
            f"{what} {index + 1}",
            typed,
            lambda text, index=index: test.read(index, text),
            number=True,
            size=theme.TITLE * display.text_scale,
            expand=True,
        )
        for index, typed in enumerate(test.readings)
    ]
    rows: list[ft.Control] = [
        ft.Row(spacing=theme.GAP, controls=boxes[at : at + ACROSS]) for at in range(0, len(boxes), ACROSS)
    ]
    more = ft.TextButton("Read once more", icon=ft.Icons.ADD, height=theme.TOUCH, on_click=lambda event: test.again())
    return [*rows, ft.Row(controls=[more])]


def _outcome(test: FieldTest, kit: Kit, outcome: Outcome, display: Display) -> list[ft.Control]:
    if outcome.entry is None or outcome.repeat is None:
        return [ToneLine("watch" if outcome.refused else "missing", outcome.wanted)]
    found = outcome.repeat
    lines: list[ft.Control] = [
        ft.Text(
            f"= {_show(outcome.entry, display)}",
            theme_style=ft.TextThemeStyle.HEADLINE_SMALL,
            color=ft.Colors.PRIMARY,
        ),
        Note(_how(test, kit, display)),
    ]
    if len(found.readings) > 1:
        error = unit_shown(format_quantity(found.standard_error, outcome.read_in, display.decimal, digits=2))
        lines.append(Note(f"Mean of {len(found.readings)}; its standard error is {error}."))
    if found.outlier is not None:
        without = format_quantity(found.mean_without, outcome.read_in, display.decimal)
        lines += [
            ToneLine("watch", found.words),
            ft.OutlinedButton(
                f"Leave it out: {unit_shown(without)}",
                height=theme.TOUCH,
                on_click=lambda event: test.leave_out(found.outlier or 0),
            ),
        ]
    return lines


def _how(test: FieldTest, kit: Kit, display: Display) -> str:
    diluted = " × dilution" if test.dilution.strip() else ""
    if kit.kind == "drops":
        worth = unit_shown(format_quantity(kit.resolution, kit.unit, display.decimal, digits=3))
        return f"drops × {worth} a drop{diluted}"
    if kit.kind == "titration":
        return f"titrant × its strength ÷ sample{diluted}"
    return f"{what_is_read(kit)}{diluted}"


def _show(entry: Entry, display: Display) -> str:
    return unit_shown(format_quantity(entry.value, entry.unit, display.decimal, digits=4))


def _buttons(
    outcome: Outcome, display: Display, take_over: Callable[[Entry], None], close: Callable[[], None]
) -> ft.Control:
    entry = outcome.entry
    take = ft.FilledButton(
        "Take over" if entry is None else f"Take over {_show(entry, display)}",
        expand=True,
        height=theme.TOUCH + 8,
        disabled=entry is None,
        on_click=lambda event: take_over(entry) if entry is not None else None,
    )
    return ft.Row(controls=[take, ft.TextButton("Close", height=theme.TOUCH, on_click=lambda event: close())])
