"""What every formula of core.treatment promises, tried on all of them: cards, shapes, NaN, empty arrays."""

import importlib
import inspect
import pkgutil

import numpy as np
import pytest
from numpy.testing import assert_array_equal

import core.treatment
from core.references import REFERENCES

MODULES = [
    importlib.import_module(f"core.treatment.{module.name}") for module in pkgutil.iter_modules(core.treatment.__path__)
]
FORMULAS = {
    f"{module.__name__.rpartition('.')[2]}.{name}": function
    for module in MODULES
    for name, function in vars(module).items()
    if hasattr(function, "card") and function.__module__ == module.__name__
}
WITHOUT_KEY = {"definition", "common practice, no source"}
# Ordinary values by unit, three each, so that a formula is tried where it answers.
VALUES = {
    "": (0.2, 0.3, 0.15),
    "mmol/L": (3.9, 1.4, 2.2),
    "mg/L": (1.0, 30.0, 200.0),
    "°C": (10.0, 15.0, 25.0),
    "g/L": (96.2, 128.1, 240.0),
    "WSFU": (6.4, 11.4, 30.0),
    "mm": (203.2, 254.0, 330.2),
}
NAMED = {"bead": (0.4, 0.6, 0.8), "density": (1250.0, 1290.0, 1300.0)}
ORDINARY = (12.0, 31.0, 57.0)


def _arguments(function):
    """Numeric arguments of a formula with three ordinary values each; its words stay at their defaults."""
    parameters = inspect.signature(function).parameters
    chosen = {}
    for name, unit in function.card.takes.items():
        if parameters[name].annotation != "Number":
            continue
        values = NAMED.get(name) or VALUES.get(unit, ORDINARY)
        turn = len(chosen) % 3  # so that two arguments of one unit differ
        chosen[name] = np.array(values[turn:] + values[:turn])
    return chosen


NUMERIC = [name for name, function in FORMULAS.items() if _arguments(function)]


@pytest.fixture(params=NUMERIC)
def function(request):
    """Each formula of numbers in turn."""
    return FORMULAS[request.param]


def test_the_collection_is_not_empty():
    """The formulas are found, or the tests below would pass on nothing."""
    assert len(FORMULAS) >= len(NUMERIC) > 30


@pytest.mark.parametrize("function", FORMULAS.values(), ids=list(FORMULAS))
def test_card_names_real_arguments_and_a_known_source(function):
    """A card speaks of the arguments the function has, and its source is in the bibliography."""
    assert set(function.card.takes) <= set(inspect.signature(function).parameters)
    assert function.card.source in REFERENCES or function.card.source in WITHOUT_KEY
    assert function.card.quantity
    assert function.card.expression


def test_array_equals_scalars(function):
    """An array of questions gets the answers the single ones get, to the last bits; floats stay floats."""
    arrays = _arguments(function)
    answers = function(**arrays)
    assert np.isfinite(answers).any()
    for index in range(3):
        single = function(**{name: float(values[index]) for name, values in arrays.items()})
        assert type(single) is float
        assert single == pytest.approx(answers[index], rel=1e-14, nan_ok=True)


def test_lists_integers_and_numpy_scalars_are_numbers_too(function):
    """A list counts as an array, an integer and a numpy scalar as a float."""
    arrays = _arguments(function)
    assert_array_equal(function(**{name: list(v) for name, v in arrays.items()}), function(**arrays))
    single = {name: float(values[0]) for name, values in arrays.items()}
    assert type(function(**{name: np.float64(v) for name, v in single.items()})) is float
    assert type(function(**{name: np.array(v) for name, v in single.items()})) is float
    assert function(**{name: 3 for name in arrays}) == function(**dict.fromkeys(arrays, 3.0)) or np.isnan(
        function(**dict.fromkeys(arrays, 3.0))
    )


def test_missing_number_stays_missing_and_alone(function):
    """NaN in, NaN out at the same place; its neighbours are untouched. Nothing warns."""
    arrays = _arguments(function)
    whole = function(**arrays)
    for name in arrays:
        holed = dict(arrays)
        holed[name] = np.where([False, True, False], np.nan, arrays[name])
        answers = function(**holed)
        assert np.isnan(answers[1]), name
        assert_array_equal(answers[[0, 2]], whole[[0, 2]])
        assert np.isnan(function(**{key: float(values[1]) for key, values in holed.items()})), name


def test_empty_array_gives_empty_array(function):
    """No question, no answer, no error."""
    assert function(**{name: np.array([]) for name in _arguments(function)}).shape == (0,)


def test_shapes_combine_like_numpys(function):
    """A column against a row gives a table."""
    arrays = _arguments(function)
    if len(arrays) < 2:
        return
    first, *rest = arrays
    shaped = {first: arrays[first][:, None], **{name: arrays[name] for name in rest}}
    assert function(**shaped).shape == (3, 3)


def test_zeros_never_raise(function):
    """Zero everywhere is a poor question, not an error: a number or NaN comes back."""
    arrays = _arguments(function)
    assert type(function(**dict.fromkeys(arrays, 0.0))) is float
    assert function(**{name: np.zeros(2) for name in arrays}).shape == (2,)
