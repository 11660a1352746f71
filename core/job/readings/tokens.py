"""The pieces of a line with their meaning: names, units, limits, and the words between.

tokens_of(line, offset) -> list[Token]       line folded, offset its place in the text
"""

from __future__ import annotations

from functools import lru_cache

from core.job.readings import vocabulary
from core.job.readings.cutting import COUNTED, Token, cut
from core.job.readings.vocabulary import LONGEST_UNIT, Name, begins_unit, normal, unit_form, words

_CROSSED = frozenset("-./()'_:,+&[]")  # signs that may stand inside a name
_UNIT_TOKENS = 9  # a unit is made of no more
_NAME_TOKENS = 14  # words and the signs between them


def tokens_of(line: str, offset: int = 0) -> list[Token]:
    """The tokens of a folded line that begins at this place of the text."""
    return [_classified(token) for token in _with_names(_with_units(cut(line, offset), line, offset))]


def _with_units(pieces: list[Token], line: str, offset: int) -> list[Token]:
    """Runs of pieces that are a unit, made one token; the longest that fits."""
    made: list[Token] = []
    at = 0
    while at < len(pieces):
        end = _unit_end(pieces, at)
        if end:
            first, last = pieces[at], pieces[end - 1]
            made.append(Token("unit", first.start, last.end, _without_links(pieces[at:end])))
            at = end
        else:
            made.append(pieces[at])
            at += 1
    return made


def _unit_end(pieces: list[Token], at: int) -> int:
    """Where a unit that begins at this piece ends; 0 where none does."""
    first = pieces[at]
    if first.kind not in ("word", "sign") or not begins_unit(first.text):
        return 0
    if _is_symbol(first.text) and (at + 1 == len(pieces) or pieces[at + 1].text != "/"):
        return 0  # Mg is magnesium, unless it is written "Mg/l"
    best, texts, links = 0, [], words("link")
    for end in range(at + 1, min(len(pieces), at + _UNIT_TOKENS) + 1):
        piece = pieces[end - 1]
        if piece.kind == "sep" or piece.end - first.start > LONGEST_UNIT:
            break
        gap = "" if end == at + 1 or pieces[end - 2].end == piece.start else " "
        text = "".join(texts) + gap + piece.text
        if _closes(text) and unit_form(text) and not _begins_next(pieces, at, end):
            best = end
        if end == at + 1 or piece.kind != "word" or normal(piece.text) not in links:
            texts.append(gap + piece.text)  # a word that only links a unit to what it is counted as is passed over
    return best


def _begins_next(pieces: list[Token], at: int, end: int) -> bool:
    """Whether the last piece is rather the name of what comes next: "Ca 92 mg/l Mg 18 mg/l"."""
    if end == at + 1 or end == len(pieces) or not _is_symbol(pieces[end - 1].text):
        return False
    return pieces[end].kind in ("number", "range") or pieces[end].text in (":", "=")


def _is_symbol(text: str) -> bool:
    """Whether a text, written exactly so, is the symbol of something measured."""
    node = vocabulary.names().steps.get(f"={text}")
    return node is not None and node.name is not None and ":" not in node.name.field


def _closes(text: str) -> bool:
    return text.count("(") == text.count(")") and text[-1] not in ".,([-/:" and text[0] not in ".,)]-/:"


def _without_links(run: list[Token]) -> str:
    """The text of a unit, without the words that only link it to what it is counted as."""
    texts, links = [], words("link")
    for index, piece in enumerate(run):
        if piece.kind == "word" and 0 < index < len(run) - 1 and normal(piece.text) in links:
            continue
        texts.append(("" if index == 0 or run[index - 1].end == piece.start else " ") + piece.text)
    return "".join(texts)


def _with_names(pieces: list[Token]) -> list[Token]:
    """Runs of pieces that are a name, made one token; the longest that fits."""
    made: list[Token] = []
    at = 0
    while at < len(pieces):
        name, end = _name_at(pieces, at)
        if name is None:
            made.append(pieces[at])
            at += 1
            continue
        kind = name.field.partition(":")[0] if ":" in name.field else "name"
        text = " ".join(piece.text for piece in pieces[at:end])
        made.append(Token(kind, pieces[at].start, pieces[end - 1].end, text, name))
        at = end
    return made


def _name_at(pieces: list[Token], at: int) -> tuple[Name | None, int]:
    if pieces[at].kind != "word":
        return None, at
    nodes, name, best = [vocabulary.names()], None, at
    for index in range(at, min(len(pieces), at + _NAME_TOKENS)):
        piece = pieces[index]
        if piece.kind in COUNTED:
            keys = (f"={piece.text}", normal(piece.text))  # a symbol as it is, a word in any spelling
            nodes = [node.steps[key] for node in nodes for key in keys if key in node.steps]
            if not nodes:
                break
            known = [node.name for node in nodes if node.name is not None]
            if known:
                name, best = known[0], index + 1
        elif piece.kind == "charge":
            if best == index:  # the charge of the symbol before it
                best = index + 1
        elif piece.kind == "unit" or piece.text not in _CROSSED:
            break
    return name, best


def _classified(token: Token) -> Token:
    if token.kind == "word":
        token.kind = _kind_of(token.text)
    elif token.kind == "charge":
        token.kind = "sign"
    elif token.kind == "sign" and token.text in "±@":
        token.kind = "limit" if token.text == "±" else "at"
    return token


@lru_cache(maxsize=4096)
def _kind_of(word: str) -> str:
    form = normal(word)
    return next((kind for kind in ("limit", "at", "changes", "harmless", "link") if form in words(kind)), "word")
