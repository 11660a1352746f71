"""The one way to show an answer: its figure, its words, and a line with its band and its limits."""

from __future__ import annotations

from collections.abc import Callable

import flet as ft

from core.job.answers import Answer, Part
from pwa import theme
from pwa.components.guard import guarded
from pwa.components.how_sure import sure_line
from pwa.components.tone import TONES, ToneLine
from pwa.components.words import Note
from pwa.state.display import Display
from pwa.state.line import Scale
from pwa.state.sheet import PartState
from pwa.state.sureness import SureState

LINE = 26.0
TRACK = 4.0
BAND = 12.0
BRIEF_FROM = 2.0  # text scale from which the strip leaves its line out: entries must stay in sight
APART = 1.1  # of the line's 2, between ticks whose names share a line


def AnswerLine(answer: Answer, display: Display) -> ft.Control | None:
    """The line under an answer: a thick stretch for the band, a mark for the answer, ticks for its limits."""
    marks = [mark for mark in answer.marks if mark.at.unit == answer.amount.unit]
    if not marks and answer.band is None:
        return None
    here = answer.amount.value
    scale = Scale.of([here, *(answer.band or ()), *(mark.at.value for mark in marks)])
    layers: list[ft.Control] = [_bar(-1.0, 1.0, TRACK, ft.Colors.OUTLINE_VARIANT)]
    if answer.band is not None:
        ends = (scale.x(answer.band[0]), scale.x(answer.band[1]))
        layers.append(_bar(*ends, BAND, ft.Colors.PRIMARY_CONTAINER, edge=ft.Colors.PRIMARY))
    layers += [_tick(scale.x(mark.at.value), 16.0, 2.0, ft.Colors.ON_SURFACE_VARIANT) for mark in marks]
    layers.append(_tick(scale.x(here), 24.0, 6.0, ft.Colors.PRIMARY))
    names = [(scale.x(mark.at.value), f"{mark.name} {display.show(mark.at)}") for mark in marks]
    return ft.Semantics(
        label=_spoken(answer, display),
        exclude_semantics=True,
        container=True,
        content=ft.Column(
            spacing=2,
            controls=[ft.Stack(height=LINE, controls=layers), *_name_rows(names)],
        ),
    )


def _bar(left: float, right: float, height: float, colour: str, edge: str = "") -> ft.Control:
    before, width, after = (round(500 * part) for part in (left + 1.0, right - left, 1.0 - right))
    return ft.Row(
        spacing=0,
        height=LINE,
        controls=[
            ft.Container(expand=max(1, before)) if before > 0 else ft.Container(),
            ft.Container(
                expand=max(1, width),
                height=height,
                bgcolor=colour,
                border_radius=height / 2,
                border=ft.Border.all(1, edge) if edge else None,
            ),
            ft.Container(expand=max(1, after)) if after > 0 else ft.Container(),
        ],
    )


def _tick(x: float, height: float, width: float, colour: str) -> ft.Control:
    return ft.Container(
        height=LINE,
        alignment=ft.Alignment(x, 0.0),
        content=ft.Container(width=width, height=height, bgcolor=colour, border_radius=width / 2),
    )


def _name_rows(names: list[tuple[float, str]]) -> list[ft.Control]:
    """The names of the ticks, on as few lines as they fit on without running into each other."""
    rows: list[list[tuple[float, str]]] = []
    for x, text in sorted(names):
        for row in rows:
            if x - row[-1][0] >= APART:
                row.append((x, text))
                break
        else:
            rows.append([(x, text)])
    return [ft.Stack(controls=[_name(x, text) for x, text in row]) for row in rows]


def _name(x: float, text: str) -> ft.Control:
    return ft.Container(
        alignment=ft.Alignment(x, 0.0),
        content=ft.Text(text, theme_style=ft.TextThemeStyle.LABEL_SMALL, color=ft.Colors.ON_SURFACE_VARIANT),
    )


def _spoken(answer: Answer, display: Display) -> str:
    parts = [f"{answer.label} {display.show(answer.amount)}"]
    if answer.band is not None:
        low, high = (
            display.show(type(answer.amount)(end, answer.amount.unit, answer.amount.quantity)) for end in answer.band
        )
        parts.append(f"between {low} and {high}")
    parts += [f"{mark.name} {display.show(mark.at)}" for mark in answer.marks]
    return ", ".join(parts)


def Figure(answer: Answer, display: Display) -> ft.Control:
    """The figure of an answer with its unit, large."""
    number, unit = display.figure(answer.amount)
    return ft.Row(
        spacing=6,
        tight=True,
        vertical_alignment=ft.CrossAxisAlignment.END,
        controls=[
            ft.Text(number, theme_style=ft.TextThemeStyle.DISPLAY_SMALL, color=ft.Colors.PRIMARY),
            ft.Container(padding=ft.Padding.only(bottom=5), content=ft.Text(unit, color=ft.Colors.ON_SURFACE_VARIANT)),
        ],
    )


def AnswerBlock(part: Part, display: Display, *, brief: bool = False) -> ft.Control:
    """A part's headline: figure, words, line; or what is missing for it. `brief` leaves room for entries below."""
    headline = part.headline
    lacks = [ToneLine("missing", missing.text) for missing in part.missing]
    if headline is None:
        lacks += [ToneLine("bad", problem.text) for problem in part.problems if problem.level == "error"]
        return ft.Column(spacing=4, controls=lacks[:1] if brief else lacks or [ToneLine("missing", "No answer yet.")])
    words = display.say(headline.words)
    tone = TONES[headline.tone]
    controls: list[ft.Control] = [
        ft.Row(
            alignment=ft.MainAxisAlignment.SPACE_BETWEEN,
            vertical_alignment=ft.CrossAxisAlignment.CENTER,
            controls=[Figure(headline, display), *([_badge(headline.tone)] if tone.word else [])],
        ),
        ft.Text(
            words,
            theme_style=ft.TextThemeStyle.BODY_LARGE,
            max_lines=2 if brief else None,
            overflow=ft.TextOverflow.ELLIPSIS if brief else ft.TextOverflow.CLIP,
        ),
    ]
    if not brief:  # its room is kept, so that nothing moves under the thumb when the band arrives
        controls.append(AnswerLine(headline, display) or ft.Container(height=LINE))
    return ft.Column(spacing=2, controls=[*controls, *lacks])


def spoken(part: Part, display: Display) -> str:
    """A part's headline in one breath, for a screen reader."""
    headline = part.headline
    if headline is None:
        return " ".join(missing.text for missing in part.missing) or "nothing to answer yet"
    return f"{display.show(headline.amount)}. {display.say(headline.words)}"


def _badge(name: str) -> ft.Control:
    tone = TONES[name]
    return ft.Row(
        spacing=4,
        tight=True,
        controls=[ft.Icon(tone.icon, size=20, color=tone.colour), ft.Text(tone.word, color=tone.colour)],
    )


@guarded
def AnswerStrip(
    state: PartState, title: str, shown: Callable[[], Display], sure: SureState | None = None
) -> ft.Control:
    """The strip that stays in sight while entries change: the section's headline, and how sure it is.

    `shown` says in which units; `sure` is None for a section of which that is not worked out.
    """
    part, display = state.part, shown()
    brief = display.text_scale >= BRIEF_FROM
    content = ft.Text("Getting the calculator ready …") if part is None else AnswerBlock(part, display, brief=brief)
    if sure is not None and not brief and part is not None and part.headline is not None:
        content = ft.Column(spacing=2, controls=[content, Note(sure_line(sure, display) or " ")])
    return ft.Container(
        bgcolor=ft.Colors.SURFACE_CONTAINER_LOWEST,
        padding=ft.Padding.symmetric(horizontal=theme.PAD, vertical=theme.GAP),
        border=ft.Border.only(bottom=ft.BorderSide(2, ft.Colors.PRIMARY)),
        content=ft.Semantics(live_region=True, container=True, label=f"{title}: answer", content=content),
    )
