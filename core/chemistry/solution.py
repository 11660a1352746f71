"""A water: what is dissolved in it, and which two of pH, alkalinity and dissolved carbon are known."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, fields
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from core.chemistry.thermodynamics import check_data
from core.errors import InputError

Floats = NDArray[np.float64]
Value = float | Floats

# Field of a Solution -> total in the tables of core.chemistry.reactions; sulfate has its own balance
IONS = {
    "ca": "Ca",
    "mg": "Mg",
    "na": "Na",
    "k": "K",
    "nh4": "NH4",
    "fe": "Fe",
    "mn": "Mn",
    "sr": "Sr",
    "ba": "Ba",
    "cl": "Cl",
    "no3": "NO3",
    "f": "F",
    "si": "Si",
}
TOTALS = (*IONS, "so4")  # what mixes and dilutes besides alkalinity and dissolved carbon
KNOWN = ("ph", "alkalinity", "dic")

_NUMBERS = ("temp_c", *KNOWN, *TOTALS)

HIGHEST = 10_000.0  # mmol/kg; more than any of these salts dissolves in the waters this is for
LIMITS = {"temp_c": (0.0, 100.0, "°C"), "ph": (0.0, 14.0, ""), "alkalinity": (-HIGHEST, HIGHEST, "meq/kg")}


@dataclass(frozen=True, eq=False, kw_only=True)
class Solution:
    """A water, per kilogram of water; every field a number or an array, which broadcast together.

    temp_c in °C, 0 to 100. Totals in mmol/kg water: ca, mg, na, k, nh4, fe (II), mn (II), sr, ba, cl, so4, no3, f,
    si. Exactly two of these three are given: ph; alkalinity in meq/kg (bicarbonate, carbonate and hydroxide, free
    and paired, less acid; it may be negative in acid water); dic, all dissolved carbonate and CO2, in mmol/kg. A
    Solution that comes out of a calculation holds all three.

    `data` names the carbonate data set it was, or is to be, computed with. NaN stands for not known and travels.
    An impossible value raises InputError, which names the field and the first place of it in an array.
    """

    temp_c: Value
    ph: Value | None = None
    alkalinity: Value | None = None
    dic: Value | None = None
    ca: Value = 0.0
    mg: Value = 0.0
    na: Value = 0.0
    k: Value = 0.0
    nh4: Value = 0.0
    fe: Value = 0.0
    mn: Value = 0.0
    sr: Value = 0.0
    ba: Value = 0.0
    cl: Value = 0.0
    so4: Value = 0.0
    no3: Value = 0.0
    f: Value = 0.0
    si: Value = 0.0
    data: str = "pb1982"
    why: str | NDArray[np.object_] = ""  # of a result: why there is no answer, where there is none

    def __post_init__(self) -> None:
        check_data(self.data)
        given = [name for name in KNOWN if getattr(self, name) is not None]
        if len(given) != 2:
            raise InputError("ph, alkalinity, dic", given, _two_wanted(given))
        for name in ("temp_c", *given, *TOTALS):
            object.__setattr__(self, name, _checked(name, getattr(self, name)))
        _shape(self)

    def __eq__(self, other: object) -> bool:
        if not isinstance(other, Solution):
            return NotImplemented
        pairs = ((getattr(self, f.name), getattr(other, f.name)) for f in fields(self) if f.name != "why")
        return all(a == b if isinstance(a, str) or a is None or b is None else _same(a, b) for a, b in pairs)

    @property
    def shape(self) -> tuple[int, ...]:
        """Shape that all fields broadcast to; () for one water."""
        return _shape(self)

    def change(self, **changes: Any) -> Solution:
        """The same water with some fields changed; alkalinity and dic are kept before pH if all three are held."""
        values = {f.name: getattr(self, f.name) for f in fields(self)}
        values.update(changes)
        if all(values[name] is not None for name in KNOWN):
            loose = [name for name in KNOWN if name not in changes]
            values[loose[0] if loose else "ph"] = None
        return Solution(**values)

    def items(self) -> Iterator[tuple[str, Value]]:
        """The totals that are not zero everywhere, by field name. [mmol/kg]"""
        for name in TOTALS:
            value = getattr(self, name)
            if not isinstance(value, float) or value != 0.0:
                yield name, value


def solved(**values: Any) -> Solution:
    """A Solution from a calculation, holding pH, alkalinity and dissolved carbon alike; nothing is checked."""
    solution = object.__new__(Solution)
    for field in fields(Solution):
        object.__setattr__(solution, field.name, values.get(field.name, field.default))
    return solution


def number(field: str, value: ArrayLike) -> Value:
    """A number or an array of numbers, or InputError in a sentence. A scalar comes back as a float."""
    if type(value) is float:
        return value
    try:
        array = np.array(value, dtype=float)
    except (TypeError, ValueError):
        raise InputError(field, value, f"{field} is {value!r}; a number or an array of numbers is accepted.") from None
    if array.ndim == 0:
        return float(array)
    array.setflags(write=False)
    return array


def within(field: str, value: Value, low: float, high: float, unit: str) -> Value:
    """The value, or InputError naming the first place outside low to high; NaN passes."""
    if isinstance(value, float):
        if low <= value <= high or value != value:
            return value
        bad, where = value, ""
    else:
        wrong = ~((value >= low) & (value <= high)) & ~np.isnan(value)
        if not wrong.any():
            return value
        place = tuple(int(i) for i in np.argwhere(wrong)[0])
        bad, where = float(value[place]), f" at index {place[0] if len(place) == 1 else place}"
    said = f"{bad:g} {unit}".rstrip()
    accepted = f"{low:g} to {high:,.0f} {unit}".rstrip()
    raise InputError(field, bad, f"{field} is {said}{where}; accepted is {accepted}.")


def _checked(name: str, value: ArrayLike) -> Value:
    low, high, unit = LIMITS.get(name, (0.0, HIGHEST, "mmol/kg"))
    return within(name, number(name, value), low, high, unit)


def _shape(solution: Solution) -> tuple[int, ...]:
    return common_shape(*(v for n in _NUMBERS if isinstance(v := getattr(solution, n), np.ndarray)))


def common_shape(*values: Value) -> tuple[int, ...]:
    """Shape that values broadcast to, or InputError if they do not fit together."""
    shapes = {np.shape(v) for v in values}
    try:
        return np.broadcast_shapes(*shapes)
    except ValueError:
        listed = ", ".join(str(s) for s in sorted(shapes))
        raise InputError("shape", listed, f"The fields have shapes {listed}, which do not fit together.") from None


def _same(a: Value, b: Value) -> bool:
    return bool(np.array_equal(a, b, equal_nan=True))


def _two_wanted(given: list[str]) -> str:
    told = "none" if not given else " and ".join(given) if len(given) < 3 else "all three"
    return (
        "A water needs exactly two of ph, alkalinity and dic: the third follows from them. "
        f"Given here: {told}. Leave out one you measured least well, or add one."
    )
