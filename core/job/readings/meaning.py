"""What an item of a report means: a value, a question, or nothing to use.

    meaning_of(item, text, sign) -> Found | Question | Left | None

Nothing is guessed. A value comes out only where name, number and unit are each beyond doubt and nothing unknown
stands between them; whatever can be read in several ways is asked.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise
from math import isclose

from core.errors import AmbiguousUnit, UnitError
from core.job.fields import FIELDS
from core.job.readings.cutting import Token
from core.job.readings.items import Item, Number
from core.job.readings.numbers import readings_of
from core.job.readings.report import Found, Left, Question, Span, words_at
from core.job.readings.vocabulary import Name, measures, normal, unit_of, words
from core.job.record import Entry
from core.units import convert

SAME = 0.03  # two readings closer than this share of themselves say the same: the same value in two units, rounded
MOST_CHOICES = 12
MOST_NUMBERS = 6  # beside one name; with more, nobody can say which is meant
MOST_NAMES = 3
REFERENCE_TEMPERATURE = 25.0  # °C, of the conductivity that is entered
_BARE = ("mg/l", "ppm", "g/m3")
_THOUSANDS = re.compile(r"\d{3}(?:[.,]\d{1,3})?")


@dataclass(frozen=True, slots=True)
class _Option:
    """One way to read an item."""

    field: str
    name: Name
    number: Number
    value: float
    unit: str
    unit_token: Token | None

    @property
    def in_core(self) -> float:
        """The value in the unit of the core."""
        field = FIELDS[self.field]
        return (
            convert(self.value, self.unit, field.core_unit, quantity=field.quantity) if field.quantity else self.value
        )


def meaning_of(item: Item, text: str, sign: str | None) -> Found | Question | Left | None:
    """What one item means; None where it holds neither a name nor a number. `sign` is the report's decimal sign."""
    names = [token for token in item.of_kind("name") if token.name is not None]
    known = {token.name.field: token.name for token in names if token.name and token.name.field}
    if not names:
        return _nameless(item, text, sign)
    if not known or len(known) < len({token.name.field for token in names if token.name}):
        return _left("no entry" if not known else "not usable", item, text, _no_entry(names, known))
    for token in names:  # the last name that says more of the unit counts
        if token.name and (token.name.plain or token.name.asks or token.name.note):
            known[token.name.field] = token.name
    return _named(item, names, known, text, sign)


@dataclass(slots=True)
class _Reading:
    """All that one number of an item can mean, and what stands in the way of being sure."""

    number: Number
    options: list[_Option]
    doubts: list[str]

    @property
    def is_sure(self) -> bool:
        """Whether number and unit stand together and can mean one thing only."""
        return len(self.options) == 1 and not self.doubts and self.number.unit is not None


def _named(
    item: Item, names: list[Token], known: dict[str, Name], text: str, sign: str | None
) -> Found | Question | Left:
    quantities = {FIELDS[field].quantity for field in known}
    warm = "water.conductivity" in known and _other_temperature(item)
    numbers = _without_row_number(_without_conditions(item, quantities), names)
    if not numbers:
        return _no_number(item, text)
    if len(numbers) > MOST_NUMBERS or len(known) > MOST_NAMES or (len(numbers) > 1 and len(known) > 1):
        return _left(
            "not usable", item, text, "Several names and numbers stand together: whose is which cannot be said."
        )
    readings = [_reading(number, known, item, sign) for number in [*_grouped(numbers), *numbers]]
    readings = _without_repeats([reading for reading in readings if reading.options or reading.doubts])
    options = [option for reading in readings for option in reading.options]
    doubts = [doubt for reading in readings for doubt in reading.doubts]
    if not options:
        return _left("not usable", item, text, doubts[0] if doubts else _out_of_range(known))
    doubts += _why_doubtful(item, names, numbers)
    if warm:
        doubts.append("It was read at another temperature than 25 °C; the entry is the conductivity at 25 °C.")
    if len(readings) > 1:
        doubts.append("There is more than one number.")
    if len(options) == 1 and not doubts:
        return _found(options[0], item, text, names, numbers)
    return _question(options, doubts, item, text, names)


def _reading(number: Number, known: dict[str, Name], item: Item, sign: str | None) -> _Reading:
    doubts: list[str] = []
    options: list[_Option] = []
    values = readings_of(number.token.text, sign)
    if len(values) > 1:
        doubts.append(f"“{number.token.text}” can be {values[0]:g} or {values[1]:g}.")
    for field, name in known.items():
        units, token = _units(field, name, number, item, doubts)
        options += [_Option(field, name, number, value, unit, token) for value in values for unit in units]
    return _Reading(number, _possible(options), doubts)


def _without_repeats(readings: list[_Reading]) -> list[_Reading]:
    """One value given in two units, "306 ppm (17.9 gpg)", is one reading: the one that is beyond doubt."""
    sure = next((reading for reading in readings if reading.is_sure), None)
    if sure is None:
        return readings
    held = sure.options[0]
    return [
        reading
        for reading in readings
        if reading is sure or reading.number.unit is None or not any(_agree(option, held) for option in reading.options)
    ]


def _grouped(numbers: list[Number]) -> list[Number]:
    """Two numbers that can be one with a blank in it: "1 250"."""
    made = []
    for first, second in pairwise(numbers):
        whole, part = first.token.text, second.token.text
        follows = second.token.start == first.token.end + 1 and first.unit is None
        if follows and whole.isdigit() and len(whole) <= 3 and _THOUSANDS.fullmatch(part):
            token = Token("number", first.token.start, second.token.end, whole + part)
            made.append(Number(token, second.unit, second.label))
    return made


def _units(
    field: str, name: Name, number: Number, item: Item, doubts: list[str]
) -> tuple[tuple[str, ...], Token | None]:
    """The units a number can be in, and the token that says so; several make a question."""
    quantity = FIELDS[field].quantity
    if not quantity:
        return ("",), None
    attached = [other.unit for other in item.numbers if other.unit is not None]
    loose = [token for token in item.of_kind("unit") if all(token is not unit for unit in attached)]
    tokens = [number.unit] if number.unit is not None else loose or attached
    fitting = [token for token in tokens if measures(_counted_as(token, number, item), quantity)]
    if not fitting and number.unit is not None:
        doubts.append(f"“{number.unit.text}” is no unit of {FIELDS[field].label.lower()} known here.")
        return (), None
    if not fitting:
        doubts.append("The unit is missing.")
        return name.asks or FIELDS[field].units, None
    if number.unit is None and not loose:
        doubts.append("The unit stands beside another number.")
    meant = dict.fromkeys(unit for token in fitting for unit in _meant(field, name, token, number, item, doubts))
    if len(meant) > 1 and len(fitting) > 1:
        doubts.append("There is more than one unit.")
    return tuple(meant), fitting[0]


def _meant(field: str, name: Name, token: Token, number: Number, item: Item, doubts: list[str]) -> tuple[str, ...]:
    try:
        return (unit_of(_counted_as(token, number, item), field, name),)
    except AmbiguousUnit as question:
        doubts.append(str(question))
        return question.choices
    except UnitError as error:
        doubts.append(str(error))
        return ()


def _counted_as(unit: Token, number: Number, item: Item) -> str:
    """The unit with what the item says its figures are counted as: "mg/l" beside "as CaCO3"."""
    bare = unit.text.replace(" ", "").casefold() in _BARE
    return (
        f"{unit.text} CaCO3"
        if bare and any(_bears_on(basis, number, item) for basis in item.of_kind("basis"))
        else unit.text
    )


def _bears_on(basis: Token, number: Number, item: Item) -> bool:
    """Whether "as CaCO3" is said of this number: before it, or after it in the same clause."""
    if basis.start < number.token.start:
        return True
    return not any(number.token.end <= token.start < basis.start for token in item.of_kind("sep"))


def _without_conditions(item: Item, quantities: set[str]) -> list[Number]:
    """The numbers of an item, without the temperature at which something else was read."""
    kept = []
    for number in item.numbers:
        if _is_condition(number, quantities):
            number.token.kind = "beside"
            if number.unit is not None:
                number.unit.kind = "beside"
        else:
            kept.append(number)
    return kept


def _is_condition(number: Number, quantities: set[str]) -> bool:
    """Whether a number can only be the temperature at which something else was read."""
    if number.unit is None or "temperature" in quantities or not measures(number.unit.text, "temperature"):
        return False
    return not any(quantity and measures(number.unit.text, quantity) for quantity in quantities)


def _other_temperature(item: Item) -> bool:
    for number in item.numbers:
        if _is_condition(number, {"conductivity"}) and number.unit is not None and "F" not in number.unit.text.upper():
            values = readings_of(number.token.text)
            return bool(values) and abs(values[0] - REFERENCE_TEMPERATURE) > 0.5
    return False


def _without_row_number(numbers: list[Number], names: list[Token]) -> list[Number]:
    """A bare number before the name counts rows, where another number with a unit follows the name."""
    begins = min(token.start for token in names)
    after = [number for number in numbers if number.token.start > begins and number.unit is not None]
    return [n for n in numbers if n.unit is not None or n.token.start > begins] if after else numbers


def _possible(options: list[_Option]) -> list[_Option]:
    """Those within what the entry accepts."""
    return [
        option for option in options if FIELDS[option.field].lowest <= option.in_core <= FIELDS[option.field].highest
    ]


def _agree(one: _Option, other: _Option) -> bool:
    return one.field == other.field and isclose(one.in_core, other.in_core, rel_tol=SAME)


def _why_doubtful(item: Item, names: list[Token], numbers: list[Number]) -> list[str]:
    """Why an item must be asked: unknown words near the name, or words that tell of another water."""
    doubts = [item.doubt] if item.doubt else []
    if len({token.name.field for token in names if token.name}) > 1:
        doubts.append("There is more than one name.")
    first = min(names[0].start, numbers[0].token.start)
    last = max(names[-1].start if names[-1] in item.tokens else 0, numbers[0].token.start)
    between = [t for t in item.tokens if first < t.start < last and t.kind in ("word", "absent")]
    changing = item.of_kind("changes")
    changing += [b for b in item.of_kind("basis") if not all(_bears_on(b, number, item) for number in numbers)]
    after = _right_after(item, numbers)
    for token in [*_right_before(item, names[0]), *between, *changing, *after][:1]:
        doubts.append(f"“{token.text}” may change what is meant.")
    label = next((number.label for number in numbers if _changes(number.label)), "")
    if label:
        doubts.append(f"It stands under “{label}”.")
    return doubts


def _changes(heading: str) -> bool:
    return any(normal(word) in words("changes") for word in heading.split())


def _right_before(item: Item, name: Token) -> list[Token]:
    previous = None
    for token in item.tokens:
        if token is name:
            return [previous] if previous is not None and previous.kind == "word" else []
        previous = token
    return []


def _right_after(item: Item, numbers: list[Number]) -> list[Token]:
    """What directly follows a number and its unit, where it can say what kind of number it is: "K2O", "limit"."""
    ends = {id(number.unit or number.token) for number in numbers}
    found = []
    for token, follower in pairwise(item.tokens):
        formula = follower.kind == "word" and any(not letter.islower() for letter in follower.text[1:])
        if id(token) in ends and (formula or (follower.kind == "limit" and follower.text != "±")):
            found.append(follower)
    return found


def _found(option: _Option, item: Item, text: str, names: list[Token], numbers: Sequence[Number] = ()) -> Found:
    """A reading; `numbers` are those that say the same, all of which are then part of its words."""
    mark = option.number.token.text[0]
    below, above = mark == "<", mark == ">"
    used = [*names, option.number.token, *([option.unit_token] if option.unit_token else []), *item.of_kind("basis")]
    used += [token for number in numbers for token in (number.token, number.unit) if token is not None]
    spans = _spans(used, item, text)
    typed = f"{mark} {option.value:g}" if below or above else ""
    entry = Entry(option.value, option.unit, "report", typed=typed)
    return Found(option.field, entry, spans, words_at(text, spans), _how(option), below, above)


def _how(option: _Option) -> str:
    label = FIELDS[option.field].label
    mark = {"<": "below ", ">": "at least "}.get(option.number.token.text[0], "")
    parts = [f"{label}: {mark}{option.value:g} {option.unit}".rstrip()]
    if option.number.label:
        parts.append(f"from the column “{option.number.label}”")
    if option.name.note:
        parts.append(option.name.note)
    return "; ".join(parts) + "."


def _question(options: Sequence[_Option], doubts: list[str], item: Item, text: str, names: list[Token]) -> Question:
    choices = tuple(_found(option, item, text, names) for option in options[:MOST_CHOICES])
    spans = tuple(dict.fromkeys(span for choice in choices for span in choice.spans))
    spans = _joined(spans)
    reasons = " ".join(dict.fromkeys(doubts))
    ask = "Is this what is meant?" if len(choices) == 1 else "Which is meant?"
    return Question(f"{reasons} {ask}".strip(), choices, spans, words_at(text, spans))


def _nameless(item: Item, text: str, sign: str | None) -> Question | Left | None:
    """Numbers no name claims: a unit that only hardness or alkalinity has makes a question of them."""
    if not item.has_number:
        return None
    near = [number for number in item.numbers if number.unit is not None]
    options = [
        option
        for number in near[:MOST_NUMBERS]
        if number.unit is not None
        for field in ("water.hardness", "water.alkalinity", "water.conductivity")
        if _is_telling(number.unit.text, field)
        for option in _reading(number, {field: Name(field)}, item, sign).options
    ]
    if not options:
        return None
    return _question(options, ["It is not said what this is."], item, text, [])


def _is_telling(unit: str, field: str) -> bool:
    """Whether a unit alone says what kind of thing was measured: degrees of hardness, grains, µS/cm."""
    return measures(unit, FIELDS[field].quantity) and not measures(unit, "sodium") and not measures(unit, "temperature")


def _no_number(item: Item, text: str) -> Left:
    if item.of_kind("limited"):
        return _left("limit", item, text, "This is a limit or a target, not a reading.")
    if item.of_kind("range"):
        return _left("not usable", item, text, "This is a range; enter one number, such as its middle.")
    if item.of_kind("absent"):
        why = "Not found, or not looked for. If you know the limit of the method, enter “<” and the limit."
        return _left("no number", item, text, why)
    return _left("no number", item, text, "There is no number beside it.")


def _no_entry(names: list[Token], known: dict[str, Name]) -> str:
    other = next((token.text for token in names if token.name and not token.name.field), "")
    if known:
        return f"“{other}” is mixed up with it here, and there is no entry for that."
    return f"There is no entry for “{other}”."


def _out_of_range(known: dict[str, Name]) -> str:
    field = FIELDS[next(iter(known))]
    unit = f" {field.core_unit}" if field.core_unit else ""
    return f"{field.label} is accepted from {field.lowest:g} to {field.highest:g}{unit}; this number is not among them."


def _left(kind: str, item: Item, text: str, why: str) -> Left:
    telling = [t for t in item.tokens if t.kind not in ("sep",)]
    span = (telling[0].start, telling[-1].end) if telling else (item.tokens[0].start, item.tokens[-1].end)
    return Left(kind, span, text[span[0] : span[1]], why)


def _spans(used: Sequence[Token], item: Item, text: str) -> tuple[Span, ...]:
    """Where the tokens used stand: one place on the item's line, and those of its heading."""
    own = {id(token) for token in item.tokens}
    here = [token for token in used if id(token) in own]
    there = [token for token in used if id(token) not in own]
    return tuple(_span(part, text) for part in (there, here) if part)


def _span(tokens: Sequence[Token], text: str) -> Span:
    """From the first to the last token, with the bracket that closes it."""
    start, end = min(token.start for token in tokens), max(token.end for token in tokens)
    open_bracket = text.count("(", start, end) > text.count(")", start, end)
    return start, end + 1 if open_bracket and text[end : end + 1] == ")" else end


def _joined(spans: Sequence[Span]) -> tuple[Span, ...]:
    """Places without overlaps, in order."""
    joined: list[Span] = []
    for start, end in sorted(spans):
        if joined and start <= joined[-1][1]:
            joined[-1] = (joined[-1][0], max(end, joined[-1][1]))
        else:
            joined.append((start, end))
    return tuple(joined)
