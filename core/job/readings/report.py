"""What a pasted report was found to say: entries, questions, and what was left over."""

from __future__ import annotations

from dataclasses import dataclass

from core.job.record import Entry, Job

Span = tuple[int, int]  # from, to: places in the text as it was given


@dataclass(frozen=True, slots=True)
class Found:
    """A value that was read, beside the words it came from; to be confirmed before it becomes an entry."""

    field: str
    entry: Entry
    spans: tuple[Span, ...]  # where it stands; more than one where a heading belongs to it
    words: str  # exactly those places of the text
    how: str  # how it was understood, in a sentence
    below: bool = False  # "< 0,05": the value is at most this
    above: bool = False  # "> 425": at least this


@dataclass(frozen=True, slots=True)
class Question:
    """Something that can mean several things: the user is asked, nothing is guessed."""

    text: str  # a sentence that asks
    choices: tuple[Found, ...]
    spans: tuple[Span, ...]
    words: str


@dataclass(frozen=True, slots=True)
class Left:
    """Words that became no entry, kept in sight, with the reason."""

    kind: str  # unknown · no entry · no number · not usable · repeated · limit · method · heading · beside
    span: Span
    words: str
    why: str


@dataclass(frozen=True, slots=True)
class Report:
    """All that a text says: each line that is not blank is in at least one of the three."""

    text: str
    found: tuple[Found, ...] = ()
    questions: tuple[Question, ...] = ()
    left: tuple[Left, ...] = ()
    refusal: str = ""  # why the text was not read at all; empty where it was
    job: Job | None = None  # where the text is a job file of this app

    @property
    def not_understood(self) -> tuple[Left, ...]:
        """What a reader should look at again: neither used, nor known to be of no use."""
        return tuple(item for item in self.left if item.kind in ("unknown", "no number", "not usable"))


def words_at(text: str, spans: tuple[Span, ...]) -> str:
    """The words of a text at some places."""
    return " … ".join(text[start:end] for start, end in spans)
