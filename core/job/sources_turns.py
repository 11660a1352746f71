"""One card for the day: the settings as now, and with each source off in turn."""

from __future__ import annotations

from math import isnan

from core.errors import InputError
from core.job import sources_question as asking
from core.job.answers import Amount, Answer, Part, Phrase
from core.job.sources import Mixing
from core.job.sources_question import Question
from core.job.sources_words import Shown, cannot, fits, not_found, plain


def assess_turns(mixing: Mixing) -> Part:
    """What to set as things are, and when a source fails."""
    question, shown = mixing.question, mixing.shown
    if question is None or shown is None or len(question.streams) < 2:
        return Part("turns")
    on = [stream.name for stream in question.streams if stream.name not in question.off]
    answers = [_case(mixing, "now", "As it is now", question, shown)]
    for place, name in enumerate(on if len(on) > 1 else (), start=1):
        less = mixing.ledger.working.step(asking.without_source, question=question, name=name)
        answers.append(_case(mixing, f"off_{place}", f"{name} off", less, shown))
    return Part("turns", {answer.key: answer for answer in answers if not isnan(answer.amount.value)})


def _case(mixing: Mixing, key: str, label: str, question: Question, shown: Shown) -> Answer:
    w = mixing.ledger.working
    try:
        solved = w.step(asking.solve, question=question)
    except InputError as error:
        return Answer(key, label, Amount(0.0, "L/min", "flow"), Phrase(str(error)), tone="bad")
    given = w.step(asking.given_of, solved=solved)
    costs = any(stream.cost for stream in question.streams)
    blend = solved.blend
    if blend.verdict == "fits":
        words, tone = fits(blend, shown, costs=costs), "good"
    elif blend.verdict == "none fits":
        words, tone = cannot(blend, shown), "bad"
    elif blend.verdict == "none found":
        words, tone = not_found(blend, shown), "bad"
    else:
        words, tone = plain("It cannot be told: a reading is missing, or limits meet too closely."), "bad"
    return Answer(key, label, Amount(given, "L/min", "flow"), words, w.leading_to(given), tone=tone)
