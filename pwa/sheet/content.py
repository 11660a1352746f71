"""What stands on a sheet: from a job and its assessment to finished blocks of text. Pure; the same in, the same out.

The front is for the customer: what was found, what is proposed, what it does and costs, what to watch. What a builder
or an inspector wants to know stands in `pwa.sheet.technical`.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from decimal import Decimal
from itertools import zip_longest
from typing import TYPE_CHECKING

from core.job.answers import Amount, Answer, Caution, Part
from core.job.comparison import LEFT_OUT, Column, Comparison, Saving, compare
from core.job.fields import sections_of
from core.job.offer import Offer
from core.job.prices import PriceBook
from core.job.record import Job
from core.job.signoff import SignOff
from pwa.sheet.data import Beside, Block, Figure, Firm, Said, Scale, Section, SheetData, Signature, Table, Text
from pwa.sheet.money import money_text, plain_number
from pwa.sheet.technical import technical_sections
from pwa.state import line
from pwa.state.display import Display

if TYPE_CHECKING:
    from core.job.assessment import Assessment

FOUND = ("water", "demand", "scale")  # sections that say how things are; all others say what is proposed
DOES = ("interval", "sodium", "sodium_added", "potassium")  # answers a customer asks for
IN_COSTS = ("salt_year", "water_year")  # those that stand among the costs where there is an offer
SIGNS = {"met": "✓", "not met": "✗", "cannot tell": "!"}

LOCAL = (
    "Connection, backflow protection and the drain are for a licensed installer under the local code, which comes "
    "before anything on this sheet."
)


@dataclass(frozen=True, slots=True)
class Signed:
    """A sign-off with the name and the date under it."""

    result: SignOff
    name: str = ""
    date: str = ""


def sheet_of(
    job: Job,
    parts: Mapping[str, Part],
    display: Display,
    firm: Firm | None = None,
    *,
    offer: Offer | None = None,
    signed: Signed | None = None,
    date: str = "",
    day: str = "",
    paper: str = "A4",
) -> SheetData:
    """The sheet of a job. `parts` are the parts of its assessment by section; `date` is shown, `day` is ISO."""
    own = firm or Firm()
    reckoned = compare(offer) if offer and offer.options else None
    front = [
        _section("What was found", _found(parts, display)),
        _section("What is proposed", _proposed(parts, display)),
        _section("What it does", _does(parts, display, () if reckoned else IN_COSTS)),
        _section("What it costs", _costs(offer, reckoned, display) if offer and reckoned else ()),
        _section("What was measured afterwards", _signed(signed, display) if signed else ()),
        _section("What to watch", _watch(parts)),
    ]
    return SheetData(
        title=job.name or "Water and softening",
        subtitle=" · ".join(filter(None, (job.place, date))),
        firm=own,
        date=date,
        day=day,
        paper=paper,
        front=tuple(section for section in front if section),
        technical=technical_sections(job, parts, display, own, offer, reckoned, signed.result if signed else None),
        footer=own.name,
    )


def parts_of(assessment: Assessment) -> dict[str, Part]:
    """The parts of an assessment by section, in the order of the visit."""
    return {key: getattr(assessment, key) for key in sections_of(assessment.job.choices)}


def _section(title: str, blocks: Iterable[Block]) -> Section | None:
    held = tuple(blocks)
    return Section(title, held) if held else None


def figure_of(answer: Answer, display: Display) -> Figure:
    """An answer as a block, its words and its line in the reader's units."""
    number, unit = display.figure(answer.amount)
    return Figure(answer.label, number, unit, display.say(answer.words), answer.tone, scale_of(answer, display))


def scale_of(answer: Answer, display: Display) -> Scale | None:
    """The line under an answer; None where it has neither band nor limits."""
    marks = [mark for mark in answer.marks if mark.at.unit == answer.amount.unit]
    if not marks and answer.band is None:
        return None
    here = answer.amount.value
    values = [here, *(answer.band or ()), *(mark.at.value for mark in marks)]
    scale = line.Scale.of(values)

    def place(value: float) -> float:
        return (scale.x(value) + 1.0) / 2.0

    ticks = tuple((place(mark.at.value), f"{mark.name} {display.show(mark.at)}") for mark in marks)
    band = (place(answer.band[0]), place(answer.band[1])) if answer.band else None
    return Scale(place(here), band, ticks, _spoken(answer, display, [words for _, words in ticks]))


def _spoken(answer: Answer, display: Display, ticks: list[str]) -> str:
    said = [f"{answer.label} {display.show(answer.amount)}"]
    if answer.band:
        kind = answer.amount
        low, high = (display.show(Amount(end, kind.unit, kind.quantity, kind.role)) for end in answer.band)
        said.append(f"8 cases of 10 between {low} and {high}")
    return ", ".join([*said, *ticks])


def _found(parts: Mapping[str, Part], display: Display) -> list[Block]:
    blocks: list[Block] = []
    for key in FOUND:
        part = parts.get(key)
        if part is None or part.headline is None:
            continue
        if not blocks:
            blocks.append(figure_of(part.headline, display))
        else:
            blocks.append(Text(display.say(part.headline.words)))
        blocks += [
            Said(answer.tone, f"{answer.label} {display.show(answer.amount)}. {display.say(answer.words)}")
            for answer in list(part.answers.values())[1:]
            if answer.tone == "bad" or (answer.tone == "watch" and key == "water")
        ]
    return blocks


def _proposed(parts: Mapping[str, Part], display: Display) -> list[Block]:
    headlines = [part.headline for key, part in parts.items() if key not in FOUND and part.headline is not None]
    figures = tuple(figure_of(headline, display) for headline in headlines)
    return list(figures) if len(figures) < 2 else [Beside(figures)]


def _does(parts: Mapping[str, Part], display: Display, more: tuple[str, ...]) -> list[Block]:
    names = (*DOES, *more)
    found: dict[str, Answer] = {}
    for key, part in parts.items():
        if key not in FOUND:
            found |= {name: answer for name, answer in part.answers.items() if name in names and name not in found}
    shown = [found[name] for name in names if name in found]
    cells = [(answer.label, display.show(answer.amount)) for answer in shown]
    pairs = [(*one, "", *other) for one, other in zip_longest(cells[::2], cells[1::2], fillvalue=("", ""))]
    said = [
        Said(answer.tone, f"{answer.label}: {display.say(answer.words)}")
        for answer in shown
        if answer.tone in ("watch", "bad")
    ]
    return [Table(("",) * 5, tuple(pairs), (0.34, 0.14, 0.02, 0.29, 0.17), frozenset({1, 4})), *said] if pairs else []


def _watch(parts: Mapping[str, Part]) -> list[Block]:
    found: dict[str, Caution] = {}
    for part in parts.values():
        if part.answers:
            found |= {caution.key: caution for caution in part.cautions if caution.level in ("care", "danger")}
    ranked = sorted(found.values(), key=lambda caution: caution.level != "danger")
    return [*(Said(caution.level, caution.text) for caution in ranked), Said("note", LOCAL)]


def _costs(offer: Offer, reckoned: Comparison, display: Display) -> list[Block]:
    columns, book, decimal = reckoned.columns, offer.book, display.decimal

    def money(amount: Decimal | None) -> str:
        return money_text(amount, book, decimal)

    rows = [
        ("Price now, tax included", *(money(column.total.gross) for column in columns)),
        ("Salt a year", *(_salt(column, money, decimal) for column in columns)),
        ("Water a year", *(_water(column, money, decimal) for column in columns)),
        *([("Service a year", *(_service(column, money) for column in columns))] if book.service_year else []),
        (f"Price and {offer.years} years", *(money(column.over_years) for column in columns)),
    ]
    names = tuple(column.option.name or f"Design {at}" for at, column in enumerate(columns, start=1))
    width = 0.34 if len(columns) == 1 else 0.66 / len(columns)
    table = Table(
        ("", *names),
        tuple(rows),
        (0.34, *(width for _ in columns)),
        frozenset(range(1, len(columns) + 1)),
        frozenset({0, len(rows) - 1}),
    )
    lacking = dict.fromkeys(text for column in columns if column.running for text in column.running.missing)
    savings = [_saving(saving, names, book, display) for saving in reckoned.savings]
    notes = [
        Text(
            f"At today's prices, without interest. {LEFT_OUT}" if savings else "At today's prices, without interest.",
            "small",
        )
    ]
    return [table, *(Said("missing", text) for text in lacking), *(Text(text) for text in savings), *notes]


def _salt(column: Column, money, decimal: str) -> str:
    used = column.running
    return "–" if used is None else f"{money(used.salt_cost)}\n{plain_number(used.salt, decimal)} {used.salt_unit}"


def _water(column: Column, money, decimal: str) -> str:
    used = column.running
    return "–" if used is None else f"{money(used.water_cost)}\n{plain_number(used.water, decimal)} {used.water_unit}"


def _service(column: Column, money) -> str:
    return "–" if column.running is None else money(column.running.service_cost)


def _saving(saving: Saving, names: tuple[str, ...], book: PriceBook, display: Display) -> str:
    one, other = (f"“{names[at]}”" for at in (saving.option, saving.against))
    if saving.why_not:
        return f"{one} against {other}: {saving.why_not}"
    gains = [(saving.salt, "kg", "mass", "", "salt"), (saving.water, "L", "volume", "large volume", "water")]
    used = [
        f"{display.show(Amount(abs(value), unit, quantity, role))} {'less' if value > 0 else 'more'} {name}"
        for value, unit, quantity, role, name in gains
        if value
    ]
    money = f"{money_text(saving.money, book, display.decimal)} a year less to run" if (saving.money or 0) > 0 else ""
    text = f"{one} uses {' and '.join(used)} a year than {other}" if used else f"{one} costs {money} than {other}"
    if used and money:
        text += f", and costs {money}"
    if saving.payback is not None:
        extra = money_text(saving.extra, book, display.decimal)
        years = plain_number(saving.payback, display.decimal)
        text += f"; the {extra} more that it costs now come back in {years} years"
    return text + "."


def _signed(signed: Signed, display: Display) -> list[Block]:
    rows = []
    for check in signed.result.checks:
        if check.reading is not None:
            shown = display.show(Amount(check.reading.value, check.unit, check.quantity))
            rows.append(
                (check.label, shown, f"{SIGNS[check.verdict]} {check.verdict.capitalize()}\n{display.say(check.words)}")
            )
    table = Table(("", "Read", "Against what was promised"), tuple(rows), (0.36, 0.18, 0.46), frozenset({1}))
    explained: list[Block] = []
    if signed.result.explanation is not None:
        first = signed.result.explanation.causes[0]
        explained = [Said("watch", f"Likeliest reason: {first.label}. {display.say(first.words)}")]
    return [table, *explained, Signature(signed.name, signed.date)] if rows else []
