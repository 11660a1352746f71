"""Sheets to be drawn in tests: one like a real one, one that is hard to set."""

from decimal import Decimal

from core.job import Entry, Job, assess
from core.job.offer import Offer, Option
from core.job.prices import Item, PriceBook, UnitPrice
from core.job.proposal import design_of, propose
from core.job.signoff import sign_off
from core.job.signoff_readings import Measured, Promised, Readings
from pwa.sheet.content import Signed, parts_of, sheet_of
from pwa.sheet.data import Beside, Figure, Firm, Points, Said, Scale, Section, SheetData, Signature, Table, Text
from pwa.state.display import Display

D = Decimal
BOOK = PriceBook(
    currency="€",
    tax_rates={"standard": D(19)},
    salt=UnitPrice(D("8.90"), D(25), "kg"),
    water=UnitPrice(D("4.35"), D(1), "m³"),
    service_year=D(120),
    items=(
        Item("S", "Softener, metered", price=D(1290), tax="standard", use="softener", size=D(90), fits="single"),
        Item("T", "Twin softener", price=D(2150), tax="standard", use="softener", size=D(90), fits="twin"),
        Item("W", "Fitting and commissioning", "h", D(68), "labour", "standard", "every offer", D("3.5")),
        Item("B", "Blending valve ¾″", price=D("48.20"), tax="standard", use="blending"),
        Item("N", "Salt, first fill", "kg", D("0.40"), tax="standard", use="first salt"),
    ),
)
FIRM = Firm(
    "Brook & Vale Water Care",
    ("12 Mill Row, Alder Ford · 555 0142", "Licence 00000"),
    terms="Prices hold for thirty days. Müller & Søn, Größe ³⁄₄ ₃ é ß € °.",
)


def usual_job():
    """A house with hard water and a blend."""
    entries = {
        "water.hardness": Entry(22.0, "gpg", "measured", "drop count"),
        "water.iron": Entry(1.5, "mg/L Fe", "report"),
        "water.alkalinity": Entry(240.0, "mg/L CaCO3", "report"),
        "water.ph": Entry(7.3, "", "measured", "strip"),
        "water.sodium": Entry(30.0, "mg/L Na", "report"),
        "demand.persons": Entry(4.0, "", "told"),
        "demand.bathrooms": Entry(2.0, "", "told"),
        "blend.target": Entry(8.0, "°dH", "told"),
    }
    return Job("x", "Heron Lane 4", "Alder Ford", "Keller feucht; Anschluß ¾″.", entries=entries)


def usual_offer(job, designs=3):
    """Up to three options."""
    kinds = (("Single, saving", "single", 6.0), ("Twin", "twin", 6.0), ("Single, full", "single", 15.0))
    options = []
    for name, kind, dose in kinds[:designs]:
        held = job.with_choice("softener.kind", kind).with_entry("softener.salt_dose", Entry(dose, "lb/ft³", "told"))
        design = design_of(name, held, assess(held).softener)
        options.append(Option(name, propose(design, BOOK), D("2.5"), design))
    return Offer(tuple(options), BOOK, 12)


def usual_sheet(paper="A4", firm=FIRM, designs=3):
    """A sheet as a dealer leaves it."""
    job = usual_job()
    return sheet_of(
        job,
        parts_of(assess(job)),
        Display(),
        firm,
        offer=usual_offer(job, designs),
        date="4 May 2031",
        day="2031-05-04",
        paper=paper,
    )


def signed_sheet(paper="A4"):
    """A sheet after commissioning, with a leaking bypass."""
    job = usual_job()
    promised = Promised(
        raw=Measured(3.77, 0.1), softened=0.1, blend=1.43, capacity=Measured(6.0, 0.6), meter=900.0, salt=4.0, peak=30.0
    )
    readings = Readings(
        raw=Measured(3.8, 0.05),
        softened_fresh=Measured(0.6, 0.03),
        softened_late=Measured(0.6, 0.03),
        flow=Measured(12.0, 0.5),
        blend=Measured(1.9, 0.05),
        salt_used=Measured(4.0, 0.1),
    )
    return sheet_of(
        job,
        parts_of(assess(job)),
        Display(decimal=","),
        FIRM,
        signed=Signed(sign_off(promised, readings), "R. Vale", "4 May 2031"),
        date="4 May 2031",
        paper=paper,
    )


LONG = "Das Wasser steht im Keller und der Anschluß ist alt; " * 60
WORD = "Donaudampfschifffahrtsgesellschaftskapitänswitwenrentenauszahlungsstelle" * 3


def hard_sheet(paper="A4"):
    """Everything that makes setting hard: long texts, long words, crowded ticks, tall rows, many rows."""
    ticks = tuple((at / 10, f"limit {at} of 200 mg/L Na") for at in range(11))
    crowded = Scale(1.0, (0.0, 1.0), ticks, "spoken")
    three = (
        Figure("One", "12", "kg", LONG[:200], "good", crowded),
        Figure("Two", "1", "", "", "watch"),
        Figure("3", "3", ""),
    )
    rows = tuple((f"Row {n}", "1\n2", LONG[: 37 * n]) for n in range(12))
    blocks = (
        Figure("A label of an answer " * 8, "1 234 567.8", "mg/L CaCO3", LONG[:400], "bad", crowded),
        Beside(three),
        Figure("At the edge", "0", "", "", "plain", Scale(0.0, None, (), "spoken")),
        Text(LONG),
        Text(WORD),
        Text(""),
        Said("danger", LONG[:500]),
        Said("watch", WORD),
        Said("unknown tone", "A tone that nobody knows."),
        Points((LONG[:300], WORD, "short")),
        Points(tuple(f"Point {n}" for n in range(1, 25)), numbered=True),
        Table(("Name", "Value", WORD), rows, (0.3, 0.2, 0.5), frozenset({1})),
        Table(("", "", ""), (("a", LONG, WORD),), (0.2, 0.3, 0.5)),
        Signature("", ""),
        Signature("A name " * 10, "4 May"),
    )  # fmt: skip
    return SheetData(
        title="A title that is far too long for one line and goes on and on " * 2,
        subtitle="An address " * 12,
        firm=Firm("A firm with a long name " * 5, ("line " * 40, "line"), terms=LONG),
        date="4 May 2031",
        paper=paper,
        front=(Section("A section with a long title of many words", blocks), Section("Short", (Text("x"),))),
        technical=(Section(WORD[:80], blocks), Section("Last", (Text(LONG, "small"),))),
        footer="A footer that is far too long " * 10,
    )
