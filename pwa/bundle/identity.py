"""What the app is called and how its mark is drawn: one place for page, manifest, icons and splash."""

from __future__ import annotations

from pwa.theme import DARK, LIGHT

NAME = "Tapwright"
DESCRIPTION = "Hard water: from a reading to size, setting, blend, dose and cost."

CHALK = "#F4F1EA"
SLATE = "#2B3A42"
ACCENT = "#0B5D66"

# The splash stands on the ground the app will draw, so that nothing flashes when the app takes over.
COLOURS = {
    f"{theme}_{use.upper()}": getattr(colours, use)
    for theme, colours in (("LIGHT", LIGHT), ("DARK", DARK))
    for use in ("ground", "ink", "accent", "on_accent")
}

# A tap as a T, and under it a drop with a level across it: the water is measured. In a square of 96.
TAP = "M18 14h60v14H56v11H40V28H18z"
DROP = "M48 43C56 54 65 60.5 65 67.5H31C31 60.5 40 54 48 43zM31.3 71.5H64.7A17 17 0 0 1 31.3 71.5z"


def mark_svg(ink: str, drop: str, *, attributes: str = "") -> str:
    """The mark as an SVG element on a transparent ground; `ink` and `drop` are fill attributes."""
    return (
        f'<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 96 96"{attributes}>'
        f'<path {ink} d="{TAP}"/><path {drop} d="{DROP}"/></svg>'
    )
