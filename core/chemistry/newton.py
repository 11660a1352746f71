"""Newton's step for the four balances of a water: protons, carbon, sulfur and ionic strength.

A total that only its own ion and pairs share is eliminated beforehand: where the activity of an ion follows from its
total, every product of two sums over its species, divided by that total, comes off the slopes. If a solid holds the
ion instead, its species move with the activities the solid names.
"""

from __future__ import annotations

from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from core.chemistry.model import SLOPES, STRENGTH, SUMS
from core.chemistry.problem import CLOSED, Closure, Contact, Problem

Floats = NDArray[np.float64]

SMALLEST = 1e-300
FEW = 8  # waters


def newton_step(problem: Problem, sums: Floats, strength_sums: Floats, totals: Floats, strength: Floats) -> Floats:
    """The step in the free activities (ln) and in ionic strength that would bring the balances to zero."""
    paired = problem.model.paired
    miss = sums[: STRENGTH + 1].copy()
    miss[:STRENGTH] -= problem.balance
    miss[STRENGTH] -= strength
    slopes = np.empty((4, 4, strength.size))
    slopes[:, :3] = sums[SLOPES].reshape(4, 3, -1)
    slopes[:, 3] = strength_sums[:4]
    rows = sums[SUMS:].reshape(4, len(paired), strength.size)
    columns = rows.copy()
    columns[3] = strength_sums[4:]
    weight = 1.0 / np.maximum(totals[paired], SMALLEST)
    for contact in problem.contacts:
        _hold(problem, contact, miss, slopes, totals, rows, columns)
        weight[paired.index(contact.component)] = 0.0
    slopes -= np.einsum("ipn,jpn->ijn", rows, columns * weight)
    if problem.activity:
        slopes[3, 3] -= 1.0
    else:
        miss[3], slopes[3], slopes[:, 3] = 0.0, 0.0, 0.0
        slopes[3, 3] = -1.0
    return _solved(problem.closure, miss, slopes)


def _hold(
    problem: Problem, contact: Contact, miss: Floats, slopes: Floats, totals: Floats, rows: Floats, columns: Floats
) -> None:
    """A cation held by a solid: its total is free, and moves with the activities the solid names."""
    component = contact.component
    total = totals[component]
    place = problem.model.paired.index(component)
    row, column = rows[:, place], columns[:, place]
    for i, p in enumerate(contact.made):
        if p:
            miss[i] += p * (total - problem.totals[component])
            slopes[i] += p * column
            slopes[:, i] += p * row
            for j, other in enumerate(contact.made):
                slopes[i, j] += p * other * total


def _solved(closure: Closure, miss: Floats, slopes: Floats) -> Floats:
    """The step in the free activities and ionic strength, by elimination; the slopes need no exchange of rows."""
    if closure is not CLOSED:
        answers, moves = _projections(closure)
        miss = answers @ miss
        slopes = np.tensordot(answers, np.tensordot(moves, slopes, axes=(1, 1)), axes=(1, 1))
    if miss.shape[1] <= FEW:
        return _solved_one_by_one(miss, slopes)
    size = len(miss)
    table = np.concatenate((slopes, -miss[:, None]), axis=1)
    for k in range(size - 1):
        factor = table[k + 1 :, k] / table[k, k]
        table[k + 1 :, k + 1 :] -= factor[:, None] * table[k, k + 1 :]
    step = table[:, size]
    for k in reversed(range(size)):
        step[k] /= table[k, k]
        if k:
            step[:k] -= table[:k, k] * step[k]
    return step


def _solved_one_by_one(miss: Floats, slopes: Floats) -> Floats:
    """The same for a few waters, where the calls of the elimination would cost more than its arithmetic."""
    try:
        step = np.linalg.solve(slopes.transpose(2, 0, 1), miss.T[:, :, None])
        return -np.asarray(step[:, :, 0].T, dtype=float)
    except np.linalg.LinAlgError:  # a water without answer: it is left unsolved, and says so
        return np.full_like(miss, np.nan)


@lru_cache(maxsize=8)
def _projections(closure: Closure) -> tuple[Floats, Floats]:
    """Rows that turn balances, and slopes, into those of the free activities and of ionic strength."""
    free = len(closure.moves)
    answers, moves = np.zeros((2, free + 1, 4))
    answers[:free, :3], moves[:free, :3] = closure.answers, closure.moves
    answers[free, 3] = moves[free, 3] = 1.0
    return answers, moves
