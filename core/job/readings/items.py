"""The tokens of a line sorted into items: a name with its numbers, in whatever order they stand.

    items_of(tokens) -> list[Item]         every token is in exactly one item

A line is cut at commas, semicolons, tabs and the like into clauses. A clause with a name and a number stands for
itself; a name alone waits for a number, a number alone goes to the name before it. Numbers after "limit", "max",
"±" and the like are no readings.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field

from core.job.readings.cutting import Token
from core.job.readings.vocabulary import names


@dataclass(slots=True)
class Number:
    """A number of an item, with the unit that stands right after it."""

    token: Token
    unit: Token | None = None
    label: str = ""  # heading of its column


@dataclass(slots=True)
class Item:
    """A name and what stands with it. Without names, numbers that no name claims; without both, loose words."""

    tokens: list[Token] = field(default_factory=list)
    heading: list[Token] = field(default_factory=list)  # of the column it stands in, from another line
    labels: dict[int, str] = field(default_factory=dict)  # start of a number -> heading of its column
    doubt: str = ""  # why it must be asked, whatever it says
    fields: set[str] = field(default_factory=set)  # of its names
    has_number: bool = False

    @classmethod
    def of(cls, tokens: Iterable[Token]) -> Item:
        """An item of these tokens."""
        item = cls()
        item.add(tokens)
        return item

    def add(self, tokens: Iterable[Token]) -> None:
        """Put more tokens to it."""
        for token in tokens:
            self.tokens.append(token)
            if token.kind == "name" and token.name is not None:
                self.fields.add(token.name.field)
            self.has_number = self.has_number or token.kind == "number"

    @property
    def everything(self) -> list[Token]:
        """The tokens of the heading, then its own."""
        return [*self.heading, *self.tokens]

    def of_kind(self, *kinds: str) -> list[Token]:
        """Its tokens of some kinds, in order, those of the heading first."""
        return [token for token in self.everything if token.kind in kinds]

    @property
    def numbers(self) -> list[Number]:
        """Its numbers that can be readings, each with the unit right after it."""
        found = []
        for index, token in enumerate(self.tokens):
            if token.kind == "number":
                follower = self.tokens[index + 1] if index + 1 < len(self.tokens) else None
                unit = follower if follower is not None and follower.kind == "unit" else None
                found.append(Number(token, unit, self.labels.get(token.start, "")))
        return found


def items_of(tokens: Sequence[Token]) -> list[Item]:
    """The items of one line, in order."""
    marked = _without_limits(_without_remarks(list(tokens)))
    items: list[Item] = []
    for clause in _clauses(marked):
        _place(_with_symbols(clause), items)
    return items


def _with_symbols(clause: list[Token]) -> list[Token]:
    """In a clause without a name the symbol in a unit is one: "92 mg/l Ca, 18 mg/l Mg"."""
    if any(token.kind == "name" for token in clause):
        return clause
    made: list[Token] = []
    for token in clause:
        unit, _, symbol = token.text.rpartition(" ")
        node = names().steps.get(f"={symbol}") if token.kind == "unit" and unit else None
        plain = token.end - token.start == len(token.text)  # "mg/l as Ca" is a unit, whatever stands before it
        if node is None or node.name is None or ":" in node.name.field or not plain:
            made.append(token)
            continue
        middle = token.end - len(symbol)
        made.append(Token("unit", token.start, middle - 1, unit))
        made.append(Token("name", middle, token.end, symbol, node.name))
    return made


def _place(clause: list[Token], items: list[Item]) -> None:
    """Make items of a clause, or add it to the item before it."""
    new = Item.of(clause)
    last = items[-1] if items else None
    if last is not None and (_adds_to(last, new) or _says_again(last, new)):
        last.add(clause)
    elif new.fields and new.has_number:
        items += map(Item.of, _parts(clause))
    else:
        items.append(new)


def _adds_to(last: Item, new: Item) -> bool:
    """Whether a clause without a name belongs to the item before it."""
    return not new.fields and bool(last.fields or not new.has_number)


def _says_again(last: Item, new: Item) -> bool:
    """Whether a clause names once more what still waits for its number: "Calcium (Ca), Ca: 92"."""
    return not last.has_number and len(new.fields) == 1 and last.fields == new.fields


def _clauses(tokens: Sequence[Token]) -> list[list[Token]]:
    clauses: list[list[Token]] = [[]]
    for token in tokens:
        clauses[-1].append(token)
        if token.kind == "sep":
            clauses.append([])
    return [clause for clause in clauses if clause]


def _parts(clause: list[Token]) -> list[list[Token]]:
    """A clause with several names cut into one part each: "Ca 92 Mg 18", or "92 mg/l Ca 18 mg/l Mg"."""
    runs = _runs(clause)
    kinds = [kind for kind, _ in runs]
    values_first = kinds == ["number", "name"] * (len(kinds) // 2) and _all_with_units(clause)
    first = "number" if values_first else "name"
    starts = [start for kind, start in runs if kind == first]
    starts[0] = 0
    return [clause[start:end] for start, end in zip(starts, [*starts[1:], len(clause)], strict=True)]


def _runs(clause: list[Token]) -> list[tuple[str, int]]:
    """Runs of names and runs of numbers: their kind and where they begin."""
    runs: list[tuple[str, int]] = []
    for index, token in enumerate(clause):
        if token.kind in ("name", "number") and (not runs or runs[-1][0] != token.kind):
            runs.append((token.kind, index))
    return runs


def _all_with_units(clause: list[Token]) -> bool:
    return all(
        index + 1 < len(clause) and clause[index + 1].kind == "unit"
        for index, token in enumerate(clause)
        if token.kind == "number"
    )


def _without_limits(tokens: list[Token]) -> list[Token]:
    """Numbers that follow a word for a limit are marked as such, one number a word."""
    owed = 0
    for index, token in enumerate(tokens):
        if token.kind == "limit":
            owed += 1
        elif token.kind == "name":
            owed = owed if _is_limited(tokens, index) else 0
        elif token.kind in ("number", "range") and owed:
            owed -= 1
            tokens[index] = Token("limited", token.start, token.end, token.text)
    return tokens


def _is_limited(tokens: list[Token], index: int) -> bool:
    """Whether a limit is said of this name: "Grenzwert für Natrium"."""
    before = index - 1
    while before >= 0 and tokens[before].kind in ("harmless", "link", "at"):
        before -= 1
    return before >= 0 and tokens[before].kind == "limit"


def _without_remarks(tokens: list[Token]) -> list[Token]:
    """Names in brackets after a name, with no number beside them, only explain it: "Härte (Calcium, Magnesium)"."""
    opened: int | None = None
    explained: Token | None = None
    for index, token in enumerate(tokens):
        if token.kind == "sign" and token.text in "([":
            opened = index
        elif token.kind == "sign" and token.text in ")]" and opened is not None:
            inside = range(opened + 1, index)
            if explained is not None and not any(tokens[at].kind == "number" for at in inside):
                for at in inside:
                    tokens[at] = _remark(tokens[at], explained)
            opened = None
        elif token.kind == "name" and opened is None:
            explained = token
    return tokens


def _remark(token: Token, explained: Token) -> Token:
    """A name or comma inside brackets, taken out of play unless it says more of the same entry."""
    if token.kind == "sep":
        return Token("sign", token.start, token.end, token.text)
    if token.kind != "name" or token.name is None or explained.name is None:
        return token
    return token if token.name.field == explained.name.field else Token("harmless", token.start, token.end, token.text)
