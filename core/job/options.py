"""Other ways to do the softener's task: other kinds, the next beds, other salt settings; what rules them out."""

from __future__ import annotations

from dataclasses import replace
from math import isnan

from core.job.answers import Amount, Answer, Bar, Mark, Part, Phrase, Picture, say
from core.job.softener import Softener
from core.job.softener_choice import KINDS, Task, pick_of
from core.treatment.resin import salt_efficiency
from core.treatment.rules import efficiency_ratings, ratings_met
from core.treatment.search import Pick, Search

KIND_NAMES = {"single": "One tank", "twin": "Two tanks in turn", "counter-current": "One tank, from below"}


def assess_options(softener: Softener) -> Part:
    """What else could be fitted or set, beside what the softener's part recommends."""
    task, bed = softener.task, softener.bed
    if task is None or bed is None or softener.search is None or softener.pick is None:
        return Part("options")
    open_task = replace(task, salt_dose=None)
    answers = [_kind(open_task, kind) for kind in KINDS]
    answers += _neighbours(open_task, bed.resin_volume)
    answers.append(_rating(softener))
    return Part("options", {answer.key: answer for answer in answers}, picture=_picture(open_task, softener))


def _kind(task: Task, kind: str) -> Answer:
    found = replace(task, kind=kind).search()
    pick = pick_of(found)
    volume = Amount(found.beds[pick.bed].resin_volume, "L", "volume", "resin")
    return Answer(
        f"kind_{kind}", KIND_NAMES[kind], volume, _fate(found, pick, task.salt_factor), tone=_tone(found, pick)
    )


def _neighbours(task: Task, volume: float) -> list[Answer]:
    """The next bed below and above: at its best dose where it will do, with its reasons where it will not."""
    found = task.search()
    volumes = sorted({bed.resin_volume for bed in found.beds})
    below = [v for v in volumes if v < volume * (1.0 - 1e-6)][-1:]
    above = [v for v in volumes if v > volume * (1.0 + 1e-6)][:1]
    answers = []
    for key, label, wanted in (("smaller", "The next smaller bed", below), ("larger", "The next larger bed", above)):
        for size in wanted:
            bed = next(bed for bed in found.beds if bed.resin_volume == size)
            alone = task.search(bed)
            pick = pick_of(alone)
            amount = Amount(size, "L", "volume", "resin")
            answers.append(Answer(key, label, amount, _fate(alone, pick, task.salt_factor), tone=_tone(alone, pick)))
    return answers


def _fate(found: Search, pick: Pick, factor: float) -> Phrase:
    figures = found.figures(pick)
    if isnan(figures["interval"]):
        return say("Nothing is known of it at this salt setting.")
    text = "Every {days} at {dose}: {salt} of salt and {water} of water a year."
    reasons = " ".join(found.reasons(pick))
    return say(
        f"{reasons} {text}" if reasons else text,
        days=Amount(figures["interval"], "day", "time"),
        dose=Amount(factor * figures["salt_dose"], "g/L", "salt dose"),
        salt=Amount(factor * figures["salt_per_year"], "kg", "mass"),
        water=Amount(figures["water_per_year"], "L", "volume", "large volume"),
    )


def _tone(found: Search, pick: Pick) -> str:
    return "good" if found.best is not None and not found.reasons(pick) else "bad"


def _rating(softener: Softener) -> Answer:
    figures = softener.search.figures(softener.pick)
    efficiency = figures["rated_efficiency"]
    met = ratings_met(efficiency, figures["rated_water"])
    named = {rating.key: rating for rating in efficiency_ratings()}
    if met:
        words = "Meets: " + "; ".join(f"{named[key].words} ({named[key].status})" for key in met) + "."
    else:
        words = "Meets none of the published efficiency ratings known here."
    steps = softener.ledger.working.leading_to(softener.salt_dose)
    marks = tuple(
        Mark(rating.key, Amount(rating.salt, "mol/kg", "salt efficiency"), rating.source)
        for rating in named.values()
        if rating.binding
    )
    amount = Amount(efficiency, "mol/kg", "salt efficiency")
    return Answer("rating", salt_efficiency.card.quantity, amount, say(words), steps, marks)


def _picture(task: Task, softener: Softener) -> Picture:
    """Salt a year against the salt setting, for the bed chosen."""
    found, factor = task.search(softener.bed), task.salt_factor
    bars = []
    for index, dose in enumerate(found.doses):
        pick = Pick(0, 0, index)
        figures = found.figures(pick)
        if isnan(figures["salt_per_year"]):
            continue
        bars.append(
            Bar(
                Amount(factor * float(dose), "g/L", "salt dose"),
                Amount(factor * figures["salt_per_year"], "kg", "mass"),
                _fate(found, pick, factor),
                not found.reasons(pick),
                abs(float(dose) - softener.salt_dose) < 0.5,
            )
        )
    return Picture("Salt a year by salt setting", "salt setting", "salt a year", tuple(bars), "softener.salt_dose")
