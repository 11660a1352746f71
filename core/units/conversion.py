"""Turning a number from one unit into another: plain numbers without numpy, arrays and lists with it."""

from __future__ import annotations

import math
from functools import lru_cache
from typing import TYPE_CHECKING, overload

from core.errors import AmbiguousUnit, InputError, UnitError
from core.units.lookup import QUANTITIES, find_unit, meaning, quantity_named
from core.units.typed import LONGEST
from core.units.unit import Unit

if TYPE_CHECKING:
    from numpy import float64
    from numpy.typing import ArrayLike, NDArray

_LARGEST = 2**53  # whole numbers up to here are floats to the last digit
_SAME = 1e-12  # two ratios closer than this are one conversion


@overload
def convert(value: float, from_unit: str | Unit, to_unit: str | Unit, quantity: str | None = None) -> float: ...
@overload
def convert(
    value: ArrayLike, from_unit: str | Unit, to_unit: str | Unit, quantity: str | None = None
) -> float | NDArray[float64]: ...
def convert(value, from_unit, to_unit, quantity=None):  # type: ignore[no-untyped-def]
    """The same amount in another unit, at full precision.

    Parameters
    ----------
    value : number or array_like
        What was read, in `from_unit`. NaN travels. A plain number needs no numpy.
    from_unit, to_unit : str or Unit
        However they are written ("gr/gal", "°d"); see `find_unit`.
    quantity : str, optional
        What is measured: "hardness", "sodium", "flow", ... Left out, it is the one quantity that both units
        measure. Hardness goes first where both are symbols of hardness, so that "mmol/L" is Ca + Mg.

    Returns
    -------
    float, or ndarray of the shape of `value`

    Raises UnitError, AmbiguousUnit (with `.choices`) or InputError (a value that is no number).
    """
    from_zero, ratio, to_zero = _between(from_unit, to_unit, quantity)
    if isinstance(value, float) or (type(value) is int and -_LARGEST <= value <= _LARGEST):
        return (float(value) - from_zero) * ratio + to_zero
    return _convert_array(value, from_zero, ratio, to_zero)


def _convert_array(value: ArrayLike, from_zero: float, ratio: float, to_zero: float) -> float | NDArray[float64]:
    import numpy as np  # here, so that a plain number is converted before numpy is there

    try:
        given = np.asarray(value)
        if given.dtype.kind not in "biufO" or any(isinstance(item, (str, bytes)) for item in given.flat):
            raise TypeError
        numbers = given.astype(float)
    except (TypeError, ValueError, OverflowError):
        raise InputError("value", value, "The value to convert must be a number or an array of numbers.") from None
    with np.errstate(over="ignore", invalid="ignore"):
        result = (numbers - from_zero) * ratio + to_zero
    return float(result) if result.ndim == 0 else result


@lru_cache(maxsize=2048)
def _between(from_unit: str | Unit, to_unit: str | Unit, quantity: str | None) -> tuple[float, float, float]:
    """Zero of the one unit, ratio, zero of the other: what a conversion needs, looked up once."""
    one, other = _pair(from_unit, to_unit, quantity)
    if one == other:
        return 0.0, 1.0, 0.0
    return one.offset, one.factor / other.factor, other.offset


def _pair(from_unit: str | Unit, to_unit: str | Unit, quantity: str | None) -> tuple[Unit, Unit]:
    given = [unit.quantity for unit in (from_unit, to_unit) if isinstance(unit, Unit)]
    if quantity is not None or given:
        name = quantity_named(quantity) if quantity is not None else given[0]
        return find_unit(from_unit, name), find_unit(to_unit, name)
    pairs = _shared(str(from_unit)[: LONGEST + 1], str(to_unit)[: LONGEST + 1])
    if not pairs:
        raise _unlike(from_unit, to_unit)
    one, other = pairs[0]
    ratio = one.factor / other.factor
    if one.quantity == "hardness" or all(math.isclose(a.factor / b.factor, ratio, rel_tol=_SAME) for a, b in pairs):
        return one, other
    raise _which_quantity(pairs)


def _shared(from_unit: str, to_unit: str) -> list[tuple[Unit, Unit]]:
    """Both units in each quantity that they both measure; hardness comes first."""
    return [
        (one, other)
        for quantity in QUANTITIES
        if isinstance(one := meaning(from_unit, quantity), Unit)
        and isinstance(other := meaning(to_unit, quantity), Unit)
    ]


def _unlike(from_unit: str | Unit, to_unit: str | Unit) -> UnitError:
    """Why two units do not meet; an unknown or ambiguous one raises its own error first."""
    one, other = find_unit(from_unit), find_unit(to_unit)
    return UnitError(
        f"{one.symbol} measures {one.quantity} and {other.symbol} measures {other.quantity}: "
        "the one cannot be turned into the other."
    )


def _which_quantity(pairs: list[tuple[Unit, Unit]]) -> AmbiguousUnit:
    one, other = pairs[0]
    choices = tuple(dict.fromkeys(f"{a.symbol} ({a.quantity})" for a, _ in pairs))
    names = ", ".join(dict.fromkeys(a.quantity for a, _ in pairs))
    return AmbiguousUnit(
        f"From {one.symbol} to {other.symbol} depends on what is dissolved; say one of {names}.", choices
    )
