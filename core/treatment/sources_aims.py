"""What a blend of several sources is to be best at: cost, nearness to targets, margin to the limits.

    serve(case) -> Served | None              shares that serve the aim best, None where none keeps the limits
    weighed(case, ...) -> LinearProgram       the aim and the cost in one sum, for the search of the chemistry
    score(case, x) -> that sum                for many blends at once

Targets and margins come first, the cost decides between blends that serve them equally well. Where every source
costs the same, the cheapest blend is any: the one farthest from its limits is taken.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from math import inf, isfinite

import numpy as np
from numpy.typing import NDArray

from core.treatment.linear_program import LinearProgram, Optimum
from core.treatment.sources_case import Case, Target
from core.treatment.sources_model import HAIR, Row, limit_rows, with_stops, within

Floats = NDArray[np.float64]
Unknown = tuple[float, float, float]  # cost, lowest, highest

FIRST = 1e3  # how many times the first aim, in shares, outweighs the largest cost where both stand in one sum


@dataclass(frozen=True, slots=True)
class Served:
    """Shares that serve the aim best."""

    x: Floats  # share of each source that is on
    optimum: Optimum  # of the last program solved
    program: LinearProgram  # that program
    priced: bool  # whether its prices are those of limits and targets, in cost per m³


@dataclass(frozen=True, slots=True)
class _Aim:
    """The first aim as rows and further unknowns whose weighted sum is to be least."""

    rows: tuple[Row, ...] = ()
    unknowns: tuple[Unknown, ...] = ()


def serve(case: Case) -> Served | None:
    """Shares that serve the aim of a case best; None where no shares keep its limits.

    ArithmeticError where rounding hides the answer.
    """
    aim = _first_aim(case)
    if not aim.unknowns:
        return _solved(case, within(case, case.cost), priced=True)
    n = len(case.sources)
    rows = [*limit_rows(case), *aim.rows]
    first = with_stops(case, within(case, np.zeros(n), rows, aim.unknowns))
    if first.verdict == "infeasible":
        return None
    _decided(first)
    if case.aim == "target" and first.cost <= HAIR:
        exact = [*limit_rows(case), *(_target_row(case, target) for target in case.targets)]
        served = _solved(case, within(case, case.cost, exact), priced=True)
        if served is not None:
            return served
    return _then_cheapest(case, rows, aim, first)


def _solved(case: Case, program: LinearProgram, *, priced: bool) -> Served | None:
    found = with_stops(case, program)
    if found.verdict == "infeasible":
        return None
    return Served(_decided(found).x[: len(case.sources)], found, program, priced)


def _decided(found: Optimum) -> Optimum:
    if found.verdict != "optimal":
        raise ArithmeticError(f"the blend is {found.verdict}")
    return found


def _then_cheapest(case: Case, rows: list[Row], aim: _Aim, first: Optimum) -> Served:
    """The cheapest of the blends that serve the first aim as well as can be."""
    n = len(case.sources)
    held = Row(
        np.zeros(n),
        high=first.cost + HAIR * max(1.0, abs(first.cost)),
        more=tuple((j, cost) for j, (cost, _, _) in enumerate(aim.unknowns)),
    )
    free = [(0.0, low, high) for _, low, high in aim.unknowns]
    program = within(case, case.cost, [*rows, held], free)
    second = _solved(case, program, priced=False)
    return second if second is not None else Served(first.x[:n], first, program, priced=False)


def _first_aim(case: Case) -> _Aim:
    if case.aim == "target":
        return _near_targets(case)
    if case.aim == "margin" or len(set(case.cost.tolist())) < 2:
        return _far_from_limits(case)
    return _Aim()


def _target_row(case: Case, target: Target) -> Row:
    return Row(case.values(target.parameter), target.value, target.value)


def _target_size(case: Case, target: Target) -> float:
    """What a deviation is a share of: the target, or where it is zero the largest value met."""
    return abs(target.value) or float(np.abs(case.values(target.parameter)).max()) or 1.0


def _near_targets(case: Case) -> _Aim:
    """Least sum of deviations, each as a share of its target: two unknowns a target, above and below."""
    rows, unknowns = [], []
    for i, target in enumerate(case.targets):
        rows.append(replace(_target_row(case, target), more=((2 * i, -1.0), (2 * i + 1, 1.0))))
        unknowns += [(1.0 / _target_size(case, target), 0.0, inf)] * 2
    return _Aim(tuple(rows), tuple(unknowns))


def _far_from_limits(case: Case) -> _Aim:
    """Largest smallest margin, as a share of its limit; limits at zero have none."""
    rows = [Row(factors, high=side, more=((0, size),)) for factors, side, size in _margin_sides(case)]
    return _Aim(tuple(rows), ((-1.0, 0.0, 1.0),)) if rows else _Aim()


def _margin_sides(case: Case) -> list[tuple[Floats, float, float]]:
    """Each side of a limit as factors·x ≤ side, with the size that a margin to it is a share of."""
    found = []
    for limit in case.limits:
        for side, sign in ((limit.high, 1.0), (limit.low, -1.0)):
            if isfinite(side) and side != 0.0:
                found.append((sign * case.values(limit.parameter), sign * side, abs(side)))
    return found


def _weight(case: Case) -> float:
    return FIRST * (1.0 + float(np.abs(case.cost).max(initial=0.0)))


def weighed(
    case: Case,
    rows: Sequence[Row] = (),
    unknowns: Sequence[Unknown] = (),
    low: Floats | None = None,
    high: Floats | None = None,
) -> LinearProgram:
    """The limits of a case, and further rows and unknowns, with the aim and the cost in one sum."""
    aim, weight, k = _first_aim(case), _weight(case), len(unknowns)
    aimed = [replace(row, more=tuple((k + j, factor) for j, factor in row.more)) for row in aim.rows]
    costly = [(weight * cost, lowest, highest) for cost, lowest, highest in aim.unknowns]
    return within(case, case.cost, [*limit_rows(case), *rows, *aimed], [*unknowns, *costly], low, high)


def score(case: Case, x: Floats) -> Floats:
    """The sum that `weighed` makes least, for blends that keep the limits, one a row of shares."""
    total = x @ case.cost
    if case.aim == "target":
        for target in case.targets:
            miss = np.abs(x @ case.values(target.parameter) - target.value)
            total = total + _weight(case) * miss / _target_size(case, target)
    elif _first_aim(case).unknowns:
        margins = [(side - x @ factors) / size for factors, side, size in _margin_sides(case)]
        total = total - _weight(case) * np.clip(np.min(margins, axis=0), 0.0, 1.0)
    return total
