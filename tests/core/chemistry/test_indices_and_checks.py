"""Indices, their bands, the checks of an analysis, the water made from a field reading, the scale band."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.testing import assert_allclose

from core.chemistry import Solution, complete, scale_per_year, scale_potential, speciate, stability
from core.chemistry import indices as ix
from core.chemistry.index_bands import SCALES, band
from core.chemistry.quality import (
    accepted_charge_error,
    calculated_tds,
    charge_error_by_mean,
    check_analysis,
    conductivity_from_ions,
    ionic_strength_from_conductivity,
    require_balance,
)
from core.errors import InputError
from core.references import REFERENCES

HARD = {
    "temp_c": 11.0, "ph": 7.15, "ca": 2.994, "mg": 1.0286, "na": 0.6525, "k": 0.0512, "cl": 0.5021, "so4": 0.6246,
    "no3": 0.4032, "alkalinity": 6.594,
}  # fmt: skip


@pytest.mark.parametrize(
    ("index", "value", "words"),
    [
        ("langelier", -0.6, "tends to dissolve scale"), ("langelier", 0.0, "near balance"),
        ("langelier", 0.7, "tends to scale"),
        ("ryznar", 4.2, "heavy scale"), ("ryznar", 6.5, "little scale or corrosion"),
        ("ryznar", 9.5, "very heavy corrosion"),
        ("puckorius", 6.5, "neutral"), ("precipitation potential", 6.0, "protective film"),
        ("precipitation potential", -7.0, "mildly dissolving"), ("aggressiveness", 12.0, "not aggressive"),
        ("aggressiveness", 9.9, "highly aggressive"), ("larson", 1.0, "notable"), ("galvanised", 3.5, "high risk"),
        ("copper", 1.0, "pitting more likely"),
    ],
)  # fmt: skip
def test_bands(index, value, words):
    """A value falls into the band the trade gives it."""
    assert band(index, value).words == words


@pytest.mark.parametrize("index", SCALES)
def test_bands_leave_no_gap(index):
    """Bands run from minus to plus infinity, each starting where the last ended, and name their source."""
    scale = SCALES[index]

    assert scale.bands[0].low == -np.inf
    assert scale.bands[-1].high == np.inf
    assert all(a.high == b.low for a, b in zip(scale.bands, scale.bands[1:], strict=False))
    assert scale.source in REFERENCES or scale.source == "common practice, no source"
    assert band(index, float("nan")) is None


def test_unknown_index():
    """An index without bands is refused by name."""
    with pytest.raises(InputError, match="has no bands"):
        band("luck", 1.0)


@pytest.mark.parametrize(
    "call",
    [
        lambda bad: ix.saturation_ph_simple([300.0, bad], 25.0, 150.0, 100.0),
        lambda bad: ix.saturation_ph_SM2330(25.0, [1e-3, bad], 2e-3, 0.01),
        lambda bad: ix.puckorius_ph([100.0, bad]),
        lambda bad: ix.aggressiveness(7.0, [100.0, bad], 100.0),
        lambda bad: ix.larson_ratio(1.0, 1.0, [4.0, bad]),
        lambda bad: ix.copper_ratio(1.0, [1.0, bad]),
    ],
)
@pytest.mark.parametrize("bad", [0.0, np.nan])
def test_unusable_value_is_nan_and_alone(call, bad):
    """What has no logarithm, or nothing to divide by, gives NaN in its own place."""
    assert np.isnan(call(bad)).tolist() == [False, True]


def test_stability_has_its_working():
    """Each index comes from a step of the working, and the numbers are those of the formulas."""
    found = stability(Solution(**HARD))
    quantities = [step.card.quantity for step in found.working.steps]

    assert {"Langelier index", "Ryznar index", "Larson ratio", "Dissolved solids, calculated"} <= set(quantities)
    by_name = {step.card.quantity: step.result for step in found.working.steps}
    assert found.values["ryznar"] == by_name["Ryznar index"]
    assert_allclose(found.values["saturation index"], speciate(Solution(**HARD)).si_calcite)
    assert all(type(value) is float for value in found.values.values())
    assert found.band("ryznar").words == "corrosion notable"


def test_stability_of_many_waters():
    """An array of waters has arrays of indices."""
    assert stability(Solution(**HARD | {"ph": [7.0, 7.5, 8.0]})).values["larson"].shape == (3,)


# SM 1030 E: ±0.2 meq/L to 3 meq/L of anions, ±2 % to 10, ±5 % above (from memory)
@pytest.mark.parametrize(("anions", "accepted"), [(2.0, 5.0), (5.0, 2.0), (10.0, 2.0), (12.0, 5.0)])
def test_accepted_charge_error(anions, accepted):
    """Acceptance goes by the sum of anions; at 2.0 meq/L, 0.2 of a sum of 4.0 is 5 %."""
    assert_allclose(accepted_charge_error(anions, anions), accepted)


def test_two_forms_of_charge_balance_differ_by_two():
    """The form by the mean is twice the form by the sum."""
    assert_allclose(charge_error_by_mean(8.4, 8.0), 2 * 100 * 0.4 / 16.4)


# EC at 25 °C as a general library computes it for balanced waters, with their cations [meq/L] and ionic strength
CONDUCTIVITY = [
    (108, 0.950, 0.00134, 0.3),
    (509, 4.928, 0.00702, 0.2),
    (832, 8.749, 0.01258, 0.1),
    (848, 8.747, 0.00925, 0.5),
]


@pytest.mark.parametrize(("conductivity", "cations", "strength", "miss"), CONDUCTIVITY)
def test_shortcuts_from_conductivity(conductivity, cations, strength, miss):
    """The sum rule holds within 15 %; the ionic strength shortcut is out by 5 to 50 %, most on softened water."""
    assert_allclose(conductivity_from_ions(cations), conductivity, rtol=0.15)
    assert_allclose(ionic_strength_from_conductivity(conductivity), strength, rtol=miss)


def test_good_analysis_passes():
    """An analysis in balance passes all its checks, each with words and a source."""
    checks = check_analysis(Solution(**HARD), conductivity=832.0, measured_tds=480.0, hardness=402.0, co2=50.0)

    assert [c.passed for c in checks] == [True] * 6
    assert all(c.words and c.source for c in checks)


@pytest.mark.parametrize(
    ("change", "measured", "failed"),
    [
        ({"na": 3.0}, {}, "charge balance"),
        ({}, {"measured_tds": 700.0}, "dissolved solids, measured to calculated"),
        ({}, {"conductivity": 1500.0}, "conductivity, measured to expected"),
        ({}, {"hardness": 250.0}, "hardness, titrated to calcium and magnesium"),
        ({}, {"co2": 5.0}, "carbonate: CO2 measured to CO2 from pH"),
    ],
)
def test_bad_analysis_is_found(change, measured, failed):
    """A wrong entry fails the check it belongs to."""
    found = {c.name: c.passed for c in check_analysis(Solution(**HARD | change), **measured)}

    assert found[failed] is False


def test_outside_the_range_is_noted():
    """Beyond pH 10, or very dilute, the check is made and the range named."""
    sharp = check_analysis(Solution(**HARD | {"ph": 10.5, "alkalinity": 8.0, "na": 2.1}))[0]
    thin = check_analysis(Solution(temp_c=10, ph=7, alkalinity=0.2, ca=0.1), conductivity=20.0)[-1]

    assert "pH 4 to 10" in sharp.note
    assert "90 to 3000" in thin.note


def test_one_analysis_at_a_time():
    """Checks speak of one water."""
    with pytest.raises(InputError, match="one water at a time"):
        check_analysis(Solution(**HARD | {"ca": [1.0, 2.0]}))


def test_balance_beyond_repair():
    """An analysis that lacks an ion is refused with its error, its place, and what is accepted."""
    require_balance(Solution(**HARD))
    with pytest.raises(InputError, match=r"differ by -\d+ % of their sum at index 1; up to ±30 %") as refused:
        require_balance(Solution(**HARD | {"ca": [2.994, 0.0], "mg": [1.0286, 0.0]}))
    assert refused.value.field == "charge balance"


def test_solids_follow_the_formula():
    """0.6 × 200.172 + 40.078 + 2 × 35.45: calcium 1, chloride 2, alkalinity 4 give 231.08 mg/L."""
    assert_allclose(calculated_tds(Solution(temp_c=10, ph=7, ca=1.0, cl=2.0, alkalinity=4.0)), 231.0812, rtol=1e-6)


def test_field_water_is_balanced_and_says_what_it_assumed():
    """A full water from five readings balances its charge, keeps what was measured, and lists each assumption."""
    made = complete(temp_c=11, ph=7.15, hardness=4.0226, alkalinity=6.594, conductivity=832.0)
    water = made.solution

    assert_allclose(speciate(water).charge_balance, 0.0, atol=1e-8)
    assert_allclose(water.ca + water.mg, 4.0226)
    assert (water.ph, water.alkalinity) == (7.15, 6.594)
    assert len(made.assumptions) == 4
    assert all(text.endswith(".") for text in made.assumptions)


def test_field_water_is_near_the_full_analysis():
    """Saturation from the thin reading lies within 0.05 of that from the full analysis."""
    thin = complete(temp_c=11, ph=7.15, hardness=4.0226, alkalinity=6.594, conductivity=832.0).solution

    assert_allclose(speciate(thin).si_calcite, speciate(Solution(**HARD)).si_calcite, rtol=0, atol=0.05)


def test_field_water_of_softened_water_gets_sodium():
    """Where alkalinity exceeds hardness, sodium balances it and no calcium is invented."""
    made = complete(temp_c=11, ph=7.15, hardness=0.02, alkalinity=6.6)

    assert_allclose(made.solution.na, 6.56)
    assert any("softened" in text for text in made.assumptions)
    assert any("No conductivity" in text for text in made.assumptions)


def test_field_water_doubts_a_low_conductivity():
    """A conductivity that hardness alone exceeds is doubted in words, and hardness kept."""
    made = complete(temp_c=11, ph=7.2, hardness=4.0, alkalinity=6.0, conductivity=[300.0, 900.0])

    assert any("in doubt" in text for text in made.assumptions)
    assert np.all(made.solution.ca + made.solution.mg == 4.0)


def test_scale_band_holds_the_plain_answer():
    """The band spans both data sets and both forms; the plain answer is calcite by the water's own set."""
    found = scale_potential(Solution(**HARD), np.linspace(10.0, 90.0, 17))

    assert found.plain.shape == found.low.shape == (17,)
    assert np.all((found.low <= found.plain) & (found.plain <= found.high))
    assert np.all(np.diff(found.plain) > 0.0)
    assert len(found.views) == 4


def test_scale_of_many_waters():
    """Temperatures run along the first axis, waters along the next."""
    assert scale_potential(Solution(**HARD | {"ph": [7.0, 7.2, 7.4]}), [40.0, 60.0]).high.shape == (2, 3)
    assert type(scale_potential(Solution(**HARD), 60.0).plain) is float


def test_a_dissolving_water_throws_out_nothing():
    """The potential is not below zero, though the view behind it shows that the water dissolves."""
    found = scale_potential(Solution(temp_c=10, ph=6.5, ca=0.3, alkalinity=0.6), 20.0)

    assert found.plain == 0.0
    assert found.views["pb1982", "calcite"] < 0.0


def test_scale_in_a_year_by_hand():
    """20 g/m³ in 200 L a day: 20 × 0.2 × 365 / 1000 = 1.46 kg."""
    assert_allclose(scale_per_year(20.0, 200.0), 1.46)
