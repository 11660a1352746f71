"""What a laid-out page is made of, and how strips flow over pages. Lengths are points from the top left corner."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field, replace

from pwa.sheet.type import Style

PAPERS = {"A4": (595.28, 841.89), "Letter": (612.0, 792.0)}
SIDE, TOP, FOOT = 46.0, 34.0, 44.0  # margins
MARGIN = 96.0  # column of the section titles
GUTTER = 18.0
RUNNING_HEAD = 26.0  # taken by the head of a later page


@dataclass(frozen=True, slots=True)
class Ink:
    """A run of text; `y` is its baseline."""

    x: float
    y: float
    text: str
    style: Style


@dataclass(frozen=True, slots=True)
class Box:
    """A filled rectangle."""

    x: float
    y: float
    width: float
    height: float
    colour: str


@dataclass(frozen=True, slots=True)
class Picture:
    """The logo."""

    x: float
    y: float
    width: float
    height: float


Mark = Ink | Box | Picture


@dataclass(frozen=True, slots=True)
class Piece:
    """Marks that belong together for a reader: a heading, a paragraph, a row; without a tag they are decoration."""

    tag: str  # H1 | H2 | P | Figure | "" for decoration
    marks: tuple[Mark, ...]
    spoken: str = ""  # for a figure


@dataclass(frozen=True, slots=True)
class Strip:
    """A stretch of a column that is not broken; its marks count from its top."""

    height: float
    pieces: tuple[Piece, ...]
    before: float = 0.0  # space above, left out at the top of a page
    keep: bool = False  # with the next strip on one page
    heads: tuple[Strip, ...] = ()  # repeated above it where it comes first on a page
    follows: bool = False  # belongs to the paragraph of the strip before


@dataclass(slots=True)
class Page:
    """One page."""

    pieces: list[Piece] = field(default_factory=list)
    end: float = 0.0  # lowest point reached


def moved(mark: Mark, dx: float, dy: float) -> Mark:
    """A mark at another place."""
    return replace(mark, x=mark.x + dx, y=mark.y + dy)


def moved_piece(piece: Piece, dx: float, dy: float) -> Piece:
    """A piece at another place."""
    return replace(piece, marks=tuple(moved(mark, dx, dy) for mark in piece.marks))


class Flow:
    """Puts strips below one another, and turns the page where they no longer fit."""

    def __init__(self, paper: str) -> None:
        self.width, self.height = PAPERS[paper]
        self.pages: list[Page] = []
        self.y = 0.0
        self.turn()

    @property
    def bottom(self) -> float:
        """Where the room of a page ends."""
        return self.height - FOOT

    @property
    def full_width(self) -> float:
        """Between the side margins."""
        return self.width - 2 * SIDE

    @property
    def column(self) -> float:
        """Width of the column beside the section titles."""
        return self.full_width - MARGIN - GUTTER

    def turn(self) -> None:
        """Begin a new page."""
        self.pages.append(Page())
        self.y = TOP + (RUNNING_HEAD if len(self.pages) > 1 else 0.0)
        self.at_top = True

    def put(self, pieces: Sequence[Piece], dx: float = 0.0, dy: float = 0.0) -> None:
        """Put pieces on the page, moved."""
        page = self.pages[-1]
        page.pieces += [moved_piece(piece, dx, dy) for piece in pieces]

    def advance(self, by: float) -> None:
        """Go down the page."""
        self.y += by
        self.pages[-1].end = max(self.pages[-1].end, self.y)

    def run(self, strips: Sequence[Strip], x: float, title: Piece | None = None) -> None:
        """Put strips one below the other at `x`; `title` stands beside wherever they go on after a page turn."""
        at = 0
        while at < len(strips):
            chain = _chain(strips, at)
            if not self.at_top and self.y + _height(chain) > self.bottom:
                self.turn()
                if title is not None:
                    self.put([title], SIDE, self.y)
                for head in strips[at].heads:
                    self._put_strip(replace(head, pieces=tuple(replace(p, tag="") for p in head.pieces)), x)
            for strip in chain:
                self._put_strip(strip, x)
            at += len(chain)

    def _put_strip(self, strip: Strip, x: float) -> None:
        if not self.at_top:
            self.advance(strip.before)
        pieces = strip.pieces
        if strip.follows and not self.at_top and pieces:
            self._join(pieces[0], x)
            pieces = pieces[1:]
        self.put(pieces, x, self.y)
        self.advance(strip.height)
        self.at_top = False

    def _join(self, piece: Piece, x: float) -> None:
        """Add a line to the paragraph before, so that it is read as one."""
        held = self.pages[-1].pieces
        last = held[-1]
        held[-1] = replace(last, marks=last.marks + moved_piece(piece, x, self.y).marks)


def _chain(strips: Sequence[Strip], at: int) -> list[Strip]:
    """The strip and those it must stay with."""
    chain = [strips[at]]
    while chain[-1].keep and at + len(chain) < len(strips):
        chain.append(strips[at + len(chain)])
    return chain


def _height(chain: Sequence[Strip]) -> float:
    return sum(strip.before + strip.height for strip in chain)
