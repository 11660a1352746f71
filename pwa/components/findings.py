"""What the checks of the whole job find odd, each with what to do next and the way to its entry."""

from __future__ import annotations

import flet as ft

from core.job.answers import Problem
from core.job.fields import field_for
from pwa import theme
from pwa.components.words import Heading, Note, Tappable
from pwa.state.display import formulas_shown
from pwa.state.sheet import Findings

MOST = 4  # shown on the sheet; all stand beside their entries


def LookAgain(findings: Findings, job_id: str) -> list[ft.Control]:
    """The list on the sheet; nothing where all is well."""
    rows = findings.rows
    if not rows:
        return []
    more = [Note(f"And {len(rows) - MOST} more, beside their entries.")] if len(rows) > MOST else []
    listed = ft.Container(
        bgcolor=ft.Colors.SURFACE,
        border_radius=theme.RADIUS,
        border=ft.Border.all(1, ft.Colors.TERTIARY),
        padding=theme.PAD,
        content=ft.Column(
            spacing=0,
            horizontal_alignment=ft.CrossAxisAlignment.STRETCH,
            controls=[Heading("Look again"), *[_row(problem, job_id) for problem in rows[:MOST]], *more],
        ),
    )
    return [listed]


def _row(problem: Problem, job_id: str) -> ft.Control:
    known = field_for(problem.field)
    label = known.label if known else problem.field
    section = problem.field.partition(".")[0]
    return Tappable(
        f"{label}: {problem.text}",
        lambda event: ft.context.page.navigate(f"/job/{job_id}/{section}"),
        ft.Row(
            spacing=theme.GAP,
            vertical_alignment=ft.CrossAxisAlignment.START,
            controls=[
                ft.Icon(ft.Icons.PRIORITY_HIGH, size=20, color=ft.Colors.TERTIARY),
                ft.Column(
                    expand=True,
                    spacing=0,
                    controls=[
                        ft.Text(label, weight=ft.FontWeight.W_600),
                        ft.Text(
                            formulas_shown(problem.text),
                            theme_style=ft.TextThemeStyle.BODY_SMALL,
                            color=ft.Colors.ON_SURFACE_VARIANT,
                        ),
                    ],
                ),
                ft.Icon(ft.Icons.CHEVRON_RIGHT, color=ft.Colors.ON_SURFACE_VARIANT),
            ],
        ),
        padding=ft.Padding.symmetric(vertical=theme.GAP),
    )
