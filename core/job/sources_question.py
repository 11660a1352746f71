"""The question that the Sources section asks: read from the entries, solved, and read off, with cards for working.

source_of(name=…, most=…, least=…, cost=…, may_stop=…, hardness=…, …) -> Stream
ask(demand=…, aim=…, off=…, stream_1=…, limit_1=…, target_1=…) -> Question
solve(question) -> Solved;  flow_of(solved, name), share_of, value_of(solved, parameter), cost_of
"""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from functools import lru_cache
from math import inf, nan
from typing import Any

from core.treatment.limits import Limit, limits_of, typed_limit
from core.treatment.sources import Blend, Source, Target, blend_sources
from core.working import formula


@dataclass(frozen=True, slots=True)
class Stream:
    """One source with its analysis, as a step of the working."""

    name: str
    most: float
    least: float
    cost: float
    may_stop: bool
    analysis: tuple[tuple[str, float], ...]

    @property
    def source(self) -> Source:
        """The source as the treatment takes it."""
        return Source(self.name, dict(self.analysis), self.most, self.least, self.cost, self.may_stop)


@dataclass(frozen=True, slots=True)
class Question:
    """What is asked of the sources."""

    streams: tuple[Stream, ...]
    demand: float
    aim: str
    limits: tuple[Limit, ...]
    targets: tuple[Target, ...]
    off: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Solved:
    """The blend that answers a question; two are alike where verdict and flows are."""

    verdict: str
    flows: tuple[float, ...]
    blend: Blend = field(compare=False)


@formula(
    "Source",
    "what it gives, what it costs, what is in it, as entered",
    unit="",
    takes={"most": "L/min", "least": "L/min"},
    source="definition",
)
def source_of(
    name: str, most: float, may_stop: str = "yes", least: float = 0.0, cost: float = 0.0, **analysis: float
) -> Stream:
    """One source. Its analysis by parameter, in the core's units."""
    return Stream(name, most, least, cost, may_stop == "yes", tuple(sorted(analysis.items())))


@formula("Limit", "as entered", unit="", takes={}, source="definition")
def limit_of(parameter: str, low: float = -inf, high: float = inf) -> Limit:
    """A limit that somebody typed."""
    return typed_limit(parameter, low, high)


@formula("Limits of the rules", "as in the table", unit="", takes={}, source="definition")
def rules_of(rules: str, but: str) -> tuple[Limit, ...]:
    """Limits of a rule set, but for those parameters that somebody typed a limit for."""
    return tuple(limit for limit in limits_of(rules) if limit.parameter not in but.split())


@formula("Target", "as entered", unit="", takes={}, source="definition")
def target_of(parameter: str, value: float) -> Target:
    """What the blend is to have."""
    return Target(parameter, value)


@formula(
    "The question",
    "flows of all sources that meet the demand, keep every limit, and serve the aim best",
    unit="",
    takes={"demand": "L/min"},
    source="definition",
)
def ask(demand: float, aim: str, off: str = "", rules: tuple[Limit, ...] = (), **parts: Any) -> Question:
    """One question; `parts` are its streams, limits and targets; `off` the names of sources that do not run."""
    streams = tuple(part for part in parts.values() if isinstance(part, Stream))
    limits = tuple(part for part in parts.values() if isinstance(part, Limit))
    targets = tuple(part for part in parts.values() if isinstance(part, Target))
    return Question(streams, demand, aim, (*limits, *rules), targets, tuple(filter(None, off.split("\n"))))


@formula(
    "The blend",
    "linear parts solved exactly by the simplex method; pH, saturation and lime with the chemistry",
    unit="",
    takes={"question": ""},
    source="DANTZIG63",
    validity="Concentrations mix by share; pH and saturation do not and are computed for the blend.",
)
def solve(question: Question) -> Solved:
    """The answer to a question; InputError in a sentence where it cannot be one."""
    blend = _solved(question)
    return Solved(blend.verdict, tuple(flow.flow for flow in blend.flows), blend)


@lru_cache(maxsize=64)
def _solved(question: Question) -> Blend:
    return blend_sources(
        [stream.source for stream in question.streams],
        question.demand,
        question.limits,
        question.targets,
        aim=question.aim,
        off=question.off,
    )


def without(question: Question, name: str) -> Question:
    """The same question with one source off."""
    return replace(question, off=(*question.off, name))


@formula("Question without a source", "the same, one more off", unit="", takes={"question": ""}, source="definition")
def without_source(question: Question, name: str) -> Question:
    """The same question with one source off, as a step."""
    return without(question, name)


@formula("Flow of a source", "as the blend has it", unit="L/min", takes={"solved": ""}, source="definition")
def flow_of(solved: Solved, name: str) -> float:
    """Flow of one source. [L/min]"""
    return next((flow.flow for flow in solved.blend.flows if flow.name == name), nan)


@formula(
    "Value of the blend",
    "Σ share × value of the source",
    unit="in the unit of the entry",
    takes={"solved": ""},
    source="definition",
)
def value_of(solved: Solved, parameter: str) -> float:
    """One parameter of the blend, core unit."""
    state = next((s for s in solved.blend.limits if s.limit.parameter == parameter), None)
    return solved.blend.values.get(parameter, nan if state is None else state.value)


@formula("Cost of the blend", "Σ share × cost of the source", unit="per m³", takes={"solved": ""}, source="definition")
def cost_of(solved: Solved) -> float:
    """Cost of a m³ of blend, in the money of the entries."""
    return solved.blend.cost


@formula("Water that is given", "Σ flow", unit="L/min", takes={"solved": ""}, source="definition")
def given_of(solved: Solved) -> float:
    """Flow of all sources together. [L/min]"""
    return solved.blend.given


@formula(
    "pH of the blend", "from alkalinity and dissolved carbon, which mix", unit="", takes={"solved": ""}, source="PB82"
)
def ph_of(solved: Solved) -> float:
    """pH of the blend; NaN where it was not computed."""
    return nan if solved.blend.chemistry is None else solved.blend.chemistry.ph


@formula(
    "Lime that the blend drops or dissolves",
    "with the blend's own calcium, carbon and alkalinity; below zero it dissolves",
    unit="mg/kg CaCO3",
    takes={"solved": ""},
    source="PB82",
)
def lime_of(solved: Solved) -> float:
    """Precipitation potential of the blend. [mg/kg CaCO3]"""
    return nan if solved.blend.chemistry is None else solved.blend.chemistry.ccpp
