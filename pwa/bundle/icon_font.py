"""Cuts the icon font to the icons in use: 1.3 MB become a few KB."""

from __future__ import annotations

from collections.abc import Iterable
from pathlib import Path

from fontTools import subset
from fontTools.ttLib import TTFont

# Flutter's own controls draw these without being told.
DRAWN_BY_CONTROLS = (
    "arrow_back",
    "arrow_back_ios_new_rounded",
    "arrow_drop_down",
    "arrow_drop_up",
    "arrow_upward",
    "arrow_downward",
    "calendar_today",
    "access_time",
    "cancel",
    "check",
    "check_box",
    "check_box_outline_blank",
    "chevron_left",
    "chevron_right",
    "clear",
    "done",
    "close",
    "error",
    "expand_less",
    "expand_more",
    "first_page",
    "last_page",
    "keyboard_arrow_down",
    "keyboard_arrow_up",
    "menu",
    "more_horiz",
    "more_vert",
    "remove",
    "search",
    "visibility",
    "visibility_off",
    "warning",
)


class UnknownIconError(ValueError):
    """An icon name that the icon font does not have."""


def _glyph_names(icon: str) -> tuple[str, ...]:
    """The names a glyph may have in the font, for an icon's name in lower case."""
    return (icon, f"{icon}_baseline", f"_{icon}", f"_{icon}_baseline")


def write_icon_font(full: Path, icons: Iterable[str], out: Path) -> None:
    """Write the part of the icon font that holds these icons ("WATER_DROP" or "water_drop")."""
    font = TTFont(full)
    code_points: dict[str, int] = {}
    for code_point, glyph in font.getBestCmap().items():
        code_points.setdefault(glyph, code_point)
    wanted = []
    for icon in sorted({name.lower() for name in icons} | set(DRAWN_BY_CONTROLS)):
        found = next((code_points[name] for name in _glyph_names(icon) if name in code_points), None)
        if found is None:
            raise UnknownIconError(f"The icon font has no {icon.upper()}.")
        wanted.append(found)
    options = subset.Options(layout_features=[], notdef_outline=True, recalc_timestamp=False)
    cutter = subset.Subsetter(options)
    cutter.populate(unicodes=wanted)
    cutter.subset(font)
    out.parent.mkdir(parents=True, exist_ok=True)
    font.save(out)
