"""Working: how an answer explains itself.

A formula is a plain function with a card: what it yields, how it is written, in which units its arguments and
its result are, where it comes from, where it holds. `Working.step` calls such a function and keeps what went in
and what came out, so that the numbers shown are the numbers computed: there is no second formula to drift.

    @formula("Daily load", "load = volume × (hardness − target)", unit="mol/day",
             takes={"volume": "L/day", "hardness": "mmol/L", "target": "mmol/L"}, source="definition")
    def daily_load(volume, hardness, target=0.0): ...

    w = Working()
    load = w.step(daily_load, volume=484.0, hardness=3.92, target=1.43)
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from typing import Any, TypeVar

F = TypeVar("F", bound=Callable[..., Any])


@dataclass(frozen=True, slots=True)
class Card:
    """What a formula says of itself."""

    quantity: str  # what comes out, in the words of the trade
    expression: str  # as it would be written on paper
    unit: str  # of the result; "" for a pure number
    takes: Mapping[str, str]  # argument -> its unit
    source: str  # key in core.references, "definition", or "common practice, no source"
    validity: str = ""  # where it holds, where it misleads


@dataclass(frozen=True, slots=True)
class Step:
    """One line of working: a formula with the numbers that went in and the number that came out."""

    card: Card
    function: Callable[..., Any]
    inputs: Mapping[str, Any]
    result: Any
    note: str = ""


def formula(
    quantity: str,
    expression: str,
    *,
    unit: str,
    takes: Mapping[str, str],
    source: str,
    validity: str = "",
) -> Callable[[F], F]:
    """Give a function its card; the function itself is left as it is."""

    def attach(function: F) -> F:
        function.card = Card(quantity, expression, unit, dict(takes), source, validity)  # type: ignore[attr-defined]
        return function

    return attach


@dataclass(slots=True)
class Working:
    """The steps that were taken, in their order.

    The result of a step is handed on as it is to the steps that use it, so that `leading_to` can follow a result
    back to where it began.
    """

    steps: list[Step] = field(default_factory=list)

    def step(self, function: Callable[..., Any], note: str = "", **inputs: Any) -> Any:
        """Call a formula, keep the step, return its result."""
        result = function(**inputs)
        self.steps.append(Step(function.card, function, inputs, result, note))  # type: ignore[attr-defined]
        return result

    def add(self, step: Step) -> Any:
        """Keep a step that was taken elsewhere, return its result."""
        self.steps.append(step)
        return step.result

    def leading_to(self, *results: Any) -> tuple[Step, ...]:
        """The steps that these results came from, however far back, in the order they were taken."""
        wanted, kept = list(results), []
        for step in reversed(self.steps):
            if any(step.result is value for value in wanted):
                wanted = [value for value in wanted if value is not step.result]
                wanted += step.inputs.values()
                kept.append(step)
        return tuple(reversed(kept))
