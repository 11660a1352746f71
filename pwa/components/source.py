"""Where an entry comes from: measured with which kit, from a report, told, assumed; and what each would leave open."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import flet as ft

from core.job.answers import Phrase
from core.job.field import Field
from core.job.kits import Kit, find_kit, kits_for
from core.job.record import Entry
from pwa import theme
from pwa.components.words import Heading, Note, Tappable
from pwa.state.display import Display

DoubtOf = Callable[[str, Entry], Phrase | None]


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


def offered_kits(field: Field, own: tuple[Kit, ...]) -> tuple[Kit, ...]:
    """The kits an entry can be measured with; none where it is something wanted or chosen."""
    by_name = tuple(kit for kit in kits_for(field, own) if field.key in kit.measures)
    is_read = field.usual_source == "measured" or (field.key.startswith("sources.") and field.quantity != "flow")
    return kits_for(field, own) if is_read else by_name


def SourceSheet(
    field: Field,
    entry: Entry,
    own: tuple[Kit, ...],
    doubt_of: DoubtOf,
    display: Display,
    choose: Callable[[str, str], None],
    count: Callable[[], None] | None,
    close: Callable[[], None],
) -> ft.BottomSheet:
    """The list of ways to know an entry; `choose(source, kit)`, and `count` where readings can be counted."""

    def row(source: str, words: str, kit: str, icon: ft.IconData) -> ft.Control:
        doubt = doubt_of(field.key, replace(entry, source=source, kit=kit))
        said = display.say_as_read(doubt) if doubt else ""
        said = said.removesuffix(f": {words}.")
        held = find_kit(entry.kit, field, own) if entry.source == "measured" else None
        chosen = source == entry.source and kit == (held.words if held else "")
        return SourceRow(words, said, chosen, icon, lambda event: choose(source, kit))

    measured = PROVENANCE["measured"].icon
    kits = sorted(offered_kits(field, own), key=lambda kit: (kit.kind != "own", kit.unit != entry.unit))
    kit_rows = [row("measured", kit.words, kit.words, measured) for kit in kits]
    other_rows = [row(key, known.explained, "", known.icon) for key, known in PROVENANCE.items()]
    button = ft.FilledTonalButton(
        "Count or average", height=theme.TOUCH, on_click=lambda event: count() if count else None
    )
    return ft.BottomSheet(
        show_drag_handle=True,
        scrollable=True,
        on_dismiss=lambda event: close(),
        content=ft.Container(
            padding=ft.Padding.only(left=theme.PAD, right=theme.PAD, bottom=theme.PAD),
            content=ft.Column(
                tight=True,
                scroll=ft.ScrollMode.AUTO,
                spacing=0,
                horizontal_alignment=ft.CrossAxisAlignment.STRETCH,
                controls=[
                    Heading(f"{field.label}: where it comes from"),
                    Note("Under each: what the truth may be where this was read in that way."),
                    *(
                        [ft.Container(padding=ft.Padding.symmetric(vertical=theme.GAP), content=button)]
                        if count
                        else []
                    ),
                    *kit_rows,
                    *other_rows,
                    ft.TextButton("Close", on_click=lambda event: close()),
                ],
            ),
        ),
    )


def SourceRow(words: str, doubt: str, chosen: bool, icon: ft.IconData, tap: Callable) -> ft.Control:
    """One way to know it; the one in force is marked by a sign and a word."""
    texts: list[ft.Control] = [
        ft.Text(f"{words} · in force" if chosen else words, weight=ft.FontWeight.W_600 if chosen else None)
    ]
    if doubt:
        texts.append(ft.Text(doubt, theme_style=ft.TextThemeStyle.BODY_SMALL, color=ft.Colors.ON_SURFACE_VARIANT))
    return Tappable(
        f"{words}. {doubt}",
        tap,
        ft.Row(
            spacing=12,
            controls=[
                ft.Icon(ft.Icons.CHECK if chosen else icon, color=ft.Colors.PRIMARY),
                ft.Column(expand=True, spacing=0, controls=texts),
            ],
        ),
        selected=chosen,
        padding=ft.Padding.symmetric(vertical=12),
        border=ft.Border.only(bottom=ft.BorderSide(1, ft.Colors.OUTLINE_VARIANT)),
    )


def SourceButton(field: Field, source: str, open_: Callable) -> ft.Control:
    """The button that says where an entry comes from and opens the list."""
    known = PROVENANCE[source]
    return Tappable(
        f"Where {field.label} comes from: {known.word}",
        lambda event: open_(),
        ft.Row(
            spacing=4,
            tight=True,
            controls=[
                ft.Icon(known.icon, size=18, color=ft.Colors.ON_SURFACE_VARIANT),
                ft.Text(known.word),
                ft.Icon(ft.Icons.ARROW_DROP_DOWN, color=ft.Colors.ON_SURFACE_VARIANT),
            ],
        ),
        height=theme.TOUCH,
        padding=ft.Padding.only(left=10, right=2),
        border_radius=4,
        border=ft.Border.all(1, ft.Colors.OUTLINE_VARIANT),
    )
