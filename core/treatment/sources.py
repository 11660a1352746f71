"""Several sources blended to a demand: least cost, nearest to a target, or most margin, within every limit.

    Source(name, analysis, most, least=0, cost=0, may_stop=True)         analysis: parameter -> value, core units
    Target(parameter, value);  Turn(name, off=(), demand=None, hours=24)
    blend_sources(sources, demand [L/min], limits=(), targets=(), aim="cost", off=()) -> Blend
    schedule(sources, demand, turns, ...) -> tuple[TurnBlend, ...]        one blend for each turn of the day
    one_off(sources) -> tuple[Turn, ...]                                  all on, then each source off in turn

A Blend says in `verdict` how it stands:
    fits        every limit that can be judged is kept; pH, saturation and lime by the chemistry, not by guess
    none fits   no shares keep the limits: `conflict` says which block and why; the flows are the nearest blend's
    none found  the linear limits can be kept, but no blend was found that also keeps those of the chemistry
    missing     something asked for was not measured: `missing` says what, nothing was computed
    undecided   the rounding of arithmetic hides the answer

Concentrations mix by share; pH, saturation and lime that would dissolve or drop out do not: `sources_chemistry`.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace
from math import isfinite, nan
from types import MappingProxyType

import numpy as np
from numpy.typing import NDArray

from core.errors import InputError
from core.treatment import sources_chemistry as chemistry
from core.treatment.limits import PARAMETERS, Limit, keeps, margin
from core.treatment.sources_aims import Served, serve
from core.treatment.sources_case import Case, Source, Target, make_case
from core.treatment.sources_conflict import Conflict, explain
from core.treatment.sources_model import with_stops

__all__ = ["Blend", "Source", "Target", "Turn", "blend_sources", "one_off", "schedule"]

Floats = NDArray[np.float64]

AT_THE_END = 1e-7  # of the demand: a flow this near to the end of its range is at it
BINDING = 1e-7  # of a limit: a value this near to it is held by it
NEAR = 1e-3  # the same for limits of the chemistry, which are approached in steps, in units of their size
EASED = 0.10  # by how much a limit is eased to say what that would save
NUDGE = 1e-6  # the same, to find a price where several limits meet in one corner


@dataclass(frozen=True, slots=True)
class SourceFlow:
    """What one source gives."""

    name: str
    flow: float  # L/min
    share: float  # of the blend
    stands: str  # "off", "stopped", "at least", "between", "at most"
    gap: float  # per m³: how much cheaper its water would have to be for more of it to pay; negative: what one m³
    # more of it would save; 0 between; NaN where the aim has no price


@dataclass(frozen=True, slots=True)
class LimitState:
    """How the blend stands to one limit."""

    limit: Limit
    value: float  # of the blend
    kept: bool
    margin: float  # as a share of the limit, see `limits.margin`
    holds: str  # "low" or "high" where the limit holds the blend back, else ""
    price: float  # cost of a m³ of blend saved by easing the limit by one unit; 0 if it does not hold, NaN if unpriced
    eased_to: float  # the limit a tenth easier
    eased_saves: float  # cost of a m³ of blend saved by that


@dataclass(frozen=True, slots=True)
class TargetState:
    """What the blend reached of one target."""

    target: Target
    value: float  # of the blend
    price: float  # what a m³ costs more for one unit more of it; NaN where the target was not met, or not aimed at


@dataclass(frozen=True)
class Blend:
    """The answer to one question; the module says what each verdict means."""

    verdict: str
    flows: tuple[SourceFlow, ...]
    cost: float  # per m³ of blend
    values: Mapping[str, float]  # parameter -> value of the blend, where every source that gives was measured
    limits: tuple[LimitState, ...]
    targets: tuple[TargetState, ...]
    margin: float  # the smallest, as a share of its limit; NaN where there is no limit
    demand: float  # L/min
    given: float  # L/min; less than the demand where the sources cannot give it
    missing: tuple[tuple[str, str], ...] = ()
    unchecked: tuple[tuple[Limit, tuple[str, ...]], ...] = ()
    conflict: Conflict | None = None
    chemistry: chemistry.Judged | None = None  # pH and saturation of the blend, where they can be computed

    @property
    def cost_per_day(self) -> float:
        """Cost of a day at this flow."""
        return self.cost * self.given * 1.44


@dataclass(frozen=True, slots=True)
class Turn:
    """A part of the day, or a case to be ready for: what is off, and what is needed then."""

    name: str
    off: tuple[str, ...] = ()
    demand: float | None = None  # L/min; None: as always
    hours: float = 24.0


@dataclass(frozen=True, slots=True)
class TurnBlend:
    """The settings for one turn."""

    turn: Turn
    blend: Blend

    @property
    def volume(self) -> float:
        """Water given in this turn. [L]"""
        return self.blend.given * 60.0 * self.turn.hours

    @property
    def cost(self) -> float:
        """Cost of this turn."""
        return self.blend.cost * self.volume / 1000.0


def blend_sources(
    sources: Iterable[Source],
    demand: float,
    limits: Iterable[Limit] = (),
    targets: Iterable[Target] = (),
    *,
    aim: str = "cost",
    off: Iterable[str] = (),
) -> Blend:
    """Flows of up to 12 sources that meet a demand within limits, by the aim; see the module for the verdicts.

    demand in L/min; limits from `limits.limits_of` or `limits.typed_limit`; aim "cost", "target" (the least sum of
    deviations as shares of the targets, then the cost) or "margin" (the largest smallest margin, then the cost).
    With the aim "cost" targets are not looked at. off: names of sources that are not to run. InputError in a
    sentence where the question cannot be one.
    """
    sources = tuple(sources)
    case = make_case(sources, demand, limits, targets, aim, off)
    if case.missing:
        return _unanswered(case, sources, "missing")
    try:
        served = serve(case)
        if served is None:
            conflict = explain(case)
            return _answer(case, sources, "none fits", conflict.nearest, None, conflict=conflict)
        return _with_chemistry(case, sources, served)
    except ArithmeticError:
        return _unanswered(case, sources, "undecided")


def _with_chemistry(case: Case, sources: tuple[Source, ...], served: Served) -> Blend:
    judged = chemistry.judge(case, served.x)
    if not case.chemical or (judged is not None and judged.kept):
        return _answer(case, sources, "fits", served.x, served, judged)
    found = chemistry.search(case, served)
    verdict = "fits" if found.kept else "none found"
    return _answer(case, sources, verdict, found.x, None, found)


def schedule(
    sources: Iterable[Source],
    demand: float,
    turns: Iterable[Turn],
    limits: Iterable[Limit] = (),
    targets: Iterable[Target] = (),
    *,
    aim: str = "cost",
) -> tuple[TurnBlend, ...]:
    """The settings for each turn, with the sources of that turn off and its own demand."""
    sources, limits, targets = tuple(sources), tuple(limits), tuple(targets)
    made = []
    for turn in turns:
        if not 0.0 < turn.hours <= 24.0:
            raise InputError("hours", turn.hours, f"“{turn.name}” lasts {turn.hours:g} hours; 0 to 24 are accepted.")
        need = demand if turn.demand is None else turn.demand
        made.append(TurnBlend(turn, blend_sources(sources, need, limits, targets, aim=aim, off=turn.off)))
    return tuple(made)


def one_off(sources: Iterable[Source]) -> tuple[Turn, ...]:
    """Turns to be ready for: everything on, then each source off."""
    return (Turn("all on"), *(Turn(f"{source.name} off", (source.name,)) for source in sources))


def _unanswered(case: Case, sources: tuple[Source, ...], verdict: str) -> Blend:
    off = {source.name for source in case.off}
    flows = tuple(
        SourceFlow(s.name, 0.0 if s.name in off else nan, nan, "off" if s.name in off else "", nan) for s in sources
    )
    empty = MappingProxyType({})
    return Blend(verdict, flows, nan, empty, (), (), nan, case.demand, nan, case.missing, case.unchecked)


def _answer(
    case: Case,
    sources: tuple[Source, ...],
    verdict: str,
    x: Floats,
    served: Served | None,
    judged: chemistry.Judged | None = None,
    conflict: Conflict | None = None,
) -> Blend:
    """Everything that is said of a blend with these shares of the demand."""
    x = np.where(x > AT_THE_END, x, 0.0)
    total = float(x.sum())
    if abs(total - 1.0) < len(x) * AT_THE_END:  # the demand is met: only rounding was taken away
        x, total = x / total, 1.0
    parts = x / total if total > 0.0 else np.full(len(x), nan)
    if judged is None:
        judged = chemistry.judge(case, parts)
    values = _values(case, parts)
    states = _limit_states(case, values, judged, served)
    margins = [state.margin for state in states]
    return Blend(
        verdict,
        _flows(case, sources, x, served),
        float(case.cost @ parts),
        values,
        states,
        _target_states(case, values, served),
        min(margins) if margins else nan,
        case.demand,
        total * case.demand,
        unchecked=case.unchecked,
        conflict=conflict,
        chemistry=judged,
    )


def _target_states(case: Case, values: Mapping[str, float], served: Served | None) -> tuple[TargetState, ...]:
    priced = case.aim == "target" and served is not None and served.priced
    first = 1 + len(case.limits)
    return tuple(
        TargetState(
            target,
            values.get(target.parameter, nan),
            float(served.optimum.price[first + i]) if priced and served is not None else nan,
        )
        for i, target in enumerate(case.targets)
    )


def _values(case: Case, parts: Floats) -> Mapping[str, float]:
    values = {}
    giving = parts > 0.0
    for parameter, about in PARAMETERS.items():
        if about.mixes:
            column = case.values(parameter)
            mean = float(column[giving] @ parts[giving]) if giving.any() else nan
            if isfinite(mean):
                values[parameter] = mean
    return MappingProxyType(values)


def _flows(case: Case, sources: tuple[Source, ...], x: Floats, served: Served | None) -> tuple[SourceFlow, ...]:
    place = {source.name: i for i, source in enumerate(case.sources)}
    total = float(x.sum())
    flows = []
    for source in sources:
        i = place.get(source.name)
        if i is None:
            flows.append(SourceFlow(source.name, 0.0, 0.0, "off", nan))
            continue
        share = float(x[i])
        stands = _stands(case, i, share)
        gap = 0.0 if stands == "between" else float(served.optimum.reduced[i]) if served and served.priced else nan
        flows.append(SourceFlow(source.name, share * case.demand, share / total if total else nan, stands, gap))
    return tuple(flows)


def _stands(case: Case, i: int, share: float) -> str:
    if share <= AT_THE_END:
        return "stopped"
    if share >= case.most[i] - AT_THE_END:
        return "at most"
    return "at least" if share <= case.least[i] + AT_THE_END and case.least[i] > 0.0 else "between"


def _limit_states(
    case: Case, values: Mapping[str, float], judged: chemistry.Judged | None, served: Served | None
) -> tuple[LimitState, ...]:
    states = []
    for i, limit in enumerate(case.limits):
        value = values.get(limit.parameter, nan)
        holds = _holds(value, limit)
        price, eased_to, saves = _price(case, i, holds, served)
        states.append(
            LimitState(limit, value, keeps(value, limit), margin(value, limit), holds, price, eased_to, saves)
        )
    for limit in case.chemical:
        value = nan if judged is None else judged.value(limit)
        holds = _holds(value, limit, NEAR * chemistry.SIZE[limit.parameter])
        states.append(LimitState(limit, value, keeps(value, limit), margin(value, limit), holds, nan, nan, nan))
    return tuple(states)


def _holds(value: float, limit: Limit, near: float = 0.0) -> str:
    for side in ("low", "high"):
        at = getattr(limit, side)
        if isfinite(at) and abs(value - at) <= max(BINDING * max(abs(at), 1e-3), near):
            return side
    return ""


def _price(case: Case, i: int, holds: str, served: Served | None) -> tuple[float, float, float]:
    """What easing a limit saves per unit, the limit a tenth easier, and what that saves. [cost per m³]"""
    if served is None or not served.priced:
        return nan, nan, nan
    if not holds:
        return 0.0, nan, nan
    limit = case.limits[i]
    at = getattr(limit, holds)
    step = abs(at) or float(np.abs(case.values(limit.parameter)).max()) or 1.0
    price = abs(float(served.optimum.price[1 + i]))
    if served.optimum.degenerate or limit.low == limit.high:
        price = _saved(case, served, i, holds, NUDGE * step) / (NUDGE * step)
    eased = at + EASED * step * (1.0 if holds == "high" else -1.0)
    return price, eased, _saved(case, served, i, holds, EASED * step)


def _saved(case: Case, served: Served, i: int, holds: str, step: float) -> float:
    """What a m³ of blend costs less once a limit is eased by so much."""
    low, high = served.program.row_low.copy(), served.program.row_high.copy()
    if holds == "high":
        high[1 + i] += step
    else:
        low[1 + i] -= step
    eased = with_stops(case, replace(served.program, row_low=low, row_high=high), served.optimum.corner)
    return max(served.optimum.cost - eased.cost, 0.0) if eased.verdict == "optimal" else nan
