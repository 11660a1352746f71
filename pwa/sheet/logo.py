"""Reads a logo, PNG or JPEG, into what a PDF takes, without an imaging library: the browser has none here.

A JPEG is put in as it is. So is a PNG without transparency; one with it is unpacked, and its transparency put beside
it. What cannot be read this way is refused with a sentence that says what to do.
"""

from __future__ import annotations

import struct
import zlib
from dataclasses import dataclass

MOST_BYTES = 3_000_000  # of a logo file
MOST_SIDE = 6000  # pixels
MOST_PIXELS = 4_000_000  # of a PNG
MOST_UNPACKED = 1_500_000  # pixels of a PNG with transparency, which is unpacked here
_PNG = b"\x89PNG\r\n\x1a\n"
_CHANNELS = {0: 1, 2: 3, 3: 1, 4: 2, 6: 4}  # by PNG colour type
_SPACES = {1: "DeviceGray", 3: "DeviceRGB"}
_START_OF_FRAME = {0xC0, 0xC1, 0xC2}
_NO_LENGTH = {0x01, *range(0xD0, 0xD9)}


class LogoError(Exception):
    """A logo that cannot be drawn; its text is a sentence."""


@dataclass(frozen=True, slots=True)
class Logo:
    """A picture in the parts that a PDF image has."""

    width: int  # pixels
    height: int
    space: str  # DeviceGray | DeviceRGB | Indexed
    bits: int
    kind: str  # DCTDecode | FlateDecode
    parameters: str
    data: bytes
    palette: bytes = b""
    mask: bytes = b""  # transparency, deflated rows with a filter byte; empty where there is none


def read_logo(data: bytes) -> Logo:
    """A logo from a PNG or JPEG file; LogoError says why it cannot be drawn."""
    if len(data) > MOST_BYTES:
        raise LogoError(f"The logo file is larger than {MOST_BYTES // 1_000_000} MB. Save it smaller.")
    try:
        if data.startswith(_PNG):
            return _png(data)
        if data.startswith(b"\xff\xd8"):
            return _jpeg(data)
    except (struct.error, IndexError, ValueError, zlib.error):
        raise LogoError("The logo file is damaged or cut off. Save it again as PNG or JPEG.") from None
    raise LogoError("The logo is neither PNG nor JPEG. Save it as one of them.")


def _sized(width: int, height: int) -> None:
    if not (0 < width <= MOST_SIDE and 0 < height <= MOST_SIDE):
        raise LogoError(f"The logo has {width} × {height} pixels; up to {MOST_SIDE} on a side are taken.")


def _jpeg(data: bytes) -> Logo:
    at = 2
    while at + 4 <= len(data):
        if data[at] != 0xFF:
            raise ValueError
        kind = data[at + 1]
        if kind == 0xFF:  # a filler
            at += 1
            continue
        if kind in _NO_LENGTH:
            at += 2
            continue
        length = struct.unpack(">H", data[at + 2 : at + 4])[0]
        if kind in _START_OF_FRAME:
            bits, height, width, channels = struct.unpack(">BHHB", data[at + 4 : at + 10])
            return _jpeg_of(data, bits, width, height, channels)
        at += 2 + max(2, length)
    raise ValueError


def _jpeg_of(data: bytes, bits: int, width: int, height: int, channels: int) -> Logo:
    _sized(width, height)
    if bits != 8 or channels not in _SPACES:
        raise LogoError(
            "The logo is a JPEG for printing presses (CMYK) or of an odd kind. Save it as an RGB JPEG or PNG."
        )
    return Logo(width, height, _SPACES[channels], 8, "DCTDecode", "", data)


@dataclass(frozen=True, slots=True)
class _Chunks:
    """The parts of a PNG that matter here."""

    width: int
    height: int
    bits: int
    colour: int
    packed: bytes
    palette: bytes
    transparent: bytes


def _png(data: bytes) -> Logo:
    found = _chunks(data)
    if found.colour in (4, 6) or found.transparent:
        return _with_mask(found)
    channels = _CHANNELS[found.colour]
    _unpacked(found)  # a damaged picture is refused here, not by the customer's reader
    parameters = f"/Predictor 15 /Colors {channels} /Columns {found.width}"
    space = "Indexed" if found.colour == 3 else _SPACES[channels]
    return Logo(found.width, found.height, space, found.bits, "FlateDecode", parameters, found.packed, found.palette)


def _chunks(data: bytes) -> _Chunks:
    width, height, bits, colour, _, _, interlaced = struct.unpack(">IIBBBBB", data[16:29])
    _sized(width, height)
    if interlaced or bits > 8 or colour not in _CHANNELS:
        raise LogoError("The logo is an interlaced PNG, or one of 16 bits. Save it as an ordinary PNG of 8 bits.")
    if width * height > MOST_PIXELS:
        raise LogoError(f"The logo has {width} × {height} pixels. Save it smaller: 1000 pixels wide is plenty.")
    packed, held, at = b"", {b"PLTE": b"", b"tRNS": b""}, 8
    while at + 8 <= len(data):
        length, kind = struct.unpack(">I4s", data[at : at + 8])
        body = data[at + 8 : at + 8 + length]
        if kind == b"IDAT":
            packed += body
        elif kind in held:
            held[kind] = body
        elif kind == b"IEND":
            break
        at += 12 + length
    if not packed or (colour == 3 and not (held[b"PLTE"] and len(held[b"PLTE"]) % 3 == 0)):
        raise ValueError
    return _Chunks(width, height, bits, colour, packed, held[b"PLTE"], held[b"tRNS"])


def _row_bytes(found: _Chunks) -> int:
    return (found.width * _CHANNELS[found.colour] * found.bits + 7) // 8


def _unpacked(found: _Chunks) -> bytes:
    """The filtered rows; never more of them than the picture has."""
    size = (_row_bytes(found) + 1) * found.height
    unpacker = zlib.decompressobj()
    rows = unpacker.decompress(found.packed, size + 1)
    if len(rows) != size or not unpacker.eof:
        raise ValueError
    return rows


def _with_mask(found: _Chunks) -> Logo:
    if found.width * found.height > MOST_UNPACKED:
        raise LogoError("The logo is a large PNG with transparency. Save it smaller, or without transparency.")
    if found.bits != 8 and found.colour != 3:
        raise LogoError("The logo is a PNG of few greys with transparency. Save it with 8 bits a channel.")
    rows = _unfiltered(_unpacked(found), _row_bytes(found), _CHANNELS[found.colour])
    rows = [_spread(row, found) for row in rows] if found.bits != 8 else rows
    colours, mask = zip(*(_parted(row, found) for row in rows), strict=True)
    channels = len(colours[0]) // found.width
    return Logo(
        found.width,
        found.height,
        _SPACES[channels],
        8,
        "FlateDecode",
        f"/Predictor 15 /Colors {channels} /Columns {found.width}",
        zlib.compress(b"".join(b"\0" + row for row in colours)),
        mask=zlib.compress(b"".join(b"\0" + row for row in mask)),
    )


def _spread(row: bytes, found: _Chunks) -> bytes:
    """A row of a palette with 2, 4 or 16 colours, a byte for each pixel."""
    each = 8 // found.bits
    shifts = [8 - found.bits * (at + 1) for at in range(each)]
    most = (1 << found.bits) - 1
    return bytes((byte >> shift) & most for byte in row for shift in shifts)[: found.width]


def _parted(row: bytes, found: _Chunks) -> tuple[bytes, bytes]:
    """Colour and opacity of a row."""
    if found.colour == 4:
        return row[0::2], row[1::2]
    if found.colour == 6:
        colour = bytearray(3 * found.width)
        for channel in range(3):
            colour[channel::3] = row[channel::4]
        return bytes(colour), row[3::4]
    if found.colour == 3:
        return _from_palette(row, found)
    key = found.transparent[1::2]  # one colour is transparent; 16-bit numbers, of which 8 bits count
    step = _CHANNELS[found.colour]
    clear = (row[at : at + step] == key for at in range(0, len(row), step))
    return row, bytes(0 if one else 255 for one in clear)


def _from_palette(row: bytes, found: _Chunks) -> tuple[bytes, bytes]:
    opacity = found.transparent.ljust(256, b"\xff")[:256]
    palette = found.palette.ljust(768, b"\0")
    colour = bytearray(3 * found.width)
    for channel in range(3):
        colour[channel::3] = row.translate(palette[channel:768:3])
    return bytes(colour), row.translate(opacity)


def _unfiltered(data: bytes, length: int, step: int) -> list[bytes]:
    """The rows of a picture with the filters of PNG undone."""
    rows, above = [], bytearray(length)
    for at in range(0, len(data), length + 1):
        row = bytearray(data[at + 1 : at + 1 + length])
        _undo(data[at], row, above, step)
        rows.append(bytes(row))
        above = row
    return rows


def _undo(kind: int, row: bytearray, above: bytearray, step: int) -> None:
    if kind == 1:
        for at in range(step, len(row)):
            row[at] = (row[at] + row[at - step]) & 255
    elif kind == 2:
        for at in range(len(row)):
            row[at] = (row[at] + above[at]) & 255
    elif kind == 3:
        for at in range(len(row)):
            left = row[at - step] if at >= step else 0
            row[at] = (row[at] + (left + above[at]) // 2) & 255
    elif kind == 4:
        for at in range(len(row)):
            left, corner = (row[at - step], above[at - step]) if at >= step else (0, 0)
            row[at] = (row[at] + _paeth(left, above[at], corner)) & 255
    elif kind:
        raise ValueError


def _paeth(left: int, above: int, corner: int) -> int:
    """The neighbour nearest to left + above − corner, as the PNG standard has it."""
    guess = left + above - corner
    by_left, by_above, by_corner = abs(guess - left), abs(guess - above), abs(guess - corner)
    if by_left <= by_above and by_left <= by_corner:
        return left
    return above if by_above <= by_corner else corner
