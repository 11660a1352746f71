"""A text in a few parts that survive any way of being carried: QR codes, links, messages.

    parts = encode(text)         ["0K3F…", …]: digits and capital letters only, one part for each code
    pool = Pool()
    pool.add(parts[1])           Progress(have=1, total=2, …); parts may come in any order, twice, in small letters
    pool.add(parts[0]).text      the text, once all parts are there

The text is deflated with a dictionary of the words that job files are made of, and cut into equal parts. A part is, in
bytes: version 1 · the first 6 bytes of the SHA-256 of the whole · its number from 0 · how many there are · its piece ·
CRC-32 of all that. Nine bytes are written as 14 digits of base 36: a camera, a browser or a messenger leaves digits and
letters alone, and a QR code packs them tightly.

What comes in may be hostile: parts that are damaged, foreign, endless, or that unpack to something huge are refused
with a sentence, and what was collected before stays.
"""

from __future__ import annotations

import json
import re
import zlib
from dataclasses import dataclass, field
from hashlib import sha256

from pwa.services.handover_words import DICTIONARY

VERSION = 1
PIECE = 330  # bytes in a part: a code that a phone reads off another phone's screen
MOST_PARTS = 24
LARGEST_TEXT = 400_000  # bytes unpacked; a job with years of readings is far smaller
LONGEST_PART = 2000  # characters
MOST_SETS = 4  # begun at the same time; a fifth takes the place of the oldest
BLOCK, DIGITS = 9, 14  # bytes, and the base 36 digits that hold them
HEAD, TAIL, MARK = 9, 4, 6  # bytes before the piece, after it, and of the mark of the set

_ALPHABET = "0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZ"
_CODE = re.compile(r"[0-9A-Za-z]+", re.ASCII)
_LENGTHS = {1: 2, 2: 4, 3: 5, 4: 7, 5: 8, 6: 10, 7: 11, 8: 13, 9: 14}  # bytes of a last block -> its digits
_BYTES = {digits: size for size, digits in _LENGTHS.items()}


class CodeError(Exception):
    """A part that cannot be used, or a text too large for codes; its text is a sentence."""


@dataclass(frozen=True, slots=True)
class Progress:
    """How far a set is: what is there, what lacks, and the text once it is whole."""

    have: int
    total: int
    missing: tuple[int, ...]  # numbers of the parts that lack, counted from 1
    text: str | None = None

    def sentence(self) -> str:
        """The state in words."""
        if self.text is not None:
            return "All codes are in."
        lacking = ", ".join(map(str, self.missing))
        return f"{self.have} of {self.total} codes are in. Still to scan: {lacking}."


@dataclass(slots=True)
class _Set:
    total: int
    pieces: dict[int, bytes] = field(default_factory=dict)


@dataclass(frozen=True, slots=True)
class _Part:
    mark: str
    index: int
    total: int
    piece: bytes


def encode(text: str, piece: int = PIECE) -> list[str]:
    """The parts that carry a text, all of nearly the same length; CodeError where it is too large for them."""
    packer = zlib.compressobj(9, zlib.DEFLATED, -15, 9, zlib.Z_DEFAULT_STRATEGY, DICTIONARY)
    packed = packer.compress(text.encode()) + packer.flush()
    total = max(1, -(-len(packed) // piece))
    if total > MOST_PARTS or len(text.encode()) > LARGEST_TEXT:
        raise CodeError(f"The job is too large for {MOST_PARTS} codes. Hand it over as a file.")
    size = -(-len(packed) // total)
    head = bytes([VERSION]) + sha256(packed).digest()[:MARK]
    pieces = [packed[at * size : (at + 1) * size] for at in range(total)]
    return [_written(head + bytes([index, total]) + part) for index, part in enumerate(pieces)]


def _written(body: bytes) -> str:
    return to_digits(body + zlib.crc32(body).to_bytes(TAIL, "big"))


def to_digits(data: bytes) -> str:
    """Bytes in base 36: 14 digits for each nine bytes, fewer for the rest."""
    blocks = (data[at : at + BLOCK] for at in range(0, len(data), BLOCK))
    return "".join(_digits(int.from_bytes(block, "big"), _LENGTHS[len(block)]) for block in blocks)


def _digits(number: int, count: int) -> str:
    out = []
    for _ in range(count):
        number, digit = divmod(number, 36)
        out.append(_ALPHABET[digit])
    return "".join(reversed(out))


def from_digits(text: str) -> bytes:
    """Bytes from base 36, in capital or small letters; CodeError where the text is no such number."""
    if not _CODE.fullmatch(text):
        raise CodeError("This is no code of this app: it holds other signs than digits and letters.")
    out = b""
    for at in range(0, len(text), DIGITS):
        digits = text[at : at + DIGITS]
        size = _BYTES.get(len(digits))
        number = int(digits, 36)
        if size is None or number >= 1 << (8 * size):
            raise CodeError("This code is damaged or cut off. Scan it again.")
        out += number.to_bytes(size, "big")
    return out


def _read(text: str) -> _Part:
    if not HEAD + TAIL < len(text) <= LONGEST_PART:
        raise CodeError("This is no code of this app: it is too short or too long.")
    data = from_digits(text)
    body, check = data[:-TAIL], int.from_bytes(data[-TAIL:], "big")
    if len(body) <= HEAD or zlib.crc32(body) != check:
        raise CodeError("This code is damaged, or it is not of this app. Scan it again.")
    if body[0] != VERSION:
        raise CodeError(f"This code has form {body[0]}; this app reads form {VERSION}. Bring the app up to date.")
    index, total = body[HEAD - 2], body[HEAD - 1]
    if not index < total <= MOST_PARTS:
        raise CodeError("This code is damaged: its number does not fit. Have the codes made anew.")
    return _Part(body[1 : 1 + MARK].hex(), index, total, body[HEAD:])


class Pool:
    """The parts collected so far, of a few sets at once; it can be kept as a text between two starts of the app."""

    def __init__(self) -> None:
        self._sets: dict[str, _Set] = {}

    def add(self, text: str) -> Progress:
        """Take in a part; the text comes out with the last one. CodeError where it cannot be used."""
        part = _read(text)
        held = self._sets.get(part.mark)
        if held is not None and held.total != part.total:
            raise CodeError("This code does not belong to the others. Have the codes made anew.")
        if held is None:
            while len(self._sets) >= MOST_SETS:
                del self._sets[next(iter(self._sets))]
            held = self._sets[part.mark] = _Set(part.total)
        held.pieces[part.index] = part.piece
        missing = tuple(index + 1 for index in range(held.total) if index not in held.pieces)
        if missing:
            return Progress(len(held.pieces), held.total, missing)
        del self._sets[part.mark]
        return Progress(held.total, held.total, (), _whole(held, part.mark))

    def to_text(self) -> str:
        """What is collected, to be kept."""
        sets = {
            mark: {"total": held.total, "pieces": {str(at): piece.hex() for at, piece in held.pieces.items()}}
            for mark, held in self._sets.items()
        }
        return json.dumps(sets)

    @classmethod
    def from_text(cls, text: str) -> Pool:
        """What was kept; an empty pool where it cannot be read."""
        pool = cls()
        try:
            for mark, held in list(json.loads(text).items())[:MOST_SETS]:
                pieces = {int(at): bytes.fromhex(piece) for at, piece in held["pieces"].items()}
                total = held["total"]
                if isinstance(total, int) and 1 < total <= MOST_PARTS and all(0 <= at < total for at in pieces):
                    pool._sets[mark] = _Set(total, pieces)
        except (ValueError, TypeError, KeyError, AttributeError, RecursionError):
            return cls()
        return pool


def _whole(held: _Set, mark: str) -> str:
    packed = b"".join(held.pieces[at] for at in range(held.total))
    if sha256(packed).digest()[:MARK].hex() != mark:
        raise CodeError("The codes do not belong together. Have them made anew and scan them all.")
    unpacker = zlib.decompressobj(-15, zdict=DICTIONARY)
    try:
        data = unpacker.decompress(packed, LARGEST_TEXT + 1)
        if len(data) > LARGEST_TEXT:
            raise CodeError("The codes unpack to far more than a job holds. Nothing was taken in.")
        if not unpacker.eof or unpacker.unused_data:
            raise ValueError
        return data.decode()
    except (zlib.error, ValueError):
        raise CodeError("The codes are whole, but what they hold is damaged. Nothing was taken in.") from None
