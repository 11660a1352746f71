"""One open job: what was typed, what it means, what the assessment says of it.

The sheet is the only writer of its job, and calls `changed` with the section after each change. Each field and each
part of the assessment is an observable of its own, so that a key press redraws one field and one strip. Numbers exist
only in the job; the fields hold what was typed.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass, replace
from typing import Any, TypeVar

import flet as ft

from core.errors import UnitError
from core.job.answers import Part, Phrase, Problem
from core.job.fields import (
    CHOICES,
    FIELDS,
    FURTHER_PARTS,
    SECTION_CHOICE,
    SECTIONS,
    Field,
    choice_for,
    field_for,
    sections_of,
)
from core.job.kits import HowRead, Kit
from core.job.record import Entry, Job
from core.job.signoff_fields import SECTION as SIGNOFF
from core.job.source_fields import MOST, parameters_of, source_numbers
from pwa.state.sureness import SureState
from pwa.text import parse_quantity


@ft.observable
@dataclass
class FieldState:
    """One entry on the screen: the text as typed, its unit, where it comes from, what is wrong with it."""

    key: str
    typed: str = ""
    unit: str = ""
    source: str = "measured"
    refused: str = ""  # why what was typed is not a number with a unit
    note: str = ""  # how what was typed was understood, where that is not plain
    remark: str = ""  # what the checks say of the value
    level: str = ""  # of the remark: warning | error
    kit: str = ""  # what it was measured with, as kept in the entry
    odd: tuple[str, ...] = ()  # what the checks of the whole job say of it
    doubt: Phrase | None = None  # what the truth may be; None where nothing is to be said


@ft.observable
@dataclass
class ChoiceState:
    """One choice on the screen."""

    key: str
    value: str
    made: bool  # by the user; otherwise it is the default


@ft.observable
@dataclass
class PartState:
    """One section's assessment; `turn` changes with each new one."""

    key: str
    turn: int = 0
    _part: Part | None = None

    @property
    def part(self) -> Part | None:
        """The assessment; None until the first has been made."""
        return self._part

    def put(self, part: Part | None) -> None:
        """Take in a new assessment, or none where the last one no longer holds."""
        self._part = part
        self.turn += 1


State = TypeVar("State")


@ft.observable
@dataclass
class Layout:
    """What there is to show: the sections on the sheet, the sources, and what is looked at in them."""

    sections: tuple[str, ...] = ()
    sources: tuple[int, ...] = ()
    parameters: tuple[str, ...] = ()

    @classmethod
    def of(cls, job: Job) -> Layout:
        """What a job asks to be shown."""
        numbers = source_numbers((*job.entries, *job.choices))
        return cls(sections_of(job.choices), numbers, parameters_of(job.choices, job.entries))

    def follow(self, job: Job) -> None:
        """Take over what has changed."""
        new = Layout.of(job)
        for name in ("sections", "sources", "parameters"):
            if getattr(self, name) != getattr(new, name):
                setattr(self, name, getattr(new, name))


class _Made(dict[str, State]):
    """States by key, each made when it is first asked for: a job may hold entries that no table lists."""

    def __init__(self, make: Callable[[str], State], keys: Iterable[str]) -> None:
        super().__init__({key: make(key) for key in keys})
        self._make = make

    def __missing__(self, key: str) -> State:
        self[key] = self._make(key)
        return self[key]


@ft.observable
@dataclass
class Findings:
    """What the checks of the whole job find odd."""

    rows: tuple[Problem, ...] = ()


@ft.observable
@dataclass
class Turn:
    """Changes each time something is to be looked at anew."""

    turn: int = 0


@ft.observable
@dataclass
class Heading:
    """Name and place of the job."""

    name: str = ""
    place: str = ""
    notes: str = ""


class Sheet:
    """The open job and its verbs."""

    def __init__(
        self, job: Job, changed: Callable[[Sheet, str], None], units: Callable[[str], Mapping[str, str]]
    ) -> None:
        """`units` gives the unit of each role and quantity that goes with a hardness read in a unit."""
        self.job = job
        self._changed, self._units = changed, units
        self.heading = Heading(job.name, job.place, job.notes)
        further = (part for parts in FURTHER_PARTS.values() for part in parts)
        self.parts = {key: PartState(key) for key in (*SECTIONS, *further)}
        self.signoff = Turn()
        self.findings = Findings()
        self.sure = {key: SureState(key) for key in SECTIONS}
        self.assessment: Any = None  # of the job as it is now; made when first asked for
        self.locked = False  # while another tab does the saving
        self.own_kits: tuple[Kit, ...] = ()
        self.doubt_of: Callable[[str, Entry], Phrase | None] = lambda key, entry: None  # until it can be computed
        self.fields = _Made(self._field, FIELDS)
        self.choices = _Made(self._choice, CHOICES)
        self.layout = Layout.of(job)
        self.looked_at = ""  # the section on the screen: what it shows further is kept up to date

    @property
    def hardness_unit(self) -> str:
        """The unit the hardness was read in; "" where none was entered."""
        entry = self.job.entries.get("water.hardness")
        return entry.unit if entry is not None else ""

    def type(self, key: str, typed: str) -> None:
        """Take in what stands in a field now."""
        state = self.fields[key]
        state.typed = typed
        state.kit = HowRead.of(state.kit).kit  # a mean or a dilution belonged to the number that stood there
        self._enter(key)

    def set_unit(self, key: str, unit: str) -> None:
        """Say in which unit the number was read; the number stays."""
        self.fields[key].unit = unit
        self._enter(key)

    def set_source(self, key: str, source: str, kit: str = "") -> None:
        """Say where the entry comes from, and with which kit it was measured."""
        state = self.fields[key]
        state.source, state.kit = source, kit if source == "measured" else ""
        self._enter(key)

    def put_entry(self, key: str, entry: Entry) -> None:
        """Take over an entry that was made elsewhere: by a test in the field, or out of a report."""
        state = self.fields[key]
        made = _field_state(_known(key), entry, {})
        state.typed, state.unit, state.source, state.kit = made.typed, made.unit, made.source, made.kit
        self._enter(key)

    def put_entries(self, entries: Mapping[str, Entry | None]) -> None:
        """Take over several entries, or empty them where there is None."""
        for key, entry in entries.items():
            if entry is None:
                self.type(key, "")
            else:
                self.put_entry(key, entry)

    def say_doubts(self, section: str) -> None:
        """Say beside each entry of a section what the truth may be."""
        for key, state in self.fields.items():
            if not key.startswith(f"{section}."):
                continue
            entry = self.job.entries.get(key)
            said = None if entry is None or entry.value is None else self.doubt_of(key, entry)
            if said != state.doubt:
                state.doubt = said

    def choose(self, key: str, value: str) -> None:
        """Make a choice."""
        state = self.choices[key]
        state.value, state.made = value, True
        self._put(self.job.with_choice(key, value), _section(key))

    def show_section(self, section: str, *, shown: bool) -> None:
        """Put a section on the sheet, or take it off; its entries stay in the job."""
        kept = [key for key in SECTIONS if (shown if key == section else key in self.layout.sections)]
        if kept:
            self._put(self.job.with_choice(SECTION_CHOICE, " ".join(kept)), section if shown else "")

    def add_source(self) -> int | None:
        """Begin another source; gives its number, None where there are as many as can be."""
        free = next((number for number in range(1, MOST + 1) if number not in self.layout.sources), None)
        if free is not None:
            self.choose(f"sources.{free}.name", f"Source {free}")
        return free

    def remove_source(self, number: int) -> Callable[[], None]:
        """Take a source out of the job, with all that was entered for it; gives the way back."""
        own = f"sources.{number}."
        for states in (self.fields, self.choices):
            for key in [key for key in states if key.startswith(own)]:
                del states[key]
        before = self.job
        entries = {key: entry for key, entry in before.entries.items() if not key.startswith(own)}
        choices = {key: choice for key, choice in before.choices.items() if not key.startswith(own)}
        self._put(replace(before, entries=entries, choices=choices), "sources")

        def put_back() -> None:
            held = {key: entry for key, entry in before.entries.items() if key.startswith(own)}
            chosen = {key: choice for key, choice in before.choices.items() if key.startswith(own)}
            now = self.job
            again = replace(now, entries={**now.entries, **held}, choices={**now.choices, **chosen})
            self._put(again, "sources")

        return put_back

    def rename(self, name: str | None = None, place: str | None = None, notes: str | None = None) -> None:
        """Change the words that name the job."""
        heading = self.heading
        heading.name = heading.name if name is None else name
        heading.place = heading.place if place is None else place
        heading.notes = heading.notes if notes is None else notes
        self._put(replace(self.job, name=heading.name, place=heading.place, notes=heading.notes), "")

    def take(self, parts: dict[str, Part]) -> None:
        """Show a new assessment of some sections, and its problems beside their fields."""
        for key, part in parts.items():
            self.parts[key].put(part)
            self._remark(key, part)

    def take_findings(self, found: tuple[Problem, ...]) -> None:
        """Show what the checks of the whole job say, beside the entries they are about."""
        if found != self.findings.rows:
            self.findings.rows = found
        for key, state in self.fields.items():
            odd = self._odd(key)
            if odd != state.odd:
                state.odd = odd

    def _odd(self, key: str) -> tuple[str, ...]:
        return tuple(problem.text for problem in self.findings.rows if problem.field == key)

    def _enter(self, key: str) -> None:
        state = self.fields[key]
        state.refused = state.note = ""
        state.odd = ()
        if not state.typed.strip():
            state.remark = state.level = state.kit = ""
            state.doubt = None
            self._put(self.job.with_entry(key, None), _section(key))
            return
        value = None
        try:
            reading = parse_quantity(state.typed, _known(key).quantity, state.unit)
            value, state.unit, state.note = reading.value, reading.unit, reading.note
        except UnitError as error:
            state.refused = str(error)
        entry = Entry(value, state.unit, state.source, state.kit, typed=state.typed)
        if key == "water.hardness":
            self._follow(state.unit)
        self._put(self.job.with_entry(key, entry), _section(key))

    def _follow(self, hardness_unit: str) -> None:
        """Offer the entries that are still empty in the units that go with the hardness as read."""
        units = self._units(hardness_unit)
        for state in self.fields.values():
            unit = _usual_unit(_known(state.key), units)
            if not state.typed.strip() and state.unit != unit:
                state.unit = unit

    def _put(self, job: Job, section: str) -> None:
        if self.locked:
            return  # another tab does the saving: nothing is taken that could not be kept
        self.job = job
        self.layout.follow(job)
        self._changed(self, section if section in self.parts else "")
        if section == SIGNOFF:
            self.signoff.turn += 1
            self.say_doubts(SIGNOFF)

    def _field(self, key: str) -> FieldState:
        entry = self.job.entries.get(key)
        state = _field_state(_known(key), entry, self._units(self.hardness_unit))
        state.odd = self._odd(key)
        state.doubt = self.doubt_of(key, entry) if entry is not None else None
        held = self.parts.get(_section(key))
        problems = held.part.problems if held is not None and held.part is not None else ()
        problem = next((problem for problem in problems if problem.field == key), None)
        if problem:
            state.remark, state.level = problem.text, problem.level
        return state

    def _choice(self, key: str) -> ChoiceState:
        choice = choice_for(key)
        if choice is None:
            raise KeyError(key)
        return ChoiceState(key, self.job.choices.get(key, choice.default), key in self.job.choices)

    def _remark(self, section: str, part: Part) -> None:
        said = {problem.field: problem for problem in part.problems}
        for key, state in self.fields.items():
            problem = said.get(key)
            if problem is None and _section(key) != section:
                continue
            remark, level = (problem.text, problem.level) if problem else ("", "")
            if (remark, level) != (state.remark, state.level):
                state.remark, state.level = remark, level


def _section(key: str) -> str:
    return key.partition(".")[0]


def _known(key: str) -> Field:
    field = field_for(key)
    if field is None:
        raise KeyError(key)
    return field


def _field_state(field: Field, entry: Entry | None, units: Mapping[str, str]) -> FieldState:
    if entry is None:
        return FieldState(field.key, unit=_usual_unit(field, units), source=field.usual_source)
    typed = entry.typed or ("" if entry.value is None else f"{entry.value:g}")
    return FieldState(field.key, typed, entry.unit, entry.source, kit=entry.kit)


def _usual_unit(field: Field, units: Mapping[str, str]) -> str:
    wanted = units.get(field.role) or units.get(field.quantity)
    return wanted if wanted in field.units else next(iter(field.units), "")
