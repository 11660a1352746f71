"""The app's entry: a placeholder until the screens stand."""

from __future__ import annotations

import flet as ft


def main(page: ft.Page) -> None:
    """Show a text and a number field."""
    page.title = "Tapwright"
    page.add(
        ft.SafeArea(
            ft.Column(
                [
                    ft.Text("Tapwright", size=24),
                    ft.TextField(label="Hardness", suffix="°dH", keyboard_type=ft.KeyboardType.PHONE),
                    ft.TextField(label="Name"),
                ]
            )
        )
    )


if __name__ == "__main__":
    ft.run(main)
