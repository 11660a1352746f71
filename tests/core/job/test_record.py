"""The job file: round trip, refusals in sentences, nothing lost."""

import contextlib
import json

import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.errors import JobFileError
from core.job.record import FORMAT, SOURCES, VERSION, Entry, Job

TEXT = st.text(max_size=20)
ENTRIES = st.builds(
    Entry,
    value=st.none() | st.floats(allow_nan=False, allow_infinity=False),
    unit=TEXT,
    source=st.sampled_from(SOURCES),
    kit=TEXT,
    typed=TEXT,
)
JOBS = st.builds(
    Job,
    id=TEXT,
    name=TEXT,
    place=TEXT,
    notes=TEXT,
    changed=TEXT,
    entries=st.dictionaries(TEXT, ENTRIES, max_size=4),
    choices=st.dictionaries(TEXT, TEXT, max_size=4),
)


@given(JOBS)
def test_a_job_survives_its_file(job):
    """What is written is read back the same, whatever stands in it."""
    assert Job.from_text(job.to_text()) == job


def test_keys_of_a_later_writer_are_kept():
    """A top-level key this version does not know is written back as it came."""
    document = {"format": FORMAT, "version": VERSION, "id": "a", "colour": {"of": ["the", "van"]}}

    assert json.loads(Job.from_text(json.dumps(document)).to_text())["colour"] == {"of": ["the", "van"]}


def test_expected_answers_of_a_sample_are_not_kept():
    """A sample's "expected" is for the tests; it does not follow the job around."""
    document = {"format": FORMAT, "version": VERSION, "id": "a", "expected": {"x": 1}}

    assert "expected" not in Job.from_text(json.dumps(document)).to_text()


REFUSED = [  # what is wrong, the file, words the sentence must hold
    ("no JSON", "{", "JSON"),
    ("another format", '{"format": "a recipe"}', "not a job file"),
    ("a list", "[]", "not a job file"),
    ("no version", json.dumps({"format": FORMAT}), "version"),
    ("true as version", json.dumps({"format": FORMAT, "version": True}), "version"),
    ("a newer version", json.dumps({"format": FORMAT, "version": VERSION + 1}), "Update the app"),
    ("a number as name", json.dumps({"format": FORMAT, "version": 1, "name": 3}), "“name”"),
    ("entries as list", json.dumps({"format": FORMAT, "version": 1, "entries": []}), "“entries”"),
    ("an entry as number", json.dumps({"format": FORMAT, "version": 1, "entries": {"a": 3}}), "“a”"),
    (
        "text as value",
        json.dumps({"format": FORMAT, "version": 1, "entries": {"a": {"value": "3"}}}),
        "not a number",
    ),
    ("infinity", '{"format": "tapwright job", "version": 1, "entries": {"a": {"value": 1e999}}}', "finite"),
    (
        "huge integer",
        '{"format": "tapwright job", "version": 1, "entries": {"a": {"value": 1' + "0" * 400 + "}}}",
        "finite",
    ),
    (
        "unknown source",
        json.dumps({"format": FORMAT, "version": 1, "entries": {"a": {"source": "dreamt"}}}),
        "dreamt",
    ),
    ("deep nesting", "[" * 100_000, "nested"),
    ("a huge integer alone", "9" * 5000, "JSON"),
]


@pytest.mark.parametrize(("text", "words"), [row[1:] for row in REFUSED], ids=[row[0] for row in REFUSED])
def test_a_bad_file_is_refused_with_a_sentence(text, words):
    """The sentence says what is wrong."""
    with pytest.raises(JobFileError) as refused:
        Job.from_text(text)

    assert words in str(refused.value)


@given(st.text(max_size=200))
def test_any_text_is_read_or_refused(text):
    """No text makes the reader fail in another way."""
    with contextlib.suppress(JobFileError):
        Job.from_text(text)


def test_changing_a_job_leaves_the_old_one():
    """Jobs are values: a change makes a new one."""
    old = Job("a", entries={"water.iron": Entry(1.0, "mg/L Fe")})

    new = old.with_entry("water.iron", None).with_choice("softener.kind", "twin")

    assert "water.iron" in old.entries
    assert (new.entries, new.choices) == ({}, {"softener.kind": "twin"})
