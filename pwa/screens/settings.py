"""Settings: units, decimal sign, rules, looks, own kits, and the backup."""

from __future__ import annotations

import flet as ft

from core.job.fields import CHOICES
from pwa import theme
from pwa.components.guard import guarded
from pwa.components.menu import Menu
from pwa.components.own_kits import OwnKits
from pwa.components.words import Disclosure
from pwa.state.display import unit_shown
from pwa.state.settings import Settings
from pwa.state.unit_sets import CHOOSABLE, UNIT_SET_NAMES, own_units, units_to_choose, with_own_unit
from pwa.state.workspace import Preferences, Workspace

DECIMALS = {".": "Point: 12.5", ",": "Comma: 12,5"}
GROUNDS = {"system": "As the device", "light": "Light", "dark": "Dark"}
CONTRASTS = {False: "Usual", True: "High, for the sun"}
AS_THE_SET = "as the set"
TEXTS = {"normal": "Usual", "large": "Large", "largest": "Twice the size"}


@guarded
def SettingsView(workspace: Workspace, preferences: Preferences) -> ft.View:
    """The settings, each kept as it is changed."""
    settings = preferences.settings
    regions = {"": "asked in each job", **dict(CHOICES["softener.region"].options[1:])}
    rows = [
        SettingRow("Units of the answers", "unit_set", settings.unit_set, UNIT_SET_NAMES, workspace),
        OwnUnits(settings, workspace),
        SettingRow("New jobs by the rules of", "region", settings.region, regions, workspace),
        SettingRow("Decimal sign", "decimal", settings.decimal, DECIMALS, workspace),
        SettingRow("Ground", "ground", settings.ground, GROUNDS, workspace),
        SettingRow("Contrast", "contrast", settings.contrast, CONTRASTS, workspace),
        SettingRow("Text size", "text", settings.text, TEXTS, workspace),
    ]
    return ft.View(
        route="/settings",
        padding=0,
        appbar=ft.AppBar(title=ft.Text("Settings"), bgcolor=ft.Colors.SURFACE),
        controls=[
            ft.SafeArea(
                expand=True,
                content=ft.ListView(
                    expand=True,
                    padding=theme.PAD,
                    spacing=theme.PAD,
                    controls=[*rows, OwnKits(preferences, workspace), *_backup(workspace)],
                ),
            )
        ],
    )


@guarded
def OwnUnits(settings: Settings, workspace: Workspace) -> ft.Control:
    """Units that go before those of the set, quantity by quantity."""
    opened, set_opened = ft.use_state(False)
    own = own_units(settings.own_units)
    words = f"{len(own)} chosen, before those of the set" if own else "Each as the set has it"

    def row(name: str) -> ft.Control:
        def choose(unit: str) -> None:
            ft.context.page.run_task(workspace.set, own_units=with_own_unit(settings.own_units, name, unit))

        label, chosen = CHOOSABLE[name][0], own.get(name, "")
        options = [("", AS_THE_SET), *[(unit, unit_shown(unit)) for unit in units_to_choose(name)]]
        return _row(
            label, Menu(tooltip=label, shown=dict(options)[chosen], options=options, chosen=chosen, choose=choose)
        )

    rows = [row(name) for name in CHOOSABLE] if opened else []
    return ft.Column(
        spacing=theme.GAP,
        horizontal_alignment=ft.CrossAxisAlignment.STRETCH,
        controls=[Disclosure("Units one by one", words, opened, lambda event: set_opened(not opened)), *rows],
    )


def _row(label: str, menu: ft.Control) -> ft.Control:
    return ft.Row(
        wrap=True,
        alignment=ft.MainAxisAlignment.SPACE_BETWEEN,
        controls=[ft.Text(label, theme_style=ft.TextThemeStyle.TITLE_SMALL), menu],
    )


def SettingRow(label: str, name: str, value, options: dict, workspace: Workspace) -> ft.Control:
    """One setting with its options."""

    def choose(chosen) -> None:
        ft.context.page.run_task(workspace.set, **{name: chosen})

    shown = options.get(value, f"{value}")
    return _row(label, Menu(tooltip=label, shown=shown, options=list(options.items()), chosen=value, choose=choose))


def _backup(workspace: Workspace) -> list[ft.Control]:
    return [
        ft.Divider(),
        ft.Text("Backup", theme_style=ft.TextThemeStyle.TITLE_MEDIUM),
        ft.Text(
            "Jobs are kept on this device only. A browser may clear them when the app is not used for long: "
            "save a backup now and then.",
            color=ft.Colors.ON_SURFACE_VARIANT,
        ),
        ft.FilledButton("Save a backup", icon=ft.Icons.DOWNLOAD, height=theme.TOUCH + 8, on_click=workspace.back_up),
        ft.OutlinedButton(
            "Restore from a backup",
            icon=ft.Icons.FILE_OPEN_OUTLINED,
            height=theme.TOUCH + 8,
            on_click=workspace.open_file,
        ),
    ]
