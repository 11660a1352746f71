"""Results of all items put together: one reading an entry, what repeats said so, what differs asked.

merged(meanings, text) -> (found, questions, left)
"""

from __future__ import annotations

from collections.abc import Sequence
from math import isclose

from core.job.fields import FIELDS
from core.job.readings.meaning import MOST_CHOICES, SAME
from core.job.readings.report import Found, Left, Question, words_at
from core.units import convert

MOST_QUESTIONS = 60

Meaning = Found | Question | Left


def merged(meanings: Sequence[Meaning], text: str) -> tuple[list[Found], list[Question], list[Left]]:
    """Readings one for each entry, questions, and the rest; in the order of the text."""
    left = [meaning for meaning in meanings if isinstance(meaning, Left)]
    by_field: dict[str, list[Found]] = {}
    for meaning in meanings:
        if isinstance(meaning, Found):
            by_field.setdefault(meaning.field, []).append(meaning)
    found: list[Found] = []
    questions: list[Question] = []
    for readings in by_field.values():
        different = _different(readings)
        if len(different) == 1:
            found.append(readings[0])
            left += [_repeated(again, readings[0]) for again in readings[1:]]
        else:
            questions.append(_which(different, text))
            left += [_repeated(again, different[0]) for again in readings if again not in different[:MOST_CHOICES]]
    settled = {reading.field: reading for reading in found}
    asked: set[object] = set()
    for meaning in meanings:
        if isinstance(meaning, Question):
            why = _why_not_asked(meaning, settled, asked, len(questions))
            left += [Left(kind, span, text[span[0] : span[1]], words) for kind, words in why for span in meaning.spans]
            questions += [] if why else [meaning]
    return found, sorted(questions, key=lambda question: question.spans), left


def in_core(found: Found) -> float:
    """The value of a reading in the unit of the core."""
    field, value = FIELDS[found.field], found.entry.value or 0.0
    return convert(value, found.entry.unit, field.core_unit, quantity=field.quantity) if field.quantity else value


def agree(one: Found, other: Found) -> bool:
    """Whether two readings say the same, to what rounding in two units can do."""
    same_mark = (one.below, one.above) == (other.below, other.above)
    return one.field == other.field and same_mark and isclose(in_core(one), in_core(other), rel_tol=SAME)


def _different(readings: Sequence[Found]) -> list[Found]:
    """The readings that do not say the same as one before them; looking is bounded."""
    kept: list[Found] = []
    for reading in readings:
        if len(kept) <= MOST_CHOICES and not any(agree(reading, held) for held in kept):
            kept.append(reading)
    return kept


def _which(readings: Sequence[Found], text: str) -> Question:
    choices = tuple(readings[:MOST_CHOICES])
    spans = tuple(sorted({span for choice in choices for span in choice.spans}))
    label = FIELDS[choices[0].field].label
    return Question(
        f"{label} is given more than once, and not alike. Which is meant?", choices, spans, words_at(text, spans)
    )


def _why_not_asked(
    question: Question, settled: dict[str, Found], asked: set[object], count: int
) -> list[tuple[str, str]]:
    """Kind and reason where a question need not be asked: a sure reading answers it, or it was asked before."""
    for choice in question.choices:
        sure = settled.get(choice.field)
        if sure is not None and agree(choice, sure):
            return [("repeated", f"It says what “{sure.words}” says.")]
    same = tuple((choice.field, choice.entry.value, choice.entry.unit) for choice in question.choices)
    if same in asked:
        return [("repeated", "It asks what is asked already.")]
    asked.add(same)
    if count >= MOST_QUESTIONS:
        return [("not usable", "There are more questions than anyone would answer: paste less at once.")]
    return []


def _repeated(again: Found, first: Found) -> Left:
    why = f"It says what “{first.words}” says." if agree(again, first) else "There are too many readings of it to ask."
    start, end = min(span[0] for span in again.spans), max(span[1] for span in again.spans)
    return Left("repeated", (start, end), again.words, why)
