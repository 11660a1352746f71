"""What a sheet holds: plain blocks of finished text, in reading order. Nothing here computes or draws."""

from __future__ import annotations

from dataclasses import dataclass, field


@dataclass(frozen=True, slots=True)
class Firm:
    """Who hands the sheet over, in the user's own words."""

    name: str = ""
    lines: tuple[str, ...] = ()  # address, telephone, licence
    logo: bytes | None = None  # PNG or JPEG
    terms: str = ""


@dataclass(frozen=True, slots=True)
class Scale:
    """The line under an answer: places from 0 (left) to 1 (right)."""

    here: float
    band: tuple[float, float] | None
    ticks: tuple[tuple[float, str], ...]  # place, and name with its amount
    spoken: str  # all of it in words


@dataclass(frozen=True, slots=True)
class Figure:
    """An answer: its name, its figure, its words, and the line under it."""

    label: str
    number: str
    unit: str
    words: str = ""
    tone: str = "plain"
    scale: Scale | None = None


@dataclass(frozen=True, slots=True)
class Beside:
    """Answers side by side, two in a row."""

    figures: tuple[Figure, ...]


@dataclass(frozen=True, slots=True)
class Text:
    """A paragraph."""

    text: str
    style: str = "body"  # lead | body | small


@dataclass(frozen=True, slots=True)
class Said:
    """A sentence led by the sign and the word of its tone: watch, bad, note, care, danger, missing, good."""

    tone: str
    text: str


@dataclass(frozen=True, slots=True)
class Points:
    """Sentences, each with a dash or a number before it."""

    points: tuple[str, ...]
    numbered: bool = False


@dataclass(frozen=True, slots=True)
class Table:
    """Rows under a heading. In a cell the lines after the first are set small."""

    heading: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    widths: tuple[float, ...]  # parts of the width
    right: frozenset[int] = frozenset()  # columns set to the right
    strong: frozenset[int] = frozenset()  # rows that are sums


@dataclass(frozen=True, slots=True)
class Signature:
    """Who stands for a reading or a price, and when; empty parts are lines to write on."""

    name: str = ""
    date: str = ""


Block = Figure | Beside | Text | Said | Points | Table | Signature


@dataclass(frozen=True, slots=True)
class Section:
    """Blocks under one title."""

    title: str
    blocks: tuple[Block, ...]


@dataclass(frozen=True, slots=True)
class SheetData:
    """A whole sheet. The first part is for the customer and keeps to one page where it can; the second is technical."""

    title: str
    subtitle: str = ""
    firm: Firm = field(default_factory=Firm)
    date: str = ""  # as it is shown
    day: str = ""  # ISO, for the file
    paper: str = "A4"  # A4 | Letter
    front: tuple[Section, ...] = ()
    technical: tuple[Section, ...] = ()
    technical_title: str = "Technical page"
    footer: str = ""
    made_with: str = "Tapwright"
    notes: tuple[str, ...] = ()  # sentences for the user about what could not be put in; not on the sheet
