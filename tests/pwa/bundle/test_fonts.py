"""Every sign the app can show is in the font it ships, and every icon in the icon font."""

from __future__ import annotations

import ast
import json

import pytest
from fontTools.ttLib import TTFont

from pwa.bundle.client import FONT
from pwa.bundle.icon_font import UnknownIconError, write_icon_font
from pwa.bundle.make_font import LACKING
from pwa.bundle.places import ASSETS, CLIENT, ROOT
from pwa.bundle.sources import app_files, icon_names

FONTS = ASSETS / "fonts"
# Understood in what people paste, and not used by our own texts: invisible signs, and the wide forms of East Asia.
READ_ONLY = {"\ufeff", "\u200b", "\u00ad", "\u2060", "\ufe63", *map(chr, range(0xFF01, 0xFF5F))}


def _shown(place: str, text: str) -> set[str]:
    """The signs a file can put on the screen: of a Python file its string literals, without docstrings."""
    if not place.endswith(".py"):
        return set(text)
    tree = ast.parse(text)
    strings = {node for node in ast.walk(tree) if isinstance(node, ast.Constant) and isinstance(node.value, str)}
    documented = (ast.Module, ast.ClassDef, ast.FunctionDef, ast.AsyncFunctionDef)
    for node in ast.walk(tree):
        if isinstance(node, documented) and node.body and isinstance(node.body[0], ast.Expr):
            strings.discard(node.body[0].value)
    return set("".join(node.value for node in strings))


def test_every_sign_in_the_sources_has_a_glyph():
    """No text of the app needs a sign that its font lacks."""
    known = {chr(code) for code in TTFont(FONTS / FONT).getBestCmap()} | READ_ONLY
    missing = {}
    for place, path in app_files().items():
        if path.suffix in {".py", ".json", ".tsv"}:
            text = path.read_text(encoding="utf-8")
            signs = {sign for sign in _shown(place, text) - known if sign.isprintable()}
            missing |= {place: sorted(signs)} if signs else {}

    assert missing == {}


def test_the_trades_signs_are_there():
    """Units, sub- and superscripts, comparisons, arrows and money are in the font."""
    known = TTFont(FONTS / FONT).getBestCmap()

    assert not [sign for sign in "°µ³²₂₃₄⁺⁻≥≤−±×½‰éß€£≈→←↑↓∅✓⚠√ΔΩ–—’“”…•·" if ord(sign) not in known]
    assert not [sign for sign in LACKING if ord(sign) not in known]


def test_figures_are_equally_wide():
    """Figures stand in columns: all ten have one width."""
    font = TTFont(FONTS / FONT)
    widths = {font["hmtx"][font.getBestCmap()[ord(figure)]][0] for figure in "0123456789"}

    assert len(widths) == 1


def test_screen_and_pdf_have_the_same_font():
    """The two files hold the same signs, under a name of our own, with the licences beside them."""
    screen, pdf = TTFont(FONTS / FONT), TTFont(FONTS / "tapwright-sans.ttf")

    assert screen.getBestCmap() == pdf.getBestCmap()
    for name in ("Roboto", "Bitstream", "Vera"):
        assert name not in screen["name"].getDebugName(1)
    assert {path.name for path in FONTS.glob("LICENSE-*.txt")} == {"LICENSE-roboto.txt", "LICENSE-dejavu.txt"}


def test_icon_font_holds_the_icons_in_use(tmp_path):
    """The cut icon font is small and has a glyph for each icon the sources name."""
    out = tmp_path / "icons.otf"
    write_icon_font(CLIENT / "assets/fonts/MaterialIcons-Regular.otf", icon_names(), out)

    assert out.stat().st_size < 60_000
    assert len(TTFont(out).getBestCmap()) >= len(icon_names())


def test_an_unknown_icon_stops_the_build(tmp_path):
    """A misspelt icon is an error, not an empty square on the phone."""
    with pytest.raises(UnknownIconError, match="WATER_DORP"):
        write_icon_font(CLIENT / "assets/fonts/MaterialIcons-Regular.otf", {"WATER_DORP"}, tmp_path / "icons.otf")


def test_every_icon_is_one_flet_knows():
    """The icon names in the sources are flet's."""
    import flet

    table = json.loads((ROOT / flet.__path__[0] / "controls/material/icons.json").read_text(encoding="utf-8"))
    assert icon_names() <= set(table)
