"""Makes the app's one text font: Roboto, with the signs it lacks taken from DejaVu Sans.

Run by hand when the trade's signs change: `python -m pwa.bundle.make_font [DejaVuSans.ttf]`. The result is
committed, so that a build needs no font on its machine. Both fonts share a grid of 2048 units; their licences
lie beside it.
"""

from __future__ import annotations

import sys
import tempfile
from pathlib import Path

from fontTools import merge, subset
from fontTools.ttLib import TTFont

from pwa.bundle.places import ASSETS, CLIENT

FAMILY = "Tapwright Sans"  # a changed font must not go by the name of its origin
BASE = CLIENT / "assets/fonts/roboto.woff2"
DEJAVU = Path("/usr/share/fonts/truetype/dejavu/DejaVuSans.ttf")  # Debian: fonts-dejavu-core
OUT = ASSETS / "fonts"
NAME = "tapwright-sans"

# Signs a water report, a formula or a setting may hold and Roboto has not.
LACKING = "₀₁₂₃₄₅₆₇₈₉₊₋⁰⁴⁵⁶⁷⁸⁹⁺⁻→←↑↓↔⇌∅⌀✓✗⚠★☆●○■□▲▼△▽◆◇⅓⅔≡∝∼∥‑ℹ☐☑▶◀↺⟳∙⋅˂˃‒∕∘ȳ\u0304"


def _cut(source: Path, out: Path, code_points: list[int] | None, features: list[str]) -> None:
    """Write the part of a font with these code points (all if None), without hinting."""
    font = TTFont(source)
    font.flavor = None
    dropped = ["hdmx", "FFTM"] if code_points is None else ["GSUB", "GPOS", "GDEF", "kern", "FFTM"]
    options = subset.Options(hinting=False, layout_features=features, notdef_outline=True, recalc_timestamp=False)
    options.drop_tables += dropped
    cutter = subset.Subsetter(options)
    cutter.populate(unicodes=font.getBestCmap() if code_points is None else code_points)
    cutter.subset(font)
    font.save(out)


def _rename(font: TTFont, origin: str) -> None:
    names = font["name"]
    names.names = []
    texts = {
        0: "Copyright 2011 Google Inc. (Roboto), 2003 Bitstream, Inc. (DejaVu; its changes: public domain)",
        1: FAMILY,
        2: "Regular",
        3: f"{FAMILY} 1.0",
        4: FAMILY,
        5: "Version 1.0",
        6: FAMILY.replace(" ", ""),
        10: f"{origin}, with signs from DejaVu Sans.",
        13: "Roboto: Apache License 2.0. DejaVu Sans: Bitstream Vera licence.",
    }
    for number, text in texts.items():
        names.setName(text, number, 3, 1, 0x409)


def make_font(dejavu: Path = DEJAVU, out: Path = OUT) -> list[Path]:
    """Write the font as .woff2 for the screen and .ttf for the PDF; returns the files."""
    base = TTFont(BASE)
    missing = [ord(sign) for sign in LACKING if ord(sign) not in base.getBestCmap()]
    absent = [chr(code) for code in missing if code not in TTFont(dejavu).getBestCmap()]
    if absent:
        raise ValueError(f"{dejavu.name} has no {' '.join(absent)} either.")
    origin = str(base["name"].getDebugName(5))
    with tempfile.TemporaryDirectory() as work:
        parts = [Path(work) / "base.ttf", Path(work) / "signs.ttf"]
        _cut(BASE, parts[0], None, ["kern", "liga", "tnum"])
        _cut(dejavu, parts[1], missing, [])
        font = merge.Merger().merge([str(part) for part in parts])
    _rename(font, f"Roboto {origin}")
    written = []
    for flavor, suffix in ((None, "ttf"), ("woff2", "woff2")):
        font.flavor = flavor
        written.append(out / f"{NAME}.{suffix}")
        font.save(written[-1])
    return written


if __name__ == "__main__":
    for path in make_font(*map(Path, sys.argv[1:])):
        print(f"{path} {path.stat().st_size} bytes")
