"""Conversions: figures from outside, then the laws that hold for every unit."""

import math
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given
from numpy.testing import assert_allclose

from core import constants
from core.errors import AmbiguousUnit, InputError, UnitError
from core.units import HARDNESS_UNITS, QUANTITIES, Unit, convert, find_unit, units_of
from core.units.lookup import REGISTRY
from tests import strategies
from tests.published import rows

EPSILON = 1e-12  # a conversion is three roundings of 1e-16; four in a row stay far below this

# Bridges as they are printed, with half a unit of the last digit: value, from, to, quantity, printed, source.
PRINTED = [
    (1, "kgr/ft³", "g CaCO3/L", "resin capacity", 2.288352, 5e-7, "grain and cubic foot, exact"),
    (1, "kgr/ft³", "eq/L", "resin capacity", 0.0457277, 5e-8, "the same with IUPAC 2021 weights"),
    (1, "eq/L", "kgr/ft³", "resin capacity", 21.8686, 5e-5, "the same"),
    (1, "lb/ft³", "g/L", "salt dose", 16.018463, 5e-7, "pound and cubic foot, exact"),
    (3350, "grain/lb", "g/kg", "salt efficiency", 478.571, 5e-4, "a pound has 7000 grains"),
    (2850, "grain/lb", "mol/kg", "salt efficiency", 4.0679, 5e-5, "IUPAC 2021 weights"),
    (4000, "grain/lb", "mol/kg", "salt efficiency", 5.7094, 5e-5, "IUPAC 2021 weights"),
    (1, "mol", "m³·°dH", "exchanged amount", 5.6077, 5e-5, "IUPAC 2021 weights, 10 mg CaO per litre"),
    (1, "gpm/ft²", "m/h", "surface loading", 2.44475, 5e-9, "0.22712470704 m3/h over 0.09290304 m2, by hand"),
    (1, "gpm/ft³", "BV/h", "specific flow", 8.020833, 5e-7, "US gallon and foot, exact"),
    (1, "psi", "kPa", "pressure", 6.894757, 5e-7, "NIST SP 811 appendix B, from memory"),
    (1, "ft H₂O", "kPa", "pressure", 2.98907, 5e-6, "NIST SP 811 appendix B (conventional), from memory"),
    (1, "atm", "bar", "pressure", 1.01325, 5e-13, "SI Brochure, exact"),
    (1, "BTU", "MJ", "energy", 1.055056e-3, 5e-10, "NIST SP 811 appendix B, from memory"),
    (212, "°F", "°C", "temperature", 100.0, 1e-12, "definition"),
    (-40, "°C", "°F", "temperature", -40.0, 1e-12, "definition"),
    (25, "°C", "K", "temperature", 298.15, 1e-12, "definition"),
    (1, "MGD", "m³/day", "flow", 3785.41, 5e-3, "US gallon, exact"),
    (1, "mg/L", "lb/MG", "concentration", 8.3454, 5e-5, "pound and US gallon, exact"),
    (1, "mg/L NO3-N", "mg/L NO3", "nitrate", 4.42664, 5e-6, "IUPAC 2021 weights"),
    (1, "mg/L SO4-S", "mg/L SO4", "sulfate", 2.99613, 5e-6, "IUPAC 2021 weights"),
    (1, "mg/L", "mg/L CaCO3", "iron", 1.792, 5e-4, "older SM 2340 B, from memory"),
    (1, "mg/L", "mg/L CaCO3", "aluminium", 5.564, 5e-4, "older SM 2340 B, from memory"),
    (1, "mg/L", "mg/L CaCO3", "zinc", 1.531, 5e-4, "older SM 2340 B, from memory"),
    (1, "mg/L", "mg/L CaCO3", "strontium", 1.142, 5e-4, "older SM 2340 B, from memory"),
    (1, "mg/L", "mg/L CaCO3", "manganese", 1.822, 5e-4, "older SM 2340 B, from memory"),
    (1, "mg/L Ca", "mg/L CaCO3", "hardness", 2.497, 5e-4, "SM 2340 B, from memory"),
    (1, "mg/L Mg", "mg/L CaCO3", "hardness", 4.118, 5e-4, "SM 2340 B, from memory"),
    (1, "°dH", "mmol/L", "hardness", 0.1783, 5e-5, "DIN 38409-6, from memory"),
    (1, "gpg", "mg/L CaCO3", "hardness", 17.1, 5e-2, "unit dictionaries, read"),
    (1, "mmol/L", "°dH", "hardness", 5.6, 5e-2, "Kozisek 2020, read"),
]

# milliequivalents per milligram, from handbook tables of equivalent weights (IUPAC 2021 weights, by hand)
MEQ_PER_MG = {
    "calcium": 0.0499027,
    "magnesium": 0.0822876,
    "sodium": 0.0434976,
    "potassium": 0.0255766,
    "iron": 0.0358134,
    "manganese": 0.0364046,
    "strontium": 0.0228258,
    "barium": 0.0145638,
    "ammonium": 0.0554354,
    "bicarbonate": 0.0163891,
    "carbonate": 0.0333289,
    "sulfate": 0.0208212,
    "chloride": 0.0282087,
    "nitrate": 0.0161280,
    "fluoride": 0.0526360,
    "carbon dioxide": 0.0454452,
    "aluminium": 0.1111871,
    "zinc": 0.0305904,
}


def _convert(value, to, quantity=None, **named):
    return {"value": convert(value, named["from"], to, quantity)}


def _round_trip(value, through):
    path = [step.strip() for step in through.split(">")]
    for here, there in pairwise(path):
        value = convert(value, here, there)
    return {"value": value}


@pytest.mark.parametrize("row", rows("units", what="convert"), ids=lambda row: row.id)
def test_conversion_agrees_with_outside_figure(row):
    """A conversion gives the figure that definitions and atomic weights give by hand."""
    row.check(**_convert(**row.inputs))


@pytest.mark.parametrize("row", rows("units", what="round trip"), ids=lambda row: row.id)
def test_round_trip_returns_the_reading(row):
    """A reading sent through several units comes back as it was."""
    row.check(**_round_trip(**row.inputs))


@pytest.mark.parametrize(
    ("value", "one", "other", "quantity", "printed", "half_digit", "source"),
    PRINTED,
    ids=[f"{r[0]} {r[1]} in {r[2]}" for r in PRINTED],
)
def test_conversion_matches_print(value, one, other, quantity, printed, half_digit, source):
    """Every bridge comes out as printed, to every digit that was printed."""
    assert_allclose(convert(value, one, other, quantity), printed, rtol=0, atol=half_digit, err_msg=source)


@pytest.mark.parametrize("ion", MEQ_PER_MG)
def test_equivalents_of_each_ion(ion):
    """A milligram of an ion carries the milliequivalents of the handbook table."""
    symbol = units_of(ion)[0]

    assert_allclose(convert(1.0, symbol, "meq/L", ion), MEQ_PER_MG[ion], rtol=0, atol=5e-8)


def test_public_face():
    """The example of the design: 14 German degrees, with the symbols promised to every caller."""
    assert_allclose(convert(14, "°dH", "mg/L CaCO3"), 249.8714, rtol=0, atol=5e-5)
    promised = ("mg/L CaCO3", "mmol/L", "meq/L", "gpg", "°dH", "°fH", "°e", "mg/L Ca")

    assert HARDNESS_UNITS[:8] == promised
    assert units_of("hardness") == HARDNESS_UNITS


@given(strategies.readings, strategies.units_of_one_quantity(2))
def test_there_and_back(value, pair):
    """Any reading survives the way to another unit and back."""
    one, other = pair
    back = convert(convert(value, one, other), other, one)

    zero = abs(one.offset) + abs(other.offset)  # a temperature is exact to its distance from the furthest zero
    assert math.isclose(back, value, rel_tol=EPSILON, abs_tol=EPSILON * zero)


@given(strategies.readings, strategies.units_of_one_quantity(3))
def test_no_way_round_matters(value, three):
    """Straight from the first unit to the third is the same as by way of the second."""
    first, second, third = three
    direct = convert(value, first, third)
    by_way = convert(convert(value, first, second), second, third)

    zero = sum(abs(unit.offset) for unit in three)
    assert math.isclose(by_way, direct, rel_tol=EPSILON, abs_tol=EPSILON * zero)


@given(strategies.readings, strategies.units_of_one_quantity(2))
def test_more_stays_more(value, pair):
    """A larger reading is a larger reading in every unit."""
    assert convert(value * 1.001, *pair) > convert(value, *pair)


@given(strategies.readings, strategies.every_unit)
def test_same_unit_changes_nothing(value, unit):
    """To convert a reading into its own unit leaves every bit of it."""
    assert convert(value, unit, unit) == value


@given(strategies.units_of_one_quantity(2))
def test_array_equals_its_elements(pair):
    """Arrays, lists and single numbers give the same figures; the shape is kept."""
    values = np.array([[0.0, 1.5, np.nan], [-3.0, 1e6, 17.3]])
    each = [[convert(float(v), *pair) for v in row] for row in values]

    assert_allclose(convert(values, *pair), each, rtol=0, atol=0)
    assert_allclose(convert(values.tolist(), *pair), each, rtol=0, atol=0)


def test_kinds_of_numbers():
    """One number in is one Python float out, whatever its kind; an empty array stays empty."""
    for number in (14, 14.0, np.float64(14), np.float32(14), np.int64(14), np.array(14.0)):
        assert type(convert(number, "°dH", "gpg")) is float
    assert math.isnan(convert(math.nan, "°dH", "gpg"))
    assert convert(math.inf, "°dH", "gpg") == math.inf
    assert np.shape(convert([], "°dH", "gpg")) == (0,)
    assert np.isnan(convert([None, 1.0], "°dH", "gpg")).tolist() == [True, False]


@pytest.mark.parametrize(
    "value", ["14", b"14", ["1", "2"], {"a": 1}, 1j, 10**400, [[1], [1, 2]]], ids=lambda v: str(v)[:12]
)
def test_what_is_no_number_is_refused(value):
    """A text is parsed by the app, never guessed at here."""
    with pytest.raises(InputError) as refusal:
        convert(value, "°dH", "gpg")

    assert refusal.value.field == "value"


def test_hardness_goes_first():
    """Without a quantity mmol/L is calcium plus magnesium; with alkalinity it is acid used up."""
    assert_allclose(convert(1, "mmol/L", "meq/L"), 2.0, rtol=EPSILON)
    assert_allclose(convert(1, "mmol/L", "meq/L", "alkalinity"), 1.0, rtol=EPSILON)
    assert_allclose(convert(1, "mmol/L", "meq/L", "sodium"), 1.0, rtol=EPSILON)


def test_two_units_settle_what_one_leaves_open():
    """The other unit tells which °F, which grain, which g/L is meant."""
    assert_allclose(convert(50, "°F", "°C"), 10.0, rtol=EPSILON)
    assert_allclose(convert(50, "°F", "mg/L CaCO3"), 500.0, rtol=EPSILON)
    assert_allclose(convert(7000, "grain", "lb"), 1.0, rtol=EPSILON)
    assert_allclose(convert(7000, "grain", "kgr"), 7.0, rtol=EPSILON)
    assert_allclose(convert(1, "mg/L", "µg/L"), 1000.0, rtol=EPSILON)


def test_what_is_dissolved_must_be_said():
    """Milligrams to millimoles depends on the ion: asked back, with choices that are accepted."""
    with pytest.raises(AmbiguousUnit, match="depends on what is dissolved") as question:
        convert(92, "mg/L", "mmol/L")

    assert "mg/L Ca (calcium)" in question.value.choices
    for choice in question.value.choices:
        assert isinstance(find_unit(choice), Unit)


def test_unlike_units_do_not_meet():
    """A pressure is not a hardness; the sentence names both."""
    with pytest.raises(UnitError, match="gpg measures hardness and bar measures pressure"):
        convert(1, "gpg", "bar")
    with pytest.raises(UnitError, match="“bar” measures pressure, not hardness; accepted are mg/L CaCO3"):
        convert(1, "gpg", "bar", "hardness")
    with pytest.raises(UnitError, match="“°dH” measures hardness, not flow"):
        convert(1, find_unit("°dH"), "L/min", "flow")


@pytest.mark.parametrize("quantity", QUANTITIES)
def test_tables_are_sound(quantity):
    """Symbols are unique in a quantity, factors positive and finite, and some unit is the base."""
    table = REGISTRY[quantity]

    assert len({unit.symbol for unit in table}) == len(table) >= 2
    assert all(unit.quantity == quantity and 0 < unit.factor < math.inf for unit in table)
    assert any(unit.factor == 1.0 and unit.offset == 0.0 for unit in table)
    assert all(0 <= unit.decimals <= 4 for unit in table)


def test_gallons_and_grains_are_the_legal_ones():
    """gpg and °e differ by the gallons alone, a pound is 7000 grains, a cubic foot is a foot cubed."""
    gallons = constants.IMPERIAL_GALLON / constants.US_GALLON

    assert_allclose(convert(1, "gpg", "°e"), gallons, rtol=EPSILON)
    assert_allclose(convert(1, "lb", "grain", "mass"), 7000, rtol=EPSILON)
    assert_allclose(convert(1, "ft", "m") ** 3 * 1000, convert(1, "ft³", "L"), rtol=EPSILON)
    assert_allclose(convert(1, "ft", "m") ** 2, convert(1, "ft²", "m²"), rtol=EPSILON)
