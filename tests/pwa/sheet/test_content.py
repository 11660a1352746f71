"""What stands on the sheet: answers in the reader's units, where entries come from, what it costs, what to watch."""

from dataclasses import replace
from decimal import Decimal

import pytest

from core.job import Entry, Job, assess
from core.job.answers import Amount, Answer, Mark, say
from core.job.offer import Offer, Option
from core.job.prices import Item, PriceBook, UnitPrice
from core.job.proposal import design_of, propose
from core.job.signoff import sign_off
from core.job.signoff_readings import Measured, Promised, Readings
from pwa.sheet.content import Signed, parts_of, scale_of, sheet_of
from pwa.sheet.data import Figure, Firm, Points, Said, Signature, Table, Text
from pwa.sheet.money import money_text, percent_text, plain_number
from pwa.sheet.technical import MUST_DECIDE, Sources
from pwa.state.display import Display

D = Decimal
BOOK = PriceBook(
    currency="€",
    tax_rates={"standard": D(19)},
    salt=UnitPrice(D("8.90"), D(25), "kg"),
    water=UnitPrice(D("4.35"), D(1), "m³"),
    items=(
        Item("S", "Softener", price=D(1290), tax="standard", use="softener", size=D(60)),
        Item("W", "Fitting", "h", D(68), "labour", "standard", "every offer", D("3.5")),
    ),
)


def job(**changes):
    """A job with a blend, an iron reading and something assumed."""
    entries = {
        "water.hardness": Entry(22.0, "gpg", "measured", "drop count"),
        "water.iron": Entry(1.5, "mg/L Fe", "report"),
        "demand.persons": Entry(4.0, "", "told"),
        "demand.bathrooms": Entry(2.0, "", "told"),
        "blend.target": Entry(8.0, "°dH", "told"),
    }
    held = Job(
        "x", "Heron Lane 4", "Alder Ford", "Weiche Wünsche", entries=entries, choices={"softener.kind": "single"}
    )
    return replace(held, **changes)


def sheet(held=None, **options):
    """The sheet of a job."""
    held = held or job()
    return sheet_of(held, parts_of(assess(held)), Display(), Firm("Brook & Vale", terms="Thirty days."), **options)


def offer():
    """Two designs of the job: a saving salt setting and a full one."""
    options = []
    for name, dose in (("Saving", 6.0), ("Full", 15.0)):
        held = job().with_entry("softener.salt_dose", Entry(dose, "lb/ft³", "told"))
        design = design_of(name, held, assess(held).softener)
        options.append(Option(name, propose(design, BOOK), design=design))
    return Offer(tuple(options), BOOK, 12)


def blocks(part, title):
    """The blocks of a section by its title."""
    return next(section.blocks for section in part if section.title == title)


def titles(part):
    """Titles of the sections."""
    return [section.title for section in part]


def words(part):
    """All text of a part, to look something up in."""
    return repr(part).replace("\\xa0", " ")


def test_the_front_reads_as_the_visit_went():
    """Found, proposed, does, costs, watch: in this order."""
    assert titles(sheet(offer=offer()).front) == [
        "What was found",
        "What is proposed",
        "What it does",
        "What it costs",
        "What to watch",
    ]


def test_the_front_leads_with_the_hardness_in_the_readers_unit():
    """22 gpg are 21.1 °dH to a metric reader."""
    first = blocks(sheet().front, "What was found")[0]
    assert isinstance(first, Figure)
    assert (first.label, first.number, first.unit) == ("Total hardness", "21.1", "°dH")


def test_every_entry_says_where_it_comes_from():
    """Measured, report and told stand beside their values; nothing assumed is among them."""
    table = blocks(sheet().technical, "Entries")[0]
    rows = {row[0]: row[1:] for row in table.rows}

    assert rows["Total hardness"][1] == "measured, drop count"
    assert rows["Dissolved iron"][1] == "from a report"
    assert rows["Persons"][1] == "told by the customer"
    assert "Manganese" not in rows


def test_what_was_assumed_stands_apart_with_its_reason():
    """Each assumption of an answered part is listed with why, and with its source where it has one."""
    table = blocks(sheet().technical, "Assumed, not measured")[0]
    shown = {row[0]: row for row in table.rows}

    assert "Manganese" in shown
    assert "No manganese was entered" in shown["Manganese"][2]
    assumed = {a.field for part in parts_of(assess(job())).values() if part.answers for a in part.assumptions}
    assert len(table.rows) == len(assumed)


def test_settings_are_listed_for_whoever_sets_them():
    """Hardness, meter, salt and the blend, as they were answered; the wish of the customer in his own unit."""
    rows = {row[0]: row[1] for row in blocks(sheet().technical, "Settings")[0].rows}
    softener = assess(job()).softener

    assert rows["Hardness to set"] == Display().show(softener.answers["hardness"].amount)
    assert rows["Water between regenerations"] == Display().show(softener.answers["meter"].amount)
    assert rows["Hardness wanted at the taps"] == "8.0\u00a0°dH"


def test_what_was_not_understood_is_shown_as_typed():
    """A text that is no number is no value."""
    held = job().with_entry("demand.persons", Entry(None, "", "told", typed="four"))
    table = blocks(sheet(held).technical, "Entries")[0]
    assert ("Persons", "“four”, not understood", "told by the customer") in table.rows


def test_costs_stand_side_by_side_and_add_up():
    """Price, salt, water and the years, by hand from the amounts shown."""
    block = blocks(sheet(offer=offer()).front, "What it costs")[0]
    rows = {row[0]: row[1:] for row in block.rows}

    def euros(text):
        return D(text.partition("\n")[0].replace("€", "").replace("\u00a0", ""))

    assert block.heading == ("", "Saving", "Full")
    for at in range(2):
        year = euros(rows["Salt a year"][at]) + euros(rows["Water a year"][at])
        assert euros(rows["Price and 12 years"][at]) == euros(rows["Price now, tax included"][at]) + 12 * year
    assert euros(rows["Price now, tax included"][0]) == D("1818.32")  # (1290 + 3.5 × 68) × 1.19 = 1818.32


def test_only_defended_savings_are_told():
    """Less salt is said against the other design; heaters and appliances are left out, and that is said."""
    text = words(blocks(sheet(offer=offer()).front, "What it costs"))
    assert "“Saving” uses" in text
    assert "less salt" in text
    assert "Not counted as a saving: energy, heaters" in text


def test_two_salts_are_compared_in_money_alone():
    """Kilograms of two salts do not compare; the sentence is whole all the same."""
    one, other = offer().options
    book = replace(BOOK, potassium_salt=UnitPrice(D(40), D(25), "kg"))
    two = (one, replace(other, name="Potassium", design=replace(one.design, salt="kcl")))
    text = words(blocks(sheet(offer=Offer(two, book)).front, "What it costs"))
    assert "“Saving” costs €" in text
    assert "a year less to run than “Potassium”" in text


def test_a_missing_price_is_said():
    """No cost of the years is made up."""
    without = replace(offer(), book=replace(BOOK, salt=None))
    found = blocks(sheet(offer=without).front, "What it costs")
    assert Said("missing", "The price of salt is missing in the price book.") in found
    assert "–" in words(found[0])


def test_cautions_of_care_and_danger_are_on_the_front():
    """Every such caution of an answered part, whole; and that the local code comes first."""
    found = [block.text for block in blocks(sheet().front, "What to watch")]
    for part in parts_of(assess(job())).values():
        if part.answers:
            for caution in part.cautions:
                assert caution.text in found or caution.level == "note"
    assert "local code" in found[-1]


def test_what_others_must_decide_is_listed():
    """Backflow, drain, raw-water taps, earthing: for the local code and a licensed installer."""
    assert blocks(sheet().technical, "For the local code and a licensed installer") == (Points(MUST_DECIDE),)


def test_each_source_is_numbered_and_listed_once():
    """The numbers in the text lead to the list, and the list holds nothing idle."""
    made = sheet(offer=offer())
    listed = blocks(made.technical, "Sources")[0].points
    rest = words([section for section in made.technical if section.title != "Sources"])

    assert len(set(listed)) == len(listed)
    for number in range(1, len(listed) + 1):
        assert f"[{number}]" in rest
    assert f"[{len(listed) + 1}]" not in rest
    assert all(entry.endswith(("(checked)", "(secondary)", "(from memory)")) for entry in listed)


def test_keys_in_running_text_become_numbers():
    """No key of the bibliography is left for a customer to puzzle over."""
    sources = Sources()
    assert sources.in_text("see [TRADE-SIZING] and [NOT-A-KEY]") == "see [1] and [NOT-A-KEY]"
    assert sources.cite("TRADE-SIZING, page 3") == "TRADE-SIZING, page 3"
    assert sources.cite("common practice, no source") == "common practice, no source"
    assert len(sources.listed()) == 1


def test_the_working_shows_the_numbers_of_the_answers():
    """The result of the step is the number in the assessment."""
    part = assess(job()).softener
    step = next(step for step in part.working if step.card.quantity == "Salt per regeneration")
    row = next(
        row for row in blocks(sheet().technical, "Working in short")[0].rows if row[0].startswith("Salt per reg")
    )
    assert float(row[1].split()[0]) == pytest.approx(step.result, rel=1e-3)
    assert step.card.expression in row[0]


def test_empty_parts_leave_no_empty_section():
    """An empty job still makes a sheet: what others must decide, and no section without blocks."""
    made = sheet(Job("y"))
    assert all(section.blocks for section in (*made.front, *made.technical))
    assert titles(made.front) == ["What to watch"]


def test_notes_and_terms_are_the_users_own():
    """They stand as they were written."""
    made = sheet()
    assert blocks(made.technical, "Notes") == (Text("Weiche Wünsche"),)
    assert blocks(made.technical, "Terms") == (Text("Thirty days.", "small"),)


def test_a_sign_off_is_part_of_the_sheet():
    """Readings with their verdicts, the likeliest reason, a name and a date; causes in detail behind."""
    promised = Promised(raw=Measured(3.9, 0.1), softened=0.1, capacity=Measured(4.0, 0.4), meter=900.0)
    readings = Readings(raw=Measured(3.9, 0.05), softened_fresh=Measured(0.6, 0.03), softened_late=Measured(0.6, 0.03))
    made = sheet(signed=Signed(sign_off(promised, readings), "R. Vale", "4 May 2031"))
    front = blocks(made.front, "What was measured afterwards")

    assert front[-1] == Signature("R. Vale", "4 May 2031")
    assert ("Softened water, fresh", "3.4\u00a0°dH", "✗ Not met\nPromised: at most 0.56\u00a0°dH.") in front[0].rows
    assert "gets past the resin" in words(front)
    behind = blocks(made.technical, "Sign-off")
    assert any(isinstance(block, Table) and block.heading[1] == "Weight" for block in behind)


def test_the_line_of_an_answer_puts_everything_in_its_place():
    """Places run from 0 to 1 and keep the order of the values, by the same rule as on the screen."""
    answer = Answer(
        "x",
        "Sodium",
        Amount(120.0, "mg/L Na", "sodium"),
        say("Plain."),
        marks=(Mark("limit", Amount(200.0, "mg/L Na", "sodium")), Mark("low", Amount(20.0, "mg/L Na", "sodium"))),
        band=(100.0, 150.0),
    )
    scale = scale_of(answer, Display())
    low, high = scale.ticks[1][0], scale.ticks[0][0]

    assert 0.0 <= low < scale.band[0] < scale.here < scale.band[1] < high <= 1.0
    assert low == pytest.approx(20.0 / 221.6)  # room 0.12 × 180 = 21.6 both ways, not below zero
    assert high == pytest.approx(200.0 / 221.6)
    assert "8 cases of 10 between" in scale.spoken
    assert scale_of(replace(answer, marks=(), band=None), Display()) is None


MONEY = [
    (D("1234.5"), "€", ".", "€1234.50"),
    (D("12345.6"), "€", ".", "€12\u00a0345.60"),
    (D("12345.6"), "€", ",", "12\u00a0345,60\u00a0€"),
    (D("-9.99"), "$", ".", "−$9.99"),
    (D("5"), "CHF", ".", "CHF\u00a05.00"),
    (D("5"), "", ",", "5,00"),
    (None, "€", ".", "–"),
]


@pytest.mark.parametrize(("amount", "currency", "decimal", "shown"), MONEY)
def test_money_as_people_read_it(amount, currency, decimal, shown):
    """To the coin, grouped, the sign where the reader's language has it."""
    assert money_text(amount, PriceBook(currency=currency), decimal) == shown


def test_plain_numbers_and_percentages():
    """Needless zeros go, whole tens stay."""
    assert plain_number(D("3.50"), ",") == "3,5"
    assert plain_number(D("1E+2")) == "100"
    assert plain_number(D("0.40"), places=2) == "0.40"
    assert percent_text(D("8.250")) == "8.25\u00a0%"
