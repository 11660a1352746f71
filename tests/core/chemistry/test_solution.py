"""A Solution takes what can be and refuses, in a sentence, what cannot."""

from __future__ import annotations

import numpy as np
import pytest

from core.chemistry import Solution, speciate
from core.errors import InputError

HARD = {"temp_c": 12, "ph": 7.3, "ca": 2.4, "mg": 0.8, "na": 0.9, "cl": 2.3, "so4": 0.6, "alkalinity": 4.0}


@pytest.mark.parametrize(
    ("change", "field", "value", "words"),
    [
        ({"ca": -0.1}, "ca", -0.1, "ca is -0.1 mmol/kg; accepted is 0 to 10,000 mmol/kg."),
        ({"ca": [1.0, -2.0]}, "ca", -2.0, "ca is -2 mmol/kg at index 1"),
        ({"mg": [[1.0, 2.0], [3.0, -4.0]]}, "mg", -4.0, "at index (1, 1)"),
        ({"ph": 14.1}, "ph", 14.1, "ph is 14.1; accepted is 0 to 14."),
        ({"ph": -1}, "ph", -1.0, "accepted is 0 to 14"),
        ({"temp_c": 101}, "temp_c", 101.0, "temp_c is 101 °C; accepted is 0 to 100 °C."),
        ({"temp_c": -0.5}, "temp_c", -0.5, "accepted is 0 to 100 °C"),
        ({"na": 20_000}, "na", 20_000.0, "accepted is 0 to 10,000 mmol/kg"),
        ({"na": float("inf")}, "na", float("inf"), "na is inf mmol/kg"),
        ({"cl": "much"}, "cl", "much", "a number or an array of numbers is accepted"),
        ({"dic": 4.0}, "ph, alkalinity, dic", ["ph", "alkalinity", "dic"], "exactly two of ph, alkalinity and dic"),
        ({"ph": None}, "ph, alkalinity, dic", ["alkalinity"], "Given here: alkalinity."),
        ({"data": "wateq"}, "data", "wateq", 'are "pb1982" or "usgs2024"'),
        ({"ca": [1.0, 2.0], "mg": [1.0, 2.0, 3.0]}, "shape", "(2,), (3,)", "do not fit together"),
    ],
)
def test_refusal_names_field_value_and_what_is_accepted(change, field, value, words):
    """An impossible value raises InputError with its field, the value, and what is accepted."""
    with pytest.raises(InputError) as refused:
        Solution(**HARD | change)

    assert refused.value.field == field
    assert refused.value.value == value
    assert words in str(refused.value)


def test_scalars_become_floats_and_arrays_are_closed():
    """Whole numbers and numpy scalars turn into floats; an array is copied and cannot be changed afterwards."""
    calcium = np.array([1.0, 2.0])
    water = Solution(**HARD | {"ca": calcium, "mg": np.float64(1), "na": 2})
    calcium[0] = 9.0

    assert type(water.mg) is float
    assert type(water.na) is float
    assert water.ca.tolist() == [1.0, 2.0]
    with pytest.raises(ValueError, match="read-only"):
        water.ca[0] = 3.0


def test_unknown_is_not_impossible():
    """NaN stands for not known and is taken."""
    assert np.isnan(Solution(**HARD | {"ca": float("nan")}).ca)


def test_equality_is_by_value():
    """Two Solutions with the same values are equal, arrays and unknowns included."""
    assert Solution(**HARD) == Solution(**HARD)
    assert Solution(**HARD) != Solution(**HARD | {"ca": 2.5})
    holed = HARD | {"ca": [1.0, float("nan")]}
    assert Solution(**holed) == Solution(**holed)
    assert Solution(**HARD) != "a water"


def test_change_keeps_two_of_three():
    """A solved water that is changed keeps alkalinity and carbon, unless pH is what was changed."""
    solved = speciate(Solution(**HARD)).solution

    more = solved.change(ca=3.0)
    sour = solved.change(ph=6.5)

    assert (more.ph, more.ca, more.dic) == (None, 3.0, solved.dic)
    assert (sour.ph, sour.alkalinity) == (6.5, None)
    assert Solution(**HARD).change(na=5.0).ph == 7.3


def test_shape_is_that_of_all_fields():
    """Fields broadcast together."""
    assert Solution(**HARD).shape == ()
    assert Solution(**HARD | {"temp_c": [[10.0], [20.0]], "ca": [1.0, 2.0, 3.0]}).shape == (2, 3)
