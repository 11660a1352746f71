"""Draws a laid-out sheet as a PDF with fpdf2: embedded font, tags in reading order, no Pillow.

    drawn = draw_sheet(data)
    drawn.pdf, drawn.pages, drawn.notes      bytes, how many, sentences for the user about what could not be drawn

Importing this module imports fpdf2 and fontTools, which takes a phone a second: do it when a sheet is made.
"""

from __future__ import annotations

import warnings
from collections.abc import Iterator, Set
from contextlib import ExitStack, closing, contextmanager
from dataclasses import dataclass, fields, is_dataclass, replace
from datetime import UTC, datetime
from functools import lru_cache
from importlib.resources import as_file, files
from pathlib import Path
from typing import Any, cast

with warnings.catch_warnings():
    warnings.simplefilter("ignore")  # it warns where Pillow is missing, as in the browser; `logo` does without
    from fpdf import FPDF
    from fpdf.enums import TextMode
    from fpdf.fonts import TTFFont
    from fpdf.image_datastructures import RasterImageInfo

from pwa import theme
from pwa.sheet.data import SheetData
from pwa.sheet.layout import lay_out
from pwa.sheet.logo import Logo, LogoError, read_logo
from pwa.sheet.page import PAPERS, Box, Ink, Mark, Page, Picture, Piece
from pwa.sheet.type import UNKNOWN, Style, printable

FONT = "sheet"
FONT_FILE = "assets/fonts/tapwright-sans.ttf"
STRONGER = 0.032  # of the size: width of the outline that makes the one weight of the font bold
KEPT = {"tone", "style", "paper", "day"}  # texts that are keys, not words


@dataclass(frozen=True, slots=True)
class Drawn:
    """A finished sheet."""

    pdf: bytes
    pages: int
    notes: tuple[str, ...]


def draw_sheet(data: SheetData) -> Drawn:
    """A sheet as a PDF."""
    with closing(Paper(data)) as paper:
        return _drawn(data, paper)


def _drawn(data: SheetData, paper: Paper) -> Drawn:
    notes = list(data.notes)
    logo = None
    if data.firm.logo:
        try:
            logo = read_logo(data.firm.logo)
        except LogoError as error:
            notes.append(str(error))
    clean = _cleaned(data, paper.signs)
    if UNKNOWN in repr(clean) and UNKNOWN not in repr(data):
        notes.append(f"Some signs are not in the font of the sheet and stand as {UNKNOWN}.")
    pages = lay_out(clean, paper, (logo.width, logo.height) if logo else None)
    for page in pages:
        paper.draw(page, logo)
    return Drawn(paper.finish(), len(pages), tuple(notes))


_open = ExitStack()  # in the browser the font lies in an archive: it is unpacked once and stays


@lru_cache(maxsize=1)
def _font_path() -> Path:
    return _open.enter_context(as_file(files("pwa") / FONT_FILE))


class Paper:
    """A PDF in the making; measures text with its font."""

    def __init__(self, data: SheetData) -> None:
        self._pdf = FPDF(unit="pt", format=PAPERS[data.paper])
        self._pdf.set_auto_page_break(False)
        self._pdf.set_margin(0)
        self._pdf.c_margin = 0
        self._pdf.add_font(FONT, fname=_font_path())
        self._pdf.set_font(FONT, size=10)
        self._pdf.set_title(data.title)
        self._pdf.set_author(data.firm.name or data.made_with)
        self._pdf.set_producer(data.made_with)
        self._pdf.set_lang("en")
        self._pdf.set_creation_date(_day(data.day))
        self._font = cast(TTFFont, self._pdf.fonts[FONT])
        self._advance = self._font.cw  # of each sign, in thousandths of the size; nothing is kerned here

    @property
    def signs(self) -> Set[int]:
        """Code points that the font can draw."""
        return self._font.cmap.keys()

    def width(self, text: str, style: Style) -> float:
        """Width of a text in one line."""
        thousandths = sum(map(self._advance.__getitem__, map(ord, text)))
        return (thousandths / 1000.0 + (STRONGER if style.bold else 0.0)) * style.size

    def draw(self, page: Page, logo: Logo | None) -> None:
        """Add a page."""
        self._pdf.add_page()
        for piece in page.pieces:
            with self._tagged(piece):
                for mark in piece.marks:
                    self._mark(mark, logo)

    def finish(self) -> bytes:
        """The file."""
        return bytes(self._pdf.output())

    def close(self) -> None:
        """Let go of the font's file."""
        self._font.close()

    @contextmanager
    def _tagged(self, piece: Piece) -> Iterator[None]:
        """What a reader is told about marks: their role, or that they are decoration.

        fpdf2 tags pictures only; its builder of the structure tree takes any role.
        """
        pdf = self._pdf
        if not piece.tag:
            pdf._out("/Artifact BMC")
        else:
            number = pdf.struct_builder.next_mcid_for_page(pdf.page)
            spoken = {"alt_text": piece.spoken} if piece.spoken else {}
            pdf._add_marked_content(struct_type=f"/{piece.tag}", mcid=number, **spoken)
            pdf._out(f"/{piece.tag} <</MCID {number}>> BDC")
        yield
        pdf._out("EMC")

    def _mark(self, mark: Mark, logo: Logo | None) -> None:
        pdf = self._pdf
        if isinstance(mark, Box):
            pdf.set_fill_color(_colour(mark.colour))
            pdf.rect(mark.x, mark.y, mark.width, mark.height, style="F")
        elif isinstance(mark, Ink):
            self._ink(mark)
        elif logo is not None:
            self._picture(mark, logo)

    def _ink(self, ink: Ink) -> None:
        if not ink.text:
            return
        pdf, style = self._pdf, ink.style
        colour = _colour(style.colour)
        pdf.set_font_size(style.size)
        pdf.set_text_color(colour)
        if not style.bold:
            pdf.text(ink.x, ink.y, ink.text)
            return
        pdf.set_draw_color(colour)
        pdf.set_line_width(STRONGER * style.size)
        pdf.text_mode = TextMode.FILL_STROKE
        pdf.text(ink.x, ink.y, ink.text)
        pdf.text_mode = TextMode.FILL
        pdf._out(f"{TextMode.FILL} Tr")  # the mode outlives the text it was set for

    def _picture(self, picture: Picture, logo: Logo) -> None:
        held = self._pdf.image_cache.images
        if "logo" not in held:
            held["logo"] = _image_info(logo)
        self._pdf.image("logo", picture.x, picture.y, picture.width, picture.height)


def _image_info(logo: Logo) -> RasterImageInfo:
    """A logo as fpdf2 keeps pictures it has read."""
    info = RasterImageInfo(
        i=1, usages=0, iccp_i=None, w=logo.width, h=logo.height, cs=logo.space, bpc=logo.bits, f=logo.kind,
        dp=logo.parameters, data=logo.data, pal=logo.palette,
    )  # fmt: skip
    if logo.mask:
        info["smask"] = logo.mask
    return info


def _colour(name: str) -> tuple[int, int, int]:
    code = getattr(theme.LIGHT, name).lstrip("#")
    return int(code[0:2], 16), int(code[2:4], 16), int(code[4:6], 16)


def _day(iso: str) -> datetime:
    """The day noted in the file; the caller keeps the clock."""
    try:
        return datetime.fromisoformat(iso).replace(tzinfo=UTC)
    except ValueError:
        return datetime(2000, 1, 1, tzinfo=UTC)


def _cleaned(value: Any, signs: Set[int]) -> Any:
    """The same data with texts that the font can draw."""
    if isinstance(value, str):
        return printable(value, signs)
    if isinstance(value, tuple):
        return tuple(_cleaned(part, signs) for part in value)
    if is_dataclass(value) and not isinstance(value, type):
        parts = {column.name: getattr(value, column.name) for column in fields(value)}
        changed = {name: part if name in KEPT else _cleaned(part, signs) for name, part in parts.items()}
        return replace(value, **changed)
    return value
