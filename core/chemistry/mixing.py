"""Waters blended: totals mix, pH and CO2 are solved, never averaged."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from core.chemistry.columns import conserved, resolved
from core.chemistry.solution import HIGHEST, TOTALS, Solution, Value, common_shape, number, within
from core.chemistry.thermodynamics import check_data
from core.errors import InputError


def mix(solutions: Sequence[Solution], shares: Sequence[ArrayLike] | ArrayLike, *, data: str | None = None) -> Solution:
    """The blend of any number of waters, closed to gas, in shares by mass of water.

    shares: one for each water, numbers or arrays, zero or more; they are taken relative to their sum. Temperature
    mixes as heat does. The data set is that of the waters unless another is named; it must then be one for all.
    """
    waters = list(solutions)
    parts = _parts(waters, shares)
    chosen = check_data(data) if data else _common_data(waters)
    common_shape(*parts, *(np.empty(water.shape) for water in waters))
    whole = sum(parts)
    if np.any(np.asarray(whole) == 0.0):
        raise InputError("shares", 0.0, "The shares add up to zero; at least one must be above zero.")
    weights = [part / whole for part in parts]
    carbonate = [conserved(water, chosen) for water in waters]
    fields = {name: _blend(weights, [getattr(w, name) for w in waters]) for name in ("temp_c", *TOTALS)}
    fields["alkalinity"] = _blend(weights, [c[0] for c in carbonate])
    fields["dic"] = _blend(weights, [c[1] for c in carbonate])
    return resolved(Solution(**fields, data=chosen, why=_first_reason([c[2] for c in carbonate])))


def _parts(waters: list[Solution], shares: Sequence[ArrayLike] | ArrayLike) -> list[Value]:
    given: list[Any] = list(shares) if isinstance(shares, Sequence | np.ndarray) else [shares]
    if not waters or len(given) != len(waters):
        raise InputError(
            "shares",
            len(given),
            f"There are {len(waters)} waters and {len(given)} shares; one share for each is needed.",
        )
    return [within("shares", number("shares", share), 0.0, HIGHEST, "") for share in given]


def _common_data(waters: list[Solution]) -> str:
    sets = {water.data for water in waters}
    if len(sets) > 1:
        said = " and ".join(sorted(sets))
        raise InputError("data", said, f"The waters come from different data sets ({said}); name one for the blend.")
    return sets.pop()


def _blend(weights: list[Value], values: list[Value]) -> Value:
    """Sum of weight times value; a water that has no share leaves no trace, even where it is not known."""
    terms = [np.where(np.asarray(w) == 0.0, 0.0, w * v) for w, v in zip(weights, values, strict=True)]
    total = sum(terms)
    return float(total) if np.ndim(total) == 0 else np.asarray(total)


def _first_reason(reasons: list[str | NDArray[np.object_]]) -> str | NDArray[np.object_]:
    told: NDArray[np.object_] = np.asarray(reasons[0], dtype=object)
    for reason in reasons[1:]:
        told = np.where(told == "", np.asarray(reason, dtype=object), told)
    return told if np.ndim(told) else str(told)
