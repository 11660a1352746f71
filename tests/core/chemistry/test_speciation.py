"""What speciation gives: shapes, names, reasons, and the edges of what can be asked."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.testing import assert_allclose

from core.chemistry import Solution, add, at_temperature, mix, speciate, to_saturation
from core.chemistry.thermodynamics import log_k
from core.errors import InputError

HARD = {"temp_c": 12, "ph": 7.3, "ca": 2.4, "mg": 0.8, "na": 0.9, "cl": 2.3, "so4": 0.6, "alkalinity": 4.0}
NUMBERS = (
    "ph", "ionic_strength", "alkalinity", "dic", "co2", "p_co2", "water_activity", "charge_balance",
    "si_calcite", "si_aragonite", "si_vaterite", "si_brucite", "si_gypsum",
)  # fmt: skip


@pytest.mark.parametrize("name", NUMBERS)
def test_one_water_gives_floats_and_many_give_arrays(name):
    """A single water answers with plain floats, an array of waters in its own shape."""
    one = getattr(speciate(Solution(**HARD)), name)
    many = getattr(speciate(Solution(**HARD | {"temp_c": [[12.0], [30.0]], "na": [0.9, 2.0, 4.0]})), name)

    assert type(one) is float
    assert many.shape == (2, 3)
    assert_allclose(many[0, 0], one, rtol=1e-9, atol=1e-12)


def test_no_waters():
    """No waters give no answers, and no fuss."""
    found = to_saturation(Solution(**HARD | {"ca": []}))

    assert found.precipitated.shape == (0,)
    assert found.why.shape == (0,)


def test_mass_action():
    """Activities obey the constant of each reaction: calcium carbonate pair, bicarbonate, water."""
    found = speciate(Solution(**HARD))
    a = found.activities

    assert_allclose(np.log10(a["CaCO3"] / (a["Ca+2"] * a["CO3-2"])), log_k("CaCO3", 12.0), rtol=0, atol=1e-9)
    assert_allclose(np.log10(a["HCO3-"] / (a["H+"] * a["CO3-2"])), log_k("HCO3-", 12.0), rtol=0, atol=1e-9)
    assert_allclose(np.log10(a["OH-"] * a["H+"] / found.water_activity), log_k("OH-", 12.0), rtol=0, atol=1e-9)
    assert_allclose(np.log10(a["CO2"] / found.p_co2), log_k("CO2(g)", 12.0), rtol=0, atol=1e-9)
    assert_allclose(-np.log10(a["H+"]), 7.3, rtol=0, atol=1e-12)
    assert found.molalities["Ca"] == found.molalities["Ca+2"]
    assert found.molalities.get("rust") is None
    assert set(a) == set(found.molalities)
    assert len(a) == len(list(a))


def test_results_name_their_data_and_keep_it():
    """A result carries the set it was computed with, and later calls go on with it."""
    water = Solution(**HARD)
    new = at_temperature(water, 60.0, data="usgs2024")

    assert speciate(water).data == "pb1982"
    assert new.data == speciate(new).data == to_saturation(new).data == "usgs2024"
    assert_allclose(speciate(new).ph, new.ph, rtol=0, atol=1e-9)


def test_open_water_keeps_alkalinity():
    """Open to air a hard water loses CO2: alkalinity stays, pH rises, and the pressure is that of the gas."""
    closed, aired = speciate(Solution(**HARD)), speciate(Solution(**HARD), p_co2=4.2e-4)

    assert_allclose(aired.alkalinity, 4.0, rtol=1e-8)
    assert_allclose(aired.p_co2, 4.2e-4, rtol=1e-8)
    assert aired.ph > closed.ph
    assert aired.dic < closed.dic


@pytest.mark.parametrize(
    "call",
    [
        lambda w: at_temperature(w, [10.0, 20.0]),
        lambda w: speciate(w, p_co2=[1e-3, 1e-2]),
        lambda w: add(w, lime=[1.0, 2.0]),
        lambda w: mix([w, w], [[0.5, 0.5], 0.5]),
    ],
)
def test_shapes_that_do_not_fit(call):
    """Arrays that do not broadcast together are refused in a sentence, not by numpy."""
    with pytest.raises(InputError, match="do not fit together"):
        call(Solution(**HARD | {"ca": [1.0, 2.0, 3.0]}))


def test_unknown_pressure_is_alone():
    """A pressure that is not known leaves its own water without answer."""
    found = to_saturation(Solution(**HARD), p_co2=[4.2e-4, np.nan])

    assert np.isnan(found.precipitated).tolist() == [False, True]
    assert "not known" in found.why[1]
    assert "not known" in speciate(Solution(**HARD), p_co2=np.nan).why


def test_pure_water():
    """Pure water is neutral at half of pKw, 6.997 at 25 °C, and free of everything."""
    found = speciate(Solution(temp_c=25.0, alkalinity=0.0, dic=0.0))

    assert_allclose(found.ph, 13.9948 / 2, rtol=0, atol=5e-4)
    assert found.dic == 0.0
    assert found.si_calcite == -np.inf
    assert speciate(Solution(temp_c=25.0, ph=7.0, alkalinity=0.0)).why == ""


def test_missing_ion_means_no_saturation():
    """Without magnesium, iron or carbonate the solid that needs it is infinitely far."""
    found = speciate(Solution(temp_c=25.0, ph=7.0, alkalinity=2.0, na=2.0))

    assert found.si_brucite == found.si_siderite == found.si_calcite == found.si_gypsum == -np.inf


@pytest.mark.parametrize(
    ("water", "words"),
    [
        ({"ph": 12.0, "alkalinity": 3.0}, "Even without carbonate"),
        ({"ph": 2.0, "alkalinity": 5.0}, "more dissolved CO2 than water holds"),
        ({"ph": 7.0, "alkalinity": float("nan")}, "not known"),
    ],
)
def test_water_without_answer_says_why(water, words):
    """Readings that do not fit together come back as NaN with the reason, through every later step."""
    found = speciate(Solution(temp_c=25.0, **water))
    warm = at_temperature(Solution(temp_c=25.0, **water), 60.0)

    assert np.isnan(found.si_calcite)
    assert np.isnan(found.dic)
    assert words in found.why
    assert words in warm.why
    assert words in speciate(warm).why
    assert words in to_saturation(warm).why


def test_notes_name_the_range():
    """Beyond 90 °C, or 0.5 mol/kg, the answer is given and the range named."""
    assert speciate(Solution(**HARD)).notes == ()
    assert "0 to 90 °C" in speciate(Solution(**HARD | {"temp_c": 95.0})).notes[0]
    assert "0.5 mol/kg" in speciate(Solution(**HARD | {"na": 900.0, "cl": 900.0})).notes[0]


@pytest.mark.parametrize("call", [lambda w: speciate(w, p_co2=0.0), lambda w: speciate(w, p_co2=50.0),
                                  lambda w: at_temperature(w, 120.0), lambda w: speciate(w, data="x")])  # fmt: skip
def test_impossible_question_is_refused(call):
    """Pressure, temperature and data set are checked like the fields of the water."""
    with pytest.raises(InputError, match=r"accepted|are"):
        call(Solution(**HARD))
