"""Why no blend keeps all limits: what blocks, what each limit would have to be, the blend that comes closest.

    explain(case) -> Conflict

The blocking set is irreducible: leave out any one of its members and the others can be kept together. There may be
several such sets in one question; this names one, the flow ranges left out of it where the limits alone suffice.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import inf, isfinite, nan

import numpy as np
from numpy.typing import NDArray

from core.treatment.limits import Limit, keeps
from core.treatment.linear_program import Corner, Optimum, solve
from core.treatment.sources_case import Case
from core.treatment.sources_model import HAIR, Row, limit_rows, with_stops, within

Floats = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Blocking:
    """A side of a limit that blocks, and what it would have to be for the rest to fit."""

    limit: Limit
    side: str  # "low" or "high"
    would_fit_at: float  # unit of the parameter; NaN where easing this one alone is not enough


@dataclass(frozen=True, slots=True)
class Excess:
    """How far the nearest blend lies outside a limit."""

    limit: Limit
    side: str
    value: float  # of the blend
    by: float  # beyond the limit, unit of the parameter
    share: float  # the same as a share of the limit; NaN where the limit is zero


@dataclass(frozen=True, slots=True)
class Conflict:
    """What stands against each other, and the nearest way out."""

    limits: tuple[Blocking, ...]
    at_most: tuple[str, ...]  # sources whose largest flow takes part
    at_least: tuple[str, ...]  # sources whose least flow takes part
    short_by: float  # L/min that the sources cannot give; 0 where they can
    over_by: float  # L/min that they give too much at their least flows
    most_water: float  # L/min that can be had within all limits; 0 where none can
    nearest: Floats  # shares of the demand
    excess: tuple[Excess, ...]  # where the nearest blend lies outside


@dataclass(frozen=True, slots=True)
class _Member:
    """One thing that may block: a side of a limit, or an end of a source's flow range."""

    kind: str  # "low" or "high" of a limit, "least" or "most" of a source
    index: int


def explain(case: Case) -> Conflict:
    """Why the case has no blend within its limits, and the blend that comes closest."""
    least = float(np.where(case.may_stop, 0.0, case.least).sum())
    most = float(case.most.sum())
    members = _irreducible(case)
    nearest = _nearest(case, min(max(1.0, least), most))
    return Conflict(
        tuple(
            Blocking(case.limits[m.index], m.kind, _would_fit_at(case, m)) for m in members if m.kind in ("low", "high")
        ),
        tuple(case.sources[m.index].name for m in members if m.kind == "most"),
        tuple(case.sources[m.index].name for m in members if m.kind == "least"),
        max(1.0 - most, 0.0) * case.demand,
        max(least - 1.0, 0.0) * case.demand,
        _most_water(case) * case.demand,
        nearest,
        _excess(case, nearest),
    )


def _sides(case: Case) -> list[_Member]:
    found = []
    for i, limit in enumerate(case.limits):
        found += [_Member(side, i) for side in ("low", "high") if isfinite(getattr(limit, side))]
    return found


def _irreducible(case: Case) -> list[_Member]:
    """Members that cannot be kept together, none of which can be spared; flow ranges are spared first."""
    n = range(len(case.sources))
    if case.most.sum() < 1.0:
        return [_Member("most", i) for i in n]
    ranges = [_Member("most", i) for i in n] + [_Member("least", i) for i in n if case.least[i] > 0.0]
    sides = _sides(case)
    first = _tried(case, [*ranges, *sides], None)
    if first.verdict != "infeasible":  # it fits where sources may give any part of their flow: the least flows block
        return [_Member("least", i) for i in n if case.may_stop[i]]
    kept, corner = [*ranges, *sides], first.corner
    for some in (sides, [m for m in kept if _named(m, first)]):
        answer = _tried(case, some, corner)
        if answer.verdict == "infeasible":
            kept, corner = some, answer.corner
            break
    for member in tuple(kept):
        answer = _tried(case, [m for m in kept if m is not member], corner)
        if answer.verdict == "infeasible":
            kept, corner = [m for m in kept if m is not member], answer.corner
    return kept


def _named(member: _Member, answer: Optimum) -> bool:
    """Whether the solver names a member in its contradiction; it does not say which side, so both are."""
    if member.kind in ("low", "high"):
        return member.index + 1 in answer.conflict
    return member.index in answer.conflict_bounds


def _tried(case: Case, members: list[_Member], start: Corner | None) -> Optimum:
    """Shares that keep these members and no others; sources that may stand still give any part of their flow."""
    limits = [[-inf, inf] for _ in case.limits]
    low, high = np.zeros(len(case.sources)), np.full(len(case.sources), inf)
    for member in members:
        if member.kind == "most":
            high[member.index] = case.most[member.index]
        elif member.kind == "least":
            low[member.index] = 0.0 if case.may_stop[member.index] else case.least[member.index]
        else:
            limits[member.index][member.kind == "high"] = getattr(case.limits[member.index], member.kind)
    rows = [Row(case.values(limit.parameter), *sides) for limit, sides in zip(case.limits, limits, strict=True)]
    return solve(within(case, np.zeros(len(low)), rows, low=low, high=high), start)


def _would_fit_at(case: Case, member: _Member) -> float:
    """What this side would have to be for a blend to keep all the others; NaN where that is not enough."""
    rows = limit_rows(case)
    row = rows[member.index]
    sides = (-inf, row.high) if member.kind == "low" else (row.low, inf)
    rows[member.index] = Row(row.factors, *sides)
    sign = 1.0 if member.kind == "high" else -1.0
    found = with_stops(case, within(case, sign * row.factors, rows))
    return float(row.factors @ found.x) if found.verdict == "optimal" else nan


def _most_water(case: Case) -> float:
    """Largest share of the demand that can be had within all limits; more than one where the demand is too small."""
    sides = []
    for limit in case.limits:
        values = case.values(limit.parameter)
        if isfinite(limit.high):
            sides.append(Row(values - limit.high, high=0.0))
        if isfinite(limit.low):
            sides.append(Row(values - limit.low, low=0.0))
    n = len(case.sources)
    # Flows instead of shares: their sum is free, and a mean below a limit is a weighted sum below zero.
    free = within(case, np.full(n, -1.0), [*sides, Row(np.ones(n), 0.0, inf)])
    free.row_low[0], free.row_high[0] = 0.0, inf
    found = with_stops(case, free)
    return abs(found.cost) if found.verdict == "optimal" else 0.0


def _nearest(case: Case, total: float) -> Floats:
    """Shares, summing to what the sources can give, with the least sum of excesses as shares of their limits."""
    n = len(case.sources)
    rows, more = [], []
    for limit in case.limits:
        values = case.values(limit.parameter)
        for side, sign in ((limit.high, -1.0), (limit.low, 1.0)):
            if isfinite(side):
                scale = abs(side) or float(np.abs(values).max()) or 1.0
                low, high = (-inf, side) if sign < 0 else (side, inf)
                # Limits hold for what is given, so they scale with the sum where the sources cannot give all.
                rows.append(Row(values / total if total else values, low, high, ((len(more), sign * scale),)))
                more.append((1.0, 0.0, inf))
    first = with_stops(case, within(case, np.zeros(n), rows, more, total=total))
    if first.verdict != "optimal":
        return np.full(n, nan)
    held = Row(
        np.zeros(n), high=first.cost + HAIR * max(1.0, first.cost), more=tuple((j, 1.0) for j in range(len(more)))
    )
    free = [(0.0, low, high) for _, low, high in more]
    second = with_stops(case, within(case, case.cost, [*rows, held], free, total=total))
    return (second if second.verdict == "optimal" else first).x[:n]


def _excess(case: Case, x: Floats) -> tuple[Excess, ...]:
    found, total = [], x.sum()
    for limit in case.limits:
        value = float(case.values(limit.parameter) @ x / total) if total else nan
        if keeps(value, limit) or not total:
            continue
        side = "high" if value > limit.high else "low"
        at = getattr(limit, side)
        by = abs(value - at)
        found.append(Excess(limit, side, value, by, by / abs(at) if at else nan))
    return tuple(found)
