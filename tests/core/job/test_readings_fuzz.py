"""Hostile and random reports: no crash, nothing lost, nothing invented, bounded work."""

import random
import re
from itertools import pairwise

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from core.job.fields import FIELDS
from core.job.readings import LARGEST, read_report
from core.job.readings.cutting import cut, fold
from core.job.readings.merging import MOST_QUESTIONS
from core.job.readings.numbers import decimal_sign, readings_of
from core.job.readings.tokens import tokens_of
from core.units import convert, find_unit

WORDS = [
    *(
        "Calcium",
        "Ca",
        "Magnesium",
        "Gesamthärte",
        "TAC",
        "pH",
        "Eisen",
        "Fe",
        "nitrates",
        "NO3-N",
        "Säurekapazität bis pH 4,3",
    ),
    *("mg/l", "°dH", "°f", "mmol/L", "µS/cm", "gpg", "ppm", "as CaCO3", "mg/L", "°C", "%"),
    *("92", "18,4", "<0,02", "> 425", "1.250", "7.4", "6,5-9,5", "1 250", "12.03.2024", ".5", "1e9", "1.2.3"),
    *("Grenzwert", "max.", "limit", "±", "Parameter", "Einheit", "Messwert", "Result", "DIN EN ISO 11885", "n.n."),
    *(
        ",",
        ", ",
        ";",
        "\t",
        "|",
        "  ",
        " ",
        "\n",
        "\r\n",
        ":",
        "(",
        ")",
        '"',
        "-",
        "/",
        "softened",
        "foobar",
        "and",
        "bei",
    ),
]
REPORTS = st.one_of(
    st.text(max_size=300),
    st.text(alphabet="CaMgFepH0123456789 ,.;:<>()/°µ\t\n|\"'-+lmgd", max_size=300),
    st.lists(st.sampled_from(WORDS), max_size=40).map(" ".join),
    st.lists(st.sampled_from(WORDS), max_size=40).map("".join),
)
MORE = settings(max_examples=150, deadline=None, suppress_health_check=[HealthCheck.too_slow])


def everything(report):
    """Places of all results."""
    spans = [span for result in (*report.found, *report.questions) for span in result.spans]
    return spans + [left.span for left in report.left]


@MORE
@given(REPORTS)
def test_no_line_is_lost(text):
    """Every line that is not blank is used or listed."""
    report = read_report(text)
    spans = everything(report)
    start = 0
    for line in text.splitlines(keepends=True):
        end = start + len(line)
        if line.strip():
            assert any(first < end and last > start for first, last in spans), line
        start = end


@MORE
@given(REPORTS)
def test_no_number_is_lost(text):
    """Every run of digits is in a result, and so is every longer word that is not one of the small ones."""
    report = read_report(text)
    spans = everything(report)
    for match in re.finditer(r"\d+", text, re.ASCII):
        assert any(first <= match.start() and match.end() <= last for first, last in spans), match[0]
    for match in re.finditer("foobar", text):
        assert any(first < match.end() and last > match.start() for first, last in spans)


@MORE
@given(REPORTS)
def test_results_show_the_text_as_it_is(text):
    """Spans lie within the text, in order, and the words are those at the spans."""
    report = read_report(text)
    for result in (*report.found, *report.questions):
        assert result.words == " … ".join(text[start:end] for start, end in result.spans)
        assert all(0 <= start < end <= len(text) for start, end in result.spans)
    for left in report.left:
        assert left.words == text[left.span[0] : left.span[1]]
        assert left.why


@MORE
@given(REPORTS)
def test_nothing_is_invented(text):
    """Each value is a reading of a number in its words, in a unit of its entry, within what is accepted."""
    report = read_report(text)
    pieces = cut(fold(text).translate(dict.fromkeys(map(ord, "\ufeff\u200b\u200c\u200d\u00ad"), " ")))
    for found in (*report.found, *(choice for question in report.questions for choice in question.choices)):
        field = FIELDS[found.field]
        held = [p for p in pieces if any(start <= p.start and p.end <= end for start, end in found.spans)]
        numbers = [piece.text for piece in held if piece.kind == "number"]
        grouped = [one + other for one, other in pairwise(numbers)]
        assert any(found.entry.value in readings_of(number) for number in (*numbers, *grouped))
        if field.quantity:
            assert find_unit(found.entry.unit, field.quantity).symbol == found.entry.unit
            value = convert(found.entry.value, found.entry.unit, field.core_unit, quantity=field.quantity)
        else:
            value = found.entry.value
        assert field.lowest <= value <= field.highest


@MORE
@given(REPORTS)
def test_an_entry_is_found_once(text):
    """No two readings for one entry: what differs is a question."""
    fields = [found.field for found in read_report(text).found]
    assert len(fields) == len(set(fields))


LINES = st.lists(
    st.tuples(
        st.sampled_from(
            [
                ("water.calcium", ("Calcium", "Kalzium", "Ca"), (("mg/l", "mg/L Ca"), ("mmol/l", "mmol/L"))),
                ("water.magnesium", ("Magnesium", "Mg", "magnésium"), (("mg/l", "mg/L Mg"),)),
                (
                    "water.hardness",
                    ("Gesamthärte", "Total hardness", "TH", "Dureté totale"),
                    (("°dH", "°dH"), ("gpg", "gpg"), ("°f", "°fH")),
                ),
                (
                    "water.alkalinity",
                    ("TAC", "Säurekapazität", "Total alkalinity"),
                    (("°f", "°fH"), ("mmol/l", "mmol/L K_S4.3")),
                ),
                ("water.sodium", ("Natrium", "Sodium", "Na"), (("mg/l", "mg/L Na"), ("ppm", "mg/L Na"))),
                ("water.conductivity", ("Leitfähigkeit", "Conductivity", "Conductivité"), (("µS/cm", "µS/cm"),)),
            ]
        ),
        st.integers(0, 2),
        st.integers(0, 1),
        st.integers(10, 999),
    ),
    min_size=1,
    max_size=6,
    unique_by=lambda row: row[0][0],
)
FORMS = [
    "{name} {value} {unit}",
    "{name}: {value} {unit}",
    "{name} ({unit}): {value}",
    "{name} = {value}{unit}",
    "{value} {unit} {name}",
    "{name};{unit};{value}",
    "{name}\t{value}\t{unit}",
    "{name} | {value} | {unit}",
]


@MORE
@given(LINES, st.sampled_from(FORMS), st.sampled_from(["\n", ", "]), st.sampled_from([",", "."]))
def test_what_is_written_plainly_is_read(rows, form, between, sign):
    """Name, value and unit in any of the usual forms, in one line or many, with comma or point."""
    if between == ", " and form[6:7] in ";\t ":
        between = "\n"
    texts, expected = [], {}
    for (key, names, units), name, unit, tenths in rows:
        written, symbol = units[unit % len(units)]
        value = f"{tenths // 10}{sign}{tenths % 10}"
        texts.append(form.format(name=names[name % len(names)], value=value, unit=written))
        expected[key] = (tenths / 10, symbol)
    report = read_report(between.join(texts))
    assert {found.field: (found.entry.value, found.entry.unit) for found in report.found} == expected
    assert not report.questions


@given(
    st.floats(1.0, 99999.0),
    st.integers(1, 2),
    st.sampled_from([",", "."]),
    st.sampled_from(["", ",", ".", "'", "\u00a0"]),
)
def test_a_number_is_read_as_it_was_written(value, places, sign, group):
    """Any decimal sign, any grouping that differs from it: the number comes back, alone."""
    if group == sign:
        group = ""
    digits = f"{value:,.{places}f}".replace(",", "\1").replace(".", sign).replace("\1", group)
    assert readings_of(digits) == (round(value, places),)


@given(st.integers(1, 999), st.integers(0, 999), st.sampled_from([",", "."]))
def test_three_digits_after_a_sign_can_be_two_numbers(whole, part, sign):
    """1.250 is 1.25 or 1250 until the report shows its decimal sign."""
    text = f"{whole}{sign}{part:03d}"
    other = "," if sign == "." else "."
    assert readings_of(text) == tuple(dict.fromkeys((float(f"{whole}.{part:03d}"), float(f"{whole}{part:03d}"))))
    assert readings_of(text, sign) == (float(f"{whole}.{part:03d}"),)
    assert readings_of(text, other) == (float(f"{whole}{part:03d}"),)


@pytest.mark.parametrize(
    ("numbers", "sign"),
    [
        (["92", "18,4"], ","),
        (["0.250", "1,250"], "."),
        (["1.250,5"], ","),
        (["1.250", "92"], None),
        (["18,4", "18.4"], None),
        ([], None),
    ],
)
def test_the_decimal_sign_of_a_report(numbers, sign):
    """Shown by numbers that leave no choice; not known where they disagree."""
    assert decimal_sign(numbers) == sign


@pytest.mark.parametrize("text", ["1.2.3", "1,2,3", "1.2,3.4", "12,34,567", "", "-", "1e999"])
def test_what_is_no_number(text):
    """No value is made of it."""
    assert readings_of(text) == ()


@given(st.text(max_size=200))
def test_cutting_loses_no_sign(text):
    """Every sign that is not blank is in exactly one token, at its place; folding keeps places."""
    folded = fold(text)
    assert len(folded) == len(text)
    for tokens in (cut(folded, 7), tokens_of(folded, 7)):
        covered = [place for token in tokens for place in range(token.start - 7, token.end - 7)]
        assert len(covered) == len(set(covered))
        assert {place for place, sign in enumerate(folded) if not sign.isspace()} <= set(covered)


HOSTILE = {
    "one digit": "1",
    "one letter": "a",
    "commas": ",",
    "cells": "a;",
    "blank lines": "\n",
    "symbols": "Ca ",
    "symbols with numbers": "Ca 92 ",
    "readings": "Calcium 92 mg/l\n",
    "questions": "Hardness 300 ppm\n",
    "brackets": "(",
    "names in brackets": "Ca(Mg)",
    "beginnings of units": "mg ",
    "quotes": '"a;',
    "numbers beside one name": "Calcium 1 1 ",
    "points": "1.1",
    "beginnings of methods": "DIN EN ISO ",
    "limits": "Grenzwert ",
    "headings": "Parameter;Einheit;Wert\n",
    "wide cells": "a  b  c\n",
    "beginnings of names": "Säurekapazität bis pH ",
    "combining marks": "a\u0301\u0301\u0301\u0301",
    "tables by names": "Calcium (mg/L);Magnesium (mg/L)\n92;18,4\n",
    "titles": "softened\nCa 1 mg/l\n",
    "json": '{"format": "tapwright job",[',
    "dashes": "1-",
}


@pytest.mark.timeout(60)
@pytest.mark.parametrize("piece", HOSTILE.values(), ids=HOSTILE.keys())
def test_hostile_texts_end(piece):
    """A long text all of one kind is read to its end; questions stay few."""
    report = read_report((piece * LARGEST)[: LARGEST // 5])
    assert len(report.questions) <= MOST_QUESTIONS + len(FIELDS)


@pytest.mark.timeout(60)
def test_the_longest_text_ends():
    """Random signs of the kind reports are made of, to the largest length."""
    draw = random.Random(1)
    signs = "abcCaMg 0123456789.,;:()/<>°µ\n\t-+\"'"
    report = read_report("".join(draw.choice(signs) for _ in range(LARGEST)))
    assert report.left


@pytest.mark.parametrize("piece", ["Ca 92 ", "a;", "mg ", "Calcium 92 mg/l\n", "1-", "Ca(Mg)"])
def test_work_grows_with_length_alone(piece, monkeypatch):
    """Twice the text makes at most about twice the work, counted in pieces classified and unit forms looked at."""
    from core.job.readings import tokens as module

    counts = []
    for length in (4_000, 8_000):
        calls = [0]

        def counting(token, _calls=calls, _real=module._classified):
            _calls[0] += 1
            return _real(token)

        with monkeypatch.context() as patch:
            patch.setattr(module, "_classified", counting)
            read_report((piece * length)[:length])
        counts.append(calls[0])
    assert counts[1] <= 2.2 * counts[0]
