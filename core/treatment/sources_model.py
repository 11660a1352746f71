"""Limits of a blend of several sources as a linear program, and sources that may stand still.

    within(case, cost, rows, ...) -> LinearProgram    shares of the demand as unknowns, limits as rows
    with_stops(case, program, start=None) -> Optimum  sources stand still, or give at least their least flow

Unknown are the shares of the demand, so that a concentration of the blend is a sum of shares times concentrations.
A source that may stand still below its least flow makes two problems of one: that choice is branched on, nearest
first, until no better blend is left to be found.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace
from math import inf

import numpy as np
from numpy.typing import NDArray

from core.treatment.limits import Limit
from core.treatment.linear_program import Corner, LinearProgram, Optimum, solve
from core.treatment.sources_case import Case

Floats = NDArray[np.float64]

HAIR = 1e-9  # relative: a cost or an aim this near to another is the same
STANDING = 1e-7  # a share below this is none
NODES = 600  # choices of standing sources that are looked at


@dataclass(frozen=True, slots=True)
class Row:
    """A row over shares and further unknowns."""

    factors: Floats  # on the shares
    low: float = -inf
    high: float = inf
    more: tuple[tuple[int, float], ...] = ()  # (further unknown, factor)


def limit_rows(case: Case, limits: Iterable[Limit] | None = None) -> list[Row]:
    """Rows of the linear limits of a case, in their order."""
    chosen = case.limits if limits is None else limits
    return [Row(case.values(limit.parameter), limit.low, limit.high) for limit in chosen]


def within(
    case: Case,
    cost: Sequence[float] | Floats,
    rows: Sequence[Row] | None = None,
    more: Sequence[tuple[float, float, float]] = (),
    low: Floats | None = None,
    high: Floats | None = None,
    total: float = 1.0,
) -> LinearProgram:
    """A program over the shares (and further unknowns, each given as cost, lowest, highest): sum of shares first.

    rows: those of the limits unless others are given. low, high: bounds of the shares, from the flow ranges unless
    given; sources that may stand still are let down to zero, `with_stops` sees to the rest.
    """
    chosen = limit_rows(case) if rows is None else rows
    n, k = len(case.sources), len(more)
    matrix = np.zeros((len(chosen) + 1, n + k))
    matrix[0, :n] = 1.0
    sides = np.empty((2, len(chosen) + 1))
    sides[:, 0] = total
    for i, row in enumerate(chosen, start=1):
        matrix[i, :n] = row.factors
        for j, factor in row.more:
            matrix[i, n + j] = factor
        sides[:, i] = row.low, row.high
    extra = np.array(more, dtype=float).reshape(k, 3)
    lowest = np.where(case.may_stop, 0.0, case.least) if low is None else low
    return LinearProgram(
        np.concatenate([np.asarray(cost, dtype=float), extra[:, 0]]),
        matrix,
        sides[0],
        sides[1],
        np.concatenate([lowest, extra[:, 1]]),
        np.concatenate([case.most if high is None else high, extra[:, 2]]),
    )


def with_stops(case: Case, program: LinearProgram, start: Corner | None = None) -> Optimum:
    """The best of a program in which sources stand still or give at least their least flow.

    The choice is branched on where it is not yet made, the cheaper branch first; a branch that cannot beat the best
    blend known is left alone. "undecided" should there be too many choices, which a dozen sources never reach in
    practice.
    """
    best = solve(program, start)
    if best.verdict != "optimal" or not case.may_stop.any():
        return best
    open_, found, looked = [(best.cost, program, best)], None, 1
    while open_:
        open_.sort(key=lambda node: -node[0])
        bound, node, optimum = open_.pop()
        if found is not None and bound >= found.cost - HAIR * max(1.0, abs(found.cost)):
            continue
        source = _undecided(case, optimum)
        if source is None:
            found = optimum
            continue
        for low, high in ((0.0, 0.0), (case.least[source], case.most[source])):
            part = _bounded(node, source, low, high)
            answer = solve(part, optimum.corner)
            looked += 1
            if answer.verdict == "optimal":
                open_.append((answer.cost, part, answer))
        if looked > NODES:
            return replace(best, verdict="undecided")
    return found if found is not None else replace(best, verdict="infeasible", conflict=(), conflict_bounds=())


def _undecided(case: Case, optimum: Optimum) -> int | None:
    """A source that gives some, but less than its least flow; the one farthest from standing still."""
    x = optimum.x[: len(case.sources)]
    between = case.may_stop & (x > STANDING) & (x < case.least - STANDING)
    return int(np.where(between, x, 0.0).argmax()) if between.any() else None


def _bounded(program: LinearProgram, unknown: int, low: float, high: float) -> LinearProgram:
    lows, highs = program.low.copy(), program.high.copy()
    lows[unknown], highs[unknown] = low, high
    return replace(program, low=lows, high=highs)
