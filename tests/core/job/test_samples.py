"""The sample jobs give the answers their authors worked out; every answer can be recomputed from its working."""

import json
from pathlib import Path

import pytest

from core.chemistry import Solution
from core.job import Job, assess
from core.job.fields import SECTIONS, choice_for, field_for
from core.units import convert

SAMPLES = sorted((Path(__file__).resolve().parents[3] / "sample_tests").glob("*.json"))
EXPECTED = [
    pytest.param(path, key, *expected, id=f"{path.stem}-{key}")
    for path in SAMPLES
    for key, expected in json.loads(path.read_text(encoding="utf-8"))["expected"].items()
]


def test_there_are_samples():
    """The demo has at least three jobs to show."""
    assert len(SAMPLES) >= 3


@pytest.mark.parametrize(("path", "key", "value", "unit", "tolerance"), EXPECTED)
def test_expected_answer(path, key, value, unit, tolerance):
    """The answer written down beside the sample comes out."""
    section, name = key.split(".")
    answer = getattr(assess(Job.load(path)), section).answers[name]

    got = convert(answer.amount.value, answer.amount.unit, unit, quantity=answer.amount.quantity)

    assert got == pytest.approx(value, rel=tolerance)


@pytest.mark.parametrize("path", SAMPLES, ids=lambda path: path.stem)
def test_sample_uses_known_entries(path):
    """A sample names only entries and choices that exist."""
    job = Job.load(path)

    assert [key for key in job.entries if field_for(key) is None] == []
    assert [key for key in job.choices if choice_for(key) is None] == []


@pytest.mark.parametrize("path", SAMPLES, ids=lambda path: path.stem)
def test_every_answer_can_be_recomputed_from_its_working(path):
    """Each step, called with the numbers it shows, gives the number it shows; the last one is the answer."""
    assessment = assess(Job.load(path))
    answers = [answer for section in SECTIONS for answer in getattr(assessment, section).answers.values()]

    assert answers
    for answer in answers:
        assert answer.steps, f"{answer.key} shows no working"
        for step in answer.steps:
            assert step.function(**step.inputs) == step.result, f"{answer.key}: {step.card.quantity}"


@pytest.mark.parametrize("path", SAMPLES, ids=lambda path: path.stem)
def test_working_begins_at_readings_and_assumptions(path):
    """What goes into a step is an earlier result, a figure of an earlier water, or a reading with its origin noted."""
    assessment = assess(Job.load(path))
    for section in SECTIONS:
        for answer in getattr(assessment, section).answers.values():
            known = []
            for step in answer.steps:
                for name, value in step.inputs.items():
                    earlier = any(value is result for result in known)
                    of_water = any(isinstance(result, Solution) for result in known)
                    read = name == "reading" and step.note
                    assert earlier or of_water or read or isinstance(value, str), (answer.key, name)
                known.append(step.result)
