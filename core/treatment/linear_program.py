"""The least cost under linear limits, exactly, for a few dozen unknowns: a small dense solver of our own.

    LinearProgram(cost, rows, row_low, row_high, low, high)  cost·x least, row_low ≤ rows·x ≤ row_high, low ≤ x ≤ high
    solve(program, start=None) -> Optimum                      .verdict .x .cost .activity .price .conflict .corner

The bounded primal simplex method [DANTZIG63]: each row gets a variable of its own, equal to the row's
activity and bounded by the row's limits, so that limits of rows and of unknowns are one kind of thing.
Phase one lowers the sum of what lies outside its bounds, phase two the cost. The steepest price enters;
after steps that gain nothing the rule of [BLAND77] chooses, which cannot go round in circles. At the end
everything is computed anew from the rows as given.

A phone has no room for a general solver, and needs none: this one is held against one in the tests.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import ArrayLike, NDArray

from core.errors import InputError

Floats = NDArray[np.float64]

FEASIBLE = 1e-9  # outside its bounds by more than this, relative to the bound, is outside
PRICED = 1e-9  # a price smaller than this, relative to the largest cost, is none
SMALLEST_PIVOT = 1e-9
TIE = 1e-12  # two steps closer than this are equally long
STALLED = 6  # steps without gain after which the rule that cannot circle chooses
STEPS = 2000
RESTARTS = 4  # from the rows as given, should rounding have piled up
_BASIC, _LOW, _HIGH, _FREE = range(4)


@dataclass(frozen=True, slots=True)
class LinearProgram:
    """A cost to make least within limits. Infinite limits are none; equal ones fix the row or the unknown.

    n unknowns, m rows. Unknowns should be of one size (shares, say): rows are scaled here, unknowns are not.
    """

    cost: Floats  # n
    rows: Floats  # m × n
    row_low: Floats  # m
    row_high: Floats  # m
    low: Floats  # n
    high: Floats  # n


@dataclass(frozen=True, slots=True)
class Optimum:
    """What came out: "optimal", "infeasible", "unbounded", or "undecided" where rounding hides the truth.

    x, cost and activity (rows·x) are NaN unless optimal. price: by how much the least cost changes when the
    limit that holds a row moves up by one (zero where the row is not held). reduced: the same for a bound
    that holds an unknown. conflict: where infeasible, the rows, and conflict_bounds the unknowns, whose
    limits cannot all hold: a set that contradicts itself, not always the smallest such.
    """

    verdict: str
    x: Floats
    cost: float
    activity: Floats
    price: Floats
    reduced: Floats
    degenerate: bool = False
    conflict: tuple[int, ...] = ()
    conflict_bounds: tuple[int, ...] = ()
    steps: int = 0
    corner: Corner | None = None


@dataclass(frozen=True, slots=True)
class Corner:
    """Where a search ended: which variables are basic, and at which bound the others stand.

    A program of the same size that differs little is solved in fewer steps from here.
    """

    basis: NDArray[np.intp]
    stands: NDArray[np.int_]


def program(
    cost: ArrayLike, rows: ArrayLike, row_low: ArrayLike, row_high: ArrayLike, low: ArrayLike, high: ArrayLike
) -> LinearProgram:
    """A linear program from lists; InputError where the sizes do not fit or a number is missing."""
    cost = np.asarray(cost, dtype=float)
    n = cost.size
    rows = np.asarray(rows, dtype=float).reshape(-1, n) if n else np.zeros((np.size(row_low), 0))
    m = len(rows)
    made = LinearProgram(
        cost,
        rows,
        *(np.broadcast_to(np.asarray(v, dtype=float), (m,)) for v in (row_low, row_high)),
        *(np.broadcast_to(np.asarray(v, dtype=float), (n,)) for v in (low, high)),
    )
    if not (np.isfinite(made.cost).all() and np.isfinite(made.rows).all()):
        raise InputError("linear program", None, "A cost or a coefficient is missing or not finite.")
    if any(np.isnan(bound).any() for bound in (made.row_low, made.row_high, made.low, made.high)):
        raise InputError("linear program", None, "A limit is missing.")
    return made


def solve(given: LinearProgram, start: Corner | None = None) -> Optimum:
    """The least cost within the limits, or that there is none. start: the corner of a program of the same size."""
    size = np.abs(given.rows).max(axis=1, initial=0.0)
    size = np.where(size > 0.0, size, 1.0)
    simplex = _Simplex(given, size)
    crossed = np.flatnonzero(simplex.low > simplex.high)
    if crossed.size:
        return _infeasible(_without_answer(given, "infeasible", simplex), crossed, given.cost.size)
    if start is not None:
        simplex.go_to(start)
    verdict = _settled(simplex)
    if verdict == "infeasible":
        return _infeasible(_without_answer(given, verdict, simplex), simplex.contradiction(), given.cost.size)
    if verdict != "optimal":
        return _without_answer(given, verdict, simplex)
    n = given.cost.size
    x = simplex.values[:n]
    prices = simplex.prices(simplex.cost)
    activity = given.rows @ x
    return Optimum(
        verdict,
        x,
        float(given.cost @ x),
        activity,
        prices[n:] / size,
        prices[:n],
        simplex.degenerate(),
        steps=simplex.steps,
        corner=simplex.corner(),
    )


def _settled(simplex: _Simplex) -> str:
    """Step to the end, compute the table anew, and again until nothing moves any more."""
    for _ in range(RESTARTS):
        pivots = simplex.pivots
        verdict = simplex.run()
        if simplex.pivots == pivots or verdict == "undecided":
            return verdict
        if not simplex.start_anew():
            break
    return "undecided"


def _infeasible(answer: Optimum, members: NDArray[np.intp], n: int) -> Optimum:
    rows = tuple(int(i) - n for i in members if i >= n)
    bounds = tuple(int(i) for i in members if i < n)
    return replace(answer, conflict=rows, conflict_bounds=bounds)


def _without_answer(given: LinearProgram, verdict: str, simplex: _Simplex) -> Optimum:
    m, n = given.rows.shape
    none, nothing = np.full(n, np.nan), np.full(m, np.nan)
    return Optimum(verdict, none, float("nan"), nothing, nothing, none, steps=simplex.steps, corner=simplex.corner())


class _Simplex:
    """The tableau: every basic variable as a combination of the others, and where each variable stands."""

    def __init__(self, given: LinearProgram, size: Floats) -> None:
        m, n = given.rows.shape
        self.matrix = np.hstack([-given.rows / size[:, None], np.eye(m)])  # matrix · (x, activity) = 0
        self.low = np.concatenate([given.low, given.row_low / size])
        self.high = np.concatenate([given.high, given.row_high / size])
        self.cost = np.concatenate([given.cost, np.zeros(m)])
        self.basis = np.arange(n, n + m)
        self.stands = np.full(n + m, _BASIC)
        self.stands[:n] = np.where(np.isfinite(given.low), _LOW, np.where(np.isfinite(given.high), _HIGH, _FREE))
        self.values = np.zeros(n + m)
        self.table = self.matrix.copy()
        self.steps = 0
        self.pivots = 0
        with np.errstate(invalid="ignore"):
            self.slack_low = FEASIBLE * (1.0 + np.where(np.isfinite(self.low), np.abs(self.low), 0.0))
            self.slack_high = FEASIBLE * (1.0 + np.where(np.isfinite(self.high), np.abs(self.high), 0.0))
        self.fixed = self.low == self.high
        self._place()

    def _resting(self, wanted: int | NDArray[np.int_]) -> NDArray[np.int_]:
        """The bound each variable can rest at: the one wanted, else the other, else none."""
        has_low, has_high = np.isfinite(self.low), np.isfinite(self.high)
        at_high = has_high & ((wanted == _HIGH) | ~has_low)
        return np.where(at_high, _HIGH, np.where(has_low, _LOW, _FREE))

    def corner(self) -> Corner:
        """Where the search stands."""
        return Corner(self.basis.copy(), self.stands.copy())

    def go_to(self, corner: Corner) -> None:
        """Begin at the corner of a similar program; from the start where it is none of this one."""
        kept = self.basis, self.stands
        self.basis = corner.basis.copy()
        self.stands = self._resting(corner.stands)
        self.stands[self.basis] = _BASIC
        if not self.start_anew():
            self.basis, self.stands = kept
            self.table = self.matrix.copy()
            self._place()

    def _place(self) -> None:
        """Put every variable that is not basic at its bound, and compute the basic ones."""
        at = self.stands
        self.values = np.where(at == _LOW, self.low, np.where(at == _HIGH, self.high, 0.0))
        self.values[self.basis] = 0.0
        self.values[self.basis] = -(self.table @ self.values)

    def outside(self) -> Floats:
        """-1 for a basic variable below its bounds, +1 above, 0 within."""
        basis = self.basis
        held = self.values[basis]
        below = held < self.low[basis] - self.slack_low[basis]
        above = held > self.high[basis] + self.slack_high[basis]
        return above.astype(float) - below

    def prices(self, cost: Floats) -> Floats:
        """Change of the cost when a variable that is not basic rises by one."""
        found = cost - cost[self.basis] @ self.table
        found[self.basis] = 0.0
        return found

    def run(self) -> str:
        """Step until nothing can be gained."""
        stalled = 0
        while self.steps < STEPS:
            self.steps += 1
            outside = self.outside()
            seeking = bool(outside.any())
            prices = -(outside @ self.table) if seeking else self.prices(self.cost)
            entering = self._entering(prices, seeking, careful=stalled >= STALLED)
            if entering < 0:
                return "infeasible" if seeking else "optimal"
            length = self._step(entering, prices[entering] < 0.0, outside, careful=stalled >= STALLED)
            if length == np.inf:
                return "unbounded"
            stalled = stalled + 1 if length <= TIE else 0
        return "undecided"

    def _entering(self, prices: Floats, seeking: bool, *, careful: bool) -> int:
        """A variable whose move pays, or -1; the steepest, or where care is asked for the first [BLAND77]."""
        prices[self.basis] = 0.0
        prices[self.fixed] = 0.0
        at = self.stands
        gain = np.where(at == _LOW, -prices, np.where(at == _HIGH, prices, np.abs(prices)))
        least = PRICED if seeking else PRICED * max(1.0, float(np.abs(self.cost).max(initial=0.0)))
        if careful:
            paying = np.flatnonzero(gain > least)
            return int(paying[0]) if paying.size else -1
        best = int(gain.argmax()) if gain.size else -1
        return best if best >= 0 and gain[best] > least else -1

    def _step(self, entering: int, rising: bool, outside: Floats, *, careful: bool) -> float:
        """Move one variable as far as the others allow; how far. Infinite where nothing stops it."""
        basis = self.basis
        rate = -self.table[:, entering] if rising else self.table[:, entering].copy()
        rate[np.abs(rate) < SMALLEST_PIVOT] = 0.0
        held = self.values[basis]
        # The bound each basic variable would meet: one that is outside stops where it comes in, if it does.
        up = np.where(outside < 0.0, self.low[basis], np.where(outside > 0.0, np.inf, self.high[basis]))
        down = np.where(outside > 0.0, self.high[basis], np.where(outside < 0.0, -np.inf, self.low[basis]))
        stop = np.where(rate > 0.0, up, down)
        with np.errstate(divide="ignore", invalid="ignore"):
            lengths = np.where(rate == 0.0, np.inf, (stop - held) / rate)
        lengths = np.maximum(lengths, 0.0)
        shortest = float(lengths.min(initial=np.inf))
        own = float(self.high[entering] - self.low[entering])
        length = min(shortest, own)
        if not np.isfinite(length):
            return np.inf
        self.values[basis] = held + rate * length
        self.values[entering] += length if rising else -length
        if own <= shortest:
            self.stands[entering] = _HIGH if rising else _LOW
            self.values[entering] = self.high[entering] if rising else self.low[entering]
            return length
        ties = np.flatnonzero(lengths <= shortest + TIE * (1.0 + shortest))
        row = int(ties[basis[ties].argmin()] if careful else ties[np.abs(rate[ties]).argmax()])
        self._pivot(row, entering, at_high=stop[row] == self.high[basis[row]] and rate[row] != 0.0)
        return length

    def _pivot(self, row: int, entering: int, *, at_high: bool) -> None:
        leaving = self.basis[row]
        if self.low[leaving] == self.high[leaving]:
            at_high = False
        self.stands[leaving] = _HIGH if at_high else _LOW
        self.values[leaving] = self.high[leaving] if at_high else self.low[leaving]
        self.stands[entering] = _BASIC
        self.basis[row] = entering
        self.pivots += 1
        pivot_row = self.table[row] / self.table[row, entering]
        self.table -= np.outer(self.table[:, entering], pivot_row)
        self.table[row] = pivot_row

    def start_anew(self) -> bool:
        """Compute the table again from the rows as given; False where they have become too alike to tell
        apart.
        """
        try:
            self.table = np.linalg.solve(self.matrix[:, self.basis], self.matrix)
        except np.linalg.LinAlgError:
            return False
        self._place()
        return True

    def degenerate(self) -> bool:
        """Whether a basic variable happens to lie at one of its bounds as well."""
        held, low, high = self.values[self.basis], self.low[self.basis], self.high[self.basis]
        slack = np.maximum(self.slack_low[self.basis], self.slack_high[self.basis])
        with np.errstate(invalid="ignore"):
            return bool(np.any((np.abs(held - low) <= slack) | (np.abs(held - high) <= slack)))

    def contradiction(self) -> NDArray[np.intp]:
        """Variables whose bounds together cannot hold: those with a price in the sum of what is outside."""
        outside = self.outside()
        prices = -(outside @ self.table)
        prices[self.basis] = 0.0
        members = np.abs(prices) > PRICED
        members[self.basis[outside != 0.0]] = True
        return np.flatnonzero(members)
