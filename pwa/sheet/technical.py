"""The technical part of a sheet: entries with where they come from, settings, working, sources, validity, cautions.

Sources are numbered in the order in which they are first named, and listed at the end with how well each was checked.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping
from math import isfinite
from numbers import Real

from core.job.answers import Assumption, Caution, Part
from core.job.comparison import Comparison
from core.job.fields import CHOICES, FIELDS, SECTIONS, choice_for, field_for
from core.job.ledger import ORIGIN
from core.job.offer import Offer
from core.job.record import Entry, Job
from core.job.signoff import SignOff
from core.references import REFERENCES
from core.working import Step
from pwa.sheet.data import Block, Firm, Points, Said, Section, Table, Text
from pwa.sheet.money import money_text, percent_text, plain_number
from pwa.state.display import Display
from pwa.text import NOTHING, format_number, format_quantity

SETTINGS = {"softener": ("hardness", "meter", "salt", "interval", "reserve"), "blend": ("share",)}  # answers to be set
OTHER = "Other ions"  # an assumption that is not about one entry
_KEY = re.compile(r"\[([A-Z][A-Z0-9.-]+)(?:, (?:checked|secondary|from memory))?\]")
MUST_DECIDE = (
    "Whether this work may be done here, who may do it, and what must be registered or inspected.",
    "Backflow protection between the supply and the softener, and its yearly test.",
    "The drain: an air gap, and whether brine may go to the sewer, to a septic tank or to the ground here.",
    "Which taps stay on raw water: outside, and a drinking tap where the code or the household wants one.",
    "Pressure: a reducer where the supply is above what the softener is built for.",
    "Earthing: a metal pipe that served as earth needs a bond across the softener; that is an electrician's work.",
    "Pipes of lead, galvanised steel or copper with sour water: whether the tap water must be tested afterwards.",
)


class Sources:
    """The sources named so far, each with its number."""

    def __init__(self) -> None:
        self._numbers: dict[str, int] = {}

    def cite(self, key: str) -> str:
        """How a source stands in the text: "[3]" where it is in the bibliography, else its own words."""
        if key in REFERENCES:
            return f"[{self._numbers.setdefault(key, len(self._numbers) + 1)}]"
        known = [found for found in REFERENCES if key.startswith(f"{found} ")]
        if known:
            return f"{self.cite(known[0])}{key.removeprefix(known[0])}"
        return key

    def in_text(self, text: str) -> str:
        """A text with the keys in its brackets turned into numbers."""
        return _KEY.sub(lambda found: self.cite(found[1]) if found[1] in REFERENCES else found[0], text)

    def listed(self) -> tuple[str, ...]:
        """Citation and status of each, in the order of their numbers."""
        return tuple(f"{REFERENCES[key].citation} ({REFERENCES[key].status})" for key in self._numbers)


def technical_sections(
    job: Job,
    parts: Mapping[str, Part],
    display: Display,
    firm: Firm,
    offer: Offer | None,
    reckoned: Comparison | None,
    signed: SignOff | None,
) -> tuple[Section, ...]:
    """All that stands behind the front."""
    sources = Sources()
    found = [
        ("Entries", _entries(job, display)),
        ("Settings", _settings(job, parts, display)),
        ("Assumed, not measured", _assumed(parts.values(), display, sources)),
        ("Choices", _choices(job)),
        *((f"{SECTIONS.get(key, key)}: answers", _answers(part, display)) for key, part in parts.items()),
        ("Offer in detail", _offer(offer, reckoned, display) if offer and reckoned else ()),
        ("Sign-off", _sign_off(signed, display) if signed else ()),
        ("Look again", _problems(parts.values())),
        ("Cautions", _cautions(parts.values(), sources)),
        ("For the local code and a licensed installer", (Points(MUST_DECIDE),)),
        ("Working in short", _working(parts.values(), display, sources)),
        ("Where it holds", _validity(parts.values(), sources)),
        ("Notes", (Text(job.notes),) if job.notes.strip() else ()),
        ("Terms", (Text(firm.terms, "small"),) if firm.terms.strip() else ()),
        ("Sources", _sources(sources)),
    ]
    return tuple(Section(title, tuple(blocks)) for title, blocks in ((t, tuple(b)) for t, b in found) if blocks)


def _entries(job: Job, display: Display) -> list[Block]:
    rows = [
        (_label(key, key), _entered(job.entries[key], display), _origin(job.entries[key]))
        for key in (*FIELDS, *(key for key in job.entries if key not in FIELDS))
        if key in job.entries
    ]
    return (
        [Table(("Entry", "Value", "Where it comes from"), tuple(rows), (0.42, 0.24, 0.34), frozenset({1}))]
        if rows
        else []
    )


def _label(key: str, otherwise: str = OTHER) -> str:
    named = field_for(key) or choice_for(key)
    return named.label if named else otherwise


def _entered(entry: Entry, display: Display) -> str:
    if entry.value is None:
        return f"“{entry.typed}”, not understood"
    if not entry.unit:
        return format_number(entry.value, 6, display.decimal)
    return format_quantity(entry.value, entry.unit, display.decimal)


def _origin(entry: Entry) -> str:
    return ORIGIN.get(entry.source, entry.source) + (f", {entry.kit}" if entry.kit else "")


def _assumed(parts: Iterable[Part], display: Display, sources: Sources) -> list[Block]:
    found: dict[str, Assumption] = {}
    for part in parts:
        if part.answers:
            found |= {assumption.field: assumption for assumption in part.assumptions}
    rows = []
    for key, assumption in found.items():
        cited = "" if assumption.source == "definition" else f"\n{sources.cite(assumption.source)}"
        why = f"{sources.in_text(assumption.why)}{cited}"
        shown = NOTHING if assumption.amount is None else display.show(assumption.amount)
        rows.append((_label(key), shown, why))
    return [Table(("", "Value", "Why"), tuple(rows), (0.30, 0.20, 0.50), frozenset({1}))] if rows else []


def _settings(job: Job, parts: Mapping[str, Part], display: Display) -> list[Block]:
    """What is set at the valve head and at the blending valve, where it has been answered."""
    rows = []
    for section, keys in SETTINGS.items():
        answers = parts[section].answers if section in parts else {}
        rows += [
            (answers[key].label, display.show(answers[key].amount), display.say(answers[key].words))
            for key in keys
            if key in answers
        ]
    target = job.entries.get("blend.target")
    if target is not None and target.value is not None:
        rows.append((_label("blend.target"), _entered(target, display), "Turn the blending valve until it comes out."))
    return [Table(("", "Set to", ""), tuple(rows), (0.30, 0.20, 0.50), frozenset({1}))] if rows else []


def _choices(job: Job) -> list[Block]:
    rows = []
    for key in (*CHOICES, *(key for key in job.choices if key not in CHOICES)):
        choice, decided = choice_for(key), job.choices.get(key)
        if choice is not None and decided is not None:
            rows.append((choice.label, dict(choice.options).get(decided, decided)))
    return [Table(("Choice", "Decided"), tuple(rows), (0.42, 0.58))] if rows else []


def _answers(part: Part, display: Display) -> list[Block]:
    rows = tuple(
        (answer.label, display.show(answer.amount), display.say(answer.words)) for answer in part.answers.values()
    )
    return [Table(("Answer", "Value", ""), rows, (0.30, 0.20, 0.50), frozenset({1}))] if rows else []


def _offer(offer: Offer, reckoned: Comparison, display: Display) -> list[Block]:
    book, decimal = offer.book, display.decimal
    blocks: list[Block] = []
    for at, column in enumerate(reckoned.columns, start=1):
        rows = [
            (
                row.line.name + (f"\nless {percent_text(row.line.discount, decimal)}" if row.line.discount else ""),
                f"{plain_number(row.line.quantity, decimal)} {row.line.unit}",
                money_text(row.line.price, book, decimal),
                money_text(row.amount, book, decimal),
            )
            for row in column.total.lines
        ]
        sums = [("Sum", "", "", money_text(column.total.subtotal, book, decimal))]
        if column.total.discount:
            label = f"Discount {percent_text(column.option.discount, decimal)}"
            sums.append((label, "", "", money_text(-column.total.discount, book, decimal)))
        sums += [
            (
                f"Tax {percent_text(tax.percent, decimal)} ({tax.name})",
                "",
                f"on {money_text(tax.base, book, decimal)}",
                money_text(tax.amount, book, decimal),
            )
            for tax in column.total.taxes
        ]
        sums.append(("Total", "", "", money_text(column.total.gross, book, decimal)))
        strong = frozenset({len(rows), len(rows) + len(sums) - 1})
        name = column.option.name or f"Design {at}"
        blocks.append(
            Table(
                (name, "Quantity", "Price", "Amount"),
                (*rows, *sums),
                (0.46, 0.18, 0.18, 0.18),
                frozenset({1, 2, 3}),
                strong,
            )
        )
    return [*blocks, Text(book.rule(), "small")] if blocks else []


def _sign_off(signed: SignOff, display: Display) -> list[Block]:
    blocks: list[Block] = [
        Said("note", f"{check.label}: {display.say(check.would_tell)}") for check in signed.open if check.would_tell
    ]
    if signed.explanation is not None:
        rows = []
        for cause in signed.explanation.causes:
            if cause.weight >= 0.01:
                weight = format_quantity(100.0 * cause.weight, "%", display.decimal, 2)
                speaks = " ".join(cause.speaks_for) or "No reading speaks for it."
                against = f" Against it: {' '.join(cause.speaks_against)}" if cause.speaks_against else ""
                detail = f"{display.say(cause.words)} First: {display.say(cause.first)}\n{speaks}{against}"
                rows.append((cause.label, weight, detail))
        blocks.append(
            Table(("What may be behind it", "Weight", "Reckoned"), tuple(rows), (0.28, 0.12, 0.60), frozenset({1}))
        )
        blocks.append(
            Text(
                "Weights rank the causes named here by what the readings show; they are no odds of anything else. A "
                "reading counts as met or missed where the band that holds 8 cases of 10 lies wholly on one side of "
                "the promise.",
                "small",
            )
        )
    return blocks


def _problems(parts: Iterable[Part]) -> list[Block]:
    found = dict.fromkeys((problem.level, problem.text) for part in parts for problem in part.problems)
    return [Said("bad" if level == "error" else "watch", text) for level, text in found]


def _cautions(parts: Iterable[Part], sources: Sources) -> list[Block]:
    found: dict[str, Caution] = {}
    for part in parts:
        if part.answers:
            found |= {caution.key: caution for caution in part.cautions}
    return [
        Said(caution.level, f"{caution.text} {_in_brackets(sources.cite(caution.source))}")
        for caution in found.values()
    ]


def _in_brackets(cited: str) -> str:
    return cited if cited.startswith("[") else f"[{cited}]"


def _working(parts: Iterable[Part], display: Display, sources: Sources) -> list[Block]:
    rows = [_step(step, display, sources) for step in _steps(parts)]
    return [Table(("Step", "Result", "Source"), tuple(rows), (0.62, 0.22, 0.16), frozenset({1}))] if rows else []


def _steps(parts: Iterable[Part]) -> list[Step]:
    """The steps of all parts, each formula with the same result once; readings are in the entries already."""
    found: dict[tuple[str, str], Step] = {}
    for part in parts:
        for step in part.working:
            if "reading" not in step.inputs and _is_number(step.result):
                found.setdefault((step.card.quantity, repr(step.result)), step)
    return list(found.values())


def _step(step: Step, display: Display, sources: Sources) -> tuple[str, str, str]:
    card = step.card
    taken = ", ".join(
        f"{_said(name)} = {_value(value, _unit(name, card.takes), display)}"
        for name, value in step.inputs.items()
        if _is_number(value) or isinstance(value, str)
    )
    text = f"{card.quantity}\n{card.expression}" + (f"\nwith {taken}" if taken else "")
    cited = "" if card.source == "definition" else sources.cite(card.source)
    return text, _value(step.result, card.unit, display), cited


def _said(name: str) -> str:
    return name.replace("_", " ")


def _unit(name: str, takes: Mapping[str, str]) -> str:
    unit = takes.get(name, "")
    return "" if unit == _said(name) else unit  # "persons = 4", not "persons = 4 persons"


def _is_number(value: object) -> bool:
    return isinstance(value, Real) and not isinstance(value, bool) and isfinite(float(value))


def _value(value: object, unit: str, display: Display) -> str:
    if isinstance(value, str):
        return value
    return f"{format_number(float(value), 4, display.decimal)} {unit}".rstrip()  # type: ignore[arg-type]


def _validity(parts: Iterable[Part], sources: Sources) -> list[Block]:
    found = dict.fromkeys(
        f"{step.card.quantity}: {sources.in_text(step.card.validity)}" for step in _steps(parts) if step.card.validity
    )
    return [Points(tuple(found))] if found else []


def _sources(sources: Sources) -> list[Block]:
    listed = sources.listed()
    if not listed:
        return []
    words = (
        "checked: the text or table was read when the figure was entered. secondary: a copy or a page that quotes it "
        "was read. from memory: the source is named, the figure was not read again there."
    )
    return [Points(listed, numbered=True), Text(words, "small")]
