"""The sign-off of a job: its entries become readings with the doubt of their kits, its design the promise."""

from dataclasses import fields, replace

import pytest

from core.job import assess
from core.job.kits import Kit
from core.job.record import Entry, Job
from core.job.signoff_fields import READINGS, SIGNOFF_FIELDS
from core.job.signoff_job import is_begun, sign_off_job
from core.job.signoff_readings import Readings

HOUSE = {
    "water.hardness": Entry(22.0, "gpg", "measured", "drop count, 1 gpg a drop"),
    "demand.persons": Entry(4.0),
    "demand.bathrooms": Entry(2.0),
}


def signed(own=(), **readings):
    """The sign-off of a house with readings in grains, litres or kilograms."""
    entries = {f"signoff.{name}": entry for name, entry in readings.items()}
    job = Job("x", entries=HOUSE | entries)
    return sign_off_job(job, assess(job).softener, own)


def check(found, key):
    """One check by its key."""
    return next(one for one in found.result.checks if one.key == key)


def test_every_reading_has_an_entry_and_every_entry_a_reading():
    """The entries are named as the readings are, so none is asked for in vain."""
    assert set(READINGS) == {column.name for column in fields(Readings)}


@pytest.mark.parametrize("field", SIGNOFF_FIELDS.values(), ids=SIGNOFF_FIELDS.keys())
def test_every_entry_can_be_turned_into_the_unit_of_the_core(field):
    """Each unit that is offered is one of its quantity."""
    from core.units import convert

    for unit in field.units:
        assert convert(1.0, unit, field.core_unit, quantity=field.quantity) > 0.0


def test_a_reading_arrives_in_the_unit_of_the_core():
    """1 gpg is 17.118 mg/L as CaCO3, and 100.087 mg of that a mmol: 0.1710 mmol/L (definition)."""
    found = check(signed(softened_fresh=Entry(1.0, "gpg", "measured")), "fresh")
    assert found.reading.value == pytest.approx(17.118 / 100.087, rel=1e-4)


def test_the_kit_of_a_reading_decides_whether_it_tells():
    """The same reading by a rough kit cannot tell, and by a fine one it is a miss."""
    rough = Kit("own", "my rough kit", ("hardness",), "gpg", shape="normal", resolution=2.0)
    fine = replace(rough, words="my fine kit", resolution=0.05)
    verdicts = {
        kit.words: check(
            signed((rough, fine), softened_fresh=Entry(1.5, "gpg", "measured", kit.words)), "fresh"
        ).verdict
        for kit in (rough, fine)
    }
    assert verdicts == {"my rough kit": "cannot tell", "my fine kit": "not met"}


@pytest.mark.parametrize(
    "entry", [Entry(None, "gpg", "measured", typed="x"), Entry(1e9, "gpg"), Entry(-1.0, "gpg"), Entry(1.0, "kg")]
)
def test_a_reading_that_cannot_be_counts_as_not_read(entry):
    """It judges nothing, and is named in a sentence."""
    found = signed(softened_fresh=entry, raw=Entry(22.0, "gpg", "measured"))
    assert check(found, "fresh").verdict == "not read"
    assert [problem.field for problem in found.part.problems] == ["signoff.softened_fresh"]


def test_soft_is_what_was_agreed():
    """A limit entered for the job stands in place of the usual one."""
    reading = {"softened_fresh": Entry(2.0, "gpg", "measured")}
    assert check(signed(**reading), "fresh").verdict == "not met"
    assert check(signed(**reading, soft=Entry(5.0, "gpg")), "fresh").verdict == "met"


def test_a_limit_alone_is_no_sign_off():
    """Only a reading begins one."""
    assert not is_begun(Job("x", entries=HOUSE | {"signoff.soft": Entry(1.0, "gpg")}))
    assert is_begun(Job("x", entries={"signoff.raw": Entry(1.0, "gpg")}))


def test_a_job_without_an_answer_promises_little_and_breaks_nothing():
    """Without a design there is nothing to hold the meter or the salt against."""
    job = Job("x", entries={"signoff.salt_used": Entry(3.0, "kg"), "signoff.raw": Entry(22.0, "gpg")})
    found = sign_off_job(job, assess(job).softener)
    assert {one.key for one in found.result.checks} == {"fresh", "late"}
