"""Hardness classes: the words of others, with their limits as printed."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.chemistry.classes import NO_CLASS, class_number, class_of, schemes
from core.errors import InputError, UnitError
from core.references import REFERENCES
from core.units import convert
from tests import strategies
from tests.published import rows

ON_THE_LIMITS = [  # scheme, unit, hardness, class; the source is that of the scheme, status there
    ("USGS", "mg/L CaCO3", 60, "soft"),
    ("USGS", "mg/L CaCO3", 61, "moderately hard"),
    ("USGS", "mg/L CaCO3", 180, "hard"),
    ("USGS", "mg/L CaCO3", 181, "very hard"),
    ("WHO", "mg/L CaCO3", 180, "very hard"),
    ("US-TRADE", "gpg", 0.9, "soft"),
    ("US-TRADE", "gpg", 10.5, "hard"),
    ("US-TRADE", "gpg", 10.6, "very hard"),
    ("WRMG", "mmol/L", 1.49, "soft"),
    ("UK-SW", "mg/L CaCO3", 301, "very hard"),
    ("UK-NW", "mg/L CaCO3", 74, "very soft"),
    ("UK-NW", "mg/L CaCO3", 376, NO_CLASS),
    ("CH", "°fH", 42.5, "very hard"),
]


@pytest.mark.parametrize("row", rows("units", what="class"), ids=lambda row: row.id)
def test_class_agrees_with_outside_figure(row):
    """A hardness at or near a limit falls where the law, or our stated choice, puts it."""
    scheme, value, unit = (row.inputs[name] for name in ("scheme", "value", "unit"))

    row.check(name=class_of(value, scheme, unit))


@pytest.mark.parametrize(("scheme", "unit", "hardness", "name"), ON_THE_LIMITS)
def test_limits_as_printed(scheme, unit, hardness, name):
    """Classes begin and end where the printed table says."""
    assert class_of(hardness, scheme, unit) == name


@pytest.mark.parametrize("unit", ["mg/L CaCO3", "°dH", "gpg", "°fH", "mg/L Ca"])
def test_a_limit_stays_one_in_any_unit(unit):
    """2.5 mmol/L is "medium" by WRMG however it is written; a rounding in conversion does not tip it."""
    for limit in (1.5, 2.5):
        assert class_of(convert(limit, "mmol/L", unit, "hardness"), "WRMG", unit) == "medium"


@given(strategies.hardnesses, strategies.hardnesses, st.sampled_from(tuple(schemes())))
def test_harder_is_never_a_softer_class(one, other, scheme):
    """The class number does not fall as hardness rises; above the last class there is none."""
    low, high = class_number(sorted((one, other)), scheme)

    assert low <= high or np.isnan(high)


@pytest.mark.parametrize("scheme", schemes().values(), ids=lambda s: s.key)
def test_schemes_are_sound(scheme):
    """Limits rise, names and limits pair up, the source is in the bibliography with the same status."""
    assert list(scheme.uppers) == sorted(set(scheme.uppers))
    assert len(scheme.names) == len(set(scheme.names)) == len(scheme.uppers) == len(scheme.upper_belongs)
    assert scheme.status == REFERENCES[scheme.source].status
    assert convert(1, scheme.unit, "mg/L CaCO3", "hardness") > 0
    for place, name in enumerate(scheme.names):
        below = scheme.uppers[place] * (1 - 1e-6) if np.isfinite(scheme.uppers[place]) else 1e6
        assert class_of(below, scheme.key, scheme.unit) == name


def test_arrays_and_unknowns():
    """An array gives an array of words; unknown, negative and infinite hardness have no class."""
    words = class_of([[10.0, np.nan], [-1.0, np.inf]], "USGS")

    assert words.tolist() == [["soft", NO_CLASS], [NO_CLASS, NO_CLASS]]
    assert type(class_of(10.0, "USGS")) is str
    assert type(class_number(10.0, "USGS")) is float
    assert class_of([], "USGS").shape == (0,)


def test_unknown_scheme_or_unit_is_refused():
    """A refusal says which schemes there are, or which units."""
    with pytest.raises(InputError, match="known are USGS, US-TRADE"):
        class_of(10, "MARS")
    with pytest.raises(UnitError, match="measures pressure, not hardness"):
        class_of(10, "USGS", "bar")
