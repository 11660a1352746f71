"""QR codes as pictures, one for each link.

The address of a link is written in bytes, the part behind it in the tighter form for digits and capital letters.
"""

from __future__ import annotations

from dataclasses import dataclass
from io import BytesIO

import segno

QUIET = 4  # modules of white round a code, as ISO/IEC 18004 asks
DOTS = 10  # pixels of the picture along a module: more than a phone shows, so that it stays sharp
ERROR = "m"  # 15 % of a code may be unreadable: glare, a scratch


@dataclass(frozen=True, slots=True)
class QrCode:
    """One code: its modules, True for dark, without the white round it; and the same as a picture."""

    text: str
    version: int  # 1 to 40; a phone reads up to about 20 off a screen
    rows: tuple[tuple[bool, ...], ...]
    png: bytes  # black on white in any theme, the white round it included


def qr_code(prefix: str, code: str) -> QrCode:
    """The code for an address and the digits and capital letters that follow it."""
    made = segno.make([prefix, code], error=ERROR, micro=False, boost_error=False)  # type: ignore[arg-type]  # a list is a text in parts
    rows = tuple(tuple(bool(module) for module in row) for row in made.matrix)
    png = BytesIO()
    made.save(png, kind="png", scale=DOTS, border=QUIET, dark="#000000", light="#ffffff")
    return QrCode(prefix + code, int(made.version), rows, png.getvalue())
