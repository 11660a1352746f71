"""A job in plain text, to be pasted into a message: what was found, what is proposed, what to mind."""

from __future__ import annotations

from collections.abc import Iterable
from typing import TYPE_CHECKING

from core.job.answers import Answer, Part
from core.job.fields import SECTIONS, choice_for, field_for, sections_of
from core.job.record import Job
from pwa.state.display import Display

if TYPE_CHECKING:
    from core.job.assessment import Assessment

CLOSING = (
    "Reckoned from the entries named; local codes and a licensed installer have the last word. Cautions and working "
    "are in the full sheet."
)


def summary_text(job: Job, assessment: Assessment, display: Display) -> str:
    """Name and place, the answers of each section that has any, what was assumed; in the reader's units.

    Where no section has an answer, what is missing stands in its place.
    """
    blocks = ["\n".join(filter(None, (job.name or "Job without a name", job.place)))]
    parts: dict[str, Part] = {key: getattr(assessment, key) for key in sections_of(job.choices)}
    answered = {key: part for key, part in parts.items() if part.headline is not None}
    blocks += [_section(SECTIONS[key], part, display) for key, part in (answered or parts).items()]
    assumed = _assumed(answered.values(), display)
    blocks += [f"Assumed, not measured: {assumed}."] if assumed else []
    return "\n\n".join(filter(None, [*blocks, CLOSING])) + "\n"


def _section(title: str, part: Part, display: Display) -> str:
    if part.headline is None:
        lacks = [missing.text for missing in part.missing]
        return "\n".join([f"{title.upper()}: no answer yet.", *lacks]) if lacks else ""
    first, *others = part.answers.values()
    lines = [f"{title.upper()}: {first.label} {display.show(first.amount)}. {display.say(first.words)}"]
    lines += [f"- {_line(answer, display)}" for answer in others]
    return "\n".join(lines)


def _line(answer: Answer, display: Display) -> str:
    lead = {"watch": "Watch: ", "bad": "Problem: "}.get(answer.tone, "")
    said = f" ({display.say(answer.words).rstrip('.')})" if answer.tone in ("watch", "bad") else ""
    return f"{lead}{answer.label} {display.show(answer.amount)}{said}"


def _assumed(parts: Iterable[Part], display: Display) -> str:
    found = {}
    for part in parts:
        for assumption in part.assumptions:
            named = field_for(assumption.field) or choice_for(assumption.field)
            label = named.label if named else "Other ions"
            shown = "" if assumption.amount is None else f" {display.show(assumption.amount)}"
            found[assumption.field] = f"{label}{shown}"
    return "; ".join(found.values())
