"""The user's own kits: the list, and the form to add, change or remove one."""

from __future__ import annotations

from typing import Any

import flet as ft

from core.errors import InputError
from core.job.fields import FIELDS
from core.job.kits import Kit
from pwa import theme
from pwa.components.box import Box
from pwa.components.guard import guarded
from pwa.components.menu import Menu
from pwa.components.tone import ToneLine
from pwa.components.words import Heading, Note, Tappable
from pwa.state.display import unit_shown
from pwa.state.kit_form import MEASURES, WAYS, KitForm

WORDS = "Offered first beside the entries they measure. The doubt of each reading follows from what you say here."


@guarded
def OwnKits(preferences: Any, workspace: Any) -> ft.Control:
    """The list of kits; a tap opens one."""
    own, decimal = preferences.own_kits, preferences.settings.decimal
    form, _ = ft.use_state(KitForm)
    opened, set_opened = ft.use_state(False)

    def edit(kit: Kit | None) -> None:
        form.begin(kit, decimal)
        set_opened(True)

    ft.use_dialog(_sheet(form, own, workspace, lambda: set_opened(False)) if opened else None)
    rows = [
        Tappable(
            f"{kit.words}: change",
            lambda event, kit=kit: edit(kit),
            ft.Row(
                controls=[
                    ft.Icon(ft.Icons.SCIENCE_OUTLINED, color=ft.Colors.ON_SURFACE_VARIANT),
                    ft.Column(expand=True, spacing=0, controls=[ft.Text(kit.words), Note(_measured(kit))]),
                    ft.Icon(ft.Icons.CHEVRON_RIGHT, color=ft.Colors.ON_SURFACE_VARIANT),
                ]
            ),
            padding=ft.Padding.symmetric(vertical=12),
            border=ft.Border.only(bottom=ft.BorderSide(1, ft.Colors.OUTLINE_VARIANT)),
        )
        for kit in own
    ]
    add = ft.OutlinedButton("Add a kit", icon=ft.Icons.ADD, height=theme.TOUCH, on_click=lambda event: edit(None))
    return ft.Column(spacing=theme.GAP, controls=[Heading("Own kits"), Note(WORDS), *rows, ft.Row(controls=[add])])


def _measured(kit: Kit) -> str:
    known = [FIELDS[MEASURES[name]].label for name in kit.measures if name in MEASURES]
    return f"{', '.join(known)}; {WAYS.get(kit.kind, kit.kind)}"


def _sheet(form: KitForm, own: tuple[Kit, ...], workspace: Any, close) -> ft.BottomSheet:
    page = ft.context.page
    refusal, kit = "", None
    try:
        kit = form.kit(own)
    except InputError as error:
        refusal = str(error)

    def save(event: ft.ControlEvent) -> None:
        if kit is not None:
            page.run_task(workspace.keep_kit, kit, form.editing)
            close()

    def remove(event: ft.ControlEvent) -> None:
        page.run_task(workspace.remove_kit, form.editing)
        close()

    save_button = ft.FilledButton(
        "Keep this kit", expand=True, height=theme.TOUCH + 8, disabled=kit is None, on_click=save
    )
    remove_button = ft.TextButton("Remove", height=theme.TOUCH, on_click=remove)
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
                    Heading("Change the kit" if form.editing else "A kit of your own"),
                    *_form(form),
                    *([ToneLine("missing", refusal)] if refusal else []),
                    ft.Row(controls=[save_button, *([remove_button] if form.editing else [])]),
                    ft.TextButton("Close", height=theme.TOUCH, on_click=lambda event: close()),
                ],
            ),
        ),
    )


def _form(form: KitForm) -> list[ft.Control]:
    def edit(name: str):
        return lambda typed: setattr(form, name, typed)

    what = [(key, FIELDS[field].label) for key, field in MEASURES.items()]
    menus = [
        Menu(
            tooltip="It measures",
            shown=dict(what)[form.measures],
            options=what,
            chosen=form.measures,
            choose=form.measure,
        ),
        Menu(
            tooltip="How it is read",
            shown=WAYS[form.way],
            options=list(WAYS.items()),
            chosen=form.way,
            choose=edit("way"),
        ),
    ]
    if form.units():
        units = [(unit, unit_shown(unit)) for unit in form.units()]
        menus.append(
            Menu(tooltip="Unit", shown=unit_shown(form.unit), options=units, chosen=form.unit, choose=edit("unit"))
        )
    unit = unit_shown(form.unit) if form.units() else ""
    boxes = {
        "drops": [Box(f"A drop is worth, {unit}".rstrip(", "), form.drop, edit("drop"), number=True)],
        "strip": [Box(f"Steps, {unit}".rstrip(", "), form.steps, edit("steps"), hint="0 25 50 120 250 425")],
        "meter": [Box(f"Give or take, {unit}".rstrip(", "), form.plus_minus, edit("plus_minus"), number=True)],
    }[form.way]
    share = (
        []
        if form.way == "strip"
        else [Box("Give or take, % of the reading", form.percent, edit("percent"), number=True)]
    )
    return [
        Box("Name", form.name, edit("name")),
        ft.Row(wrap=True, spacing=theme.GAP, run_spacing=theme.GAP, controls=menus),
        *boxes,
        *share,
    ]
