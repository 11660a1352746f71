"""How sure the answers are: the band in words, the odds of the decision, and what to measure next."""

from __future__ import annotations

from collections.abc import Callable

import flet as ft

from pwa import theme
from pwa.components.guard import guarded
from pwa.components.words import Heading, Tappable
from pwa.state.display import Display
from pwa.state.sureness import Next, SureState

ENOUGH = "No single further reading would change this much."


WORKING = "Working out how sure this is …"


def sure_line(state: SureState, display: Display) -> str:
    """How sure a section's answer is, in one line for the strip; "" where nothing is doubted."""
    if state.stale or not state.known:
        return WORKING
    return next(iter([*[display.say(phrase) for phrase in state.odds], *_band(state, display)]), "")


@guarded
def HowSure(state: SureState, job_id: str, shown: Callable[[], Display]) -> ft.Control:
    """What is known of a section's sureness; greyed while it belongs to what stood there before."""
    if not state.known:
        return ft.Container(height=0)
    display = shown()
    lines = [*_band(state, display), *[display.say(phrase) for phrase in state.odds]]
    if not lines and state.next is None:
        return ft.Container(height=0)
    colour = ft.Colors.OUTLINE if state.stale else ft.Colors.ON_SURFACE
    controls: list[ft.Control] = [Heading("How sure, before the last change" if state.stale else "How sure")]
    controls += [ft.Text(line, color=colour) for line in lines]
    if state.next is not None:
        controls.append(NextTest(state.next, job_id, display, stale=state.stale))
    elif state.tried:
        controls.append(ft.Text(ENOUGH, color=colour))
    return ft.Column(spacing=6, horizontal_alignment=ft.CrossAxisAlignment.STRETCH, controls=controls)


def WhatNext(state: SureState, job_id: str, display: Display) -> list[ft.Control]:
    """The one test that would make the recommendation surer; nothing where there is none."""
    if not state.known or state.next is None:
        return []
    return [NextTest(state.next, job_id, display, stale=state.stale)]


def NextTest(advice: Next, job_id: str, display: Display, *, stale: bool) -> ft.Control:
    """What to measure next; a tap leads to its entry."""
    section = advice.field.partition(".")[0]
    words = display.say(advice.words)
    colour = ft.Colors.OUTLINE if stale else ft.Colors.ON_PRIMARY_CONTAINER
    return Tappable(
        f"Next: {words}",
        lambda event: ft.context.page.navigate(f"/job/{job_id}/{section}"),
        ft.Row(
            controls=[
                ft.Icon(ft.Icons.SCIENCE_OUTLINED, color=colour),
                ft.Text(words, expand=True, color=colour),
                ft.Icon(ft.Icons.CHEVRON_RIGHT, color=colour),
            ]
        ),
        bgcolor=ft.Colors.PRIMARY_CONTAINER,
        border_radius=theme.RADIUS,
        padding=12,
    )


def _band(state: SureState, display: Display) -> list[str]:
    if state.band is None:
        return []
    low, high = map(display.show, state.band)
    return [] if low == high else [f"In 8 of 10 cases {display.between(*state.band)}."]
