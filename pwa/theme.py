"""Design tokens: colours, sizes, type. Screens and components use these names and no literal colour or size.

Chalk and slate with one deep accent. Amber and red stand only beside a word and a sign. Every pair of text and
ground below was chosen for a contrast of 4.5 or more, in the contrast themes of 7 or more; a test computes it.
"""

from __future__ import annotations

from dataclasses import dataclass

import flet as ft

FONT = "Roboto"

# Spacing and touch, logical pixels
GAP = 8
PAD = 16
TOUCH = 48  # the least height of anything to be tapped
RADIUS = 10
SHEET_WIDTH = 420  # of the sheet pane on a wide screen
CODE = 320  # side of a QR code
READING_WIDTH = 720  # a line of text is never longer than this
WIDE = 840  # from here on, sheet and section stand side by side


@dataclass(frozen=True, slots=True)
class Palette:
    """The colours of one theme."""

    ground: str
    card: str
    raised: str  # the strip, the field
    ink: str
    quiet: str  # secondary text
    line: str
    edge: str  # outline of a field: seen in the sun
    accent: str
    on_accent: str
    accent_soft: str
    on_accent_soft: str
    good: str
    watch: str
    bad: str


LIGHT = Palette(
    ground="#F3F1EB",
    card="#FCFBF8",
    raised="#FFFFFF",
    ink="#1D2730",
    quiet="#4E5B66",
    line="#D9D6CC",
    edge="#7C8790",
    accent="#134E5E",
    on_accent="#FFFFFF",
    accent_soft="#DCE8EA",
    on_accent_soft="#0F3D4A",
    good="#1F6242",
    watch="#8A5200",
    bad="#A3241B",
)
DARK = Palette(
    ground="#14191D",
    card="#1C2328",
    raised="#232B31",
    ink="#ECEAE4",
    quiet="#B3BCC3",
    line="#333E46",
    edge="#8593A0",
    accent="#8CC7D6",
    on_accent="#06272F",
    accent_soft="#1F3F49",
    on_accent_soft="#CFE9EF",
    good="#84CFA6",
    watch="#F0B860",
    bad="#FF9C90",
)
LIGHT_CONTRAST = Palette(
    ground="#FFFFFF",
    card="#FFFFFF",
    raised="#FFFFFF",
    ink="#000000",
    quiet="#1E2A33",
    line="#59646D",
    edge="#000000",
    accent="#003543",
    on_accent="#FFFFFF",
    accent_soft="#D6EAF0",
    on_accent_soft="#00232D",
    good="#00401F",
    watch="#5A3300",
    bad="#7A0A04",
)
DARK_CONTRAST = Palette(
    ground="#000000",
    card="#000000",
    raised="#0A0F12",
    ink="#FFFFFF",
    quiet="#E3E8EC",
    line="#8C97A0",
    edge="#FFFFFF",
    accent="#A8E6F5",
    on_accent="#00171D",
    accent_soft="#0F333D",
    on_accent_soft="#E3F8FD",
    good="#A9F0C6",
    watch="#FFD48A",
    bad="#FFC2BA",
)


# Type: sizes at a text scale of 1
FIGURE = 30.0  # the one figure of an answer
LEAD = 20.0  # the words of an answer
TITLE = 18.0
BODY = 16.0
SMALL = 14.0
SCALES = {"normal": 1.0, "large": 1.3, "largest": 2.0}


def _text_theme(colours: Palette, scale: float) -> ft.TextTheme:
    bold = ft.FontWeight.W_600

    def style(size: float, weight: ft.FontWeight = ft.FontWeight.W_400) -> ft.TextStyle:
        return ft.TextStyle(size=size * scale, weight=weight, font_family=FONT, height=1.3, color=colours.ink)

    return ft.TextTheme(
        display_small=style(FIGURE, bold),
        headline_small=style(LEAD, bold),
        title_large=style(LEAD, bold),
        title_medium=style(TITLE, bold),
        title_small=style(BODY, bold),
        body_large=style(BODY),
        body_medium=style(BODY),
        body_small=style(SMALL),
        label_large=style(BODY, ft.FontWeight.W_500),
        label_medium=style(SMALL),
        label_small=style(SMALL),
    )


def palette(*, dark: bool, contrast: bool) -> Palette:
    """The colours for a choice of ground and contrast."""
    if contrast:
        return DARK_CONTRAST if dark else LIGHT_CONTRAST
    return DARK if dark else LIGHT


def theme(colours: Palette, scale: float) -> ft.Theme:
    """The Flet theme that carries a palette and a text size."""
    return ft.Theme(
        font_family=FONT,
        use_material3=True,
        visual_density=ft.VisualDensity.STANDARD,
        scaffold_bgcolor=colours.ground,
        color_scheme=ft.ColorScheme(
            primary=colours.accent,
            on_primary=colours.on_accent,
            primary_container=colours.accent_soft,
            on_primary_container=colours.on_accent_soft,
            secondary=colours.accent,
            on_secondary=colours.on_accent,
            secondary_container=colours.accent_soft,
            on_secondary_container=colours.on_accent_soft,
            tertiary=colours.watch,
            on_tertiary=colours.ground,
            error=colours.bad,
            on_error=colours.ground,
            surface=colours.card,
            on_surface=colours.ink,
            on_surface_variant=colours.quiet,
            surface_container_lowest=colours.raised,
            surface_container_low=colours.card,
            surface_container=colours.card,
            surface_container_high=colours.raised,
            surface_container_highest=colours.raised,
            surface_tint=colours.card,
            outline=colours.edge,
            outline_variant=colours.line,
            inverse_surface=colours.ink,
            on_inverse_surface=colours.ground,
            inverse_primary=colours.accent_soft,
            shadow="#33000000",
        ),
        text_theme=_text_theme(colours, scale),
    )
