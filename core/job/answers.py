"""What an assessment says: answers with their working, cautions, and what is missing.

Nothing here computes. A part of an assessment is one section of the job sheet (water, softener, blend …). An answer
carries a number with its unit, a phrase whose numbers are still amounts (the reader chooses the units they are
shown in), and the steps that led to it.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field

from core.working import Step


@dataclass(frozen=True, slots=True)
class Amount:
    """A number with its unit and the quantity it measures, so that it can be shown in another unit."""

    value: float
    unit: str
    quantity: str = ""  # a quantity of core.units; "" where there is nothing to convert (persons, pH)
    role: str = ""  # what kind of that quantity, where people use other units for it: resin among volumes


@dataclass(frozen=True, slots=True)
class Phrase:
    """A sentence whose numbers are amounts: "Regenerates every {days}"."""

    text: str
    amounts: Mapping[str, Amount] = field(default_factory=dict)

    def render(self, show: Callable[[Amount], str]) -> str:
        """The sentence, each amount put into words by `show`."""
        return self.text.format_map({name: show(amount) for name, amount in self.amounts.items()})


def say(text: str, **amounts: Amount) -> Phrase:
    """A phrase from its text and the amounts it names."""
    return Phrase(text, amounts)


@dataclass(frozen=True, slots=True)
class Mark:
    """A limit worth a tick beside an answer, with its name and source."""

    name: str
    at: Amount
    source: str = ""


@dataclass(frozen=True, slots=True)
class Answer:
    """One result: its number, its words, and how it came about."""

    key: str
    label: str
    amount: Amount
    words: Phrase
    steps: tuple[Step, ...] = ()
    marks: tuple[Mark, ...] = ()
    band: tuple[float, float] | None = None  # holds 8 cases of 10, in the unit of the amount
    tone: str = "plain"  # plain | good | watch | bad; always said in words too


@dataclass(frozen=True, slots=True)
class Missing:
    """An entry that a part cannot do without, and what it is needed for."""

    field: str
    text: str


@dataclass(frozen=True, slots=True)
class Problem:
    """Something wrong or odd about an entry; the text says what is accepted and what to do next."""

    field: str
    level: str  # error: no answer from this entry · warning: answered, but look again
    text: str
    source: str = ""


@dataclass(frozen=True, slots=True)
class Assumption:
    """A value used because nothing was entered; never shown as if it had been measured."""

    field: str
    amount: Amount | None  # None where more than a number was assumed
    why: str
    source: str


@dataclass(frozen=True, slots=True)
class Caution:
    """A warning that belongs to the answers of a part."""

    key: str
    level: str  # note | care | danger
    text: str
    source: str


@dataclass(frozen=True, slots=True)
class Bar:
    """One bar of a picture: where it stands, how high it is, what it means, and the entry it would set."""

    at: Amount
    height: Amount
    words: Phrase
    fits: bool  # whether it keeps every limit
    chosen: bool


@dataclass(frozen=True, slots=True)
class Picture:
    """A row of bars to touch; `sets` names the entry that a bar can be taken over into."""

    title: str
    along: str  # what the bars stand along
    up: str  # what their height is
    bars: tuple[Bar, ...]
    sets: str = ""


@dataclass(frozen=True, slots=True)
class Part:
    """The assessment of one section. The first answer is its headline."""

    key: str
    answers: Mapping[str, Answer] = field(default_factory=dict)
    missing: tuple[Missing, ...] = ()
    problems: tuple[Problem, ...] = ()
    assumptions: tuple[Assumption, ...] = ()
    cautions: tuple[Caution, ...] = ()
    spread: Mapping[str, tuple[float, float]] | None = None
    picture: Picture | None = None

    @property
    def headline(self) -> Answer | None:
        """The answer that leads the card; None while something is missing."""
        return next(iter(self.answers.values()), None)

    @property
    def working(self) -> tuple[Step, ...]:
        """The steps of all answers in their order, each once."""
        steps: dict[int, Step] = {}
        for answer in self.answers.values():
            for step in answer.steps:
                steps.setdefault(id(step), step)
        return tuple(steps.values())
