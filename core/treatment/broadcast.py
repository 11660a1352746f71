"""Arithmetic that gives floats for floats and arrays for arrays.

A single job is answered at each key press in a browser, where every numpy call costs microseconds; ten
thousand draws of an uncertain job are answered with arrays. `broadcasts` lets one formula do both: numbers
go in as plain floats and stay so, lists and arrays go in as arrays. Inside such a formula `+ - * /` by a
constant are enough; where a divisor can be zero or a choice depends on the data, the functions below do it
for both kinds. NaN travels, nothing warns.
"""

from __future__ import annotations

from bisect import bisect_right
from collections.abc import Callable, Sequence
from functools import wraps
from math import nan
from typing import Any, TypeVar

import numpy as np

F = TypeVar("F", bound=Callable[..., Any])
Number = Any  # a float, or an array of floats


def _as_number(value: Any) -> Any:
    kind = type(value)
    if kind is float or kind is str or kind is bool or value is None:
        return value
    if kind is int:
        return float(value)
    if isinstance(value, np.ndarray | np.generic | list | tuple):
        array = np.asarray(value)
        if array.dtype.kind not in "iufb":
            return value
        return array.astype(float) if array.ndim else float(array)
    return value


def broadcasts(function: F) -> F:
    """Make a formula take numbers, lists and arrays: floats in, float out; anything longer in, array out."""

    @wraps(function)
    def call(*args: Any, **kwargs: Any) -> Any:
        args = tuple(map(_as_number, args))
        for name, value in kwargs.items():
            kwargs[name] = _as_number(value)
        result = function(*args, **kwargs)
        if type(result) is float or (type(result) is np.ndarray and result.ndim):
            return result
        return float(result)

    return call  # type: ignore[return-value]


def ratio(numerator: Number, denominator: Number) -> Number:
    """Quotient; NaN where the denominator is zero."""
    if type(numerator) is float and type(denominator) is float:
        return numerator / denominator if denominator else nan
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        return np.where(np.equal(denominator, 0.0), nan, np.divide(numerator, denominator))


def larger(first: Number, second: Number) -> Number:
    """The larger of two, element by element; NaN where either is NaN."""
    if type(first) is float and type(second) is float:
        return first if first != first or first >= second else second
    return np.maximum(first, second)


def smaller(first: Number, second: Number) -> Number:
    """The smaller of two, element by element; NaN where either is NaN."""
    if type(first) is float and type(second) is float:
        return first if first != first or first <= second else second
    return np.minimum(first, second)


def either(condition: Any, yes: Number, no: Number) -> Number:
    """The first value where the condition holds, the second elsewhere."""
    if type(condition) is bool:
        return yes if condition else no
    return np.where(condition, yes, no)


def only_where(condition: Any, value: Number) -> Number:
    """The value where the condition holds, NaN elsewhere."""
    return either(condition, value, nan)


def power(base: Number, exponent: Number) -> Number:
    """Power of a number above zero; NaN where the base is not."""
    if type(base) is float:
        return base**exponent if base > 0.0 else nan
    with np.errstate(invalid="ignore"):
        positive = np.where(np.greater(base, 0.0), base, nan)
    return positive**exponent


def interpolate(at: Number, xs: Sequence[float], ys: Sequence[float]) -> Number:
    """Value on straight lines through the points (xs rising); NaN outside them."""
    if type(at) is not float:
        return np.interp(at, xs, ys, left=nan, right=nan)
    if not xs[0] <= at <= xs[-1]:
        return nan
    if at == xs[-1]:
        return ys[-1]
    left = bisect_right(xs, at) - 1
    slope = (ys[left + 1] - ys[left]) / (xs[left + 1] - xs[left])
    return slope * (at - xs[left]) + ys[left]
