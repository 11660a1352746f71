"""What a blend of several sources is asked for: the sources, the demand, limits and targets, checked.

    Source(name, analysis, most [L/min], least=0 [L/min], cost=0 [per m³], may_stop=True)
    Target(parameter, value)
    make_case(sources, demand [L/min], limits=(), targets=(), aim="cost", off=()) -> Case     InputError in a sentence

`analysis` maps a parameter of `limits.PARAMETERS` to its value in the core's unit. What is asked for and what is
known need not match: `Case.missing` says what somebody asked for and nobody measured, `Case.unchecked` which limits
of a rule set cannot be judged. Neither is ever taken for kept.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field
from functools import cached_property
from math import inf, isfinite, isnan, nan

import numpy as np
from numpy.typing import NDArray

from core.errors import InputError
from core.treatment.limits import PARAMETERS, Limit

Floats = NDArray[np.float64]

AIMS = ("cost", "target", "margin")
MOST_SOURCES = 12
CHEMISTRY_NEEDS = ("temperature", "ph", "alkalinity", "hardness")  # without these no saturation and no pH of a blend


@dataclass(frozen=True, slots=True)
class Source:
    """A well or a treated stream: what is in it, how much of it there is, what it costs."""

    name: str
    analysis: Mapping[str, float]  # parameter -> value, core units; absent or NaN: not measured
    most: float  # L/min
    least: float = 0.0  # L/min, if it runs at all
    cost: float = 0.0  # per m³, in whatever money
    may_stop: bool = True  # whether it may also stand still; otherwise it gives at least `least`

    def value(self, parameter: str) -> float:
        """Value of a parameter [core unit]; NaN where not measured.

        Of hardness, calcium and magnesium the third follows from the other two.
        """
        analysis = self.analysis
        value = analysis.get(parameter, nan)
        if not isnan(value):
            return value
        hardness, calcium, magnesium = (analysis.get(name, nan) for name in ("hardness", "calcium", "magnesium"))
        if parameter == "hardness":
            return calcium + magnesium
        if parameter == "calcium":
            return max(hardness - magnesium, 0.0) if magnesium == magnesium else nan
        if parameter == "magnesium":
            return max(hardness - calcium, 0.0) if calcium == calcium else nan
        return nan


@dataclass(frozen=True, slots=True)
class Target:
    """A value the blend is to have, in the unit of the core."""

    parameter: str
    value: float


@dataclass(frozen=True)
class Case:
    """One question, checked: the sources that are on, and the limits split by how they can be met."""

    sources: tuple[Source, ...]  # those that are on
    off: tuple[Source, ...]
    demand: float  # L/min
    limits: tuple[Limit, ...]  # linear ones that every source on was measured for
    chemical: tuple[Limit, ...]  # on pH, saturation and lime, judged by the chemistry
    targets: tuple[Target, ...]
    aim: str
    missing: tuple[tuple[str, str], ...]  # (source, parameter) asked for and not measured
    unchecked: tuple[tuple[Limit, tuple[str, ...]], ...] = field(default=())  # limits, and the sources not measured

    @cached_property
    def least(self) -> Floats:
        """Least flows as shares of the demand."""
        return np.array([source.least for source in self.sources]) / self.demand

    @cached_property
    def most(self) -> Floats:
        """Largest flows as shares of the demand."""
        return np.array([source.most for source in self.sources]) / self.demand

    @cached_property
    def cost(self) -> Floats:
        """Cost of each source. [per m³]"""
        return np.array([source.cost for source in self.sources])

    @cached_property
    def may_stop(self) -> NDArray[np.bool_]:
        """Which sources may stand still though they have a least flow."""
        return np.array([source.may_stop and source.least > 0.0 for source in self.sources], dtype=bool)

    @cached_property
    def _columns(self) -> dict[str, Floats]:
        return {}

    def values(self, parameter: str) -> Floats:
        """Value of a parameter in each source. [core unit]"""
        if parameter not in self._columns:
            self._columns[parameter] = np.array([source.value(parameter) for source in self.sources])
        return self._columns[parameter]


def make_case(
    sources: Iterable[Source],
    demand: float,
    limits: Iterable[Limit] = (),
    targets: Iterable[Target] = (),
    aim: str = "cost",
    off: Iterable[str] = (),
) -> Case:
    """The question, or InputError that says in a sentence what is wrong with it."""
    sources, limits, targets, off = tuple(sources), tuple(limits), tuple(targets), set(off)
    _check_sources(sources, off)
    _check_wishes(demand, limits, targets, aim)
    on = tuple(source for source in sources if source.name not in off and source.most > 0.0)
    known, missing, unchecked = _sorted_by_knowledge(on, limits, targets)
    return Case(
        on,
        tuple(source for source in sources if source not in on),
        float(demand),
        tuple(limit for limit in known if PARAMETERS[limit.parameter].mixes),
        tuple(limit for limit in known if not PARAMETERS[limit.parameter].mixes),
        targets,
        aim,
        missing,
        unchecked,
    )


def _sorted_by_knowledge(
    on: tuple[Source, ...], limits: tuple[Limit, ...], targets: tuple[Target, ...]
) -> tuple[list[Limit], tuple[tuple[str, str], ...], tuple[tuple[Limit, tuple[str, ...]], ...]]:
    """Limits that can be judged; what is missing for those asked for; limits of rule sets that cannot be judged."""
    known, missing, unchecked = [], {}, []
    for limit in limits:
        gaps = {(s.name, p): None for s in on for p in _needed(limit.parameter) if isnan(s.value(p))}
        if not gaps:
            known.append(limit)
        elif limit.typed:
            missing |= gaps
        else:
            unchecked.append((limit, tuple(dict.fromkeys(name for name, _ in gaps))))
    for target in targets:
        missing |= {(s.name, target.parameter): None for s in on if isnan(s.value(target.parameter))}
    return known, tuple(missing), tuple(unchecked)


def _needed(parameter: str) -> tuple[str, ...]:
    return (parameter,) if PARAMETERS[parameter].mixes else CHEMISTRY_NEEDS


def _check_sources(sources: tuple[Source, ...], off: set[str]) -> None:
    if not 1 <= len(sources) <= MOST_SOURCES:
        text = f"There are {len(sources)} sources; 1 to {MOST_SOURCES} can be blended."
        raise InputError("sources", len(sources), text)
    names = [source.name for source in sources]
    doubled = next((name for name in names if names.count(name) > 1), None)
    if doubled is not None:
        raise InputError("sources", doubled, f"Two sources are called “{doubled}”. Give each its own name.")
    strange = off - set(names)
    if strange:
        raise InputError("off", sorted(strange), f"No source is called “{sorted(strange)[0]}”.")
    for source in sources:
        _check_source(source)


def _check_source(source: Source) -> None:
    name = source.name
    if not (isfinite(source.least) and isfinite(source.most) and 0.0 <= source.least <= source.most):
        raise InputError(
            "flow",
            (source.least, source.most),
            f"The flow range of {name} cannot be: enter a least flow of zero or more and a largest flow not below it.",
        )
    if not isfinite(source.cost):
        raise InputError("cost", source.cost, f"The cost of {name} is not a number.")
    for parameter, value in source.analysis.items():
        if parameter not in PARAMETERS:
            text = f"{name} gives “{parameter}”, which is not known; known are {', '.join(PARAMETERS)}."
            raise InputError("analysis", parameter, text)
        if (value < 0.0 and parameter not in ("alkalinity", "temperature")) or abs(value) == inf:
            raise InputError(
                "analysis", value, f"{PARAMETERS[parameter].words} of {name} is {value:g}: that cannot be."
            )


def _check_wishes(demand: float, limits: tuple[Limit, ...], targets: tuple[Target, ...], aim: str) -> None:
    if not (isfinite(demand) and demand > 0.0):
        raise InputError("demand", demand, "Enter the flow that is needed, above zero.")
    if aim not in AIMS:
        raise InputError("aim", aim, f"The aim “{aim}” is not known; known are {', '.join(AIMS)}.")
    for limit in limits:
        if limit.parameter not in PARAMETERS or isnan(limit.low) or isnan(limit.high) or limit.low > limit.high:
            raise InputError("limit", limit.parameter, f"The limit for “{limit.parameter}” cannot be one.")
    for target in targets:
        if target.parameter not in PARAMETERS or not PARAMETERS[target.parameter].mixes:
            raise InputError(
                "target", target.parameter, f"A blend cannot be aimed at “{target.parameter}”: set a limit for it."
            )
        if not isfinite(target.value):
            raise InputError("target", target.value, f"The target for {PARAMETERS[target.parameter].words} is missing.")
    if aim == "target" and not targets:
        raise InputError("target", None, "Enter what the blend is to have, or aim at the least cost.")
    if aim == "margin" and not any(PARAMETERS[limit.parameter].mixes for limit in limits):
        raise InputError("limit", None, "Choose limits, so that there is a margin to keep from them.")
