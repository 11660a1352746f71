"""What is said of a blend of sources: flows, what holds it back and what that costs, why it cannot be done."""

from __future__ import annotations

from math import isfinite, isnan

from core.job.answers import Amount, Mark, Phrase
from core.job.ledger import Ledger
from core.job.record import Job
from core.job.source_fields import parameter_label, source_field
from core.treatment.limits import PARAMETERS, Limit
from core.treatment.mixed_balance import NEAR
from core.treatment.sources import Blend, LimitState, SourceFlow
from core.treatment.sources_chemistry import Judged
from core.units import convert

SIDES = {"high": "at most", "low": "at least"}
LITTLE = 5e-5  # of money a m³: less is not worth a word
LITTLE_FLOW = 1e-4  # of the blend


def plain(text: str, **amounts: Amount) -> Phrase:
    """A phrase; names of sources in it must have gone through `named`."""
    return Phrase(text, amounts)


def named(name: str) -> str:
    """A name that somebody typed, safe inside a phrase."""
    return name.replace("{", "{{").replace("}", "}}")


class Shown:
    """How parameters are named and in which units they are shown: as they were entered."""

    def __init__(self, job: Job, ledger: Ledger) -> None:
        self.job, self.ledger = job, ledger

    def label(self, parameter: str) -> str:
        """What a parameter is called."""
        if source_field(f"sources.high.{parameter}") is not None:
            return parameter_label(parameter)
        words = PARAMETERS[parameter].words
        return words[0].upper() + words[1:]

    def amount(self, parameter: str, value: float) -> Amount:
        """A value in the core's unit, as an amount in the unit of the entries."""
        about = PARAMETERS[parameter]
        field = source_field(f"sources.high.{parameter}")
        if field is None or not field.quantity:
            return Amount(value, about.unit)
        unit = self._unit(parameter) or field.units[0]
        if field.quantity in ("hardness", "alkalinity", "temperature", "conductivity"):
            return Amount(value, field.core_unit, field.quantity)  # shown in the user's own unit in any case
        return Amount(convert(value, field.core_unit, unit, quantity=field.quantity), unit, field.quantity)

    def _unit(self, parameter: str) -> str:
        ends = (f"sources.high.{parameter}", f"sources.low.{parameter}", f"sources.target.{parameter}")
        own = (key for key in sorted(self.job.entries) if key.startswith("sources.") and key.endswith(f".{parameter}"))
        entries = (self.job.entries.get(key) for key in (*ends, *own))
        return next((entry.unit for entry in entries if entry is not None and entry.unit), "")

    def marks(self, blend: Blend, parameter: str) -> tuple[Mark, ...]:
        """The limits and the target of a parameter."""
        found = []
        for state in blend.limits:
            limit = state.limit
            if limit.parameter == parameter:
                found += [
                    Mark(f"{words}", self.amount(parameter, getattr(limit, side)), limit.source)
                    for side, words in SIDES.items()
                    if isfinite(getattr(limit, side))
                ]
        for target in blend.targets:
            if target.target.parameter == parameter:
                found.append(Mark("wanted", self.amount(parameter, target.target.value)))
        return tuple(found)

    def limit(self, limit: Limit, side: str, key: str) -> tuple[str, dict[str, Amount]]:
        """A limit in words: "nitrate at most {key}"."""
        words = f"{_lower(self.label(limit.parameter))} {SIDES[side]} {{{key}}}"
        return words, {key: self.amount(limit.parameter, getattr(limit, side))}


def _lower(label: str) -> str:
    return label if label.startswith("pH") else label[0].lower() + label[1:]


def _listed(parts: list[str]) -> str:
    return parts[0] if len(parts) == 1 else f"{', '.join(parts[:-1])} and {parts[-1]}"


def flows_said(blend: Blend) -> tuple[str, dict[str, Amount]]:
    """The flows in one breath: "{flow_0} of Oak well, {flow_1} of …"; what stands is left out."""
    parts, amounts = [], {}
    for i, flow in enumerate(blend.flows):
        if flow.flow > LITTLE_FLOW * max(blend.demand, 1e-9):
            parts.append(f"{{flow_{i}}} of {named(flow.name)}")
            amounts[f"flow_{i}"] = Amount(flow.flow, "L/min", "flow")
    return (_listed(parts) if parts else "nothing"), amounts


def fits(blend: Blend, shown: Shown, *, costs: bool) -> Phrase:
    """A blend that keeps every limit."""
    flows, amounts = flows_said(blend)
    text = f"{flows[0].upper() if not flows.startswith('{') else flows[0]}{flows[1:]}."
    if costs:
        text += " {cost} a m³."
        amounts["cost"] = Amount(blend.cost, "")
    holding = [state for state in blend.limits if state.holds]
    if holding:
        names = _listed(list(dict.fromkeys(_lower(shown.label(state.limit.parameter)) for state in holding)))
        text += f" Held back by {names}."
    elif blend.limits:
        text += " Every limit kept, with room."
    return Phrase(text, amounts)


def cannot(blend: Blend, shown: Shown) -> Phrase:
    """Why it cannot be done, and the nearest blend."""
    conflict, amounts, said = blend.conflict, {}, ["It cannot be done."]
    assert conflict is not None
    if conflict.short_by > 0.0:
        said.append("The sources that are on give {most} together, {short} short of what is needed.")
        amounts |= {"most": _flow(blend.demand - conflict.short_by), "short": _flow(conflict.short_by)}
    elif conflict.over_by > 0.0:
        said.append("Those that must run give {over} too much at their least.")
        amounts["over"] = _flow(conflict.over_by)
    said += _blocked(blend, shown, amounts)
    flows, more = flows_said(blend)
    amounts |= more
    said.append(f"Nearest: {flows}" + _beyond(blend, shown, amounts) + ".")
    if 0.0 < conflict.most_water < blend.demand * (1.0 - 1e-6):
        said.append("Within all limits {water} can be had.")
        amounts["water"] = _flow(conflict.most_water)
    return Phrase(" ".join(said), amounts)


def _blocked(blend: Blend, shown: Shown, amounts: dict[str, Amount]) -> list[str]:
    conflict = blend.conflict
    blocks = []
    for i, block in enumerate(conflict.limits):  # type: ignore[union-attr]
        words, more = shown.limit(block.limit, block.side, f"block_{i}")
        blocks.append(words)
        amounts |= more
    if not blocks:
        return []
    ends = [f"{named(name)} gives no more" for name in conflict.at_most]  # type: ignore[union-attr]
    ends += [f"{named(name)} gives no less" for name in conflict.at_least]  # type: ignore[union-attr]
    why = f", as {_listed(ends)}" if ends else ""
    said = _listed(blocks)
    if len(blocks) == 1:
        return [f"{said[0].upper()}{said[1:]} cannot be kept{why}."]
    return [f"{said[0].upper()}{said[1:]} cannot be kept together{why}."]


def _beyond(blend: Blend, shown: Shown, amounts: dict[str, Amount]) -> str:
    parts = []
    for i, excess in enumerate(blend.conflict.excess):  # type: ignore[union-attr]
        parameter = excess.limit.parameter
        amounts[f"value_{i}"], amounts[f"by_{i}"] = (shown.amount(parameter, v) for v in (excess.value, excess.by))
        side = "above" if excess.side == "high" else "below"
        parts.append(f"{_lower(shown.label(parameter))} {{value_{i}}}, {{by_{i}}} {side} the limit")
    return f", with {_listed(parts)}" if parts else ""


def _flow(value: float) -> Amount:
    return Amount(value, "L/min", "flow")


def not_found(blend: Blend, shown: Shown) -> Phrase:
    """The linear limits can be kept, those of the chemistry were not."""
    missed = [shown.label(state.limit.parameter) for state in blend.limits if not state.kept]
    flows, amounts = flows_said(blend)
    names = _listed([_lower(name) for name in dict.fromkeys(missed)]) if missed else "pH and lime"
    text = f"No blend was found that also keeps {names}. Nearest: {flows}."
    return Phrase(text, amounts)


def source_words(flow: SourceFlow) -> tuple[Phrase, str]:
    """What is said of one source."""
    share = Amount(flow.share, "1", "share")
    gap = flow.gap
    if flow.stands == "off":
        return plain("Switched off."), "note"
    if flow.stands == "stopped":
        if gap > LITTLE:
            return plain("Not used: it would pay if a m³ cost {gap} less.", gap=Amount(gap, "")), "note"
        return plain("Not used."), "note"
    if flow.stands == "at most":
        if gap < -LITTLE:
            text = "{share} of the blend, all it gives: another m³ of it would save {gap}."
            return plain(text, share=share, gap=Amount(-gap, "")), "plain"
        return plain("{share} of the blend, all it gives.", share=share), "plain"
    if flow.stands == "at least":
        return plain("{share} of the blend, the least it may give.", share=share), "plain"
    return plain("{share} of the blend.", share=share), "plain"


def limit_words(state: LimitState, shown: Shown) -> tuple[Phrase, str]:
    """How the blend stands to one limit."""
    limit = state.limit
    side = state.holds or _nearer(state)
    at = shown.amount(limit.parameter, getattr(limit, side))
    origin = f" ({limit.words})" if limit.words else ""
    if not state.kept:
        over = "Above" if state.value > limit.high else "Below"
        side = "high" if over == "Above" else "low"
        at = shown.amount(limit.parameter, getattr(limit, side))
        return plain(f"{over} the limit of {{limit}}{named(origin)}.", limit=at), "bad"
    if state.holds:
        text = f"Holds the blend back: {SIDES[side]} {{limit}}{named(origin)}."
        if state.eased_saves > LITTLE:
            text += " At {eased} a m³ would cost {saved} less."
            eased = shown.amount(limit.parameter, state.eased_to)
            return plain(text, limit=at, eased=eased, saved=Amount(state.eased_saves, "")), "watch"
        return plain(text, limit=at), "watch"
    text = f"{SIDES[side].capitalize()} {{limit}}{named(origin)}"
    if isfinite(state.margin) and getattr(limit, side):
        return plain(text + ": {margin} to spare.", limit=at, margin=Amount(state.margin, "1", "share")), "good"
    return plain(text + ".", limit=at), "good"


def _nearer(state: LimitState) -> str:
    limit = state.limit
    if not isfinite(limit.low):
        return "high"
    if not isfinite(limit.high):
        return "low"
    return "high" if limit.high - state.value < state.value - limit.low else "low"


def lime_words(judged: Judged) -> tuple[Phrase, str]:
    """Whether the mixture drops or dissolves lime, and whether its parts did."""
    lime = judged.ccpp
    if isnan(lime):
        return plain(""), "plain"
    alone = [value for _, value in judged.of_sources]
    several = len(alone) > 1
    if lime < -NEAR:
        if several and all(value >= -NEAR for value in alone):
            text = (
                "None of the sources dissolves lime by itself, but mixed they do: old deposits and cement are at risk."
            )
            return plain(text), "watch"
        return plain("Dissolves lime: cement, old deposits and bare metal are attacked."), "watch"
    if lime > NEAR:
        if several and all(value <= NEAR for value in alone):
            return plain(
                "None of the sources drops lime by itself, but mixed they do: pipes and meters grow over."
            ), "watch"
        return plain("As CaCO₃: may settle in pipes and tanks, more so where it is heated."), "watch"
    return plain("Near balance at the temperature of the blend."), "good"
