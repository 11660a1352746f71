"""Plausibility of a whole job: what is odd is said, with what to do next; what is in order is left alone."""

from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from core.job.answers import Problem
from core.job.checks import RULES, check_job
from core.job.fields import FIELDS
from core.job.record import SOURCES, Entry, Job
from core.references import REFERENCES

SAMPLES = sorted((Path(__file__).resolve().parents[3] / "sample_tests").glob("*.json"))

# Five waters of the geochemists' text-book kind: mg/L, alkalinity as CaCO3, chloride chosen to balance; conductivity at
# 25 °C computed from them by a general geochemistry code (PHREEQC 3.8.6, data of 2024).
WATERS = {
    "soft upland": (10, 7.20, 10, 2, 6, 1, 25, 7, 2, 9.7, 108),
    "moderately hard": (15, 7.60, 60, 12, 20, 3, 150, 45, 10, 29.5, 509),
    "hard limestone": (11, 7.15, 120, 25, 15, 2, 330, 60, 25, 17.8, 832),
    "gypsum": (12, 7.40, 220, 45, 60, 4, 210, 560, 5, 51.6, 1619),
}
SOFTENED = (11, 7.15, 0.6, 0.12, 199.0, 2, 330, 60, 25, 17.8, 848)
COLUMNS = (
    ("water.temperature", "°C"),
    ("water.ph", ""),
    ("water.calcium", "mg/L Ca"),
    ("water.magnesium", "mg/L Mg"),
    ("water.sodium", "mg/L Na"),
    ("water.potassium", "mg/L K"),
    ("water.alkalinity", "mg/L CaCO3"),
    ("water.sulfate", "mg/L SO4"),
    ("water.nitrate", "mg/L NO3"),
    ("water.chloride", "mg/L Cl"),
    ("water.conductivity", "µS/cm"),
)


def job(**readings):
    """A job from a report, dots written as two underscores: water__hardness=(22, "gpg")."""
    return Job("t", entries={n.replace("__", "."): Entry(float(v), u, "report") for n, (v, u) in readings.items()})


def analysis(values, **changes):
    """A full analysis as a job, some readings changed; the hardness that goes with the ions included."""
    entries = {key: Entry(float(v), unit, "report") for (key, unit), v in zip(COLUMNS, values, strict=True)}
    hardness = values[2] * 2.49728 + values[3] * 4.11792  # mg/L CaCO3 per mg/L of the ion [IUPAC21]
    entries["water.hardness"] = Entry(hardness, "mg/L CaCO3", "report")
    for name, (value, unit) in changes.items():
        entries[f"water.{name}"] = Entry(float(value), unit, "report")
    return Job("t", entries=entries)


def rules(found):
    """Which rules spoke."""
    return {finding.rule for finding in found}


# rule, job, entry it speaks of, words it must hold
SPEAKS = [
    (
        "hardness against calcium and magnesium",
        job(water__hardness=(12, "°e"), water__calcium=(60, "mg/L Ca"), water__magnesium=(13.5, "mg/L Mg")),
        "water.hardness",
        "did you mean 12 gpg",
    ),
    (
        "hardness against calcium and magnesium",
        job(water__hardness=(12, "gpg"), water__calcium=(50, "mg/L Ca"), water__magnesium=(11.2, "mg/L Mg")),
        "water.hardness",
        "did you mean 12 °e",
    ),
    (
        "hardness against calcium and magnesium",
        job(water__hardness=(20, "°dH"), water__calcium=(250, "mg/L Ca"), water__magnesium=(107, "mg/L Mg")),
        "water.hardness",
        "did you mean mg/L CaCO3 for calcium and magnesium?",
    ),
    (
        "hardness against calcium and magnesium",
        job(water__hardness=(300, "mg/L CaCO3"), water__calcium=(230, "mg/L Ca"), water__magnesium=(17, "mg/L Mg")),
        "water.hardness",
        "did you mean 230 mg/L CaCO3?",
    ),
    (
        "hardness against calcium and magnesium",
        job(water__hardness=(300, "mg/L CaCO3"), water__calcium=(60, "mg/L Ca"), water__magnesium=(10, "mg/L Mg")),
        "water.hardness",
        "measure again",
    ),
    (
        "one ion above the hardness",
        job(water__hardness=(20, "gpg"), water__calcium=(280, "mg/L Ca")),
        "water.calcium",
        "did you mean 280 mg/L CaCO3?",
    ),
    (
        "magnesium above calcium",
        job(water__calcium=(18, "mg/L Ca"), water__magnesium=(92, "mg/L Mg")),
        "water.magnesium",
        "swapped?",
    ),
    (
        "a sample from behind a softener",
        job(water__hardness=(1, "gpg"), water__alkalinity=(300, "mg/L CaCO3")),
        "water.hardness",
        "behind a softener?",
    ),
    (
        "alkalinity above the hardness",
        job(water__hardness=(180, "mg/L CaCO3"), water__alkalinity=(220, "mg/L CaCO3")),
        "water.alkalinity",
        "did you mean 220 mg/L HCO3",
    ),
    (
        "alkalinity above the hardness",
        job(water__hardness=(100, "mg/L CaCO3"), water__alkalinity=(300, "mg/L CaCO3"), water__sodium=(10, "mg/L Na")),
        "water.alkalinity",
        "too little",
    ),
    (
        "alkalinity against pH",
        job(water__ph=(4.0, ""), water__alkalinity=(100, "mg/L CaCO3")),
        "water.ph",
        "no alkalinity",
    ),
    ("carbon dioxide against pH", job(water__ph=(5.8, ""), water__alkalinity=(5, "meq/L")), "water.ph", "fizz"),
    (
        "conductivity against hardness",
        job(water__hardness=(20, "°dH"), water__conductivity=(0.7, "µS/cm")),
        "water.conductivity",
        "did you mean 0.7 mS/cm?",
    ),
    (
        "conductivity against hardness",
        job(water__hardness=(20, "gpg"), water__conductivity=(420, "µS/cm")),
        "water.hardness",
        "did you mean 20 °fH",
    ),
    (
        "charge balance and conductivity of an analysis",
        analysis(WATERS["hard limestone"], alkalinity=(330, "mg/L HCO3")),
        "water.alkalinity",
        "did you mean mg/L CaCO3?",
    ),
    (
        "charge balance and conductivity of an analysis",
        analysis(WATERS["moderately hard"], chloride=(120, "mg/L Cl")),
        "water.sodium",
        "A cation is too low",
    ),
    (
        "charge balance and conductivity of an analysis",
        analysis(WATERS["gypsum"], sulfate=(60, "mg/L SO4")),
        "water.chloride",
        "An anion is too low",
    ),
    (
        "charge balance and conductivity of an analysis",
        analysis(WATERS["moderately hard"], conductivity=(1400, "µS/cm")),
        "water.conductivity",
        "does not fit the ions",
    ),
    ("pH of drinking water", job(water__ph=(5.9, "")), "water.ph", "6.5 to 9.5"),
    ("temperature at the tap", job(water__temperature=(55, "°C")), "water.temperature", "did you mean 55 °F?"),
    ("temperature at the tap", job(water__temperature=(35, "°C")), "water.temperature", "35 °F"),
    ("extremely hard", job(water__hardness=(300, "gpg")), "water.hardness", "did you mean 300 mg/L CaCO3"),
    ("metals that stain", job(water__iron=(1, "mg/L Fe")), "water.iron", "stains"),
    ("metals that stain", job(water__iron=(50, "mg/L Fe")), "water.iron", "did you mean 50 µg/L Fe?"),
    ("metals that stain", job(water__manganese=(0.2, "mg/L Mn")), "water.manganese", "stains"),
    ("limits of drinking water", job(water__nitrate=(45, "mg/L NO3-N")), "water.nitrate", "did you mean 45 mg/L NO3?"),
    ("limits of drinking water", job(water__nitrate=(80, "mg/L NO3")), "water.nitrate", "infants"),
    ("limits of drinking water", job(water__sodium=(205, "mg/L Na")), "water.sodium", "adds to it"),
    ("limits of drinking water", job(water__chloride=(300, "mg/L Cl")), "water.chloride", "250"),
    (
        "use per person",
        job(demand__persons=(4, ""), demand__daily_volume=(12, "m³/day")),
        "demand.daily_volume",
        "leak",
    ),
    (
        "use per person",
        job(demand__persons=(4, ""), demand__daily_volume=(140, "L/day")),
        "demand.daily_volume",
        "did you mean 140 gpd",
    ),
    ("use per person", job(demand__per_person=(20, "L/person/day")), "demand.per_person", "Read the water meter."),
    (
        "bathrooms against persons",
        job(demand__persons=(1, ""), demand__bathrooms=(6, "")),
        "demand.bathrooms",
        "same time",
    ),
    (
        "bathrooms against persons",
        job(demand__persons=(20, ""), demand__bathrooms=(1, "")),
        "demand.bathrooms",
        "Count again",
    ),
    (
        "peak flow against the daily volume",
        job(demand__peak_flow=(5, "L/min"), demand__daily_volume=(30, "m³/day")),
        "demand.peak_flow",
        "20.8 L/min",
    ),
    (
        "shortest against longest interval",
        job(softener__shortest=(10, "day"), softener__longest=(4, "day")),
        "softener.shortest",
        "swapped?",
    ),
    (
        "hardness wanted against the raw water",
        job(water__hardness=(20, "gpg"), blend__target=(25, "°dH")),
        "blend.target",
        "19.2 °dH",
    ),
    (
        "hardness wanted against the raw water",
        job(water__hardness=(20, "gpg"), blend__softened=(22, "gpg")),
        "blend.softened",
        "exhausted?",
    ),
    (
        "hardness wanted against the raw water",
        job(water__hardness=(20, "gpg"), blend__softened=(2, "gpg"), blend__measured=(1, "gpg")),
        "blend.measured",
        "below that after the softener",
    ),
]


@pytest.mark.parametrize(("rule", "odd", "field", "words"), SPEAKS, ids=[f"{r[0]}-{r[3]}" for r in SPEAKS])
def test_what_is_odd_is_said(rule, odd, field, words):
    """The rule speaks, by the right entry, with the right hint."""
    said = [finding for finding in check_job(odd) if finding.rule == rule]
    assert [finding.field for finding in said] == [field]
    assert words in said[0].text


def test_every_rule_is_tried():
    """Each rule has a case in which it speaks."""
    assert {row[0] for row in SPEAKS} == {rule.name for rule in RULES}


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: rule.name)
def test_every_rule_names_its_source(rule):
    """A key of the bibliography, a definition, or common practice; and the function says what it holds."""
    assert rule.source in (*REFERENCES, "definition", "common practice, no source")
    assert rule.find.__doc__


@pytest.mark.parametrize("name", WATERS)
def test_a_sound_analysis_is_left_alone(name):
    """Balanced waters with their conductivity and hardness: not a word, but for a limit that is really passed."""
    assert rules(check_job(analysis(WATERS[name]))) <= {"limits of drinking water"}


def test_a_routine_imbalance_is_let_pass():
    """3 % of the charge, more than the method's 2 % but within what monitoring reports accept: not a word."""
    assert not check_job(analysis(WATERS["moderately hard"], chloride=(39.9, "mg/L Cl")))


def test_softened_water_is_recognised():
    """The hard limestone water behind a softener: the sample is asked about, nothing else is."""
    assert rules(check_job(analysis(SOFTENED))) == {"a sample from behind a softener"}


SLIPS = [  # one unit of the hard limestone water mistaken: entry, what was typed, the unit that is meant
    ("calcium", (299.7, "mg/L Ca"), "mg/L CaCO3"),
    ("calcium", (120, "mg/L CaCO3"), "120 mg/L Ca"),
    ("hardness", (22.6, "mg/L CaCO3"), "22.6 °dH"),
    ("hardness", (22.6, "°fH"), "22.6 °dH"),
    ("hardness", (40.3, "°dH"), "40.3 °fH"),
    ("hardness", (23.5, "°e"), "23.5 gpg"),
    ("hardness", (28.2, "gpg"), "28.2 °e"),
    ("hardness", (120, "mg/L CaCO3"), ""),
    ("alkalinity", (402, "mg/L CaCO3"), "mg/L HCO3"),
    ("alkalinity", (33, "°dKH"), "°fH"),
    ("alkalinity", (18.5, "°fH"), "°dKH"),
]


@pytest.mark.parametrize(("name", "typed", "meant"), SLIPS, ids=[f"{s[0]} {s[1][1]}" for s in SLIPS])
def test_a_mistaken_unit_is_found(name, typed, meant):
    """In an analysis that was sound, one figure in the wrong unit is noticed, and the right unit is asked about."""
    found = check_job(analysis(WATERS["hard limestone"], **{name: typed}))
    texts = " ".join(finding.text for finding in found)
    assert found
    assert meant in texts


def test_the_doubt_of_a_strip_is_not_held_against_it():
    """A strip that reads 250 beside ions of 320 mg/L is no contradiction; a laboratory that does so is."""
    ions = {"water__calcium": (100, "mg/L Ca"), "water__magnesium": (17, "mg/L Mg")}
    strip = job(**ions).with_entry(
        "water.hardness", Entry(250.0, "mg/L CaCO3", "measured", "test strip, steps in mg/L")
    )
    lab = job(**ions, water__hardness=(250, "mg/L CaCO3"))
    assert not check_job(strip)
    assert rules(check_job(lab)) == {"hardness against calcium and magnesium"}


def test_everything_is_said_at_once():
    """A job wrong in five ways is told five things, in the order of the entries."""
    odd = job(
        water__hardness=(300, "gpg"),
        water__ph=(4.0, ""),
        water__alkalinity=(100, "mg/L CaCO3"),
        water__temperature=(55, "°C"),
        demand__persons=(4, ""),
        demand__daily_volume=(30, "m³/day"),
    )
    found = check_job(odd)
    assert len(rules(found)) == 5
    order = list(FIELDS)
    assert [order.index(f.field) for f in found] == sorted(order.index(f.field) for f in found)


def test_a_finding_is_a_problem_with_its_next_step():
    """The screens show it as any other problem; what to do stands at the end of its text."""
    (finding,) = check_job(job(water__temperature=(55, "°C")))
    assert isinstance(finding, Problem)
    assert finding.level == "warning"
    assert finding.text.endswith(finding.next_step)
    assert finding.next_step[-1] in "?."
    assert finding.source


@pytest.mark.parametrize("path", SAMPLES, ids=lambda path: path.stem)
def test_the_samples_are_in_order(path):
    """The sample jobs make sense: at most iron that stains, which is their subject."""
    assert rules(check_job(Job.load(path))) <= {"metals that stain"}


def test_an_empty_job_is_in_order():
    """Nothing entered, nothing odd."""
    assert check_job(Job("t")) == ()


@pytest.mark.parametrize(
    "entry", [Entry(None, "gpg", typed="four"), Entry(20.0, "furlong"), Entry(-5.0, "gpg"), Entry(1e9, "gpg")]
)
def test_what_cannot_be_used_is_left_to_the_reading(entry):
    """An entry that is refused anyway is not judged a second time, and breaks nothing."""
    odd = job(water__calcium=(100, "mg/L Ca"), water__magnesium=(10, "mg/L Mg")).with_entry("water.hardness", entry)
    assert check_job(odd) == ()


ENTRIES = st.dictionaries(
    st.sampled_from(sorted(FIELDS)),
    st.builds(
        lambda value, index, source, typed: (value, index, source, typed),
        st.floats(0.0, 500.0) | st.none() | st.floats(allow_nan=False, allow_infinity=False),
        st.integers(0, 7),
        st.sampled_from(SOURCES),
        st.sampled_from(["", "< 5", "> 5"]),
    ),
    max_size=12,
)


@settings(max_examples=200, deadline=None)
@given(ENTRIES)
def test_no_job_breaks_the_checks(drawn):
    """Any values in any units: findings with words and a next step, never an exception or "nan"."""
    entries = {}
    for key, (value, index, source, typed) in drawn.items():
        units = FIELDS[key].units or ("",)
        entries[key] = Entry(value, units[index % len(units)], source, typed=typed)
    for finding in check_job(Job("t", entries=entries)):
        assert finding.field in FIELDS
        assert finding.next_step
        assert "nan" not in finding.text
