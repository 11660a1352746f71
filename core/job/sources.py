"""Several sources of a job joined to one demand: flow of each, what holds the blend back, why it cannot be done."""

from __future__ import annotations

from dataclasses import dataclass, replace
from math import isfinite, isnan

from core.errors import InputError
from core.job import sources_question as asking
from core.job.answers import Amount, Answer, Assumption, Missing, Part, Problem
from core.job.cautions import source_cautions
from core.job.ledger import Ledger
from core.job.record import Job
from core.job.source_fields import source_field, source_numbers
from core.job.sources_question import Question, Solved
from core.job.sources_words import Shown, cannot, fits, lime_words, limit_words, not_found, plain, source_words
from core.treatment.limits import PARAMETERS
from core.treatment.sources import Blend
from core.treatment.sources_case import MOST_SOURCES

MOST_SAID = 4  # missing readings that are named one by one


@dataclass(frozen=True, slots=True)
class Mixing:
    """What is known of the blend of sources: the question, its answer, how it is shown; and its part."""

    part: Part
    ledger: Ledger
    question: Question | None = None
    solved: Solved | None = None
    shown: Shown | None = None


def assess_sources(job: Job) -> Mixing:
    """Flow and share of each source, cost, limits and what they cost, lime of the mixture; or what blocks."""
    ledger = Ledger(job)
    numbers = source_numbers((*job.entries, *job.choices))
    question = _question(ledger, numbers)
    if question is None:
        return Mixing(ledger.part("sources", [], source_cautions()), ledger)
    try:
        solved = ledger.working.step(asking.solve, question=question)
    except InputError as error:
        ledger.missing["sources.demand"] = Missing("sources.demand", str(error))
        return Mixing(ledger.part("sources", [], source_cautions()), ledger)
    shown = Shown(job, ledger)
    names = {ledger.choice(f"sources.{number}.name"): number for number in numbers}
    if solved.verdict == "missing":
        _say_missing(ledger, solved.blend, names)
        return Mixing(ledger.part("sources", [], source_cautions()), ledger)
    if solved.verdict == "undecided":
        text = "The limits meet so closely that arithmetic cannot tell whether they can be kept: widen one a little."
        ledger.missing["sources.demand"] = Missing("sources.demand", text)
        return Mixing(ledger.part("sources", [], source_cautions()), ledger)
    _say_assumed(ledger, solved.blend)
    answers = _answers(ledger, question, solved, shown, names)
    part = ledger.part("sources", [a for a in answers if not isnan(a.amount.value)], source_cautions())
    return Mixing(part, ledger, question, solved, shown)


def _question(ledger: Ledger, numbers: tuple[int, ...]) -> Question | None:
    if not numbers:
        text = f"Enter the sources: add each well or treated stream, up to {MOST_SOURCES}."
        ledger.missing["sources.1.name"] = Missing("sources.1.name", text)
    demand = ledger.need("sources.demand", "Enter the flow that is needed.")
    parts = {f"stream_{number}": _stream(ledger, number) for number in numbers}
    limits = _limits(ledger)
    if demand is None or not numbers or None in parts.values() or limits is None:
        return None
    off = "\n".join(
        ledger.choice(f"sources.{number}.name") for number in numbers if ledger.choice(f"sources.{number}.on") == "off"
    )
    rules = ledger.choice("sources.rules")
    extra = {}
    if rules != "none":
        typed = " ".join(name.partition("_")[2].replace("_", " ") for name in limits if name.startswith("limit_"))
        extra["rules"] = ledger.working.step(asking.rules_of, rules=rules, but=typed)
    return ledger.working.step(
        asking.ask, demand=demand, aim=ledger.choice("sources.aim"), off=off, **extra, **parts, **limits
    )


def _stream(ledger: Ledger, number: int) -> asking.Stream | None:
    """One source as a step; None where its flow is missing or an entry is refused."""
    name = ledger.choice(f"sources.{number}.name")
    own = f"sources.{number}."
    found: dict[str, float | None] = {}
    for field, part in (("flow_high", "most"), ("flow_low", "least"), ("cost", "cost")):
        if own + field in ledger.job.entries:
            found[part] = _read(ledger, own + field, name)
    for parameter in PARAMETERS:
        if own + parameter in ledger.job.entries:
            found[parameter] = _read(ledger, own + parameter, name)
    if "most" not in found:
        key = own + "flow_high"
        ledger.missing[key] = Missing(key, f"Enter what {name} gives at most.")
        return None
    if None in found.values():
        return None
    if found["most"] < found.get("least", 0.0):  # type: ignore[operator]
        key = own + "flow_low"
        ledger.problems[key] = Problem(key, "error", "The least flow is above the largest. Check which is which.")
        return None
    return ledger.working.step(asking.source_of, name=name, may_stop=ledger.choice(own + "may_stop"), **found)


def _read(ledger: Ledger, key: str, name: str) -> float | None:
    """An entry, its step noted with the name of the source it belongs to."""
    value = ledger.read(key)
    if value is not None:
        steps = ledger.working.steps
        steps[-1] = replace(steps[-1], note=f"{name}: {steps[-1].note}")
    return value


def _limits(ledger: Ledger) -> dict[str, object] | None:
    """Limits and targets that somebody typed, as steps; None where one is refused."""
    found: dict[str, object] = {}
    refused = False
    for parameter in PARAMETERS:
        sides = {}
        for side in ("low", "high"):
            key = f"sources.{side}.{parameter}"
            if key in ledger.job.entries:
                sides[side] = ledger.read(key)
        refused = refused or None in sides.values()
        if sides and None not in sides.values():
            refused = not _take_limit(ledger, found, parameter, sides) or refused
        key = f"sources.target.{parameter}"
        if key in ledger.job.entries and source_field(key) is not None:
            value = ledger.read(key)
            refused = refused or value is None
            if value is not None:
                step = ledger.working.step
                found[f"target_{parameter}"] = step(asking.target_of, parameter=parameter, value=value)
    return None if refused else found


def _take_limit(ledger: Ledger, found: dict[str, object], parameter: str, sides: dict[str, float | None]) -> bool:
    try:
        found[f"limit_{parameter}"] = ledger.working.step(asking.limit_of, parameter=parameter, **sides)
    except InputError as error:
        key = f"sources.low.{parameter}"
        ledger.problems[key] = Problem(key, "error", str(error))
        return False
    return True


def _say_missing(ledger: Ledger, blend: Blend, names: dict[str, int]) -> None:
    for name, parameter in blend.missing[:MOST_SAID]:
        key = f"sources.{names[name]}.{parameter}"
        text = f"Enter the {PARAMETERS[parameter].words} of {name}: a limit or a target asks for it."
        ledger.missing[key] = Missing(key, text)
    more = len(blend.missing) - MOST_SAID
    if more > 0:
        ledger.missing["sources.more"] = Missing("sources.more", f"Enter {more} more readings of the sources.")


def _say_assumed(ledger: Ledger, blend: Blend) -> None:
    unjudged = dict.fromkeys(PARAMETERS[limit.parameter].words for limit, _ in blend.unchecked)
    if unjudged:
        why = f"Not judged, as not every source was measured for it: {', '.join(unjudged)}."
        ledger.assumptions["sources.rules"] = Assumption("sources.rules", None, why, "definition")
    if blend.chemistry is not None and blend.chemistry.assumed:
        words = ", ".join(PARAMETERS[name].words for name in blend.chemistry.assumed)
        why = f"For pH and lime not measured, counted as none, a quarter of the hardness as magnesium: {words}."
        ledger.assumptions["sources.other"] = Assumption("sources.other", None, why, "common practice, no source")


def _answers(ledger: Ledger, question: Question, solved: Solved, shown: Shown, names: dict[str, int]) -> list[Answer]:
    blend = solved.blend
    answers = [_headline(ledger, solved, shown, question), *_flows(ledger, solved, names)]
    answers += _cost(ledger, question, solved)
    answers += _held(ledger, solved, shown)
    if blend.conflict is not None:
        answers += _would_fit(ledger, solved, shown)
    return [*answers, *_chemistry(ledger, solved)]


def _headline(ledger: Ledger, solved: Solved, shown: Shown, question: Question) -> Answer:
    blend, w = solved.blend, ledger.working
    if blend.verdict == "fits":
        words, tone = fits(blend, shown, costs=_costs(question)), "good"
    elif blend.verdict == "none fits":
        words, tone = cannot(blend, shown), "bad"
    else:
        words, tone = not_found(blend, shown), "bad"
    if "hardness" in blend.values:
        value = w.step(asking.value_of, solved=solved, parameter="hardness")
        label = "Hardness of the blend" if tone == "good" else "Hardness of the nearest blend"
        marks = shown.marks(blend, "hardness")
        return Answer("blend", label, shown.amount("hardness", value), words, w.leading_to(value), marks, tone=tone)
    given = w.step(asking.given_of, solved=solved)
    return Answer("blend", "Water given", Amount(given, "L/min", "flow"), words, w.leading_to(given), tone=tone)


def _costs(question: Question) -> bool:
    return any(stream.cost for stream in question.streams)


def _flows(ledger: Ledger, solved: Solved, names: dict[str, int]) -> list[Answer]:
    answers = []
    for flow in solved.blend.flows:
        value = ledger.working.step(asking.flow_of, solved=solved, name=flow.name)
        words, tone = source_words(flow)
        amount = Amount(value, "L/min", "flow")
        steps = ledger.working.leading_to(value)
        answers.append(Answer(f"flow_{names[flow.name]}", flow.name, amount, words, steps, tone=tone))
    return answers


def _cost(ledger: Ledger, question: Question, solved: Solved) -> list[Answer]:
    if not _costs(question):
        return []
    cost = ledger.working.step(asking.cost_of, solved=solved)
    words = plain("{day} a day, if it runs all day at this flow.", day=Amount(solved.blend.cost_per_day, ""))
    return [Answer("cost", "Cost of a m³", Amount(cost, ""), words, ledger.working.leading_to(cost))]


def _held(ledger: Ledger, solved: Solved, shown: Shown) -> list[Answer]:
    """What became of each limit and of each target."""
    answers: dict[str, Answer] = {}
    for state in solved.blend.limits:
        parameter = state.limit.parameter
        if isnan(state.value) or parameter in answers:
            continue
        value = ledger.working.step(asking.value_of, solved=solved, parameter=parameter)
        words, tone = limit_words(state, shown)
        marks = shown.marks(solved.blend, parameter)
        steps = ledger.working.leading_to(value)
        label = shown.label(parameter)
        amount = shown.amount(parameter, value)
        answers[parameter] = Answer(
            f"limit_{parameter.replace(' ', '_')}", label, amount, words, steps, marks, tone=tone
        )
    for state in solved.blend.targets:
        parameter = state.target.parameter
        value = ledger.working.step(asking.value_of, solved=solved, parameter=parameter)
        words = plain("Wanted {wanted}.", wanted=shown.amount(parameter, state.target.value))
        steps = ledger.working.leading_to(value)
        label = f"{shown.label(parameter)}, wanted and reached"
        answers[f"target {parameter}"] = Answer(
            f"target_{parameter}",
            label,
            shown.amount(parameter, value),
            words,
            steps,
            shown.marks(solved.blend, parameter),
        )
    return list(answers.values())


def _would_fit(ledger: Ledger, solved: Solved, shown: Shown) -> list[Answer]:
    """What each limit that blocks would have to be, all others kept."""
    conflict = solved.blend.conflict
    return [
        Answer(
            f"fit_{block.limit.parameter.replace(' ', '_')}_{block.side}",
            f"{shown.label(block.limit.parameter)} at which it would fit",
            shown.amount(block.limit.parameter, block.would_fit_at),
            plain(
                "Instead of {limit}, all else kept.",
                limit=shown.amount(block.limit.parameter, getattr(block.limit, block.side)),
            ),
            ledger.working.leading_to(solved),
        )
        for block in (conflict.limits if conflict else ())
        if isfinite(block.would_fit_at)
    ]


def _chemistry(ledger: Ledger, solved: Solved) -> list[Answer]:
    judged = solved.blend.chemistry
    if judged is None or judged.why:
        return []
    step, answers = ledger.working.step, []
    if not any(state.limit.parameter == "ph" for state in solved.blend.limits):
        ph = step(asking.ph_of, solved=solved)
        words = plain("Of the mixture: it does not mix by share.")
        answers.append(Answer("ph", "pH of the blend", Amount(ph, ""), words, ledger.working.leading_to(ph)))
    lime = step(asking.lime_of, solved=solved)
    words, tone = lime_words(judged)
    steps = ledger.working.leading_to(lime)
    label = "Lime it drops (+) or dissolves (−)"
    return [*answers, Answer("lime", label, Amount(lime, "g/m³"), words, steps, tone=tone)]
