"""Settings: units, decimal sign, looks, and the backup."""

from __future__ import annotations

import flet as ft

from pwa import theme
from pwa.components.guard import guarded
from pwa.components.menu import Menu
from pwa.state.display import UNIT_SET_NAMES
from pwa.state.workspace import Preferences, Workspace

DECIMALS = {".": "Point: 12.5", ",": "Comma: 12,5"}
GROUNDS = {"system": "As the device", "light": "Light", "dark": "Dark"}
CONTRASTS = {False: "Usual", True: "High, for the sun"}
TEXTS = {"normal": "Usual", "large": "Large", "largest": "Twice the size"}


@guarded
def SettingsView(workspace: Workspace, preferences: Preferences) -> ft.View:
    """The settings, each kept as it is changed."""
    settings = preferences.settings
    rows = [
        SettingRow("Units of the answers", "unit_set", settings.unit_set, UNIT_SET_NAMES, workspace),
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
                    expand=True, padding=theme.PAD, spacing=theme.PAD, controls=[*rows, *_backup(workspace)]
                ),
            )
        ],
    )


def SettingRow(label: str, name: str, value, options: dict, workspace: Workspace) -> ft.Control:
    """One setting with its options."""

    def choose(chosen) -> None:
        ft.context.page.run_task(workspace.set, **{name: chosen})

    return ft.Row(
        wrap=True,
        alignment=ft.MainAxisAlignment.SPACE_BETWEEN,
        controls=[
            ft.Text(label, theme_style=ft.TextThemeStyle.TITLE_SMALL),
            Menu(tooltip=label, shown=options[value], options=list(options.items()), chosen=value, choose=choose),
        ],
    )


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
