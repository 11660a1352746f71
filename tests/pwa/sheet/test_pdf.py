"""The PDF: text that can be searched, nothing cut and nothing overlapping, tags, fonts, and no Pillow."""

import hashlib
import io
import re
import subprocess
import sys
import zipfile
from contextlib import closing
from dataclasses import fields, is_dataclass, replace
from functools import cache
from itertools import pairwise
from pathlib import Path

import numpy as np
import pypdf
import pypdfium2
import pytest

from pwa import theme
from pwa.bundle.sources import app_files
from pwa.sheet.data import Scale, SheetData
from pwa.sheet.draw import KEPT, Paper, draw_sheet
from pwa.sheet.page import FOOT, PAPERS, SIDE
from pwa.sheet.type import LEAD
from tests.pwa.sheet.samples import FIRM, hard_sheet, signed_sheet, usual_job, usual_sheet

ROOT = Path(__file__).resolve().parents[3]
SHEETS = {
    "usual A4": usual_sheet,
    "usual Letter": lambda: usual_sheet("Letter"),
    "two designs Letter": lambda: usual_sheet("Letter", designs=2),
    "signed": signed_sheet,
    "hard A4": hard_sheet,
    "hard Letter": lambda: hard_sheet("Letter"),
}
NOT_SHOWN = {*KEPT, "logo", "title_", "made_with", "date", "spoken", "footer"}  # keys, or cut to one line


@cache
def drawn(name):
    """A sheet and its PDF, made once."""
    data = SHEETS[name]()
    return data, draw_sheet(data)


@cache
def pages(name):
    """The pages as pdfium reads them."""
    return list(pypdfium2.PdfDocument(drawn(name)[1].pdf))


@cache
def runs(name):
    """For each page the stretches of text with their boxes: (left, bottom, right, top, text)."""
    found = []
    for page in pages(name):
        text = page.get_textpage()
        boxes = [text.get_rect(at) for at in range(text.count_rects())]
        found.append([(*box, text.get_text_bounded(*box)) for box in boxes])
    return found


def squeezed(text):
    """A text without blanks: lines and columns break it anywhere."""
    return re.sub(r"\s", "", text)


@cache
def content(name):
    """All text of the PDF, in the order in which it stands in the file."""
    reader = pypdf.PdfReader(io.BytesIO(drawn(name)[1].pdf))
    return [page.extract_text() for page in reader.pages]


def texts(value):
    """Every text of a sheet that is shown whole."""
    if isinstance(value, str):
        yield value
    elif isinstance(value, tuple):
        for part in value:
            yield from texts(part)
    elif is_dataclass(value):
        for column in fields(value):
            if column.name not in NOT_SHOWN and not (isinstance(value, SheetData) and column.name == "notes"):
                yield from texts(getattr(value, column.name))


@pytest.mark.parametrize("name", SHEETS)
def test_all_text_is_there_and_can_be_searched(name):
    """Every text of the data is found in the file, as it was written, line breaks apart."""
    data, _ = drawn(name)
    found = squeezed("".join(run[4] for page in runs(name) for run in page)) + squeezed("".join(content(name)))
    for text in texts(data):
        for line in text.split("\n"):
            for word in line.split():
                assert squeezed(word) in found, word


@pytest.mark.parametrize("name", ["usual A4", "signed"])
def test_paragraphs_are_read_in_one_piece(name):
    """Words of a paragraph follow one another in the file: a search over a line break, and a copy, come out right."""
    data, _ = drawn(name)
    found = squeezed("".join(content(name)))
    whole = [text for text in texts(data) if len(text) > 60 and "\n" not in text]
    in_one_piece = [text for text in whole if squeezed(text) in found]
    assert len(in_one_piece) >= 0.95 * len(whole)  # a page turn may part one or two


@pytest.mark.parametrize("sign", "°³₃éß€₂µ≥−–“”·×¾")
def test_signs_of_the_trade_can_be_searched(sign):
    """Degrees, powers, formulas, umlauts, money."""
    data = replace(usual_sheet(), title=f"x{sign}y")
    text = pypdf.PdfReader(io.BytesIO(draw_sheet(data).pdf)).pages[0].extract_text()
    assert f"x{sign}y" in text


@pytest.mark.parametrize("name", SHEETS)
def test_nothing_is_cut(name):
    """Every stretch of text lies within the margins of its paper, above the footer or in it."""
    data, _ = drawn(name)
    width, height = PAPERS[data.paper]
    for page, found in zip(pages(name), runs(name), strict=True):
        assert page.get_size() == pytest.approx((width, height), abs=0.1)
        for left, bottom, right, top, text in found:
            assert left >= SIDE - 1.5, text
            assert right <= width - SIDE + 1.5, text
            assert top <= height - 20.0, text
            assert bottom >= FOOT - 1.0 or 15.0 <= bottom <= top <= 38.0, text


@pytest.mark.parametrize("name", SHEETS)
def test_nothing_overlaps(name):
    """No two stretches of text on a page share more than a hair."""
    for found in runs(name):
        for at, (left, bottom, right, top, text) in enumerate(found):
            for left2, bottom2, right2, top2, text2 in found[at + 1 :]:
                wide, tall = min(right, right2) - max(left, left2), min(top, top2) - max(bottom, bottom2)
                assert wide <= 0.6 or tall <= 0.6, (text, text2)


@pytest.mark.parametrize("name", SHEETS)
def test_the_font_is_embedded(name):
    """One font, cut to the signs used, with the way back to Unicode: it looks and copies the same everywhere."""
    reader = pypdf.PdfReader(io.BytesIO(drawn(name)[1].pdf))
    held = {}
    for page in reader.pages:
        for key, font in page["/Resources"]["/Font"].items():
            held[key] = font.get_object()
    assert held
    for font in held.values():
        descriptor = font["/DescendantFonts"][0].get_object()["/FontDescriptor"]
        assert "/FontFile2" in descriptor
        assert "/ToUnicode" in font
    assert len(drawn(name)[1].pdf) < 250_000


def structure(name):
    """Roles in the reading order, with the words read out for figures."""
    reader = pypdf.PdfReader(io.BytesIO(drawn(name)[1].pdf))
    catalog = reader.trailer["/Root"]
    assert catalog["/MarkInfo"]["/Marked"] == pypdf.generic.BooleanObject(True)
    assert catalog["/Lang"] == "en"
    kids = catalog["/StructTreeRoot"]["/K"][0].get_object()["/K"]
    return [(kid.get_object()["/S"], kid.get_object().get("/Alt")) for kid in kids]


def test_the_sheet_is_tagged_in_its_order():
    """One title for each part, section titles, paragraphs; the answer line is a figure that is read out in words."""
    found = structure("usual A4")
    roles = [role for role, _ in found]

    assert roles.count("/H1") == 2
    assert roles.index("/H1") < roles.index("/H2") < roles.index("/Figure")
    data, _ = drawn("usual A4")
    assert roles.count("/H2") == len(data.front) + len(data.technical)
    spoken = [alt for role, alt in found if role == "/Figure"]
    assert spoken
    assert all(spoken)
    assert spoken[0].startswith("Total hardness 21.1")


@pytest.mark.parametrize("name", SHEETS)
def test_every_mark_is_tagged_or_decoration(name):
    """Marked content is opened and closed in pairs, and nothing is drawn outside it."""
    reader = pypdf.PdfReader(io.BytesIO(drawn(name)[1].pdf))
    for page in reader.pages:
        depth = 0
        for operands, operator in _operations(reader, page):
            depth += operator in (b"BDC", b"BMC")
            if operator in (b"Tj", b"TJ", b"f", b"Do"):
                assert depth == 1, operands
            depth -= operator == b"EMC"
        assert depth == 0


def _operations(reader, page):
    return pypdf.generic.ContentStream(page.get_contents(), reader).operations


def test_the_front_keeps_to_one_page():
    """Three designs on A4, two on the shorter Letter: the technical part begins on page two."""
    for name in ("usual A4", "two designs Letter"):
        assert "Technical page" in content(name)[1]
        assert "Technical page" not in content(name)[0]


def test_a_front_that_is_too_long_goes_on():
    """Nothing is left out for the sake of one page."""
    assert "continued" in "".join(content("hard A4")[:3])


def test_pages_are_numbered():
    """Each foot says which page of how many, and who made it."""
    found = content("usual A4")
    for number, text in enumerate(found, start=1):
        assert f"Page {number} of {len(found)}" in text
        assert "made with Tapwright" in text


def test_a_table_has_its_heading_on_each_page():
    """Rows that go on over a page stand under their heading again."""
    found = [text for text in content("usual A4") if "Working in short, continued" in text.replace("\n", " ")]
    assert found
    for text in found:
        assert "Step" in text
        assert "Result" in text


def test_widths_are_those_of_the_font():
    """The layout measures as the library draws, in every size, bold apart."""
    with closing(Paper(usual_sheet())) as paper:
        for text in ("Größe 22 gpg", "x₃ ° €", "a\u00a0b", ""):
            paper._pdf.set_font_size(11.5)
            assert paper.width(text, LEAD) == pytest.approx(paper._pdf.get_string_width(text), abs=1e-9)


def picture(name, number, scale=2.0):
    """A page as an array of RGB."""
    return pages(name)[number].render(scale=scale).to_numpy()[:, :, ::-1].astype(int)


def near(page, colour):
    """Where a page has a colour of the theme."""
    code = colour.lstrip("#")
    wanted = np.array([int(code[at : at + 2], 16) for at in (0, 2, 4)])
    return np.abs(page - wanted).max(axis=2) <= 12


def test_the_answer_line_is_drawn():
    """The mark of the answer in the accent, thin and tall, right of the section titles; its ticks beside it."""
    dark = near(picture("usual A4", 0), theme.LIGHT.accent)
    columns = dark[:, 2 * 170 : 2 * 545]
    tall = [at for at in range(columns.shape[1]) if _longest(columns[:, at]) >= 2 * 11]
    groups = [pair for pair in pairwise(tall) if pair[1] - pair[0] > 1]
    assert tall, "no mark"
    assert len(tall) <= 40 * (len(groups) + 1)


def _longest(column):
    best = run = 0
    for one in column:
        run = run + 1 if one else 0
        best = max(best, run)
    return best


def test_a_band_is_drawn_from_end_to_end():
    """The thick stretch lies where the data put it."""
    data = usual_sheet()
    figure = replace(data.front[0].blocks[0], words="", tone="plain", scale=Scale(0.5, (0.25, 0.75), (), "spoken"))
    section = replace(data.front[0], blocks=(figure,))
    pdf = draw_sheet(replace(data, front=(section,), technical=())).pdf
    page = pypdfium2.PdfDocument(pdf)[0].render(scale=2.0).to_numpy()[:, :, ::-1].astype(int)
    soft = near(page, theme.LIGHT.accent_soft)
    left, width = 2 * (SIDE + 96.0 + 18.0), 2 * (PAPERS["A4"][0] - 2 * SIDE - 96.0 - 18.0)
    columns = np.array(
        [at for at in range(int(left), soft.shape[1]) if 15 <= _longest(soft[:, at]) <= 20]
    )  # 8 points high

    assert columns.min() == pytest.approx(left + 0.25 * width, abs=3)
    assert columns.max() == pytest.approx(left + 0.75 * width, abs=3)


@pytest.mark.parametrize("name", SHEETS)
def test_the_edges_are_free(name):
    """No ink within 8 mm of the edges, the ground of the head apart: printers cannot reach there."""
    for number in range(len(pages(name))):
        page = picture(name, number, 1.0)
        ground = near(page, theme.LIGHT.ground) | (page.min(axis=2) >= 250)
        edge = 22
        assert ground[:edge].all()
        assert ground[-12:].all()
        assert ground[:, :edge].all()
        assert ground[:, -edge:].all()


def test_the_same_sheet_is_the_same_file():
    """No clock and no chance: two drawings are equal to the byte."""
    assert draw_sheet(usual_sheet()).pdf == drawn("usual A4")[1].pdf


def test_title_author_and_day_are_in_the_file():
    """For whoever files it."""
    found = pypdf.PdfReader(io.BytesIO(drawn("usual A4")[1].pdf)).metadata
    assert found.title == "Heron Lane 4"
    assert found.author == FIRM.name
    assert found.creation_date.date().isoformat() == "2031-05-04"


WITHOUT = """
import sys
sys.modules["PIL"] = None
import warnings
warnings.simplefilter("error")
from pwa.sheet.type import LEAD
from tests.pwa.sheet.samples import usual_sheet
from pwa.sheet.draw import draw_sheet
import hashlib
print(hashlib.sha256(draw_sheet(usual_sheet()).pdf).hexdigest())
print(" ".join(sorted({name.partition(".")[0] for name in sys.modules} - set(sys.stdlib_module_names))))
"""


def test_it_needs_no_pillow():
    """In the browser there is none: the file is the same to the byte, and nothing else of third parties is loaded."""
    done = subprocess.run([sys.executable, "-c", WITHOUT], cwd=ROOT, capture_output=True, text=True, check=True)
    digest, loaded = done.stdout.splitlines()
    assert digest == hashlib.sha256(drawn("usual A4")[1].pdf).hexdigest()
    known = {"fpdf", "fontTools", "defusedxml", "numpy", "core", "pwa", "tests", "PIL", "__main__"}
    flet = {"flet", "repath", "six", "msgpack"}
    installers = {"_distutils_hack", "distutils-precedence", "sitecustomize", "_cython_3_3_0", "cython_runtime"}
    loaded = {name for name in loaded.split() if not name.startswith("__editable__")}  # an installer's own finder
    assert loaded - known - flet - installers == set()


def test_content_needs_no_pdf_library():
    """What is said can be built, and tested, without what draws it."""
    code = "import pwa.sheet.content, sys; print(any(n.startswith(('fpdf', 'fontTools')) for n in sys.modules))"
    done = subprocess.run([sys.executable, "-c", code], cwd=ROOT, capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "False"


@pytest.mark.parametrize(
    "text", ["漢字", "Smile \U0001f600 \ufe0f", "שלום", "a\u0301bc", "tab\there", "\x00\x07", "\u202eabc"]
)
def test_signs_the_font_has_not_do_no_harm(text):
    """They stand as □, and the user is told; joiners and marks vanish."""
    made = draw_sheet(replace(usual_sheet(), title=text))
    assert made.pages >= 2
    told = any("□" in note for note in made.notes)
    assert told == any(ord(sign) > 0x590 and sign not in "\ufe0f\u202e" for sign in text)


@pytest.mark.parametrize("text", ["**bold** <b>x</b> [a](http://x)", "{nb} %s \\ ( ) /JS", "__x__ --- ~~y~~"])
def test_text_is_text(text):
    """Nothing that a user writes is taken for markup, for a command, or for a placeholder."""
    made = draw_sheet(replace(usual_sheet(), title=text))
    found = pypdf.PdfReader(io.BytesIO(made.pdf)).pages[0].extract_text()
    assert text in found
    assert b"/JavaScript" not in made.pdf


def test_an_empty_sheet_is_a_page():
    """A title and nothing else."""
    assert draw_sheet(SheetData(title="Nothing yet")).pages == 1


def test_the_job_of_the_samples_has_all_that_matters():
    """The drawn sheet is of a job with readings of every kind: the tests above see a real one."""
    assert len({entry.source for entry in usual_job().entries.values()}) == 3


FROM_ARCHIVE = """
import sys
sys.path.insert(0, sys.argv[1])
import pwa
assert sys.argv[1] in pwa.__file__, pwa.__file__
from pwa.sheet.data import SheetData
from pwa.sheet.draw import draw_sheet
from pwa.services.handover import qr_codes
from core.job import Job
made = draw_sheet(SheetData(title="Größe ₃"))
print(made.pages, len(made.pdf), qr_codes(Job("x"), "https://x.example/")[0].version)
"""


def test_it_works_from_the_archive_of_the_app(tmp_path):
    """As the browser has it: the code and the font lie in a zip."""
    archive = tmp_path / "app.zip"
    with zipfile.ZipFile(archive, "w") as packed:
        for place, path in app_files().items():
            packed.write(path, place)
    done = subprocess.run(
        [sys.executable, "-c", FROM_ARCHIVE, str(archive)], cwd=tmp_path, capture_output=True, text=True, check=True
    )
    pages_made, size, version = map(int, done.stdout.split())
    assert pages_made == 1
    assert size > 3000
    assert version <= 10
