"""pH, saturation and lime of a blend of several sources, and the search for a blend that keeps limits on them.

    judge(case, x) -> Judged | None      what the blend really is; None where a source that gives lacks an analysis
    search(case, served) -> Judged       the best blend found that keeps every limit; `kept` is False if none was

What mixes by share is settled by the linear program. pH and saturation do not mix: they are computed for each blend
anew, from alkalinity and dissolved carbon, which do. So the linear optimum is judged first; where it fails, blends of
the feasible corners are tried, and from the best of them the limits are approached by linear programs that take the
chemistry as straight near a point, each step checked with the chemistry as it is. No step is random, and their number
is bounded. That finds a good blend, it does not prove that there is no cheaper one; and where none was found, that is
not proof that there is none.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from itertools import combinations
from math import inf, nan

import numpy as np
from numpy.typing import NDArray

from core.chemistry import Solution, precipitation_potential, speciate
from core.treatment.limits import Limit, keeps
from core.treatment.linear_program import solve
from core.treatment.sources_aims import Served, score, weighed
from core.treatment.sources_case import CHEMISTRY_NEEDS, Case
from core.treatment.sources_model import STANDING, Row, within
from core.treatment.sources_waters import Waters

Floats = NDArray[np.float64]

SIZE = {"ph": 1.0, "saturation": 1.0, "ccpp": 20.0, "calcite dissolution": 20.0}  # one violation against another
INSIDE = 1e-6  # of SIZE: aimed so far inside a limit, so that the last digits of the chemistry do not lie across it
NUDGE = 1e-3  # share moved to feel the slope
STARTS = 2  # blends from which the limits are approached
STEPS = 12  # towards the limits, and again as many along them
WIDEST, NARROWEST = 0.5, 1e-4  # how far, in share, the chemistry is taken as straight
ALONG = np.array([1.0, 0.9, 0.75, 0.5, 0.3, 0.15, 0.05])  # parts of a step that are tried
GAIN = 1e-7  # relative: a step that gains less is the last
ENOUGH_LIME = 1.0  # penalty of a violation of SIZE against the rest, while the limits are approached


@dataclass(frozen=True, slots=True)
class Judged:
    """A blend with its chemistry."""

    kept: bool  # every limit on pH, saturation and lime
    x: Floats  # shares of the demand
    water: Solution | None
    ph: float
    saturation: float  # index of calcite, at the temperature of the blend
    ccpp: float  # mg/L CaCO3 that would precipitate (+) or dissolve (-)
    values: tuple[tuple[Limit, float], ...]  # each limit on pH, saturation and lime, with the value of the blend
    assumed: tuple[str, ...]  # parameters that were not measured: taken as none, calcium as three quarters of hardness
    why: str  # why there is no answer, else empty
    of_sources: tuple[tuple[str, float], ...]  # each source that gives, with the lime it would precipitate by itself
    tried: int = 1  # blends whose chemistry was computed
    dearer_by: float = nan  # what these limits cost: a m³ against the cheapest blend without them

    def value(self, limit: Limit) -> float:
        """Value of the blend for one of the limits; NaN for another."""
        return next((value for known, value in self.values if known == limit), nan)


def judge(case: Case, x: Floats) -> Judged | None:
    """The chemistry of one blend; None where a source that gives was not measured well enough for it."""
    giving = x > STANDING
    if not np.isfinite(x).all() or not giving.any():
        return None
    if any(np.isnan(case.values(name)[giving]).any() for name in CHEMISTRY_NEEDS):
        return None
    giving_only = replace(case, sources=tuple(s for s, gives in zip(case.sources, giving, strict=True) if gives))
    return _judged(Waters(giving_only), giving_only, x[giving], x)


def _judged(waters: Waters, case: Case, parts: Floats, x: Floats) -> Judged:
    water = waters.blend(parts)
    alone = precipitation_potential(waters.blends(np.eye(len(parts))))
    values = waters.values(parts[None, :], case.chemical)[:, 0]
    species = speciate(water)
    return Judged(
        all(keeps(float(value), limit) for value, limit in zip(values, case.chemical, strict=True)),
        x,
        species.solution,
        species.ph,
        species.si_calcite,
        precipitation_potential(water),
        tuple((limit, float(value)) for limit, value in zip(case.chemical, values, strict=True)),
        waters.assumed,
        str(species.why),
        tuple(
            (source.name, float(lime))
            for source, lime, part in zip(case.sources, alone, parts, strict=True)  # type: ignore[call-overload]
            if part > STANDING
        ),
        waters.tried,
    )


def search(case: Case, served: Served) -> Judged:
    """The best blend found that keeps the limits on pH, saturation and lime as well as the linear ones.

    Sources that may stand still do so as in `served`, and if that leads nowhere all of them run.
    """
    waters = Waters(case)
    best: Floats | None = None
    miss = inf
    for low, high in _running(case, served.x):
        found = _Search(case, waters, low, high).run(served.x)
        if found is None:
            continue
        missed = float(_violation(waters.values(found[None, :], case.chemical), case.chemical)[0])
        if missed < miss:
            best, miss = found, missed
        if missed == 0.0:
            break
    shares = served.x if best is None else best
    judged = _judged(waters, case, shares, shares)
    dearer = max(float(case.cost @ (shares - served.x)), 0.0) if judged.kept else nan
    return replace(judged, tried=waters.tried, dearer_by=dearer)


def _running(case: Case, x: Floats) -> list[tuple[Floats, Floats]]:
    """Bounds of the shares: sources that may stand still as in this blend, then all running."""
    stopped = case.may_stop & (x <= STANDING)
    patterns = [(np.where(stopped, 0.0, case.least), np.where(stopped, 0.0, case.most))]
    if stopped.any() and case.least.sum() <= 1.0:
        patterns.append((case.least, case.most))
    return patterns


def _violation(values: Floats, limits: Sequence[Limit]) -> Floats:
    """How far blends lie outside the limits, summed in units of SIZE; infinite where there is no answer."""
    outside = np.zeros(values.shape[1])
    for row, limit in zip(values, limits, strict=True):
        beyond = np.maximum(row - limit.high, 0.0) + np.maximum(limit.low - row, 0.0)
        kept = np.array([keeps(float(value), limit) for value in row])
        outside += np.where(kept, 0.0, beyond / SIZE[limit.parameter])
    return np.where(np.isnan(outside), inf, outside)


class _Search:
    """The search among blends whose sources run or stand in one way."""

    def __init__(self, case: Case, waters: Waters, low: Floats, high: Floats) -> None:
        self.case, self.waters, self.low, self.high = case, waters, low, high
        self.limits = case.chemical

    def run(self, x: Floats) -> Floats | None:
        """The best blend found, or the one that violates least; None where not even the linear limits can be kept."""
        corners = self._corners(x)
        if not len(corners):
            return None
        pairs = [(corners[i] + corners[j]) / 2.0 for i, j in combinations(range(len(corners)), 2)]
        blends = np.vstack([corners, *(pair[None, :] for pair in pairs), corners.mean(axis=0)[None, :]])
        missed = self._missed(blends)
        order = np.lexsort((score(self.case, blends), missed))
        ends = []
        for start in blends[order[:STARTS]]:
            ends.append(self._along(self._towards(start)))
        ends = np.array(ends)
        best = np.lexsort((score(self.case, ends), self._missed(ends)))[0]
        return ends[best]

    def _missed(self, blends: Floats) -> Floats:
        return _violation(self.waters.values(blends, self.limits), self.limits)

    def _corners(self, x: Floats) -> Floats:
        """Blends that keep the linear limits and lie far apart: the optimum, the ends of what moves pH."""
        found = [x] if np.all((x >= self.low - STANDING) & (x <= self.high + STANDING)) else []
        for column in self.waters.directions():
            for sign in (1.0, -1.0):
                answer = solve(within(self.case, sign * column, low=self.low, high=self.high))
                if answer.verdict == "optimal":
                    found.append(answer.x)
        return np.unique(np.round(np.array(found).reshape(-1, len(x)), 12), axis=0)

    def _slopes(self, x: Floats) -> tuple[Floats, Floats]:
        """Value for each limit at a blend, and how it changes per share of each source."""
        n = len(x)
        total = x.sum()
        moved = x + NUDGE * (total * np.eye(n) - x)
        values = self.waters.values(np.vstack([x, moved]), self.limits)
        return values[:, 0], (values[:, 1:] - values[:, :1]) / NUDGE / total

    def _step(
        self, x: Floats, here: Floats, slopes: Floats, reach: float, bent: Floats, *, free: bool
    ) -> Floats | None:
        """The best blend within reach, the chemistry taken as straight; `free`: violations allowed, at a price."""
        rows, unknowns = [], []
        for i, limit in enumerate(self.limits):
            size = SIZE[limit.parameter]
            # value + slopes·(y - x) + bent, as a row over y
            shift = float(slopes[i] @ x) - here[i] - bent[i]
            inside = min(INSIDE * size, (limit.high - limit.low) / 4.0)
            more = ((2 * i, 1.0), (2 * i + 1, -1.0)) if free else ()
            rows.append(Row(slopes[i], limit.low + inside + shift, limit.high - inside + shift, more))
            if free:
                unknowns += [(ENOUGH_LIME / size, 0.0, inf)] * 2
        low, high = np.maximum(self.low, x - reach), np.minimum(self.high, x + reach)
        if free:
            program = within(self.case, np.zeros(len(x)), _with_limits(self.case, rows), unknowns, low, high)
        else:
            program = weighed(self.case, rows, unknowns, low, high)
        answer = solve(program)
        return answer.x[: len(x)] if answer.verdict == "optimal" else None

    def _towards(self, x: Floats) -> Floats:
        """From a blend towards the limits, until they are kept or no step helps."""
        missed, reach = float(self._missed(x[None, :])[0]), WIDEST
        for _ in range(STEPS):
            if missed == 0.0 or reach < NARROWEST:
                break
            here, slopes = self._slopes(x)
            if not np.isfinite(slopes).all():
                break
            goal = self._step(x, here, slopes, reach, np.zeros(len(here)), free=True)
            if goal is None:
                break
            points = x + ALONG[:, None] * (goal - x)
            outcomes = self._missed(points)
            best = int(outcomes.argmin())
            if outcomes[best] < missed * (1.0 - GAIN):
                x, missed = points[best], float(outcomes[best])
                reach = min(2.0 * reach, WIDEST) if best == 0 else reach * float(ALONG[best])
            else:
                reach /= 4.0
        return x

    def _along(self, x: Floats) -> Floats:
        """From a blend that keeps the limits to a better one, and so on; others are left as they are."""
        if self._missed(x[None, :])[0] > 0.0:
            return x
        value, reach = float(score(self.case, x[None, :])[0]), WIDEST
        for _ in range(STEPS):
            if reach < NARROWEST:
                break
            here, slopes = self._slopes(x)
            straight = np.zeros(len(here))
            goal = self._step(x, here, slopes, reach, straight, free=False)
            if goal is None:
                break
            points = x + ALONG[:, None] * (goal - x)
            # The limits bend: aim once more, by as much inside as the first goal turned out to lie outside.
            bent = self.waters.values(goal[None, :], self.limits)[:, 0] - here - slopes @ (goal - x)
            again = self._step(x, here, slopes, reach, bent, free=False) if np.isfinite(bent).all() else None
            if again is not None:
                points = np.vstack([points, x + ALONG[:, None] * (again - x)])
            scores = np.where(self._missed(points) == 0.0, score(self.case, points), inf)
            best = int(scores.argmin())
            gain = value - float(scores[best])
            if gain > GAIN * max(1.0, abs(value)):
                x, value = points[best], float(scores[best])
                reach = min(1.5 * reach, WIDEST)
            else:
                reach /= 4.0
        return x


def _with_limits(case: Case, rows: list[Row]) -> list[Row]:
    return [*(Row(case.values(limit.parameter), limit.low, limit.high) for limit in case.limits), *rows]
