"""Reading a pasted report: from text to entries, questions and what is left over.

    read_report(text) -> Report

The text is read line by line in time proportional to its length; nothing of it is lost: whatever became no entry is
listed. A job file of this app is recognised and its entries are taken as they are.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from core.errors import JobFileError
from core.job.fields import FIELDS
from core.job.readings.cutting import Token, fold
from core.job.readings.items import Item, items_of
from core.job.readings.meaning import meaning_of
from core.job.readings.merging import merged
from core.job.readings.numbers import decimal_sign
from core.job.readings.report import Found, Left, Question, Report, Span
from core.job.readings.tables import DEAD, Cell, Columns
from core.job.readings.tokens import tokens_of
from core.job.record import FORMAT, Job

LARGEST = 100_000  # characters; a report of fifty pages is smaller
_LONGEST_TITLE = 80
_HIDDEN = dict.fromkeys(map(ord, "\ufeff\u200b\u200c\u200d\u00ad"), " ")  # signs without width


def read_report(text: str) -> Report:
    """What a pasted text says of a water. Never raises; a text that is too long is refused with a sentence."""
    if len(text) > LARGEST:
        return Report(
            "",
            refusal=f"The text holds {len(text):,} characters; at most {LARGEST:,} are read at once. Paste only the "
            "pages with the figures.",
        )
    if text.lstrip(" \t\r\n\ufeff").startswith("{") and FORMAT in text[: LARGEST // 2]:
        return _read_job(text)
    folded = fold(text).translate(_HIDDEN)
    items = list(_items(folded))
    sign = decimal_sign(t.text for item, _ in items for t in item.tokens if t.kind in ("number", "limited"))
    meanings = [meaning_of(item, text, sign) for item, _ in items]
    found, questions, left = merged([meaning for meaning in meanings if meaning is not None], text)
    headings = [Left("heading", span, text[span[0] : span[1]], "A heading.") for item, span in items if span]
    known = [*found, *questions, *left, *headings]
    rest = _rest(text, [item for item, _ in items], known)
    everything = sorted([*left, *headings, *rest], key=lambda item: item.span)
    return Report(text, tuple(found), tuple(questions), tuple(everything))


def _items(folded: str) -> Iterable[tuple[Item, Span | None]]:
    """The items of all lines; for a heading an empty item and its place."""
    columns = Columns()
    lines = list(_lines(folded))
    title = ""  # a line above that tells of another water
    waiting: Item | None = None  # a line that holds nothing but a name
    several = False  # and so did the line before it
    for index, (start, line) in enumerate(lines):
        below = lines[index + 1][1] if index + 1 < len(lines) else ""
        if not line.strip():
            continue
        if columns.take(line, below):
            yield Item(), _span(line, start)
            headings = _heading_tokens(columns, line, start)
            waiting = None
            continue
        items = _of_line(columns, line, start, headings if columns.names else {})
        held, waiting = waiting, None
        alone = items[0] if len(items) == 1 else None
        if held is not None and alone is not None and alone.has_number and not alone.fields and not several:
            items = [_on_two_lines(held, alone)]
        elif held is not None:
            yield held, None
        several = held is not None
        if alone is not None and alone.fields and not alone.of_kind("number", "limited", "range"):
            waiting = items.pop()
        under = _title(line, items)
        title = title if under is None else under
        for item in items:
            item.doubt = item.doubt or (f"It stands below “{title}”." if title else "")
            yield item, None
    if waiting is not None:
        yield waiting, None


def _lines(text: str) -> Iterable[tuple[int, str]]:
    """The lines of a text, each with its place."""
    start = 0
    for line in text.splitlines(keepends=True):
        yield start, line.rstrip("\r\n\v\f\x1c\x1d\x1e\x85\u2028\u2029")
        start += len(line)


def _span(line: str, start: int) -> Span:
    return start + len(line) - len(line.lstrip()), start + len(line.rstrip())


def _heading_tokens(columns: Columns, line: str, start: int) -> dict[int, list[Token]]:
    """The tokens of each heading, where the columns of a table are named after what was measured."""
    if not columns.names:
        return {}
    places = sorted(columns.names.items(), key=lambda item: item[1])
    ends = [*(place for _, place in places[1:]), len(line)]
    return {
        column: [t for t in tokens_of(line[place:end], start + place) if t.kind != "sep"]
        for (column, place), end in zip(places, ends, strict=True)
    }


def _of_line(columns: Columns, line: str, start: int, headings: dict[int, list[Token]]) -> list[Item]:
    cells = columns.row(line)
    if cells is None:
        return items_of(_by_order(columns, tokens_of(line, start)))
    if headings:
        return [_under(cell, line, start, headings) for cell in cells if cell.start < cell.end]
    return _of_row(cells, columns.sign, line, start)


def _under(cell: Cell, line: str, start: int, headings: dict[int, list[Token]]) -> Item:
    """The item of a cell whose column is named after what was measured."""
    item = Item.of(tokens_of(line[cell.start : cell.end], start + cell.start))
    if item.has_number and not item.fields:
        item.heading = headings.get(cell.column, [])
        item.fields = {token.name.field for token in item.heading if token.name is not None}
    return item


def _of_row(cells: Sequence[Cell], sign: str, line: str, start: int) -> list[Item]:
    """The items of a row: names first, then units, then numbers; columns of limits and methods out of play."""
    tokens: list[Token] = []
    labels = {}
    order = {"name": 0, "unit": 1, "value": 2, "": 3}
    for cell in sorted(cells, key=lambda cell: (order.get(cell.role, 4), cell.column)):
        if cell.start == cell.end:
            continue
        for token in tokens_of(line[cell.start : cell.end], start + cell.start):
            if cell.role in DEAD and token.kind in ("number", "name", "unit", "range"):
                token.kind = "limited" if cell.role == "limit" and token.kind != "name" else "beside"
            elif sign == "," and token.kind == "number" and "," in token.text:
                token.text = token.text.replace(",", ".")  # quoted in a table parted by commas: a decimal sign
            labels[token.start] = cell.label
            tokens.append(token)
        tokens.append(Token("sep", start + cell.end, start + cell.end, ""))
    items = items_of(tokens)
    for item in items:
        item.labels = labels
    return items


def _by_order(columns: Columns, tokens: list[Token]) -> list[Token]:
    """Numbers of a line told apart by the order of the heading, where there are just as many."""
    roles = columns.by_order()
    numbers = [token for token in tokens if token.kind in ("number", "range")]
    if len(numbers) == len(roles) and "limit" in roles and len([t for t in tokens if t.kind == "name"]) == 1:
        for token, role in zip(numbers, roles, strict=True):
            if role == "limit":
                token.kind = "limited"
    return tokens


def _on_two_lines(name: Item, number: Item) -> Item:
    item = Item.of([*name.tokens, *number.tokens])
    item.doubt = "The number stands on the line after the name."
    return item


def _title(line: str, items: list[Item]) -> str | None:
    """What a line without names and numbers says of the lines below: "" or the words that tell of another water."""
    if any(item.fields or item.has_number for item in items) or not line.strip() or len(line) > _LONGEST_TITLE:
        return None
    told = any(item.of_kind("changes") for item in items)
    return line.strip(" \t:-=*#") if told else ""


def _rest(text: str, items: Iterable[Item], known: Iterable[Found | Question | Left]) -> list[Left]:
    """What none of the results holds: words, numbers and units, in runs; and lines without anything else."""
    taken = bytearray(len(text) + 1)
    for result in known:
        for start, end in result.spans if isinstance(result, Found | Question) else (result.span,):
            taken[start:end] = b"\1" * (end - start)
    rest = []
    for item in items:
        used = any(any(taken[token.start : token.end]) for token in item.tokens)
        run: list[Token] = []
        for token in [*item.tokens, None]:
            if token is not None and not any(taken[token.start : token.end]):
                run.append(token)
                continue
            rest += _run(run, text, used)
            run = []
    for left in rest:
        start, end = left.span
        taken[start:end] = b"\1" * (end - start)
    for start, line in _lines(text):
        first, last = _span(line, start)
        if first < last and not any(taken[first:last]):
            rest.append(Left("unknown", (first, last), text[first:last], "Nothing in this line is understood."))
    return rest


_WEIGHTY = (
    "word",
    "number",
    "unit",
    "name",
    "basis",
    "range",
    "date",
    "method",
    "limited",
    "limit",
    "absent",
    "beside",
)


def _run(run: Sequence[Token], text: str, beside: bool) -> list[Left]:
    """A run of tokens that no result holds, if there is more in it than signs and small words."""
    weighty = [token for token in run if token.kind in _WEIGHTY]
    if not weighty:
        return []
    shown = weighty if beside else [token for token in run if token.kind != "sep"]
    start, end = min(token.start for token in shown), max(token.end for token in shown)
    kinds = {token.kind for token in weighty}
    if kinds & {"limited", "limit"}:
        kind, why = "limit", "A limit, a target or a doubt, not a reading."
    elif "method" in kinds:
        kind, why = "method", "The method, or what goes with it."
    elif beside and kinds <= {"date", "word", "beside", "changes", "absent"}:
        kind, why = "beside", "Words beside a figure."
    elif not kinds & {"number", "name", "unit"}:
        kind, why = "unknown", "Nothing in this is understood."
    else:
        kind, why = "unknown", "It is not clear what this belongs to."
    return [Left(kind, (start, end), text[start:end], why)]


def _read_job(text: str) -> Report:
    """The entries of a job file, as they are in it."""
    try:
        job = Job.from_text(text)
    except JobFileError as error:
        return Report(text, left=(Left("unknown", (0, len(text)), text, str(error)),), refusal=str(error))
    found, left = [], []
    for key, entry in job.entries.items():
        at = max(text.find(f'"{key}"'), 0)
        span = (at, min(len(text), at + len(key) + 2))
        if key not in FIELDS or entry.value is None:
            why = "There is no entry of this name here." if key not in FIELDS else "It holds no number."
            left.append(Left("no entry", span, text[span[0] : span[1]], why))
            continue
        how = f"{FIELDS[key].label}: {entry.value:g} {entry.unit}".rstrip() + ", as in the job file."
        found.append(Found(key, entry, (span,), text[span[0] : span[1]], how))
    return Report(text, tuple(found), left=tuple(left), job=job)
