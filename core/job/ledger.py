"""Reads the entries of a job in the units of the core, and keeps account of it.

A ledger serves one part of an assessment. What it hands out is a step of the working, so that an answer can be
followed back to the reading; what was missing, assumed or out of range is written down beside it.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from functools import cache, partial
from typing import Any

from core.errors import TapwrightError
from core.job.answers import Amount, Answer, Assumption, Caution, Missing, Part, Problem
from core.job.fields import Field, choice_for, field_for
from core.job.record import Entry, Job
from core.units import convert
from core.working import Card, Step, Working

ORIGIN = {
    "measured": "measured",
    "report": "from a report",
    "told": "told by the customer",
    "assumed": "assumed",
}


@dataclass(slots=True)
class Ledger:
    """The account of one part: working, what is missing, what is wrong, what was assumed."""

    job: Job
    working: Working = field(default_factory=Working)
    missing: dict[str, Missing] = field(default_factory=dict)
    problems: dict[str, Problem] = field(default_factory=dict)
    assumptions: dict[str, Assumption] = field(default_factory=dict)

    def read(self, key: str) -> float | None:
        """The entry in the core's unit, or its default as an assumption, or None."""
        entry = self.job.entries.get(key)
        if entry is None:
            return self._assume(_known(key))
        return self._entered(_known(key), entry)

    def need(self, key: str, why: str) -> float | None:
        """The entry, noted as missing with what it is needed for where there is none."""
        value = self.read(key)
        if value is None:
            self.missing[key] = Missing(key, why)
        return value

    def choice(self, key: str) -> str:
        """What was chosen, or the default; an option that is not known counts as not chosen."""
        chosen, choice = self.job.choices.get(key), choice_for(key)
        if choice is None:
            raise KeyError(key)
        return chosen if chosen and (not choice.options or chosen in dict(choice.options)) else choice.default

    def chosen(self, key: str) -> bool:
        """Whether the user has decided."""
        return key in self.job.choices

    def turn(self, value: float, quantity: str, unit: str, other_unit: str) -> float:
        """A result in another unit, as a step of its own."""
        turn = partial(_turned, unit=unit, core_unit=other_unit, quantity=quantity)
        card = _turning_card(quantity, unit, other_unit)
        return self.working.add(Step(card, turn, {"reading": value}, turn(reading=value)))

    def take(self, other: Ledger, *results: Any) -> None:
        """Take over the account of another part, and the steps that led to these results."""
        known = {id(step) for step in self.working.steps}
        self.working.steps += [s for s in other.working.leading_to(*results) if id(s) not in known]
        self.missing |= other.missing
        self.problems |= other.problems
        self.assumptions |= other.assumptions

    def part(self, key: str, answers: list[Answer], cautions: tuple[Caution, ...] = ()) -> Part:
        """The finished part."""
        return Part(
            key=key,
            answers={answer.key: answer for answer in answers},
            missing=tuple(self.missing.values()),
            problems=tuple(self.problems.values()),
            assumptions=tuple(self.assumptions.values()),
            cautions=cautions,
        )

    def _assume(self, entry: Field) -> float | None:
        default = entry.default
        if default is None:
            return None
        amount = Amount(default.value, default.unit, entry.quantity, entry.role)
        self.assumptions[entry.key] = Assumption(entry.key, amount, default.why, default.source)
        return self._reading(entry, default.value, default.unit, "assumed")

    def _entered(self, entry: Field, held: Entry) -> float | None:
        if held.value is None:
            self._refuse(entry, f"“{held.typed}” is not understood, so nothing is computed from it.")
            return None
        try:
            value = self._reading(
                entry, held.value, held.unit, ORIGIN[held.source] + (f", {held.kit}" if held.kit else "")
            )
        except TapwrightError as error:
            self._refuse(entry, str(error))
            return None
        if not entry.lowest <= value <= entry.highest:
            self.working.steps.pop()
            self._refuse(
                entry,
                f"{entry.label} must be {_range(entry, held.unit)}; {held.value:g} {held.unit} was entered.",
            )
            return None
        return value

    def _reading(self, entry: Field, value: float, unit: str, origin: str) -> float:
        turn = partial(_turned, unit=unit, core_unit=entry.core_unit, quantity=entry.quantity)
        step = Step(_reading_card(entry.key, unit), turn, {"reading": value}, turn(reading=value), note=origin)
        return self.working.add(step)

    def _refuse(self, entry: Field, text: str) -> None:
        self.problems[entry.key] = Problem(entry.key, "error", text)


def _turned(reading: float, unit: str, core_unit: str, quantity: str) -> float:
    return convert(reading, unit, core_unit, quantity=quantity) if quantity else reading + 0.0


def _known(key: str) -> Field:
    entry = field_for(key)
    if entry is None:
        raise KeyError(key)
    return entry


@cache
def _reading_card(key: str, unit: str) -> Card:
    entry = _known(key)
    same = unit == entry.core_unit
    return Card(
        quantity=entry.label,
        expression="as entered" if same else f"as entered in {unit}, turned into {entry.core_unit}",
        unit=entry.core_unit,
        takes={"reading": unit},
        source="definition" if same else "EXACT",
    )


@cache
def _turning_card(quantity: str, unit: str, other_unit: str) -> Card:
    return Card(quantity.capitalize(), f"{unit} turned into {other_unit}", other_unit, {"reading": unit}, "EXACT")


def _range(entry: Field, unit: str) -> str:
    ends = (entry.lowest, entry.highest)
    if entry.quantity:
        ends = tuple(convert(end, entry.core_unit, unit, quantity=entry.quantity) for end in ends)
    return f"from {ends[0]:g} to {ends[1]:.4g} {unit}".rstrip()
