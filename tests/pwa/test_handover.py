"""Handing over: codes read by an independent decoder, joined in any order; hostile codes and files do no harm."""

import asyncio
import hashlib
import io
import json
import random
import zlib
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
import zxingcpp
from hypothesis import given
from hypothesis import strategies as st
from PIL import Image

from core.job import Entry, Job, assess
from pwa.services import handover_code
from pwa.services.handover import (
    Arrivals,
    HandoverError,
    arrival,
    compact,
    file_of,
    links,
    qr_codes,
    read_file,
)
from pwa.services.handover_code import (
    LARGEST_TEXT,
    MOST_PARTS,
    MOST_SETS,
    PIECE,
    CodeError,
    Pool,
    encode,
    from_digits,
    to_digits,
)
from pwa.services.handover_words import DICTIONARY
from pwa.services.summary import summary_text
from pwa.state.display import Display

ADDRESS = "https://water.example.org/tapwright/"
SAMPLES = sorted((Path(__file__).resolve().parents[2] / "sample_tests").glob("*.json"))


def large_job():
    """A job too large for one code: notes that do not deflate."""
    dice = random.Random(5)
    return Job("large", "Large", notes="".join(chr(dice.randrange(0x4E00, 0x9000)) for _ in range(400)))


def seen(code):
    """What an independent decoder reads from a code's modules, drawn black on white with its white round it."""
    rows = np.pad(np.array(code.rows, dtype=bool), 4)
    picture = np.where(np.kron(rows, np.ones((4, 4), dtype=bool)), 0, 255).astype(np.uint8)
    found = zxingcpp.read_barcodes(picture)
    assert len(found) == 1
    return found[0].text


def scanned(codes, order):
    """The job after the codes were scanned in an order; the app starts anew before each."""
    kept, received = "", None
    for at in order:
        arrivals = Arrivals(kept)
        received = arrivals.add(seen(codes[at]))
        kept = arrivals.to_text()
    return received


@pytest.mark.parametrize("path", SAMPLES, ids=lambda path: path.stem)
def test_a_job_travels_by_one_code(path):
    """A usual job fits one code that a phone reads off a screen, a supply of many sources two; all of it arrives."""
    job = Job.load(path)
    codes = qr_codes(job, ADDRESS)

    assert len(codes) == (2 if "sources.2.name" in job.choices else 1)
    assert codes[0].version <= 16
    assert codes[0].text.startswith(f"{ADDRESS}#/join/")
    assert scanned(codes, range(len(codes))).job == Job.from_text(job.to_text())


def test_a_large_job_travels_by_a_few_codes_in_any_order():
    """Shuffled, and one twice: the job comes out whole with the last one, and not before."""
    job = large_job()
    codes = qr_codes(job, ADDRESS)
    order = list(range(len(codes)))
    random.Random(1).shuffle(order)

    assert 2 <= len(codes) <= 6
    assert scanned(codes, order[:-1]).job is None
    assert scanned(codes, [order[0], *order]).job == job


def test_the_picture_is_read_too():
    """The PNG, opened by one library, read by another."""
    code = qr_codes(Job.load(SAMPLES[0]), ADDRESS)[0]
    picture = np.asarray(Image.open(io.BytesIO(code.png)).convert("L"))
    found = zxingcpp.read_barcodes(picture)

    assert [one.text for one in found] == [code.text]


@pytest.mark.parametrize("length", [20, 60, 120])
def test_codes_stay_readable_for_long_addresses(length):
    """Version 20 at most, about a kilobyte at most, whatever the host is called."""
    codes = qr_codes(large_job(), "https://" + "a" * (length - 9) + "/")
    assert max(code.version for code in codes) <= 17
    assert max(len(code.text) for code in codes) < 1000


@given(st.binary(max_size=64))
def test_base_36_is_lossless(data):
    """Any bytes come back, also when a messenger makes the letters small."""
    digits = to_digits(data)
    assert set(digits) <= set("0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZ")
    if data:
        assert from_digits(digits) == from_digits(digits.lower()) == data


@given(st.text(st.characters(exclude_categories=["Cs"]), max_size=300), st.integers(20, PIECE))
def test_any_text_travels(text, piece):
    """Whatever a job holds, in pieces of any size."""
    try:
        parts = encode(text, piece)
    except CodeError:
        return  # too many parts at this size
    pool = Pool()
    progress = None
    for part in reversed(parts):
        progress = pool.add(part)
    assert progress.text == text


def test_the_dictionary_is_for_ever():
    """Regression, own output: codes shown by one version are read by the next."""
    assert hashlib.sha256(DICTIONARY).hexdigest() == "e67ba286b7445fb940bb29bc405875f131af9ce392c4e3e4cce9187c02f204d3"


def damaged(part, at=30):
    """A part with one digit changed."""
    return part[:at] + ("0" if part[at] != "0" else "1") + part[at + 1 :]


def forged(packed, total=1, index=0, version=1):
    """A part with a right checksum round whatever bytes."""
    body = bytes([version]) + hashlib.sha256(packed).digest()[:6] + bytes([index, total]) + packed
    return handover_code._written(body)


def bomb():
    """A megabyte of zeros in a kilobyte."""
    packer = zlib.compressobj(9, zlib.DEFLATED, -15)
    return packer.compress(b"0" * 1_000_000) + packer.flush()


GOOD = encode('{"a":1}')[0]
HOSTILE = {
    "empty": "",
    "short": "AB",
    "spaces": " " * 100,
    "letters": "Ä" * 100,
    "endless": "A" * 2001,
    "random": "".join(random.Random(2).choices("0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZ", k=400)),
    "too large a block": "Z" * 140,
    "one digit changed": damaged(GOOD, 20),
    "cut off": GOOD[:-5],
    "another version": forged(b"x", version=2),
    "number beyond the total": forged(b"x", total=2, index=2),
    "no parts": forged(b"x", total=0),
    "too many parts": forged(b"x", total=MOST_PARTS + 1),
    "no deflated data": forged(b"\xff" * 40),
    "bomb": forged(bomb()),
    "cut deflated data": forged(from_digits(GOOD)[9:-6]),
    "more after the end": forged(from_digits(GOOD)[9:-4] + b"more"),
}


@pytest.mark.parametrize("name", HOSTILE)
def test_hostile_codes_are_refused_and_spoil_nothing(name):
    """A sentence, and the parts collected before are still there."""
    parts = encode(compact(large_job()))
    pool = Pool()
    pool.add(parts[0])
    with pytest.raises(CodeError, match=r"\.$"):
        pool.add(HOSTILE[name])
    for part in parts[1:]:
        progress = pool.add(part)
    assert Job.from_text(progress.text) == large_job()


def test_a_bomb_is_not_unpacked():
    """What would unpack to a gigabyte costs no more than the limit."""
    packer = zlib.compressobj(9, zlib.DEFLATED, -15)
    packed = b"".join(packer.compress(b"0" * 1_000_000) for _ in range(3)) + packer.flush()
    pieces = [packed[at : at + 1000] for at in range(0, len(packed), 1000)]
    assert len(packed) < 4000
    mark = hashlib.sha256(packed).digest()[:6]
    pool = Pool()
    parts = [
        handover_code._written(bytes([1]) + mark + bytes([index, len(pieces)]) + piece)
        for index, piece in enumerate(pieces)
    ]
    for part in parts[:-1]:
        pool.add(part)
    with pytest.raises(CodeError, match="far more"):
        pool.add(parts[-1])


def test_parts_of_two_jobs_do_not_mix():
    """Codes of another job in between: both come out."""
    one, other = large_job(), replace(large_job(), id="other")
    pool = Pool()
    texts = [
        pool.add(part).text for pair in zip(encode(compact(one)), encode(compact(other)), strict=True) for part in pair
    ]
    assert [Job.from_text(text) for text in texts if text] == [one, other]


def test_forged_parts_under_the_same_mark_are_caught():
    """A piece of other content with a right checksum: the whole is refused, and can be scanned again."""
    parts = encode(compact(large_job()))
    body = from_digits(parts[1])[:-4]
    pool = Pool()
    pool.add(parts[0])
    pool.add(handover_code._written(body[:-1] + bytes([body[-1] ^ 1])))
    for part in parts[2:-1]:
        pool.add(part)
    with pytest.raises(CodeError, match="do not belong together"):
        pool.add(parts[-1])
    assert [pool.add(part).text for part in parts][-1] is not None


def test_another_total_under_the_same_mark_is_refused():
    """What was collected keeps its count."""
    parts = encode(compact(large_job()))
    body = bytearray(from_digits(parts[1])[:-4])
    body[8] += 1
    pool = Pool()
    pool.add(parts[0])
    with pytest.raises(CodeError, match="does not belong"):
        pool.add(handover_code._written(bytes(body)))


def test_begun_sets_do_not_pile_up():
    """The oldest of five begun sets makes room."""
    pool = Pool()
    for n in range(MOST_SETS + 3):
        pool.add(forged(bytes([n]) * 10, total=2))
    assert len(json.loads(pool.to_text())) == MOST_SETS


DAMAGED_POOLS = [
    "",
    "x",
    "[]",
    "5",
    "{}",
    '{"a": 5}',
    '{"a": {"total": "x", "pieces": {}}}',
    '{"a": {"total": 2, "pieces": {"9": "00"}}}',
    '{"a": {"total": 2, "pieces": {"0": "zz"}}}',
    "[" * 100_000,
]


@pytest.mark.parametrize("kept", DAMAGED_POOLS, ids=lambda kept: kept[:30] or "empty")
def test_a_damaged_pool_is_an_empty_one(kept):
    """What was kept between two starts may be anything."""
    assert Pool.from_text(kept).to_text() == "{}"


@pytest.mark.parametrize(
    "shape", ["{}", "#/join/{}", "/join/{}", "https://x.example/#/join/{}", " https://x.example/a?b=c#/join/{}\n"]
)
def test_a_part_is_found_in_any_link(shape):
    """The whole link, the route alone, the part alone; pasted with a blank."""
    job = Job.load(SAMPLES[0])
    assert Arrivals().add(shape.format(links(job, ADDRESS)[0][1])).job == Job.from_text(job.to_text())


@pytest.mark.parametrize(
    "link", ["", "https://x.example/", "x" * 5000, "#/join/", "javascript:alert(1)", "#/join/ab cd"]
)
def test_a_link_without_a_job_is_refused(link):
    """A sentence, no traceback."""
    with pytest.raises(HandoverError, match=r"\.$"):
        Arrivals().add(link)


def test_a_job_too_large_for_codes_is_said_to_go_by_file():
    """The sentence names the way that works."""
    dice = random.Random(5)
    huge = Job("huge", notes="".join(chr(dice.randrange(0x4E00, 0x9000)) for _ in range(6000)))
    with pytest.raises(HandoverError, match="as a file"):
        links(huge, ADDRESS)
    with pytest.raises(HandoverError, match="as a file"):
        links(Job("long", notes="a" * LARGEST_TEXT), ADDRESS)
    assert read_file(file_of(huge)[1]) == huge


def test_a_job_travels_by_file():
    """Name and content; a mark at the start of the file is borne."""
    job = Job.load(SAMPLES[0])
    name, data = file_of(job)
    assert name == "Heron Lane 4, softener check.json"
    assert read_file(data) == Job.from_text(job.to_text())
    assert read_file(b"\xef\xbb\xbf" + data) == Job.from_text(job.to_text())


FILES = {
    "empty": b"",
    "bytes": bytes(range(256)),
    "deep": b"[" * 1_000_000,
    "deep in a job": b'{"format": "tapwright job", "version": 1, "x": ' + b'{"a":' * 100 + b"1" + b"}" * 100 + b"}",
    "long number": b'{"format": "tapwright job", "version": 1, "x": ' + b"9" * 10_000 + b"}",
    "another format": b'{"format": "other"}',
    "newer": b'{"format": "tapwright job", "version": 99}',
    "infinite": b'{"format": "tapwright job", "version": 1, "entries": {"water.ph": {"value": Infinity}}}',
    "huge": b" " * 9_000_000,
}


@pytest.mark.parametrize("name", FILES)
def test_hostile_files_are_refused(name):
    """A sentence, quickly, and nothing else."""
    with pytest.raises(HandoverError, match=r"\.$"):
        read_file(FILES[name])


@pytest.mark.parametrize("bad", ["", "../../x", "a/b", "a b", "x" * 65, "é"])
def test_an_id_that_could_do_harm_is_replaced(bad):
    """Ids are part of addresses: only plain ones are taken over, others follow from the content."""
    data = file_of(Job(bad, "A"))[1]
    assert read_file(data).id != bad
    assert read_file(data) == read_file(data)


def found_in(kept):
    """A way to look jobs up in a table."""

    async def find(job_id):
        return kept.get(job_id)

    return find


def joined(job, kept):
    """What joining means, and the table after it."""
    result = asyncio.run(arrival(job, found_in(kept)))
    return result, (kept if result.kind == "same" else {**kept, result.job.id: result.job.to_text()})


def test_joining_never_overwrites():
    """New comes in; the same again changes nothing; another content comes in beside it, once."""
    mine, theirs = Job("a", "House"), Job("a", "House", notes="other")
    first, kept = joined(mine, {})
    again, kept = joined(replace(mine, changed="2031-05-04T10:00:00Z"), kept)
    beside, kept = joined(theirs, kept)
    twice, kept = joined(theirs, kept)

    assert [first.kind, again.kind, beside.kind, twice.kind] == ["new", "same", "beside", "same"]
    assert Job.from_text(kept["a"]) == mine
    assert len(kept) == 2
    assert beside.job.name == "House (handed over)"
    assert beside.job.notes == "other"


def test_a_summary_for_a_message():
    """Name, answers in the reader's units, what was assumed, and whose word comes first; no markup."""
    job = Job.load(SAMPLES[0])
    text = summary_text(job, assess(job), Display("us")).replace("\u00a0", " ")

    assert text.startswith("Heron Lane 4, softener check")
    assert "gpg" in text
    assert "4.2 days" in text
    assert "Assumed" in text
    assert "licensed installer" in text
    assert "{" not in text
    assert max(map(len, text.splitlines())) < 300


def test_a_summary_of_an_empty_job_says_what_is_missing():
    """No answer, but what to enter."""
    text = summary_text(Job("x"), assess(Job("x")), Display())
    assert "Enter the hardness" in text


def test_a_summary_keeps_what_was_typed_as_text():
    """Braces in a name or an entry are words, not places for numbers."""
    job = Job("x", "A {b} name", entries={"water.hardness": Entry(None, typed="{x}")})
    assert summary_text(job, assess(job), Display()).startswith("A {b} name")
