"""Pasted reports: what is read, what is asked, what is left, in English, German and French."""

import json

import pytest

from core.job.fields import FIELDS
from core.job.readings import LARGEST, read_report
from core.job.record import Entry, Job

# Text, and what must come out of it: entry -> (value, unit). Nothing else may be found, nothing asked.
READ = [
    (
        "the words of the task",
        "Calcium 92 mg/l, Magnesium 18,4 mg/L, Gesamthärte 17 °dH, TAC 25 °f",
        {
            "water.calcium": (92, "mg/L Ca"),
            "water.magnesium": (18.4, "mg/L Mg"),
            "water.hardness": (17, "°dH"),
            "water.alkalinity": (25, "°fH"),
        },
    ),
    ("symbol", "Ca 92 mg/l", {"water.calcium": (92, "mg/L Ca")}),
    ("unit in brackets first", "Calcium (mg/L): 92", {"water.calcium": (92, "mg/L Ca")}),
    ("value first", "92 mg/l Calcium", {"water.calcium": (92, "mg/L Ca")}),
    ("unit before the name", "mg/l Calcium 92", {"water.calcium": (92, "mg/L Ca")}),
    (
        "values first, twice",
        "1,2 mg/l Eisen und 0,3 mg/l Mangan",
        {"water.iron": (1.2, "mg/L Fe"), "water.manganese": (0.3, "mg/L Mn")},
    ),
    (
        "names first, no comma",
        "Calcium 92 mg/l Magnesium 18 mg/l",
        {"water.calcium": (92, "mg/L Ca"), "water.magnesium": (18, "mg/L Mg")},
    ),
    ("temperature of the reading", "Leitfähigkeit bei 25 °C 640 µS/cm", {"water.conductivity": (640, "µS/cm")}),
    ("the same in brackets", "Conductivity (25°C): 640 uS/cm", {"water.conductivity": (640, "µS/cm")}),
    ("pH at a temperature", "pH-Wert 7,4 (12 °C)", {"water.ph": (7.4, "")}),
    ("no blanks", "pH7.4; Fe<0.02mg/l", {"water.ph": (7.4, ""), "water.iron": (0.02, "mg/L Fe")}),
    ("leading point", "Iron (Fe) - total .35 mg/L", {"water.iron": (0.35, "mg/L Fe")}),
    (
        "number in a name",
        "Säurekapazität bis pH 4,3 (KS4,3) 5,25 mmol/L",
        {"water.alkalinity": (5.25, "mmol/L K_S4.3")},
    ),
    ("the same, short", "KS 4,3: 5,2 mmol/l", {"water.alkalinity": (5.2, "mmol/L K_S4.3")}),
    (
        "charges",
        "Ca2+ 92 mg/l, NO3- 25 mg/l, SO42- 45 mg/l, SO₄²⁻",
        {"water.calcium": (92, "mg/L Ca"), "water.nitrate": (25, "mg/L NO3"), "water.sulfate": (45, "mg/L SO4")},
    ),
    ("charge with a blank", "SO4 2- 45 mg/l", {"water.sulfate": (45, "mg/L SO4")}),
    ("superscript unit", "Calcium 92 mg·L⁻¹", {"water.calcium": (92, "mg/L Ca")}),
    ("micrograms", "Fer total 200 µg/L", {"water.iron": (200, "µg/L Fe")}),
    ("both mu", "Fer total 200 μg/L", {"water.iron": (200, "µg/L Fe")}),
    ("counted as CaCO3, in the name", "Total Hardness as CaCO3 (mg/L): 300", {"water.hardness": (300, "mg/L CaCO3")}),
    ("counted as CaCO3, in brackets", "Calcium (als CaCO3) 230 mg/l", {"water.calcium": (230, "mg/L CaCO3")}),
    ("counted as CaCO3, after the unit", "Calcium 230 mg/l als CaCO3", {"water.calcium": (230, "mg/L CaCO3")}),
    ("counted as CaCO3, in French", "Alcalinité 250 mg/l en CaCO3", {"water.alkalinity": (250, "mg/L CaCO3")}),
    ("bicarbonate as CaCO3", "Bicarbonate 250 mg/L as CaCO3", {"water.alkalinity": (250, "mg/L CaCO3")}),
    ("bicarbonate", "Hydrogénocarbonates 308 mg/L", {"water.alkalinity": (308, "mg/L HCO3")}),
    ("nitrate as nitrogen", "Nitrate (as N) 3.2 mg/L", {"water.nitrate": (3.2, "mg/L NO3-N")}),
    ("nitrate nitrogen", "NO3-N: 3.2 mg/L", {"water.nitrate": (3.2, "mg/L NO3-N")}),
    ("nitrate in the unit", "Nitrate 3.2 mg/L as N", {"water.nitrate": (3.2, "mg/L NO3-N")}),
    ("nitrate in German", "Nitrat 25 mg/l", {"water.nitrate": (25, "mg/L NO3")}),
    ("carbonate hardness", "Karbonathärte 12 °dH", {"water.alkalinity": (12, "°dKH")}),
    ("degrees spelled out", "Wasserhärte: 17 Grad deutscher Härte", {"water.hardness": (17, "°dH")}),
    ("degrees spelled out, in English", "Total hardness: 17 German degrees", {"water.hardness": (17, "°dH")}),
    ("grains", "hardness is 22 grains per gallon", {"water.hardness": (22, "gpg")}),
    ("French capitals", "TH 25 °F", {"water.hardness": (25, "°fH")}),
    ("Fahrenheit", "Temperature 53 °F", {"water.temperature": (53, "°F")}),
    (
        "all capitals",
        "CALCIUM 92 MG/L, GESAMTHÄRTE 17 °DH",
        {"water.calcium": (92, "mg/L Ca"), "water.hardness": (17, "°dH")},
    ),
    ("without umlaut", "Gesamthaerte 17 °dH", {"water.hardness": (17, "°dH")}),
    ("accents apart", "Durete\u0301 totale 25 °f", {"water.hardness": (25, "°fH")}),
    ("ions summed in brackets", "Gesamthärte (Calcium, Magnesium) 3,0 mmol/l", {"water.hardness": (3.0, "mmol/L")}),
    ("sum of ions", "Summe Erdalkalien 3,0 mmol/l", {"water.hardness": (3.0, "mmol/L")}),
    ("comma within the name", "Eisen, gesamt 0,05 mg/l", {"water.iron": (0.05, "mg/L Fe")}),
    ("limit beside", "Natrium: 12,4 mg/l (Grenzwert 200 mg/l)", {"water.sodium": (12.4, "mg/L Na")}),
    ("limit before", "Grenzwert für Natrium 200 mg/l, gemessen 12 mg/l", {"water.sodium": (12, "mg/L Na")}),
    ("maximum", "Sodium 12.4 mg/L (max. 200)", {"water.sodium": (12.4, "mg/L Na")}),
    ("doubt", "Natrium 12 mg/l ± 5 %", {"water.sodium": (12, "mg/L Na")}),
    ("doubt before the unit", "Natrium 12 ± 1 mg/l", {"water.sodium": (12, "mg/L Na")}),
    ("row number", "3 Calcium 92 mg/l", {"water.calcium": (92, "mg/L Ca")}),
    ("method", "Sulfat 45 mg/l DIN EN ISO 10304-1", {"water.sulfate": (45, "mg/L SO4")}),
    ("given twice, alike", "Gesamthärte 3,04 mmol/l (17,0 °dH)", {"water.hardness": (3.04, "mmol/L")}),
    ("given twice, the sure one", "Hardness = 306 ppm (17.9 gpg)", {"water.hardness": (17.9, "gpg")}),
    ("grouped with a sign", "Conductivity 1'250 µS/cm", {"water.conductivity": (1250, "µS/cm")}),
    ("both signs", "Sulfat 1.250,5 mg/l", {"water.sulfate": (1250.5, "mg/L SO4")}),
    (
        "decimal sign shown elsewhere",
        "Chlorid 31,5 mg/l; Sulfat 1.250 mg/l",
        {"water.chloride": (31.5, "mg/L Cl"), "water.sulfate": (1250, "mg/L SO4")},
    ),
    ("power", "Hardness as CaCO3: 1.2e2 mg/L", {"water.hardness": (120, "mg/L CaCO3")}),
    (
        "sentence, English",
        "The calcium is 92 mg/l and the magnesium is 18 mg/l.",
        {"water.calcium": (92, "mg/L Ca"), "water.magnesium": (18, "mg/L Mg")},
    ),
    (
        "sentence, German",
        "Die Härte Ihres Wassers beträgt 17 °dH (Härtebereich 3, hart).",
        {"water.hardness": (17, "°dH")},
    ),
    (
        "sentence, French",
        "La dureté de l'eau est de 25,3 °f et le pH de 7,4.",
        {"water.hardness": (25.3, "°fH"), "water.ph": (7.4, "")},
    ),
    ("German compound", "Der Calciumgehalt liegt bei 92 mg/l", {"water.calcium": (92, "mg/L Ca")}),
    ("bars", "Calcium | 92 | mg/l | - | ok", {"water.calcium": (92, "mg/L Ca")}),
    ("own labels", "Persons: 4\nBathrooms: 2", {"demand.persons": (4, ""), "demand.bathrooms": (2, "")}),
    (
        "symbols after the units",
        "92 mg/l Ca, 18 mg/l Mg",
        {"water.calcium": (92, "mg/L Ca"), "water.magnesium": (18, "mg/L Mg")},
    ),
    (
        "symbols before the values",
        "Ca 92 mg/l Mg 18 mg/l",
        {"water.calcium": (92, "mg/L Ca"), "water.magnesium": (18, "mg/L Mg")},
    ),
    ("hardness as calcium", "Hardness 92 mg/l as Ca", {"water.hardness": (92, "mg/L Ca")}),
    ("a footnote", "Calcium 92¹ mg/l", {"water.calcium": (92, "mg/L Ca")}),
    ("a charge in brackets", "Sulfat (SO4--) 45 mg/l", {"water.sulfate": (45, "mg/L SO4")}),
    ("unit in square brackets", "Gesamthärte [°dH]  17,2", {"water.hardness": (17.2, "°dH")}),
    ("a dash between", "Natrium - 12 mg/l", {"water.sodium": (12, "mg/L Na")}),
    (
        "two units, the one sure",
        "The water hardness at your address is 306 ppm or 17.9 grains per gallon.",
        {"water.hardness": (17.9, "gpg")},
    ),
    (
        "an aquarium's short hand",
        "pH 7,0; GH 17 °dH; KH 12 °dH; NO3 25 mg/l",
        {
            "water.ph": (7.0, ""),
            "water.hardness": (17, "°dH"),
            "water.alkalinity": (12, "°dKH"),
            "water.nitrate": (25, "mg/L NO3"),
        },
    ),
    ("own keys", "water.hardness;22;gpg", {"water.hardness": (22, "gpg")}),
]


@pytest.mark.parametrize(("text", "expected"), [row[1:] for row in READ], ids=[row[0] for row in READ])
def test_what_is_beyond_doubt_is_read(text, expected):
    """Exactly these entries come out, and nothing is asked."""
    report = read_report(text)
    assert {found.field: (found.entry.value, found.entry.unit) for found in report.found} == expected
    assert not report.questions
    assert all(found.entry.source == "report" for found in report.found)


ASKED = [  # what is wrong, the text, the entry, the choices in their order
    ("hardness in ppm", "Hardness 300 ppm", "water.hardness", [(300, "mg/L CaCO3"), (300, "mg/L Ca")]),
    ("calcium hardness", "Calcium hardness 230 mg/L", "water.calcium", [(230, "mg/L CaCO3"), (230, "mg/L Ca")]),
    ("magnesium hardness", "Magnesium hardness 75 mg/L", "water.magnesium", [(75, "mg/L CaCO3"), (75, "mg/L Mg")]),
    ("alkalinity", "Total alkalinity 250 mg/L", "water.alkalinity", [(250, "mg/L CaCO3"), (250, "mg/L HCO3")]),
    (
        "bicarbonate alkalinity",
        "Bicarbonate alkalinity 250 mg/L",
        "water.alkalinity",
        [(250, "mg/L CaCO3"), (250, "mg/L HCO3")],
    ),
    ("nitrate", "Nitrate 5 mg/L", "water.nitrate", [(5, "mg/L NO3"), (5, "mg/L NO3-N")]),
    ("calcium in ppm", "Calcium 92 ppm", "water.calcium", [(92, "mg/L Ca"), (92, "mg/L CaCO3")]),
    ("no unit", "Sodium: 12", "water.sodium", [(12, "mg/L Na"), (12, "mmol/L")]),
    ("comma or point", "Conductivity 1,250 µS/cm", "water.conductivity", [(1.25, "µS/cm"), (1250, "µS/cm")]),
    (
        "a blank within the number",
        "Leitfähigkeit 1 250 µS/cm",
        "water.conductivity",
        [(1250, "µS/cm"), (1, "µS/cm"), (250, "µS/cm")],
    ),
    ("value or limit", "Natrium mg/l 200 12,4", "water.sodium", [(200, "mg/L Na"), (12.4, "mg/L Na")]),
    ("the word limit behind", "Mangan 0,05 mg/l Grenzwert", "water.manganese", [(0.05, "mg/L Mn")]),
    ("CaCO3 in another cell", "Calcium | 92 | mg/l | as CaCO3", "water.calcium", [(92, "mg/L Ca")]),
    ("CaCO3 of another number", "Ca 92 mg/l; as CaCO3 230", "water.calcium", [(92, "mg/L Ca"), (230, "mg/L CaCO3")]),
    ("as an oxide", "Kalium 2,1 mg/l K2O", "water.potassium", [(2.1, "mg/L K")]),
    ("an unknown word", "Sodium foobar 12 mg/L", "water.sodium", [(12, "mg/L Na")]),
    ("an unknown word before", "Residual hardness 0.5 gpg", "water.hardness", [(0.5, "gpg")]),
    ("after the softener", "Hardness 0.5 gpg after softener", "water.hardness", [(0.5, "gpg")]),
    ("under a heading", "Enthärtetes Wasser:\nGesamthärte 0,5 °dH", "water.hardness", [(0.5, "°dH")]),
    ("conductivity at 20 °C", "Conductivité à 20 °C : 580 µS/cm", "water.conductivity", [(580, "µS/cm")]),
    ("on the next line", "Calcium\n92 mg/l", "water.calcium", [(92, "mg/L Ca")]),
    (
        "given twice, not alike",
        "Calcium 92 mg/l\nCalcium 110 mg/l",
        "water.calcium",
        [(92, "mg/L Ca"), (110, "mg/L Ca")],
    ),
    (
        "total and dissolved",
        "Total iron 0.3 mg/L, dissolved iron 0.1 mg/L",
        "water.iron",
        [(0.3, "mg/L Fe"), (0.1, "mg/L Fe")],
    ),
]


@pytest.mark.parametrize(("text", "field", "choices"), [row[1:] for row in ASKED], ids=[row[0] for row in ASKED])
def test_what_can_be_read_in_two_ways_is_asked(text, field, choices):
    """No value comes out, one question does, with these choices."""
    report = read_report(text)
    assert not report.found
    (question,) = report.questions
    assert [(choice.entry.value, choice.entry.unit) for choice in question.choices] == choices
    assert {choice.field for choice in question.choices} == {field}
    assert question.text.endswith("?")


def test_a_number_without_a_name_is_asked():
    """17 °dH is a hardness or an alkalinity: the name is asked, the unit is not."""
    (question,) = read_report("17 °dH").questions
    assert [(choice.field, choice.entry.unit) for choice in question.choices] == [
        ("water.hardness", "°dH"),
        ("water.alkalinity", "°dKH"),
    ]


LEFT = [  # why, the text, the kind
    ("a limit", "Grenzwert Natrium: 200 mg/l", "limit"),
    ("a target", "Zielwert Gesamthärte 8 °dH", "limit"),
    ("a range", "pH 7,4 - 7,6", "not usable"),
    ("a range with a word", "Gesamthärte 15 bis 20 °dH", "not usable"),
    ("names and numbers in heaps", "Ca Mg Na 92 18 12", "not usable"),
    ("out of range", "pH 74", "not usable"),
    ("below zero", "Temperatur: -5 °C", "not usable"),
    ("the wrong unit", "Calcium 92 µS/cm", "not usable"),
    ("not detected", "Chlorid nicht nachweisbar", "no number"),
    ("not detected, short", "Eisen n.n.", "no number"),
    ("a name alone", "Calcium", "no number"),
    ("no entry", "Blei 0,002 mg/l", "no entry"),
    ("no entry, near a name", "Sodium adsorption ratio 2.1", "no entry"),
    ("saturation pH", "Sättigungs-pH-Wert 7,35", "no entry"),
    ("pH of saturation", "pH-Wert der Calcitsättigung 7,35", "no entry"),
    ("permanganate", "Potassium permanganate index 3 mg/L", "no entry"),
    ("nitrite", "Nitrite (as N) 0.01 mg/L", "no entry"),
    ("hardness range", "Härtebereich 3", "no entry"),
    ("non-carbonate hardness", "Nichtkarbonathärte 4 °dH", "no entry"),
    ("air", "Lufttemperatur 22 °C", "no entry"),
    ("a greeting", "Dear customer, thank you for your order.", "unknown"),
    ("a telephone", "Tel. 0123 456789", "unknown"),
    ("a date", "12.03.2024 10:30", "unknown"),
    ("a rule", "-----", "unknown"),
    ("lime", "Calcium carbonate 230 mg/L", "unknown"),
]


@pytest.mark.parametrize(("text", "kind"), [row[1:] for row in LEFT], ids=[row[0] for row in LEFT])
def test_what_is_no_reading_is_left_in_sight(text, kind):
    """Nothing is found and nothing asked; the words stand in the list with a reason."""
    report = read_report(text)
    assert not report.found
    assert not report.questions
    assert [left.kind for left in report.left] == [kind]
    assert report.left[0].words in text
    assert report.left[0].why


def test_below_a_limit_is_kept_as_such():
    """ "< 0,02" is marked, and the entry keeps what was written, so that its doubt is known."""
    (found,) = read_report("Eisen <0,02 mg/l").found
    assert found.below
    assert found.entry.typed == "< 0.02"
    (found,) = read_report("Gesamthärte > 21 °dH").found
    assert found.above
    assert found.entry.typed == "> 21"


def test_each_value_stands_beside_its_words():
    """The span is exactly the words of the text, from name to unit."""
    text = "Hello,\nresults: Calcium (Ca) 92 mg/l, and magnesium was 18,4 mg/L"
    report = read_report(text)
    assert [found.words for found in report.found] == ["Calcium (Ca) 92 mg/l", "magnesium was 18,4 mg/L"]
    for found in report.found:
        ((start, end),) = found.spans
        assert text[start:end] == found.words


def test_how_it_was_understood_is_said():
    """What was taken for granted stands in the sentence beside the value."""
    (found,) = read_report("Karbonathärte 12 °dH").found
    assert "carbonate hardness" in found.how
    (found,) = read_report("Nitrat 25 mg/l").found
    assert "German" in found.how


def test_columns_copied_one_below_the_other_are_not_joined():
    """Two names, then two numbers: which belongs to which is not asked as if it were likely."""
    report = read_report("Calcium\nMagnesium\n92 mg/l\n18 mg/l")
    assert not report.found
    assert not report.questions
    assert len(report.left) == 4


def test_a_sure_reading_answers_a_question():
    """An ambiguous line that says the same as a sure one need not be asked."""
    report = read_report("Gesamthärte 17 °dH\nTotal hardness 303 mg/L")
    assert [found.entry.unit for found in report.found] == ["°dH"]
    assert not report.questions
    assert [left.kind for left in report.left] == ["repeated"]


def test_a_repeated_value_is_read_once():
    """The same value again is listed as repeated, not as a second reading."""
    report = read_report("Calcium 92 mg/l\nSodium 12 mg/l\nCa: 92,3 mg/l")
    assert sorted(found.field for found in report.found) == ["water.calcium", "water.sodium"]
    assert [left.kind for left in report.left] == ["repeated"]


GERMAN = """Prüfbericht 2024-117 (erfundenes Labor)
Probenahme: 12.03.2024, Küche, Kaltwasser

Parameter                 Einheit     Grenzwert     Messwert     Verfahren
pH-Wert                   -           6,5-9,5       7,42         DIN EN ISO 10523
Leitfähigkeit bei 25 °C   µS/cm       2790          643          DIN EN 27888
Calcium                   mg/l        -             92,4         DIN EN ISO 11885
Magnesium                 mg/l        -             18,4         DIN EN ISO 11885
Natrium                   mg/l        200           12,1         DIN EN ISO 11885
Eisen, gesamt             mg/l        0,200         <0,02        DIN EN ISO 11885
Nitrat                    mg/l        50            24,8         DIN EN ISO 10304-1
Blei                      mg/l        0,010         <0,001       DIN EN ISO 17294-2
Säurekapazität bis pH 4,3 mmol/l      -             4,91         DIN 38409-7

Gesamthärte: 17,2 °dH (Härtebereich hart)
"""

ENGLISH = """Well water analysis
Sample: kitchen tap
Analyte\tResult\tUnits\tMCL
Total Hardness (as CaCO3)\t376\tmg/L\t
Iron, Total\t1.35\tmg/L\t0.3
Manganese\t0.08\tmg/L\t0.05
pH\t7.1\tSU\t6.5-8.5
Sodium\t15.2\tmg/L\t
Nitrate-N\t2.4\tmg/L\t10
Total Coliform\tabsent\t\t
"""

FRENCH = """Bulletin d'analyse n° 4471
Température de l'eau : 11,8 °C
pH : 7,35
Conductivité à 25 °C : 612 µS/cm
Titre hydrotimétrique : 31,2 °f
Titre alcalimétrique complet : 24,5 °f
Chlorures : 28 mg/L (référence de qualité 250 mg/L)
Sulfates : 41 mg/L
Fer total : <20 µg/L
"""

WHOLE = [
    (
        GERMAN,
        {
            "water.ph": 7.42,
            "water.conductivity": 643,
            "water.calcium": 92.4,
            "water.magnesium": 18.4,
            "water.sodium": 12.1,
            "water.iron": 0.02,
            "water.nitrate": 24.8,
            "water.alkalinity": 4.91,
            "water.hardness": 17.2,
        },
    ),
    (
        ENGLISH,
        {
            "water.hardness": 376,
            "water.iron": 1.35,
            "water.manganese": 0.08,
            "water.ph": 7.1,
            "water.sodium": 15.2,
            "water.nitrate": 2.4,
        },
    ),
    (
        FRENCH,
        {
            "water.temperature": 11.8,
            "water.ph": 7.35,
            "water.conductivity": 612,
            "water.hardness": 31.2,
            "water.alkalinity": 24.5,
            "water.chloride": 28,
            "water.sulfate": 41,
            "water.iron": 20,
        },
    ),
]


@pytest.mark.parametrize(("text", "expected"), WHOLE, ids=["German", "English", "French"])
def test_a_whole_report_is_read(text, expected):
    """An invented report of each language: every value, no limit taken for one, nothing to ask."""
    report = read_report(text)
    assert {found.field: found.entry.value for found in report.found} == expected
    assert not report.questions


TABLES = [
    ("semicolons", "Parameter;Einheit;Grenzwert;Messwert\nNatrium;mg/l;200;12,4\nSulfat;mg/l;250;45"),
    ("limit last", "Parameter;Messwert;Einheit;Grenzwert\nNatrium;12,4;mg/l;200\nSulfat;45;mg/l;250"),
    ("tabs", "Analyte\tLimit\tResult\tUnit\nNatrium\t200\t12,4\tmg/l\nSulfat\t250\t45\tmg/l"),
    ("commas, quoted", 'Analyte,Result,Units,Limit\nNatrium,"12,4",mg/l,200\nSulfat,45,mg/l,250'),
    ("commas", "Analyte,Result,Units,Limit\nNatrium,12.4,mg/l,200\nSulfat,45,mg/l,250"),
    (
        "blanks",
        "Paramètre   Unité   Limite   Résultat\nNatrium     mg/l    200      12,4\nSulfat      mg/l    250      45",
    ),
    ("single blanks", "Parameter Einheit Grenzwert Messwert\nNatrium mg/l 200 12,4\nSulfat mg/l 250 45"),
    (
        "bars",
        "| Parameter | Einheit | Grenzwert | Messwert |\n| Natrium | mg/l | 200 | 12,4 |\n| Sulfat | mg/l | 250 | 45 |",
    ),
    ("unit with the name", "Parameter;Wert;Grenzwert\nNatrium (mg/l);12,4;200\nSulfat (mg/l);45;250"),
    ("value first", "Messwert;Einheit;Parameter;Grenzwert\n12,4;mg/l;Natrium;200\n45;mg/l;Sulfat;250"),
    ("names as columns", "Natrium (mg/l);Sulfat (mg/l)\n12,4;45"),
    ("names as columns, named rows", "Probe\tNatrium mg/l\tSulfat mg/l\nKüche\t12,4\t45"),
    ("line ends of another system", "Parameter;Einheit;Messwert\r\nNatrium;mg/l;12,4\r\nSulfat;mg/l;45\r\n"),
    ("a byte-order mark", "\ufeffParameter;Einheit;Messwert\nNatrium;mg/l;12,4\nSulfat;mg/l;45"),
]


@pytest.mark.parametrize("text", [row[1] for row in TABLES], ids=[row[0] for row in TABLES])
def test_a_table_is_read_by_its_headings(text):
    """However the cells are parted and ordered, the value is told from the limit."""
    report = read_report(text)
    assert {found.field: (found.entry.value, found.entry.unit) for found in report.found} == {
        "water.sodium": (12.4, "mg/L Na"),
        "water.sulfate": (45.0, "mg/L SO4"),
    }
    assert not report.questions
    assert [left.kind for left in report.left].count("heading") == 1


def test_two_columns_of_values_are_asked():
    """Raw and treated water side by side: which is meant, with the headings beside the choices."""
    report = read_report("Parameter;Rohwasser;Reinwasser\nCalcium mg/l;92;20")
    (question,) = report.questions
    assert not report.found
    assert ["Rohwasser" in question.choices[0].how, "Reinwasser" in question.choices[1].how] == [True, True]


def test_one_column_of_treated_water_is_asked():
    """A value under "Weichwasser" is no raw water."""
    report = read_report("Parameter;Einheit;Wert Weichwasser\nGesamthärte;°dH;0,5")
    assert not report.found
    assert "Weichwasser" in report.questions[0].text


def test_a_table_without_headings_is_asked():
    """Commas without a heading: which number is the limit cannot be known."""
    report = read_report("Sodium,12,mg/L,200\nSulfate,45,mg/L,250")
    assert not report.found
    assert len(report.questions) == 2


def test_the_apps_own_job_file_is_read():
    """The entries of a job file come out as they are in it, and the job with them."""
    entries = {
        "water.hardness": Entry(22.0, "gpg", "measured", "drop count, 1 gpg a drop"),
        "water.iron": Entry(0.02, "mg/L Fe", "report", typed="< 0.02"),
    }
    job = Job("a", "Somewhere", entries=entries)
    report = read_report(job.to_text())
    assert {found.field: found.entry for found in report.found} == entries
    assert report.job == job


def test_entries_a_job_file_holds_for_nobody_are_left():
    """A key of a later version, or an entry without a number, is listed."""
    text = json.dumps(
        {
            "format": "tapwright job",
            "version": 1,
            "entries": {"water.colour": {"value": 1}, "water.iron": {"value": None, "typed": "much"}},
        }
    )
    report = read_report(text)
    assert not report.found
    assert [left.kind for left in report.left] == ["no entry", "no entry"]


@pytest.mark.parametrize("text", ['{"format": "tapwright job"', '{"format": "tapwright job", "version": 99}'])
def test_a_damaged_job_file_is_refused_with_a_sentence(text):
    """The sentence of the record, and the text still in sight."""
    report = read_report(text)
    assert report.refusal
    assert report.left[0].words == text


def test_too_long_a_text_is_refused_kindly():
    """A million characters are refused at once, with a sentence and what to do."""
    report = read_report("a" * 1_000_000)
    assert f"{LARGEST:,}" in report.refusal
    assert "Paste" in report.refusal
    assert not report.found


@pytest.mark.parametrize("text", ["", "   \n\t\n"])
def test_nothing_comes_of_nothing(text):
    """An empty text is no error."""
    report = read_report(text)
    assert (report.found, report.questions, report.left, report.refusal) == ((), (), (), "")


@pytest.mark.parametrize("key", [key for key in FIELDS if key.startswith("water.")])
def test_every_entry_of_the_water_can_be_read(key):
    """By its label and its first unit, as the app itself would write it."""
    field = FIELDS[key]
    unit = next((u for u in field.units), "")
    report = read_report(f"{field.label}: 7.5 {unit}")
    assert [(found.field, found.entry.value, found.entry.unit) for found in report.found] == [(key, 7.5, unit)]
