"""What a part of an assessment recommends, so that it can be compared from case to case, and the odds in words.

decision_of(part, job) -> Decision
odds(found) -> tuple[Odds, ...]          "In 9 of 10 cases 28 L of resin is enough."
sizes(found) -> {size: share of cases}   which size was recommended how often
in_cases(0.87) -> "in 9 of 10 cases"
"""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from core.job.answers import Amount, Answer, Part, Phrase, say
from core.job.record import Job

if TYPE_CHECKING:
    from core.job.spread import Spread

SIZED = "softener.resin"  # the entry that, left empty, asks for a recommendation
_MEASURE = 1e-9  # sizes closer than this share of themselves are one size


@dataclass(frozen=True, slots=True)
class Decision:
    """What one case comes to: the size recommended, where there is one, and the verdicts of the answers."""

    answered: bool
    size: float | None  # in the unit of the headline; None where a bed was entered or nothing is sized
    verdicts: tuple[tuple[str, str], ...]  # (answer, tone)

    @property
    def holds(self) -> bool:
        """Whether the headline is a good answer: there is one, and it is not a bad one."""
        return self.answered and (not self.verdicts or self.verdicts[0][1] != "bad")

    def same(self, other: Decision) -> bool:
        """Whether both recommend the same."""
        if self.answered != other.answered or (self.size is None) != (other.size is None):
            return False
        if self.size is not None and other.size is not None:
            return abs(self.size - other.size) <= _MEASURE * abs(self.size)
        return self.verdicts == other.verdicts


def decision_of(part: Part, job: Job) -> Decision:
    """What a part of an assessment comes to."""
    headline = part.headline
    if headline is None:
        return Decision(False, None, ())
    sized = part.key == "softener" and SIZED not in job.entries
    if sized:
        return Decision(True, headline.amount.value, ((headline.key, headline.tone),))
    if part.key == "softener":
        return Decision(True, None, ((headline.key, headline.tone),))
    return Decision(True, None, tuple((answer.key, answer.tone) for answer in part.answers.values()))


@dataclass(frozen=True, slots=True)
class Odds:
    """How often something holds, in words."""

    key: str  # "section.answer"
    kind: str  # enough: the size recommended · good: the bed entered · answered · above, below a limit · bad, watch
    share: float
    words: Phrase


def odds(found: Spread) -> tuple[Odds, ...]:
    """The odds of the decisions and limits of a spread, the headlines first; empty before the first case.

    Of limits and verdicts only what could turn out otherwise than the plain answer says. Each sentence once.
    """
    if not found.draws:
        return ()
    said = {item.words.text: item for section in found.decisions for item in _of_section(found, section)}
    return tuple(sorted(said.values(), key=lambda item: _ORDER.index(item.kind)))


_ORDER = ("enough", "good", "answered", "above", "below", "bad", "watch")


def sizes(found: Spread, section: str = "softener") -> dict[float, float]:
    """Which size was recommended in what share of the cases, the smallest first."""
    held = [decision.size for decision in found.decisions.get(section, ()) if decision.size is not None]
    return {size: count / found.draws for size, count in sorted(Counter(held).items())}


def size_amount(found: Spread, section: str, size: float) -> Amount:
    """A size as an amount, in the unit of the headline."""
    headline = found.plain[section].headline
    return Amount(size, "L", "volume", "resin") if headline is None else replace(headline.amount, value=size)


def in_cases(share: float) -> str:
    """A share of the cases in words."""
    if share <= 0.0:
        return "in none of the cases tried"
    if share >= 1.0:
        return "in all cases tried"
    if share < 0.05:
        return "in fewer than 1 of 20 cases"
    if share > 0.95:
        return "in more than 19 of 20 cases"
    return f"in {min(9, max(1, round(10.0 * share)))} of 10 cases"


def _of_section(found: Spread, section: str) -> list[Odds]:
    part = found.plain[section]
    headline = part.headline
    if headline is None:
        return []
    said = _of_headline(found, section, headline)
    for key, answer in part.answers.items():
        said += _of_answer(found, f"{section}.{key}", answer, answer is headline)
    return said


def _of_headline(found: Spread, section: str, headline: Answer) -> list[Odds]:
    decisions = found.decisions[section]
    key = f"{section}.{headline.key}"
    answered = sum(decision.answered for decision in decisions) / len(decisions)
    said = []
    if decision_of(found.plain[section], found.job).size is not None:
        at_most = headline.amount.value * (1.0 + _MEASURE)
        share = sum(d.size is not None and d.size <= at_most for d in decisions) / len(decisions)
        text = f"{_capital(in_cases(share))} {{size}} of resin is enough."
        said.append(Odds(key, "enough", share, say(text, size=headline.amount)))
    elif section == "softener":
        share = sum(decision.holds for decision in decisions) / len(decisions)
        said.append(Odds(key, "good", share, say(f"{_capital(in_cases(share))} this bed will do.")))
    if answered < 1.0:
        text = f"{_capital(in_cases(1.0 - answered))} there is no answer: look at the remarks by the entries."
        said.append(Odds(key, "answered", answered, say(text)))
    return said


def _of_answer(found: Spread, key: str, answer: Answer, is_headline: bool) -> list[Odds]:
    said = []
    label = _escaped(answer.label)
    if not is_headline:
        for tone, verdict in (("bad", "turns out bad"), ("watch", "is one to watch")):
            share = found.tones[key].count(tone) / found.draws
            if share and tone != answer.tone:
                said.append(Odds(key, tone, share, say(f"{_capital(in_cases(share))} “{label}” {verdict}.")))
    for mark in answer.marks:
        above = found.beyond.get((key, mark.name))
        if above is None or not mark.source:  # a mark without a source is something to compare with, no limit
            continue
        side, share = ("below", 1.0 - above) if answer.amount.value > mark.at.value else ("above", above)
        if share > 0.0:
            text = f"{_capital(in_cases(share))} “{label}” is {side} {{limit}} ({_escaped(mark.name)})."
            said.append(Odds(key, side, share, say(text, limit=mark.at)))
    return said


def _capital(text: str) -> str:
    return text[:1].upper() + text[1:]


def _escaped(text: str) -> str:
    return text.replace("{", "{{").replace("}", "}}")
