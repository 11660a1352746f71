"""Logos without an imaging library: read as a reference library reads them, or refused with a sentence."""

import io
import random
import struct
import zlib
from dataclasses import replace

import numpy as np
import pypdfium2
import pytest
from PIL import Image

from pwa.sheet.draw import draw_sheet
from pwa.sheet.logo import LogoError, _unfiltered, read_logo
from tests.pwa.sheet.samples import FIRM, usual_sheet

SIZE = (60, 30)


def picture(mode):
    """A picture with four fields of colour, the last of them transparent where the mode can."""
    image = Image.new("RGBA", SIZE, (200, 30, 30, 255))
    image.paste((20, 120, 60, 255), (30, 0, 60, 15))
    image.paste((30, 60, 160, 255), (0, 15, 30, 30))
    image.paste((0, 0, 0, 0), (30, 15, 60, 30))
    return image.convert("RGB").convert(mode) if mode in ("CMYK", "1") else image.convert(mode)


def file_of(mode, kind="PNG", **options):
    """The picture as a file."""
    out = io.BytesIO()
    picture(mode).save(out, kind, **options)
    return out.getvalue()


def shown(data):
    """The logo as it stands on the sheet: the pixels in the middle of its four fields."""
    made = draw_sheet(replace(usual_sheet(), firm=replace(FIRM, logo=data), technical=()))
    assert made.notes == ()
    page = pypdfium2.PdfDocument(made.pdf)[0]
    scale = 4.0
    rgb = page.render(scale=scale).to_numpy()[:, :, ::-1].astype(int)
    right, top, tall = 595.28 - 46.0, 34.0, 44.0
    wide = tall * 2
    at = [(0.25, 0.25), (0.75, 0.25), (0.25, 0.75), (0.75, 0.75)]
    return [rgb[int((top + y * tall) * scale), int((right - wide + x * wide) * scale)] for x, y in at]


GROUND = (243, 241, 235)
RED, GREEN, BLUE = (200, 30, 30), (20, 120, 60), (30, 60, 160)
MODES = {
    "RGB": [RED, GREEN, BLUE, (0, 0, 0)],
    "RGBA": [RED, GREEN, BLUE, GROUND],
    "L": [(81,) * 3, (83,) * 3, (62,) * 3, (0,) * 3],
    "LA": [(81,) * 3, (83,) * 3, (62,) * 3, GROUND],
    "P": [RED, GREEN, BLUE, None],
    "1": [None, None, None, (0, 0, 0)],
}


@pytest.mark.parametrize("mode", MODES)
def test_a_png_of_any_kind_is_drawn(mode):
    """Colours as the reference library has them; what is transparent shows the ground of the head."""
    if mode == "P":
        data = io.BytesIO()
        picture("RGB").quantize(4).save(data, "PNG")
        found = shown(data.getvalue())
    else:
        found = shown(file_of(mode))
    for got, wanted in zip(found, MODES[mode], strict=True):
        if wanted is not None:
            assert np.abs(got - wanted).max() <= 6, (got, wanted)


@pytest.mark.parametrize("mode", ["RGB", "L"])
@pytest.mark.parametrize("progressive", [False, True])
def test_a_jpeg_is_drawn(mode, progressive):
    """As it is, progressive or not; within what JPEG loses."""
    found = shown(file_of(mode, "JPEG", quality=95, progressive=progressive))
    for got, wanted in zip(found, MODES[mode], strict=True):
        assert np.abs(got - wanted).max() <= 14


def test_one_transparent_colour():
    """A palette with its own transparency, as small logos have."""
    image = picture("RGB").quantize(4)
    out = io.BytesIO()
    image.save(out, "PNG", transparency=image.getpixel((50, 25)))
    for got, wanted in zip(shown(out.getvalue()), MODES["RGBA"], strict=True):
        assert np.abs(got - wanted).max() <= 6


def chunk(kind, body):
    """A chunk of a PNG."""
    return struct.pack(">I", len(body)) + kind + body + struct.pack(">I", zlib.crc32(kind + body))


def png(width, height, bits=8, colour=2, packed=b"", interlaced=0, extra=b""):
    """A PNG from its parts, right or wrong."""
    head = chunk(b"IHDR", struct.pack(">IIBBBBB", width, height, bits, colour, 0, 0, interlaced))
    return b"\x89PNG\r\n\x1a\n" + head + extra + chunk(b"IDAT", packed) + chunk(b"IEND", b"")


@pytest.mark.parametrize("kind", [0, 1, 2, 3, 4])
def test_each_filter_of_png_is_undone(kind):
    """Random rows under each filter, against the reference library."""
    dice = random.Random(kind)
    rows = b"".join(bytes([kind]) + dice.randbytes(4 * 7) for _ in range(5))
    image = np.asarray(Image.open(io.BytesIO(png(7, 5, colour=6, packed=zlib.compress(rows)))))
    assert b"".join(_unfiltered(rows, 28, 4)) == image.tobytes()


def test_transparency_is_parted_as_the_reference_library_has_it():
    """A picture with random colours and opacities: both come out whole."""
    dice = random.Random(9)
    image = Image.frombytes("RGBA", (31, 17), dice.randbytes(31 * 17 * 4))
    out = io.BytesIO()
    image.save(out, "PNG")
    logo = read_logo(out.getvalue())

    def unpacked(data, channels):
        rows = np.frombuffer(zlib.decompress(data), np.uint8).reshape(17, -1)
        return rows[:, 1:].reshape(17, 31, channels)

    assert (unpacked(logo.data, 3) == np.asarray(image)[:, :, :3]).all()
    assert (unpacked(logo.mask, 1)[:, :, 0] == np.asarray(image)[:, :, 3]).all()


ONE = zlib.compress(b"\0" + b"\0\0\0")
TWO = zlib.compress(b"\0\0")
BAD = {
    "empty": b"",
    "no picture": b"hello",
    "svg": b"<svg xmlns='http://www.w3.org/2000/svg'/>",
    "cut png": file_of("RGB")[:60],
    "png cut in its head": file_of("RGB")[:20],
    "png without data": png(1, 1),
    "png with too little data": png(10, 10, packed=ONE),
    "png of no size": png(0, 0, packed=ONE),
    "huge png": png(60_000, 60_000, packed=ONE),
    "large png": png(5000, 5000, packed=ONE),
    "16 bits": png(1, 1, bits=16, packed=zlib.compress(b"\0" * 7)),
    "interlaced": png(1, 1, packed=ONE, interlaced=1),
    "palette missing": png(1, 1, colour=3, packed=zlib.compress(b"\0\0")),
    "unknown colour type": png(1, 1, colour=5, packed=ONE),
    "unknown filter": png(1, 1, colour=6, packed=zlib.compress(b"\x09\0\0\0\0")),
    "not deflated": png(1, 1, packed=b"\xff" * 30),
    "bomb": png(10, 10, packed=zlib.compress(b"\0" * 5_000_000)[:2000]),
    "large with transparency": png(1900, 1900, colour=6, packed=ONE),
    "few greys with transparency": png(1, 1, bits=4, colour=0, packed=TWO, extra=chunk(b"tRNS", b"\0\1")),
    "cut jpeg": file_of("RGB", "JPEG")[:30],
    "jpeg of markers": b"\xff\xd8" + b"\xff" * 5000,
    "jpeg of noise": b"\xff\xd8" + random.Random(1).randbytes(3000),
    "cmyk jpeg": file_of("CMYK", "JPEG"),
    "too large": b"\x89PNG\r\n\x1a\n" + b"\0" * 4_000_000,
}  # fmt: skip


@pytest.mark.parametrize("name", BAD)
def test_what_cannot_be_drawn_is_refused_with_a_sentence(name):
    """The sentence says what to do; the sheet is made without the logo and says so."""
    with pytest.raises(LogoError, match=r"\w{3}.*\.$"):
        read_logo(BAD[name])


def test_a_sheet_is_made_without_a_bad_logo():
    """The user is told, the customer gets the sheet."""
    made = draw_sheet(replace(usual_sheet(), firm=replace(FIRM, logo=b"hello"), technical=()))
    assert made.pages >= 1
    assert made.notes == ("The logo is neither PNG nor JPEG. Save it as one of them.",)
