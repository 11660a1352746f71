"""Blocks of a sheet as strips of a column: paragraphs, figures with their line, tables, signed lines."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

from pwa.sheet.data import Beside, Block, Figure, Points, Said, Scale, Signature, Table
from pwa.sheet.page import Box, Ink, Mark, Piece, Strip, moved_piece
from pwa.sheet.type import BODY, FIGURE, FINE, LEAD, SMALL, TECHNICAL, UNIT, Measure, Style, lines_of

HANG = 14.0  # of a sign, a dash or a number
BETWEEN = 10.0  # columns
WRITING_LINE = 26.0
TALL = 14  # lines from which a row may be broken
TRACK, BAND, TICK, HERE = 2.6, 8.0, 11.0, 15.0  # heights on an answer's line
SIGNS = {
    "good": ("✓", "Good", "good"),
    "watch": ("!", "Watch", "watch"),
    "bad": ("✗", "Problem", "bad"),
    "missing": ("□", "Missing", "quiet"),
    "note": ("ℹ", "Note", "quiet"),
    "care": ("!", "Care", "watch"),
    "danger": ("⚠", "Danger", "bad"),
}


@dataclass(frozen=True, slots=True)
class Setter:
    """Sets blocks to a column width, in a size."""

    measure: Measure
    width: float
    scale: float = 1.0
    technical: bool = False

    def style(self, style: Style) -> Style:
        """A style in the size of this part of the sheet."""
        return style.scaled(self.scale)

    @property
    def body(self) -> Style:
        """Running text."""
        return self.style(TECHNICAL if self.technical else BODY)

    @property
    def fine(self) -> Style:
        """Small print."""
        return self.style(FINE if self.technical else SMALL)

    def strips(self, block: Block) -> list[Strip]:
        """A block as strips."""
        if isinstance(block, Figure):
            return self._figure(block)
        if isinstance(block, Beside):
            return self._beside(block)
        if isinstance(block, Said):
            return self._said(block)
        if isinstance(block, Points):
            return self._points(block)
        if isinstance(block, Table):
            return TableSetter(self, block).strips()
        if isinstance(block, Signature):
            return [self._signature(block)]
        if not block.text.strip():
            return []
        style = {"lead": self.style(LEAD), "body": self.body, "small": self.fine}[block.style]
        return self.paragraph(block.text, style)

    def paragraph(self, text: str, style: Style, x: float = 0.0, before: float = 4.0) -> list[Strip]:
        """Lines of running text, none left alone at the foot or the head of a page."""
        lines = lines_of(text, style, self.width - x, self.measure)
        return _paragraph([(Ink(x, _baseline(style), line, style),) for line in lines], style, before * self.scale)

    def _said(self, block: Said) -> list[Strip]:
        sign, word, colour = SIGNS.get(block.tone, SIGNS["note"])
        style, hang = self.body, HANG * self.scale
        strong = replace(style, colour=colour, bold=True)
        lead = f"{word}:"
        first = self.measure.width(f"{lead} ", strong)
        lines = lines_of(block.text, style, self.width - hang, self.measure, first)
        base = _baseline(style)
        head: tuple[Mark, ...] = (Ink(0.0, base, sign, strong), Ink(hang, base, lead, strong))
        rows: list[tuple[Mark, ...]] = [(*head, Ink(hang + first, base, lines[0], style))]
        rows += [(Ink(hang, base, line, style),) for line in lines[1:]]
        return _paragraph(rows, style, 3.6 * self.scale)

    def _points(self, block: Points) -> list[Strip]:
        style, hang = self.body, (HANG + 4.0 if block.numbered else HANG) * self.scale
        strips = []
        for number, text in enumerate(block.points, start=1):
            lines = lines_of(text, style, self.width - hang, self.measure)
            base = _baseline(style)
            lead = Ink(0.0, base, f"{number}." if block.numbered else "–", replace(style, colour="quiet"))
            rows: list[tuple[Mark, ...]] = [(lead, Ink(hang, base, lines[0], style))]
            rows += [(Ink(hang, base, line, style),) for line in lines[1:]]
            strips += _paragraph(rows, style, 3.0 * self.scale)
        return strips

    def _figure(self, block: Figure) -> list[Strip]:
        label, figure, unit = self.style(SMALL), self.style(FIGURE), self.style(UNIT)
        names = lines_of(block.label, label, self.width, self.measure)
        marks: list[Mark] = [
            Ink(0.0, at * label.leading + _baseline(label), name, label) for at, name in enumerate(names)
        ]
        top = len(names) * label.leading
        base = top + _baseline(figure)
        across = self.measure.width(block.number, figure) + 5.0 * self.scale
        marks += [Ink(0.0, base, block.number, figure), Ink(across, base, block.unit, unit)]
        height = top + figure.leading
        if block.tone in SIGNS:
            sign, word, colour = SIGNS[block.tone]
            strong = replace(self.body, colour=colour, bold=True)
            text = f"{sign} {word}"
            wide = self.measure.width(text, strong)
            if across + self.measure.width(block.unit, unit) + BETWEEN + wide <= self.width:
                marks.append(Ink(self.width - wide, base, text, strong))
            else:
                marks.append(Ink(0.0, height + _baseline(strong), text, strong))
                height += strong.leading
        more = bool(block.words or block.scale)
        strips = [Strip(height, (Piece("P", tuple(marks)),), before=9.0 * self.scale, keep=more)]
        if block.words:
            words = self.paragraph(block.words, self.style(LEAD), before=0.0)
            strips += [replace(strip, keep=True) for strip in words] if block.scale else words
        if block.scale is not None:
            strips.append(self._scale(block.scale))
        return strips

    def _beside(self, block: Beside) -> list[Strip]:
        """Two answers in a row, each read as a whole before the next."""
        gap = 2.0 * BETWEEN
        half = replace(self, width=(self.width - gap) / 2.0)
        strips = []
        for at in range(0, len(block.figures), 2):
            stacks = [_stacked(half.strips(figure)) for figure in block.figures[at : at + 2]]
            pieces = [
                moved_piece(piece, side * (half.width + gap), 0.0)
                for side, stack in enumerate(stacks)
                for piece in stack.pieces
            ]
            strips.append(Strip(max(stack.height for stack in stacks), tuple(pieces), before=9.0 * self.scale))
        return strips

    def _scale(self, scale: Scale) -> Strip:
        """The line under an answer: a thick stretch for the band, a mark for the answer, ticks for the limits."""
        middle = HERE * self.scale / 2.0
        marks: list[Mark] = [self._bar(0.0, 1.0, TRACK, "line", middle)]
        if scale.band is not None:
            marks.append(self._bar(*scale.band, BAND, "accent_soft", middle))
        for place, _ in scale.ticks:
            marks.append(self._upright(place, TICK, 1.1, "quiet", middle))
        marks.append(self._upright(scale.here, HERE, 4.0, "accent", middle))
        names, rows = self._tick_names(scale, HERE * self.scale + 1.0)
        height = HERE * self.scale + 1.0 + rows * self.fine.leading + 3.0
        pieces = [Piece("Figure", tuple(marks), scale.spoken)]
        if names:
            pieces.append(Piece("", tuple(names)))  # the figure is read out with them
        return Strip(height, tuple(pieces), before=4.0 * self.scale)

    def _bar(self, start: float, end: float, thick: float, colour: str, middle: float) -> Box:
        height = thick * self.scale
        return Box(start * self.width, middle - height / 2.0, max(1.0, (end - start) * self.width), height, colour)

    def _upright(self, place: float, tall: float, wide: float, colour: str, middle: float) -> Box:
        height, width = tall * self.scale, wide * self.scale
        left = min(max(0.0, place * self.width - width / 2.0), self.width - width)
        return Box(left, middle - height / 2.0, width, height, colour)

    def _tick_names(self, scale: Scale, top: float) -> tuple[list[Mark], int]:
        """Names centred under their ticks, those that would touch on a row of their own."""
        style = self.fine
        ends: list[float] = []  # where each row is free again
        marks: list[Mark] = []
        for place, name in sorted(scale.ticks):
            wide = self.measure.width(name, style)
            left = min(max(0.0, place * self.width - wide / 2.0), max(0.0, self.width - wide))
            row = next((at for at, end in enumerate(ends) if left >= end), len(ends))
            ends[row : row + 1] = [left + wide + 8.0]
            marks.append(Ink(left, top + row * style.leading + _baseline(style), name, style))
        return marks, len(ends)

    def _signature(self, block: Signature) -> Strip:
        style, fine, middle = self.body, self.fine, 0.6 * self.width
        parts = ((0.0, middle - 10.0, block.name, "Name"), (middle, self.width, block.date, "Date"))
        lines = [lines_of(text, style, right - left, self.measure) for left, right, text, _ in parts]
        height = max(WRITING_LINE * self.scale, max(map(len, lines)) * style.leading + 6.0)
        pieces = []
        for (left, right, _, word), written in zip(parts, lines, strict=True):
            top = height - 4.0 - len(written) * style.leading
            marks: list[Mark] = [Box(left, height, right - left, 0.7, "edge")]
            marks += [
                Ink(left, top + at * style.leading + _baseline(style), line, style)
                for at, line in enumerate(written)
                if line
            ]
            marks.append(Ink(left, height + _baseline(fine), word, fine))
            pieces.append(Piece("P", tuple(marks)))
        return Strip(height + fine.leading + 2.0, tuple(pieces), before=8.0)


@dataclass(frozen=True, slots=True)
class TableSetter:
    """Sets a table: rows under a heading that comes again on each page."""

    setter: Setter
    table: Table

    def strips(self) -> list[Strip]:
        """Heading and rows."""
        heads: tuple[Strip, ...] = ()
        if any(self.table.heading):
            heading = replace(self.setter.fine, bold=True, colour="quiet")
            heads = (replace(self._row(self.table.heading, heading, "edge")[0], before=6.0, keep=True),)
        body: list[Strip] = []
        last = len(self.table.rows) - 1
        for at, row in enumerate(self.table.rows):
            strong = at in self.table.strong
            rule = "" if at == last else "edge" if strong else "line"
            strips = self._row(row, replace(self.setter.body, bold=strong), rule)
            together = 0 < min(self.table.strong, default=0) <= at < last  # sums stay in one place
            body += [replace(strip, keep=True) for strip in strips] if together else strips
        return [*heads, *(replace(strip, heads=heads) for strip in body)]

    @property
    def _cell_room(self) -> float:
        """Space above and below the text of a row."""
        return (2.8 if self.setter.technical else 3.6) * self.setter.scale

    def _columns(self) -> list[tuple[float, float]]:
        """Left edge and width of each column."""
        whole = sum(self.table.widths)
        room = self.setter.width - BETWEEN * (len(self.table.widths) - 1)
        found, left = [], 0.0
        for part in self.table.widths:
            width = room * part / whole
            found.append((left, width))
            left += width + BETWEEN
        return found

    def _row(self, cells: Sequence[str], style: Style, rule: str) -> list[Strip]:
        columns = self._columns()
        set_ = [
            self._cell(cell, style, left, width, at)
            for at, (cell, (left, width)) in enumerate(zip(cells, columns, strict=True))
        ]
        tallest = max(len(cell) for cell in set_)
        height = max(cell[-1][1] for cell in set_) + self._cell_room
        line = Piece("", (Box(0.0, height, self.setter.width, 0.6, rule),) if rule else ())
        if tallest > TALL:
            return self._broken(set_, line)
        marks = tuple(mark for cell in set_ for mark, _ in cell)
        return [Strip(height + 0.6, (Piece("P", marks), line))]

    def _cell(self, text: str, style: Style, left: float, width: float, at: int) -> list[tuple[Ink, float]]:
        """The lines of a cell, each with the depth it reaches."""
        found: list[tuple[Ink, float]] = []
        top = self._cell_room
        for number, paragraph in enumerate(text.split("\n")):
            own = style if number == 0 else replace(self.setter.fine, bold=False)
            for line in lines_of(paragraph, own, width, self.setter.measure):
                wide = self.setter.measure.width(line, own)
                x = left + width - wide if at in self.table.right else left
                found.append((Ink(x, top + _baseline(own), line, own), top + own.leading))
                top += own.leading
        return found

    def _broken(self, cells: list[list[tuple[Ink, float]]], line: Piece) -> list[Strip]:
        """A tall row as one strip for each line, so that it can go on over the page."""
        leading = self.setter.body.leading
        strips = []
        for at in range(max(len(cell) for cell in cells)):
            marks = tuple(
                replace(cell[at][0], y=_baseline(self.setter.body))
                for cell in cells
                if at < len(cell) and cell[at][0].text
            )
            strips.append(Strip(leading, (Piece("P", marks),), before=self._cell_room if at == 0 else 0.0))
        end = replace(line, marks=tuple(replace(mark, y=self._cell_room) for mark in line.marks))
        return [*strips, Strip(self._cell_room + 0.6, (end,))]


def _baseline(style: Style) -> float:
    """From the top of a line to its baseline."""
    return (style.leading - style.size) / 2.0 + 0.8 * style.size


def _stacked(strips: Sequence[Strip]) -> Strip:
    """Strips as one, which is not broken; lines of a paragraph become one piece again."""
    pieces: list[Piece] = []
    y = 0.0
    for at, strip in enumerate(strips):
        y += strip.before if at else 0.0
        own = [moved_piece(piece, 0.0, y) for piece in strip.pieces]
        if strip.follows and own:
            pieces[-1] = replace(pieces[-1], marks=pieces[-1].marks + own.pop(0).marks)
        pieces += own
        y += strip.height
    return Strip(y, tuple(pieces))


def _paragraph(rows: Sequence[tuple[Mark, ...]], style: Style, before: float) -> list[Strip]:
    count = len(rows)
    return [
        Strip(
            style.leading,
            (Piece("P", marks),),
            before=before if at == 0 else 0.0,
            keep=count > 1 and at in (0, count - 2),
            follows=at > 0,
        )
        for at, marks in enumerate(rows)
    ]
