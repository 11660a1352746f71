"""The price book: numbers read without guessing, files that survive, and a sentence for each bad row."""

from dataclasses import replace
from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.errors import InputError, JobFileError
from core.job.price_csv import COLUMNS, items_as_csv, items_from_csv
from core.job.prices import KINDS, LARGEST, Item, PriceBook, UnitPrice, read_decimal, written

D = Decimal
RATES = {"standard": D(19)}
numbers = st.decimals(0, LARGEST, allow_nan=False, places=4)
words = st.text(st.characters(exclude_categories=["Cs", "Cc"]), min_size=1, max_size=30).map(str.strip).filter(bool)
items = st.builds(
    Item,
    key=words,
    name=words,
    unit=words,
    price=numbers,
    kind=st.sampled_from(KINDS),
    tax=st.sampled_from(["", "standard"]),
    quantity=numbers,
    size=st.none() | numbers,
    fits=st.sampled_from(["", "single", "twin"]),
)

READ = [
    ("12", "12"),
    ("12,5", "12.5"),
    ("1 234.50", "1234.50"),
    ("1.234,50", "1234.50"),
    ("1,234.50", "1234.50"),
    ("1'234’567.5", "1234567.5"),
    ("1,234,567", "1234567"),
    ("0.085", "0.085"),
    ("1.2340", "1.234"),
    (",5", "0.5"),
    ("\u00a012 345 ", "12345"),
]


@pytest.mark.parametrize(("typed", "value"), READ)
def test_numbers_as_people_write_them(typed, value):
    """Comma or point, groups of three, spaces."""
    assert read_decimal(typed, "price") == D(value)


@pytest.mark.parametrize("typed", ["1.234", "12,345", "999.000"])
def test_money_is_not_guessed(typed):
    """One sign and three digits can be a thousand or a fraction: the sentence shows both."""
    with pytest.raises(InputError, match=r"two ways\. Write \d+ or \d+\.\d+\."):
        read_decimal(typed, "price")


@pytest.mark.parametrize(
    "typed", ["", "abc", "1.2.3", "1e5", "NaN", "Infinity", "1 2", "1,23,456.7", "٣", "5.", "1" * 50]
)
def test_what_is_no_number_is_refused(typed):
    """The sentence says how to write it."""
    with pytest.raises(InputError, match=r"not a number\. Write it such as"):
        read_decimal(typed, "price")


@pytest.mark.parametrize(
    ("typed", "why"), [("-1", "accepted is 0 to"), ("2000000000", "accepted"), ("0.1234567", "decimals")]
)
def test_what_cannot_be_is_refused(typed, why):
    """Below zero, too large, too fine."""
    with pytest.raises(InputError, match=why):
        read_decimal(typed, "price")


@given(numbers)
def test_a_written_number_is_read_back(value):
    """No number is written in a form that is refused or read as another."""
    assert read_decimal(written(value), "price") == value


def a_book():
    """A price book with everything in it."""
    return PriceBook(
        "$",
        2,
        "half even",
        "per line",
        RATES,
        (Item("1", "Valve ¾″", price=D("1.234"), tax="standard"), Item("2", "Old unit taken back", price=D(-50))),
        UnitPrice(D("7.49"), D(40), "lb"),
        None,
        UnitPrice(D("4.35"), D(1), "m³"),
        D(120),
        {"from a later version": [1, {"a": "b"}]},
    )


def test_a_price_book_survives_its_file():
    """What is read back is what was written, keys of a later version too."""
    assert PriceBook.from_text(a_book().to_text()) == a_book()


HOSTILE = [
    "",
    "[]",
    "{}",
    "[" * 100_000,
    '{"format": "other"}',
    '{"format": "tapwright prices", "version": 2}',
    '{"format": "tapwright prices", "version": true}',
    '{"format": "tapwright prices", "version": 1, "items": {}}',
    '{"format": "tapwright prices", "version": 1, "items": [5]}',
    '{"format": "tapwright prices", "version": 1, "items": [{"key": "a", "name": "b", "price": 5}]}',
    '{"format": "tapwright prices", "version": 1, "items": [{"key": "a", "name": "b", "price": "5", "tax": "x"}]}',
    '{"format": "tapwright prices", "version": 1, "places": 1e9}',
    '{"format": "tapwright prices", "version": 1, "places": ' + "9" * 5000 + "}",
    '{"format": "tapwright prices", "version": 1, "water": {"price": "1", "unit": "kg"}}',
    "x" * 2_000_001,
]


@pytest.mark.parametrize("text", HOSTILE, ids=lambda text: text[:60] or "empty")
def test_a_damaged_price_book_is_refused_with_a_sentence(text):
    """Nothing else than JobFileError gets out."""
    with pytest.raises(JobFileError, match=r"\w{3}"):
        PriceBook.from_text(text)


def test_the_same_key_twice_is_refused():
    """A line must lead back to one item."""
    twice = replace(a_book(), items=(Item("1", "a"), Item("1", "b")))
    with pytest.raises(JobFileError, match="occurs twice"):
        PriceBook.from_text(twice.to_text())


@given(st.lists(items, max_size=5, unique_by=lambda item: item.key), st.sampled_from([",", ";", "\t"]))
def test_items_survive_a_spreadsheet_file(given_items, separator):
    """Whatever the names hold: quotes, separators, formulas, signs of any script."""
    back = items_from_csv(items_as_csv(tuple(given_items), separator), RATES)
    assert back.bad == ()
    assert back.items == tuple(given_items)


@pytest.mark.parametrize("name", ["=1+1", "+1", "-1", "@x", "'=1", "'quoted'"])
def test_no_cell_is_a_formula(name):
    """A spreadsheet that opens the file computes nothing."""
    line = items_as_csv((Item("k", name),)).splitlines()[1]
    assert line.split(",")[1] == f"'{name}"
    assert items_from_csv(items_as_csv((Item("k", name),)), RATES).items[0].name == name


def test_columns_in_any_order_with_a_decimal_comma():
    """As a spreadsheet in German writes it, with a mark at the start; the rest is usual."""
    got = items_from_csv("\ufeffPrice;NAME;key\r\n68,00;Arbeit;A\r\n;;\r\n", RATES)
    assert got.bad == ()
    assert got.items == (Item("A", "Arbeit", price=D("68.00")),)
    assert got.sentence() == "1 item read."


BAD = [
    ("a,Valve,abc,,,", "not a number"),
    ("a,Valve,1.234,,,", "two ways"),
    ("a,,5,,,", "name of “a” is missing"),
    (",Valve,5,,,", "key is missing"),
    ("a,Valve,5,gift,,", "accepted are material, labour, other"),
    ("a,Valve,5,,luxury,", "known are: standard"),
    ("a,Valve,5,,,softener", "size in litres"),
    ("ok,Again,5,,,", "occurs twice"),
]


@pytest.mark.parametrize(("row", "why"), BAD)
def test_a_bad_row_is_left_out_with_its_reason(row, why):
    """The good rows come in; the bad one is named by its number."""
    got = items_from_csv(f"key,name,price,kind,tax,use\nok,Good,1,,,\n{row}\nalso,Good,2,,,\n", RATES)
    assert [item.key for item in got.items] == ["ok", "also"]
    assert [bad.row for bad in got.bad] == [3]
    assert got.bad[0].text.startswith("Row 3: ")
    assert why in got.bad[0].text


@pytest.mark.parametrize(
    "text", ["", "\n", "a,b\n1,2\n", "key,name\n", "x" * 2_000_001, 'key,name,price\n"' + "y" * 200_000]
)
def test_a_file_that_is_no_price_list_is_refused(text):
    """Missing columns are named."""
    with pytest.raises(JobFileError, match=r"\."):
        items_from_csv(text, RATES)


def test_too_many_rows_are_refused():
    """A hostile file costs no more than a large one."""
    with pytest.raises(JobFileError, match="at most 5000"):
        items_from_csv("key,name,price\n" + "a,b,1\n" * 5001, RATES)


def test_the_heading_names_all_columns():
    """A file that goes out can be filled in and come back."""
    assert items_as_csv(()).strip() == ",".join(COLUMNS)
