"""What people type is understood or refused with a sentence; what they read is short, right, and readable back."""

import math

import pytest
from hypothesis import example, given
from hypothesis import strategies as st

from core.errors import AmbiguousUnit, UnitError
from core.units import Unit, find_unit
from pwa.text import (
    GAP,
    NOTHING,
    Parsed,
    Reading,
    format_band,
    format_number,
    format_quantity,
    parse_number,
    parse_quantity,
)
from pwa.unit_words import unit_words
from tests import strategies

NUMBERS = {
    "12.5": 12.5,
    "12,5": 12.5,
    ",5": 0.5,
    ".5": 0.5,
    "12,": 12.0,  # still typing
    "12.": 12.0,
    " 7 ": 7.0,
    "-3": -3.0,
    "−3": -3.0,
    "+4": 4.0,
    "-0": 0.0,
    "0,125": 0.125,
    "1,234,567": 1234567.0,
    "1.234.567": 1234567.0,
    "1,234.5": 1234.5,
    "1.234,5": 1234.5,
    "1 234,5": 1234.5,
    "1\u2009234.5": 1234.5,
    "1\u202f234\u202f567": 1234567.0,
    "1'234.5": 1234.5,
    "1’234": 1234.0,
    "12345": 12345.0,
    "1/2": 0.5,
    "1 1/2": 1.5,
    "1-1/2": 1.5,
    "1½": 1.5,
    "¾": 0.75,
    "1⁄4": 0.25,
    "2e3": 2000.0,
    "2,5E-3": 0.0025,
    "1.2×10³": 1200.0,
    "1.5 x 10^-3": 0.0015,
}

NO_NUMBERS = [
    "12,x",
    "x",
    "1,2,3",
    "1,23.4",
    "12 5",
    "1 2345",
    "--5",
    "1/0",
    "nan",
    "inf",
    "٣",
    "<",
    "-",
    "1e",
    "22 gpg",
]

QUANTITIES = [  # typed, quantity, unit chosen, value, unit
    ("22 gpg", "hardness", None, 22.0, "gpg"),
    ("22gpg", "hardness", "°dH", 22.0, "gpg"),
    ("22", "hardness", "°dH", 22.0, "°dH"),
    ("300ppm CaCO3", "hardness", None, 300.0, "mg/L CaCO3"),
    ("12,5 °d", "hardness", "gpg", 12.5, "°dH"),
    ("20°dH", "hardness", None, 20.0, "°dH"),
    ("5e", "hardness", None, 5.0, "°e"),
    ("10 °F", "temperature", "°C", 10.0, "°F"),
    ("10 °F", "hardness", None, 10.0, "°fH"),
    ('1 1/2"', "length", None, 1.5, "in"),
    ("3/4 in", "length", "mm", 0.75, "in"),
    ("5'", "length", None, 5.0, "ft"),
    ("1 200 l/d", "flow", None, 1200.0, "L/day"),
    ("80 %", "share", None, 80.0, "%"),
    ("7,2", "", None, 7.2, ""),
    ("7,2", None, None, 7.2, ""),
    ("30 m3·°dH", None, None, 30.0, "m³·°dH"),
    ("", "hardness", "gpg", None, "gpg"),
]

SHOWN = [  # value, unit, as shown
    (17.118, "gpg", "17.1"),
    (0.3621, "gpg", "0.36"),
    (0.0584, "gpg", "0.058"),
    (249.87, "mg/L CaCO3", "250"),
    (12.4, "mg/L CaCO3", "12"),
    (9.96, "mg/L CaCO3", "10"),
    (3.62, "mg/L CaCO3", "3.6"),
    (2.5, "mmol/L", "2.50"),
    (4.208, "day", "4.2"),
    (484.4, "L", "484"),
    (1010.4, "US gal", "1010"),
    (0.3, "mg/L Fe", "0.30"),
    (12345.6, "L", f"12{GAP}346"),
    (123.456, "gpg", "123.5"),
    (0.0, "gpg", "0.0"),
    (1e-12, "mg/L CaCO3", "0"),
    (-1e-12, "°C", "0.0"),
    (-4.04, "°C", "−4.0"),
    (math.nan, "gpg", NOTHING),
    (None, "gpg", NOTHING),
]

PLAIN = [  # value, digits, as shown
    (4.0, 3, "4"),
    (2.5, 3, "2.5"),
    (2.4999, 3, "2.50"),
    (0.012345, 3, "0.0123"),
    (99.96, 3, "100"),
    (1234.4, 3, "1234"),
    (9999.6, 3, f"10{GAP}000"),
    (1234567.8, 3, f"1{GAP}234{GAP}568"),
    (-2.25, 4, "−2.25"),
    (1e-6, 3, "0.000001"),
    (1.234e-9, 3, "1.23e-9"),
    (math.inf, 3, "∞"),
    (-math.inf, 3, "−∞"),
    (math.nan, 3, NOTHING),
]


@pytest.mark.parametrize(("typed", "value"), NUMBERS.items())
def test_number_as_typed(typed, value):
    """Comma or point, spaces, apostrophes, fractions of an inch, signs and powers of ten are understood."""
    parsed = parse_number(typed)

    assert (parsed.value, parsed.refusal, parsed.note) == (value, "", "")


@pytest.mark.parametrize("typed", NO_NUMBERS)
def test_what_is_no_number_gets_a_sentence(typed):
    """A refusal quotes what was typed and says what to type."""
    parsed = parse_number(typed)

    assert parsed.value is None
    assert parsed.refusal == (f"“{typed}” is not a number; type digits with a comma or a point, such as 12.5 or 12,5.")


@pytest.mark.parametrize("typed", ["", "  ", "\n\u2009"])
def test_nothing_typed_is_no_error(typed):
    """An empty field is empty: no value, no refusal."""
    assert parse_number(typed) == Parsed(None)
    assert parse_quantity(typed, "hardness", "gpg") == Reading(None, "gpg")


@pytest.mark.parametrize(("typed", "value"), [("1,234", 1.234), ("12.345", 12.345), ("-1.500", -1.5)])
def test_three_decimals_are_pointed_out(typed, value):
    """One sign with three digits behind it is a decimal sign, and a note says how to write the thousands."""
    parsed = parse_number(typed)

    assert parsed.value == value
    assert "is read with a decimal" in parsed.note
    assert parsed.note.endswith("out.")
    assert parse_number(typed.replace(",", "").replace(".", "")).value == value * 1000


@pytest.mark.parametrize(
    ("typed", "flag", "value"),
    [
        ("<0,05", "below", 0.05),
        ("≤ 1", "below", 1),
        ("> 425", "above", 425),
        ("~20", "about", 20),
        ("≈20", "about", 20),
        ("ca. 20", "about", 20),
        ("ca 20", "about", 20),
        ("approx. 20", "about", 20),
    ],
)
def test_limits_and_rough_figures_are_flagged(typed, flag, value):
    """ "< 0.05" and "ca. 20" keep their number and say what kind of number it is."""
    parsed = parse_number(typed)
    flags = {name for name in ("below", "above", "about") if getattr(parsed, name)}

    assert (parsed.value, flags) == (value, {flag})
    assert ("at most" in parsed.note) == (flag == "below")
    assert ("at least" in parsed.note) == (flag == "above")


@pytest.mark.parametrize("typed", ["12-15", "12 – 15", "5 to 7", "5 … 7", "10 bis 12 °dH"])
def test_a_range_is_recognised(typed):
    """Two numbers are not one: the sentence asks for a single one."""
    with pytest.raises(UnitError, match="is a range; type one number"):
        parse_quantity(typed, "hardness", "°dH")


@pytest.mark.parametrize(("typed", "quantity", "chosen", "value", "unit"), QUANTITIES)
def test_quantity_as_typed(typed, quantity, chosen, value, unit):
    """A number with its unit, or with the unit chosen beside the field, in one text."""
    reading = parse_quantity(typed, quantity, chosen)

    assert (reading.value, reading.unit, reading.note) == (value, unit, "")


def test_chosen_unit_settles_an_ambiguous_one():
    """ "300 ppm" is asked back, unless the unit chosen beside the field is one of the things it can mean."""
    with pytest.raises(AmbiguousUnit, match="say which") as question:
        parse_quantity("300 ppm", "hardness")
    reading = parse_quantity("300 ppm", "hardness", "mg/L CaCO3")

    assert question.value.choices == ("mg/L CaCO3", "mg/L Ca")
    assert (reading.value, reading.unit) == (300.0, "mg/L CaCO3")
    assert reading.note == "“ppm” is read as mg/L CaCO3, the unit chosen."
    with pytest.raises(AmbiguousUnit):
        parse_quantity("300 ppm", "hardness", "gpg")


@pytest.mark.parametrize(
    ("typed", "quantity", "sentence"),
    [
        ("22 furlong", "hardness", "“furlong” is not a unit of hardness known here; accepted are mg/L CaCO3"),
        ("22 bar", "hardness", "“bar” measures pressure, not hardness"),
        ("22", "hardness", "The unit is missing; accepted are mg/L CaCO3"),
        ("7.2 pH", "", "“pH” does not belong here; type the number alone."),
        ("gpg", "hardness", "“gpg” is not a number"),
        ("1e999 gpg", "hardness", "“1e999 gpg” is too large a number."),
    ],
)
def test_refused_quantity_says_why(typed, quantity, sentence):
    """A wrong unit, a missing one, a unit where none belongs: each has its sentence."""
    with pytest.raises(UnitError) as refusal:
        parse_quantity(typed, quantity)

    assert str(refusal.value).startswith(sentence)


@given(st.one_of(st.text(), st.text(alphabet="0123456789.,' -+/eE<>~ca×x10^½³%°gp\u2009"), st.from_regex(r"[\d.,' ]+")))
@example("0" * 100)
@example("1e-9999")
@example("9" * 90 + "e9")
def test_no_text_breaks_the_reader(typed):
    """Whatever is typed, the answer is a finite number, nothing, or a sentence."""
    parsed = parse_number(typed)

    assert parsed.value is None or math.isfinite(parsed.value)
    assert (parsed.refusal != "") == (parsed.value is None and typed.strip() != "")
    assert parsed.refusal == "" or parsed.refusal.endswith(".")


@given(st.text(max_size=120), st.one_of(st.none(), st.just(""), strategies.quantities))
def test_no_text_breaks_the_unit_reader(typed, quantity):
    """Whatever is typed as a quantity is read, or refused with a UnitError and nothing else."""
    try:
        outcome = parse_quantity(typed, quantity).unit
    except UnitError as refusal:
        outcome = str(refusal)

    assert outcome == "" or outcome.endswith(".") or find_unit(outcome, quantity or None).symbol == outcome


@pytest.mark.parametrize("piece", ["1", "1,", "1 ", "<", "1/", "1e", "' ", "½", "-", "(", "mg/L "])
@pytest.mark.timeout(5)
def test_hostile_length_is_refused_at_once(piece):
    """A hundred thousand characters are refused without being read, and quoted in short."""
    parsed = parse_number(piece * 100_000)

    assert parsed.value is None
    assert "too long" in parsed.refusal
    assert len(parsed.refusal) < 200


@pytest.mark.parametrize(("value", "unit", "shown"), SHOWN)
def test_digits_suit_the_unit(value, unit, shown):
    """Each unit has its usual digits; small readings keep two that count; dust reads as nothing."""
    assert format_number(value, unit=unit) == shown


@pytest.mark.parametrize(("value", "digits", "shown"), PLAIN)
def test_plain_numbers(value, digits, shown):
    """Without a unit so many digits count; whole digits stay, exact zeros go, thousands are parted."""
    assert format_number(value, digits) == shown
    assert format_number(value, digits, ",") == shown.replace(".", ",")


@given(st.floats(-1e300, 1e300), st.integers(2, 12), st.sampled_from(".,"))
def test_what_is_shown_reads_back(value, digits, decimal):
    """A number shown, typed in again, is that number to the digits shown."""
    parsed = parse_number(format_number(value, digits, decimal))

    assert parsed.refusal == ""
    assert math.isclose(parsed.value, value, rel_tol=0.5000001 * 10.0 ** (1 - digits))


@given(st.floats(-1e9, 1e9), strategies.every_unit, st.sampled_from(".,"))
def test_quantity_shown_reads_back(value, unit, decimal):
    """A quantity shown reads back with its unit, within half of the last digit shown, two digits at least."""
    reading = parse_quantity(format_quantity(value, unit, decimal), unit.quantity, unit.symbol)

    assert find_unit(reading.unit, unit.quantity) == unit
    assert math.isclose(reading.value, value, rel_tol=0.0500001, abs_tol=5e-7)
    assert abs(reading.value - value) <= max(0.5000001 * 10.0**-unit.decimals, 0.00051 * abs(value))


@given(st.floats(0, 1e6), st.floats(0, 1e6), strategies.every_unit)
def test_more_is_never_shown_as_less(one, other, unit):
    """Rounding for the eye keeps the order of two readings."""
    low, high = (parse_number(format_number(v, unit=unit)).value for v in sorted((one, other)))

    assert low <= high


def test_quantity_and_band():
    """The unit follows after a space that does not break; a band names it once; a plain number has none."""
    assert format_quantity(17.118, "gpg") == f"17.1{GAP}gpg"
    assert format_quantity(17.118, "gpg", ",", digits=4) == f"17,12{GAP}gpg"
    assert format_quantity(7.25, "") == "7.25"
    assert format_quantity(math.nan, "gpg") == f"{NOTHING}{GAP}gpg"
    assert format_band(11.62, 14.2, "gpg") == f"11.6 to 14.2{GAP}gpg"
    assert format_band(14.2, 11.62, "gpg", ",") == f"11,6 to 14,2{GAP}gpg"
    assert format_band(11.62, 11.63, "gpg") == f"11.6{GAP}gpg"
    assert format_band(math.nan, 3.0, "gpg") == NOTHING
    assert format_band(None, 3.0, "gpg") == NOTHING


def test_a_unit_may_be_an_object_or_unknown():
    """A Unit brings its own digits; a text that is no unit falls back on digits that count."""
    assert format_number(0.64, unit=find_unit("mg/L", "iron")) == "0.64"
    assert format_number(12.3456, unit="fixture units") == "12.3"


@given(strategies.every_unit)
def test_every_unit_has_words(unit: Unit):
    """A screen reader gets words for every unit, without signs it would spell out."""
    words = unit_words(unit.symbol)

    assert words == "" if unit.symbol == "1" else words
    assert all(part.isalnum() for part in words.replace(".", "").split())
    assert "/" not in words


def test_unit_words():
    """Words as people say them, and the symbol itself where a unit is not known."""
    assert unit_words("gpg") == "grains per gallon"
    assert unit_words("mg/L CaCO3") == "milligrams per litre as calcium carbonate"
    assert unit_words("L/person/day") == "litres per person per day"
    assert unit_words("fixture units") == "fixture units"
