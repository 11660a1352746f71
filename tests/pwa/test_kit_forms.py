"""Forms of kits and tests as plain state: what is typed becomes a kit, an entry, or a sentence."""

import pytest

from core.errors import InputError
from core.job.fields import FIELDS
from core.job.kits import find_kit, from_text, to_text
from core.units import convert
from pwa.state.field_test import FieldTest, kits_to_test
from pwa.state.kit_form import KitForm
from pwa.state.unit_sets import CHOOSABLE, UNIT_SETS, own_units, units_to_choose, with_own_unit

HARDNESS, ALKALINITY = FIELDS["water.hardness"], FIELDS["water.alkalinity"]


def outcome_of(kit: str, field, unit: str, *readings: str, **typed: str):
    """What a test with these readings comes to."""
    found = find_kit(kit, field)
    test = FieldTest()
    test.begin(found, field)
    test.readings = list(readings)
    for name, text in typed.items():
        setattr(test, name, text)
    return test.outcome(found, field, unit)


def test_titration_by_hand():
    """11.2 mL of 0.01 M on 50 mL: 11.2 × 0.01 × 1000 / 50 = 2.24 mmol/L, × 100.09 = 224.2 mg/L CaCO3."""
    outcome = outcome_of("burette, 0.01 M EDTA, 50 mL sample", HARDNESS, "mg/L CaCO3", "11,2")
    assert outcome.entry.unit == "mg/L CaCO3"
    assert outcome.entry.value == 224.2


def test_acid_by_hand():
    """9.6 mL of 0.1 M on 100 mL: 9.6 × 0.1 × 1000 / 100 = 9.6 meq/L."""
    kit = "burette, acid, 100 mL sample"
    assert outcome_of(kit, ALKALINITY, "meq/L", "9.6", strength="0.1").entry.value == 9.6


def test_repeated_readings_of_a_diluted_sample():
    """A comparator at 0.4 and 0.5 on a sample diluted four times: 0.45 × 4 = 1.8 mg/L."""
    outcome = outcome_of("colour comparator", FIELDS["water.iron"], "mg/L Fe", "0.4", "0.5", dilution="4")
    assert outcome.entry.value == 1.8
    assert "diluted 4 times" in outcome.entry.kit


@pytest.mark.parametrize(
    ("readings", "typed"),
    [(("x",), {}), (("-3",), {}), (("20",), {"dilution": "0"}), (("20",), {"dilution": "half"}), (("1e999",), {})],
)
def test_a_test_that_cannot_be_gets_a_sentence(readings, typed):
    """No number, a count below zero, a dilution below one: a sentence and no entry."""
    outcome = outcome_of("drop count, 1 gpg a drop", HARDNESS, "gpg", *readings, **typed)
    assert outcome.entry is None
    assert outcome.refused
    assert outcome.wanted.endswith(".")


def test_the_kit_in_use_goes_by_the_unit_until_one_is_chosen():
    """An entry in °dH begins with the drops worth one °dH."""
    kits = kits_to_test(HARDNESS)
    assert FieldTest().kit_in_use(kits, "°dH").words == "drop count, 1 °dH a drop"
    assert FieldTest().kit_in_use(kits, "°dH", "drop count, 1 gpg a drop").words == "drop count, 1 gpg a drop"


def test_a_described_kit_survives_its_file_and_its_form():
    """A strip with steps, typed with decimal commas, is the same kit after saving and after opening its form."""
    form = KitForm(name="blue strip", measures="iron", way="strip", unit="mg/L Fe", steps="0; 0,15; 0,3  1")
    kit = form.kit(())
    assert kit.steps == (0.0, 0.15, 0.3, 1.0)
    assert from_text(to_text([kit])) == (kit,)
    again = KitForm()
    again.begin(kit, ",")
    assert again.kit((kit,)) == kit


@pytest.mark.parametrize(
    "form",
    [
        KitForm(drop="1"),
        KitForm(name="a;b", drop="1"),
        KitForm(name="drops"),
        KitForm(name="drops", drop="one"),
        KitForm(name="strip", way="strip", steps="5"),
        KitForm(name="strip", way="strip", steps="5 2"),
        KitForm(name="meter", way="meter"),
        KitForm(name="meter", way="meter", percent="250"),
        KitForm(name="Taken", drop="1"),
    ],
)
def test_a_kit_that_cannot_be_gets_a_sentence(form):
    """What is missing or impossible is said."""
    taken = KitForm(name="taken", drop="1").kit(())
    with pytest.raises(InputError, match=r"\.$|\?$"):
        form.kit((taken,))


@pytest.mark.parametrize("name", CHOOSABLE)
def test_every_unit_of_a_quantity_can_be_turned_into_every_other(name):
    """What can be chosen for a quantity measures it, and each set's own unit is among it."""
    units = units_to_choose(name)
    assert {known[name] for known in UNIT_SETS.values()} <= set(units)
    for unit in units:
        convert(1.0, units[0], unit, quantity=CHOOSABLE[name][1])


@pytest.mark.parametrize("text", ["", "{", "[]", "7", '{"hardness": "mile"}', '{"taste": "good"}', '{"flow": ["gpm"]}'])
def test_strange_settings_of_units_are_left_out(text):
    """What is kept but not known changes nothing."""
    assert own_units(text) == {}
    assert own_units(with_own_unit(text, "flow", "gpm")) == {"flow": "gpm"}
    assert own_units(with_own_unit(with_own_unit("", "flow", "gpm"), "flow", "")) == {}
