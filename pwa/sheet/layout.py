"""From a sheet's data to pages: where every sign, rule and picture stands.

The section titles stand in a column of their own at the left, the text beside them. The front is set smaller, down to
four fifths, where that keeps it to one page; a longer one goes on.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

from pwa.sheet.blocks import Setter
from pwa.sheet.data import Firm, Section, SheetData
from pwa.sheet.page import GUTTER, MARGIN, SIDE, TOP, Box, Flow, Ink, Mark, Page, Picture, Piece, Strip
from pwa.sheet.type import FIRM, LABEL, RUNNING, SMALL, SUBTITLE, TITLE, Measure, Style, lines_of

SIZES = (1.0, 0.96, 0.92, 0.88, 0.84, 0.8)  # tried for the front until it keeps to one page
LONG_FRONT = 0.9  # the size of a front that needs more
LOGO = (130.0, 44.0)  # the room a logo has


def lay_out(data: SheetData, measure: Measure, logo: tuple[int, int] | None = None) -> list[Page]:
    """The pages of a sheet; `logo` is the size of the logo in pixels."""
    front = next((flow for size in SIZES if len((flow := _front(data, measure, logo, size)).pages) == 1), None)
    flow = front or _front(data, measure, logo, LONG_FRONT)
    if data.technical:
        flow.turn()
        _heading(flow, data.technical_title, measure)
        _sections(flow, data.technical, measure, 1.0, technical=True)
    for number, page in enumerate(flow.pages, start=1):
        page.pieces += _running(flow, data, number, measure)
    return flow.pages


def _front(data: SheetData, measure: Measure, logo: tuple[int, int] | None, size: float) -> Flow:
    flow = Flow(data.paper)
    _head(flow, data, measure, logo, size)
    _sections(flow, data.front, measure, size, technical=False)
    return flow


def _head(flow: Flow, data: SheetData, measure: Measure, logo: tuple[int, int] | None, size: float) -> None:
    """The firm with its logo, a rule with one strong stretch, the title; all on a ground of chalk."""
    top, width = flow.y, flow.full_width
    marks: list[Mark] = []
    y = _firm(marks, flow, data.firm, measure, logo is not None, size)
    if marks:
        flow.put([Piece("P", tuple(marks))])
    if logo:
        fit = min(LOGO[0] / logo[0], LOGO[1] / logo[1])
        wide, tall = logo[0] * fit, logo[1] * fit
        picture = Picture(SIDE + width - wide, top, wide, tall)
        flow.put([Piece("Figure", (picture,), data.firm.name or "Logo")])
        y = max(y, top + tall)
    if y > top:
        y += 8.0
    flow.put([Piece("", (Box(SIDE, y, width, 0.7, "line"), Box(SIDE, y - 1.1, MARGIN, 2.9, "accent")))])
    y += 12.0 * size
    title: list[Mark] = []
    y = _set(title, data.title, TITLE.scaled(size), SIDE, y, width, measure)
    flow.put([Piece("H1", tuple(title))])
    if data.subtitle:
        subtitle: list[Mark] = []
        y = _set(subtitle, data.subtitle, SUBTITLE.scaled(size), SIDE, y, width, measure)
        flow.put([Piece("P", tuple(subtitle))])
    y += 9.0 * size
    flow.pages[0].pieces.insert(0, Piece("", (Box(0.0, 0.0, flow.width, y, "ground"),)))
    flow.advance(y - flow.y + 1.0)


def _firm(marks: list[Mark], flow: Flow, firm: Firm, measure: Measure, logo: bool, size: float) -> float:
    """Name and lines of the firm: the lines at the right, or under the name where a logo has their place."""
    half = (flow.full_width - 20.0) / 2.0
    room = flow.full_width - LOGO[0] - 20.0 if logo else half if firm.lines else flow.full_width
    y = _set(marks, firm.name, FIRM.scaled(size), SIDE, flow.y, room, measure) if firm.name else flow.y
    if logo:
        for line in firm.lines:
            y = _set(marks, line, SMALL.scaled(size), SIDE, y, room, measure)
        return y
    below, style = flow.y, SMALL.scaled(size)
    for line in [part for text in firm.lines for part in lines_of(text, style, half, measure)]:
        below = _set(marks, line, style, SIDE + flow.full_width - measure.width(line, style), below, half, measure)
    return max(y, below)


def _heading(flow: Flow, text: str, measure: Measure) -> None:
    marks: list[Mark] = []
    end = _set(marks, text, TITLE.scaled(0.75), SIDE, flow.y, flow.full_width, measure)
    flow.put([Piece("H1", tuple(marks))])
    flow.advance(end - flow.y + 4.0)


def _set(marks: list[Mark], text: str, style: Style, x: float, y: float, width: float, measure: Measure) -> float:
    """Set a text from a top on; returns where it ends."""
    for line in lines_of(text, style, width, measure):
        marks.append(Ink(x, y + (style.leading - style.size) / 2.0 + 0.8 * style.size, line, style))
        y += style.leading
    return y


def _sections(flow: Flow, sections: Sequence[Section], measure: Measure, size: float, *, technical: bool) -> None:
    setter = Setter(measure, flow.column, size, technical)
    x = SIDE + MARGIN + GUTTER
    for section in sections:
        strips = [strip for block in section.blocks for strip in setter.strips(block)]
        if not strips:
            continue
        label: list[Mark] = []
        tall = _set(label, section.title, LABEL.scaled(size), 0.0, 0.0, MARGIN, measure)
        shown = technical or section is not sections[0]  # the ground of the head ends just above the first
        rule = Piece("", (Box(SIDE, 0.0, flow.full_width, 0.6, "edge"),) if shown else ())
        space = 7.5 * size
        chain = sum(strip.before + strip.height for strip in strips[: 1 + _kept(strips)])
        if flow.y + 2 * space + max(tall, chain) > flow.bottom:
            flow.turn()
        flow.advance(0.0 if flow.at_top else space)
        flow.put([rule], 0.0, flow.y)
        flow.advance(space * 0.75)
        top = flow.y
        flow.put([Piece("H2", tuple(label))], SIDE, top + _lower(label, strips[0]))
        page = len(flow.pages)
        again: list[Mark] = []
        _set(again, f"{section.title}, continued", replace(LABEL.scaled(size), bold=False), 0.0, 0.0, MARGIN, measure)
        first = replace(strips[0], before=0.0)
        flow.at_top = False
        flow.run([first, *strips[1:]], x, Piece("", tuple(again)))
        if len(flow.pages) == page and flow.y < top + tall:
            flow.advance(top + tall - flow.y)


def _lower(label: Sequence[Mark], strip: Strip) -> float:
    """How far down a title goes so that it stands on the first line of what it names."""
    inks = [mark for piece in strip.pieces for mark in piece.marks if isinstance(mark, Ink)]
    heights = [mark.y for mark in label if isinstance(mark, Ink)]
    return max(0.0, min((ink.y for ink in inks), default=0.0) - heights[0])


def _kept(strips: Sequence[Strip]) -> int:
    """How many strips the first one must stay with."""
    count = 0
    while count < len(strips) - 1 and strips[count].keep:
        count += 1
    return count


def _running(flow: Flow, data: SheetData, number: int, measure: Measure) -> list[Piece]:
    """Head and foot of a page: decoration for a reader."""
    total, base = len(flow.pages), flow.height - FOOT_BASE
    page = f"Page {number} of {total}"
    left = " · ".join(filter(None, (data.footer, f"made with {data.made_with}", data.date)))
    room = flow.full_width - measure.width(page, RUNNING) - 20.0
    marks: list[Mark] = [
        Box(SIDE, base - 12.0, flow.full_width, 0.6, "line"),
        Ink(SIDE, base, lines_of(left, RUNNING, room, measure)[0], RUNNING),
        Ink(SIDE + flow.full_width - measure.width(page, RUNNING), base, page, RUNNING),
    ]
    if number > 1:
        title = lines_of(data.title, RUNNING, flow.full_width, measure)[0]
        marks += [Ink(SIDE, TOP, title, RUNNING), Box(SIDE, TOP + 6.0, flow.full_width, 0.6, "line")]
    return [Piece("", tuple(marks))]


FOOT_BASE = 26.0  # of the footer, from the lower edge
