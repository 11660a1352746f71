"""The offer: totals to the coin, lines from a design, designs side by side, and savings that can be defended."""

import json
import random
from dataclasses import replace
from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.errors import InputError, JobFileError
from core.job import Entry, Job, assess
from core.job.comparison import _payback, compare, running
from core.job.offer import MOST_OPTIONS, Design, Line, Offer, Option, split, total
from core.job.offer_file import offer_as_json, offer_from_json
from core.job.prices import Item, PriceBook, UnitPrice
from core.job.proposal import design_of, propose, three_digits, why_no_softener
from tests.published import rows

D = Decimal
BOOK = PriceBook(
    currency="€",
    tax_rates={"standard": D(19), "low": D(7)},
    salt=UnitPrice(D("8.90"), D(25), "kg"),
    water=UnitPrice(D("4.35"), D(1), "m³"),
    service_year=D(120),
    items=(
        Item("S1", "Softener 20 L", "each", D(890), tax="standard", use="softener", size=D(20)),
        Item("S2", "Softener 45 L", "each", D(1290), tax="standard", use="softener", size=D(45)),
        Item("T2", "Twin softener 2 × 30 L", "each", D(2150), tax="standard", use="softener", size=D(30), fits="twin"),
        Item("W", "Fitting", "h", D(68), "labour", "standard", "every offer", D("3.5")),
        Item("B", "Blending valve", "each", D("48.20"), tax="standard", use="blending"),
        Item("N", "Salt", "kg", D("0.40"), tax="low", use="first salt"),
        Item("X", "Test kit", "each", D(19), tax="standard"),
    ),
)
DESIGN = Design("One", 42.0, "single", "nacl", 96.0, 4.0, 354.09, 46321.0, 3.1)
cents = st.integers(0, 500_000).map(lambda n: D(n) / 100)


def lines(quantities, prices, tax="standard"):
    """Lines from numbers."""
    return tuple(Line("x", "each", D(q), D(p), tax=tax) for q, p in zip(quantities, prices, strict=True))


def written(value):
    """The cells of a row that holds one number or several."""
    return str(value).split("|")


@pytest.mark.parametrize("row", rows("offer", what="round"), ids=lambda row: row.id)
def test_rounding(row):
    """A half goes where the named rule sends it."""
    book = PriceBook(rounding=row.inputs["rule"])
    row.check(rounded=book.round(D(str(row.inputs["amount"]))))


@pytest.mark.parametrize("row", rows("offer", what="total"), ids=lambda row: row.id)
def test_totals_by_hand(row):
    """Lines, discount and tax come out as on paper."""
    given_ = row.inputs
    book = PriceBook(tax_rule=given_["tax_rule"], tax_rates={"standard": D(str(given_["tax"]))})
    option = Option(
        "x", lines(written(given_["quantities"]), written(given_["prices"])), D(str(given_.get("discount", 0)))
    )
    got = total(option, book)
    row.check(net=got.net, tax=got.tax, gross=got.gross)
    assert all(amount == amount.quantize(D("0.01")) for amount in (got.net, got.tax, got.gross))


@pytest.mark.parametrize("row", rows("offer", what="year"), ids=lambda row: row.id)
def test_a_year_by_hand(row):
    """Salt and water of a year are rounded as printed, then priced."""
    given_ = row.inputs
    book = PriceBook(
        salt=UnitPrice(D(str(given_["salt_price"])), D(str(given_["salt_per"])), "kg"),
        water=UnitPrice(D(str(given_["water_price"])), D(1), "m³"),
    )
    got = running(replace(DESIGN, salt_year=given_["salt_year"], water_year=given_["water_year"]), book)
    row.check(salt=got.salt, salt_cost=got.salt_cost, water=got.water, water_cost=got.water_cost, year=got.year)


@pytest.mark.parametrize("row", rows("offer", what="over years"), ids=lambda row: row.id)
def test_over_the_years_by_hand(row):
    """Price now and the running cost of the years, without interest."""
    given_ = row.inputs
    book = PriceBook(
        salt=UnitPrice(D(0), D(1), "kg"), water=UnitPrice(D(0), D(1), "m³"), service_year=D(str(given_["year"]))
    )
    option = Option("x", lines([1], [str(given_["gross"])], tax=""), design=DESIGN)
    row.check(over_years=compare(Offer((option,), book, int(given_["years"]))).columns[0].over_years)


@pytest.mark.parametrize("row", rows("offer", what="payback"), ids=lambda row: row.id)
def test_payback_by_hand(row):
    """Extra price divided by what is saved a year."""
    row.check(payback=_payback(D(str(row.inputs["extra"])), D(str(row.inputs["money"]))))


@pytest.mark.parametrize(
    ("extra", "money"), [(D(0), D(10)), (D(-5), D(10)), (D(10), D(0)), (D(10), D(-1)), (D(1), None)]
)
def test_no_payback_without_extra_price_or_saving(extra, money):
    """What costs no more, or saves nothing, pays nothing back."""
    assert _payback(extra, money) is None


@given(
    st.lists(st.tuples(cents, cents, st.sampled_from(["standard", "low", ""])), min_size=1, max_size=8),
    st.integers(0, 100),
    st.sampled_from(["per line", "per total"]),
    st.sampled_from(["half up", "half even"]),
)
def test_what_is_printed_adds_up(parts, discount, tax_rule, rounding):
    """Lines give the subtotal, shares the discount, net and taxes the total: to the cent, whatever the rule."""
    book = replace(BOOK, tax_rule=tax_rule, rounding=rounding)
    option = Option("x", tuple(Line("x", "each", q, p, tax=t) for q, p, t in parts), D(discount))

    got = total(option, book)

    assert sum(row.amount for row in got.lines) == got.subtotal
    assert sum(row.share for row in got.lines) == got.discount
    assert sum(row.net for row in got.lines) == got.net
    assert got.gross == got.subtotal - got.discount + sum(tax.amount for tax in got.taxes)
    assert {tax.name for tax in got.taxes} == {t for *_, t in parts} - {""}
    assert all(0 <= row.share <= row.amount for row in got.lines)
    if tax_rule == "per line":
        assert sum(row.tax for row in got.lines) == got.tax


@given(st.integers(0, 10_000), st.lists(st.integers(0, 5000), min_size=1, max_size=9))
def test_split_is_whole_and_fair(coins, weights):
    """The parts add up, and none is a whole coin away from its exact part."""
    amount = D(coins) / 100
    parts = split(amount, [D(w) for w in weights], D("0.01"))

    assert sum(parts) == (amount if any(weights) else 0)
    if any(weights):
        exact = [amount * w / sum(weights) for w in weights]
        assert all(abs(part - whole) < D("0.01") for part, whole in zip(parts, exact, strict=True))


def test_largest_numbers_stay_exact():
    """The largest quantity and price that are accepted multiply without losing a digit."""
    got = total(Option("x", (Line("x", "each", D("999999999.999999"), D("999999999.999999")),)), BOOK)
    assert got.gross == D("999999999999998000.00")  # (1e9 - 1e-6)^2 = 1e18 - 2000 + 1e-12


@pytest.mark.parametrize(
    "line",
    [
        Line("x", "each", D(-1), D(1)),
        Line("x", "each", D("NaN"), D(1)),
        Line("x", "each", D(1), D("Infinity")),
        Line("x", "each", D(1), D(1), D(101)),
    ],
)
def test_impossible_numbers_are_refused(line):
    """A sentence names the number and what is accepted."""
    with pytest.raises(InputError, match="accepted is"):
        total(Option("x", (line,)), BOOK)


def test_an_offer_holds_three_designs_at_most():
    """More would not fit side by side."""
    with pytest.raises(InputError, match="at most 3"):
        Offer((Option("x"),) * (MOST_OPTIONS + 1))


def test_lines_are_proposed_from_a_design():
    """The smallest softener that has the resin, the work, the salt; a valve only where water is blended."""
    assert [line.key for line in propose(DESIGN, BOOK)] == ["S2", "W", "N"]
    assert [line.key for line in propose(replace(DESIGN, resin=20.0, blended=True), BOOK)] == ["S1", "W", "B", "N"]
    assert [line.key for line in propose(replace(DESIGN, resin=25.0, kind="twin"), BOOK)] == ["T2", "W", "N"]
    assert propose(DESIGN, BOOK)[1].quantity == D("3.5")


def test_a_softener_that_is_not_in_the_book_is_said():
    """No softener is proposed that is too small."""
    big = replace(DESIGN, resin=80.0)
    assert [line.key for line in propose(big, BOOK)] == ["W", "N"]
    assert "80 L" in why_no_softener(big, BOOK)
    assert why_no_softener(DESIGN, BOOK) == ""


def test_a_design_comes_from_an_assessment():
    """Resin, salt, water and load of the design are those of the softener part."""
    entries = {
        "water.hardness": Entry(22.0, "gpg", "measured"),
        "demand.persons": Entry(4.0, "", "told"),
        "demand.bathrooms": Entry(2.0, "", "told"),
    }
    job = Job("x", entries=entries)
    part = assess(job).softener
    design = design_of("One", job, part)

    load = next(s.result for s in part.working if s.card.quantity == "Daily load")
    assert design.resin == part.headline.amount.value
    assert design.salt_year == part.answers["salt_year"].amount.value
    assert design.load == pytest.approx(load, rel=1e-12)
    assert design_of("None", Job("y"), assess(Job("y")).softener) is None


def test_prices_of_salt_and_water_may_be_in_other_units():
    """40 lb bags and thousands of gallons are priced as they are sold."""
    book = PriceBook(salt=UnitPrice(D("7.49"), D(40), "lb"), water=UnitPrice(D("11.50"), D(1000), "US gal"))
    got = running(DESIGN, book)
    assert (got.salt, got.salt_unit) == (D(781), "lb")  # 354.09 kg / 0.45359237
    assert (got.water, got.water_unit) == (D(12237), "US gal")  # 46.321 m³ / 3.785411784 L
    assert got.salt_cost == D("146.24")  # 781 × 7.49 / 40 = 146.242
    assert got.water_cost == D("140.73")  # 12 237 × 0.0115 = 140.7255


def test_a_missing_price_is_said_and_not_counted_as_nothing():
    """Without the price of salt there is no cost of a year, and a sentence says why."""
    got = compare(Offer((Option("x", design=DESIGN),), replace(BOOK, salt=None))).columns[0]
    assert got.running.year is None
    assert got.over_years is None
    assert got.running.missing == ("The price of salt is missing in the price book.",)


def side_by_side(one, other, extra="0", book=BOOK):
    """Two designs: the first dearer to buy by `extra`."""
    options = (
        Option("One", lines([1], [str(D(1000) + D(extra))], tax=""), design=one),
        Option("Other", lines([1], ["1000"], tax=""), design=other),
    )
    return compare(Offer(options, book))


def test_a_saving_is_shown_against_the_dearest_to_run():
    """A third less salt for 100 more is said in kilograms, in money, and as years until it has paid back."""
    got = side_by_side(replace(DESIGN, salt_year=240.0), replace(DESIGN, salt_year=360.0), "100").savings
    assert len(got) == 1
    assert (got[0].option, got[0].against) == (0, 1)
    assert got[0].salt == 120.0
    assert got[0].water == 0.0
    assert got[0].money == D("42.72")  # 360 × 0.356 = 128.16; 240 × 0.356 = 85.44
    assert got[0].payback == D("2.3")  # 100 / 42.72 = 2.34
    assert got[0].why_not == ""


def test_a_difference_within_the_doubt_is_no_saving():
    """5 % less salt is less than the capacity tables are sure of: nothing is promised."""
    got = side_by_side(replace(DESIGN, salt_year=342.0), replace(DESIGN, salt_year=360.0)).savings[0]
    assert got.salt == 0.0
    assert got.money == 0
    assert got.payback is None
    assert "doubt" in got.why_not


def test_a_loss_always_counts():
    """Less salt bought with a little more water: the water is set against it."""
    got = side_by_side(
        replace(DESIGN, salt_year=240.0, water_year=48000.0), replace(DESIGN, salt_year=360.0, water_year=46000.0)
    ).savings[0]
    assert got.water == -2000.0
    assert got.money == D("42.72") - D("8.70")  # 2 m³ × 4.35


def test_designs_for_other_water_are_not_compared():
    """A design that takes out less hardness saves salt, but not at the same service."""
    got = side_by_side(replace(DESIGN, salt_year=240.0, load=2.0), DESIGN).savings[0]
    assert got.salt == 0.0
    assert got.money is None
    assert "cannot be compared" in got.why_not


def test_kilograms_of_two_salts_are_not_compared():
    """Potassium chloride weighs and costs something else: only the money is compared."""
    book = replace(BOOK, potassium_salt=UnitPrice(D(40), D(25), "kg"))
    got = side_by_side(DESIGN, replace(DESIGN, salt="kcl", salt_year=450.0), book=book).savings[0]
    assert got.salt == 0.0
    assert got.money == D("720.00") - D("126.02")  # 450 × 1.60; 354 × 0.356
    assert got.why_not == ""


def test_three_digits_that_count():
    """As numbers are printed: 354.09 is 354, 2985.4 is 2985, 4.321 is 4.32."""
    assert [three_digits(x) for x in (354.09, 2985.4, 4.321, 0.05, 0.0, 1e21)] == [
        D(354),
        D(2985),
        D("4.32"),
        D("0.0500"),
        D(0),
        D(10) ** 21,
    ]


def test_an_offer_survives_its_file():
    """What is read back is what was written, without the items of the price book."""
    offer = Offer(
        (Option("A", propose(DESIGN, BOOK), D("2.5"), DESIGN), Option("B", lines(["1.234"], ["-9.99"]))), BOOK, 12
    )
    back = offer_from_json(json.loads(json.dumps(offer_as_json(offer))))
    assert back == replace(offer, book=replace(BOOK, items=()))
    assert compare(back) == compare(replace(offer, book=replace(BOOK, items=())))


HOSTILE = [
    None,
    [],
    {"years": True},
    {"years": 10**30},
    {"options": {}},
    {"options": [[]]},
    {"options": [{"lines": "x"}]},
    {"options": [{"lines": [{"price": 5}]}]},
    {"options": [{"lines": [{"price": "1e5"}]}]},
    {"options": [{"design": {"resin": "5"}}]},
    {"options": [{"design": {"kind": "triple"}}]},
    {"options": [{"design": {"resin": 10**400}}]},
    {"options": [{}] * 9},
    {"terms": {"rounding": "up"}},
    {"terms": {"places": 99}},
    {"terms": {"salt": {"price": "1", "per": "0", "unit": "kg"}}},
    {"terms": {"salt": {"price": "1", "unit": "furlong"}}},
    {"terms": {"tax_rates": {"x": "101"}}},
]


@pytest.mark.parametrize("part", HOSTILE, ids=lambda part: json.dumps(part)[:50])
def test_a_damaged_offer_is_refused_with_a_sentence(part):
    """Nothing of the wrong kind gets in, and nothing else than JobFileError gets out."""
    with pytest.raises(JobFileError, match=r"offer in the job file cannot be used: .*\."):
        offer_from_json(part)


def test_the_order_of_lines_does_not_change_the_total():
    """A discount is split differently, the sums stay."""
    base = list(lines(["1", "2", "3.5"], ["9.99", "0.35", "17.77"]))
    book = replace(BOOK, tax_rule="per total")
    expected = total(Option("x", tuple(base), D(7)), book).gross
    for seed in range(5):
        random.Random(seed).shuffle(base)
        assert total(Option("x", tuple(base), D(7)), book).gross == expected
