"""How often hard water reaches the tap of this job: days of many like households, followed one by one."""

from __future__ import annotations

from core.job.answers import Amount, Answer, Mark, Part, say
from core.job.softener import Softener
from core.treatment.running import Habits, compare_reserves, draw_use, run_out
from core.working import formula

HOUSEHOLDS = 400  # followed for a year each; 2,000 move the days by a few tenths
SEED = 1
ALLOWED = 1.0  # days with hard water a year that the computed reserve keeps to
RULES = {"one day": "With one average day in reserve", "a quarter": "With a quarter of the bed in reserve"}


@formula(
    "Days with hard water at the tap",
    "400 households with days like these, followed for a year: days on which the bed was used up before the night",
    unit="day",
    takes={"load": "mol/day", "capacity": "mol", "reserve": "mol", "longest": "day", "kind": ""},
    source="common practice, no source",
    validity="Day to day ±30 %, weekends 20 % more, 14 days with guests, 21 away, and the average itself ±15 %: "
    "assumptions of habit, no source.",
)
def hard_days(load: float, capacity: float, reserve: float, longest: float, kind: str) -> float:
    """Average days a year on which hard water reaches the tap; the same inputs give the same days. [day]"""
    use = draw_use(load, Habits(), households=HOUSEHOLDS, seed=SEED)
    return run_out(use, capacity, reserve, longest=longest, twin=kind == "twin").hard_days


def assess_run_out(softener: Softener) -> Part:
    """Days a year with hard water, the reserve that keeps them to one, and the rules of thumb beside it."""
    task, ledger = softener.task, softener.ledger
    if task is None or ledger is None:
        return Part("run_out")
    answers = softener.part.answers
    if "capacity" not in answers or "reserve" not in answers:
        return Part("run_out")
    figures = {name: answers[name].amount.value for name in ("capacity", "reserve")}
    days = ledger.working.step(
        hard_days,
        load=task.load,
        capacity=figures["capacity"],
        reserve=figures["reserve"],
        longest=task.longest,
        kind=task.kind,
    )
    found = [_days(days, ledger.working.leading_to(days))]
    if task.kind != "twin":
        found += _reserves(softener, figures["capacity"])
    return Part("run_out", {answer.key: answer for answer in found})


def _days(days: float, steps) -> Answer:
    if days < 0.5:
        words, tone = "Next to never.", "good"
    elif days <= ALLOWED:
        words, tone = "About once a year.", "good"
    else:
        words, tone = "On so many days a year hard water comes through before the night's regeneration.", "watch"
    marks = (Mark("aimed at", Amount(ALLOWED, "day", "time")),)
    return Answer(
        "hard_days", "Days a year with hard water", Amount(days, "day", "time"), say(words), steps, marks, tone=tone
    )


def _reserves(softener: Softener, capacity: float) -> list[Answer]:
    task = softener.task
    use = draw_use(task.load, Habits(), households=HOUSEHOLDS, seed=SEED)
    found = compare_reserves(use, capacity, task.load, allowed=ALLOWED, longest=task.longest)
    answers = []
    computed = found["computed"]
    if computed.reserve == computed.reserve:
        answers.append(
            Answer(
                "reserve_needed",
                "Reserve for one such day a year",
                Amount(computed.reserve, "mol", "exchanged amount"),
                say(
                    "{days} of average use; it then regenerates {number} times a year.",
                    days=Amount(computed.reserve / task.load, "day", "time"),
                    number=Amount(round(computed.regenerations), ""),
                ),
            )
        )
    for key, label in RULES.items():
        run = found[key]
        words = say(
            "{days} a year with hard water; {number} regenerations.",
            days=Amount(run.hard_days, "day", "time"),
            number=Amount(round(run.regenerations), ""),
        )
        answers.append(Answer(key.replace(" ", "_"), label, Amount(run.reserve, "mol", "exchanged amount"), words))
    return answers
