"""The dose of a job: soda ash, lime or caustic for a hardness, and what it leaves by the textbook, at equilibrium, in
practice.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import isnan

from core.chemistry import Solution
from core.chemistry.residual import ideal_calcium
from core.errors import InputError
from core.job import dose_formulas as own
from core.job.answers import Amount, Answer, Mark, Part, Problem, say
from core.job.blend import sodium_sum
from core.job.cautions import dose_cautions
from core.job.dose_feed import Fed, fed_products, feed_answers
from core.job.ledger import Ledger
from core.job.record import Job
from core.job.scale import water_of
from core.treatment import precipitation as books
from core.treatment.precipitation import BookDose, Goal, RawWater

CHEMICALS = {
    "soda": ("soda_ash",),
    "lime": ("lime",),
    "lime-soda": ("lime", "soda_ash"),
    "excess-lime-soda": ("lime", "soda_ash"),
    "caustic": ("caustic",),
    "caustic-soda": ("caustic", "soda_ash"),
}
MAGNESIUM_FALLS = ("excess-lime-soda", "caustic", "caustic-soda")


@dataclass(frozen=True, slots=True)
class Dosing:
    """What is known of the dose: the water, the book dose, how each chemical is fed; and its part."""

    part: Part
    ledger: Ledger
    water: Solution | None = None
    process: str = ""
    goal: Goal | None = None
    target: float = 0.0
    excess: float = 0.0
    book: BookDose | None = None
    fed: tuple[Fed, ...] = ()


def assess_dose(job: Job) -> Dosing:
    """Dose, residuals three ways, sodium, and what the operator sets, with their working."""
    ledger = Ledger(job)
    process = ledger.choice("dose.process")
    cautions = dose_cautions(CHEMICALS[process], ledger.choice("dose.lime") == "quicklime")
    target = ledger.need("dose.target", "Enter the hardness wanted after dosing.")
    water = water_of(ledger)
    if water is None or target is None:
        return Dosing(ledger.part("dose", [], cautions), ledger)
    raw = _raw(ledger, water)
    lowered = ledger.read("dose.magnesium") if process in MAGNESIUM_FALLS else None
    goal = Goal(hardness=target, magnesium=lowered)
    found = _book(ledger, process, raw, goal)
    if found is None:
        return Dosing(ledger.part("dose", [], cautions), ledger)
    book, excess, amounts = found
    fed = fed_products(ledger, amounts)
    answers = [*_residuals(ledger, water, raw, book, target, fed, amounts), *_sodium(ledger, amounts)]
    answers += feed_answers(ledger, fed)
    part = ledger.part("dose", [answer for answer in answers if not isnan(answer.amount.value)], cautions)
    return Dosing(part, ledger, water, process, goal, target, excess, book, fed)


def _raw(ledger: Ledger, water: Solution) -> RawWater:
    step = ledger.working.step
    return RawWater(
        step(own.calcium_of, water=water),
        step(own.magnesium_of, water=water),
        step(own.alkalinity_of, water=water),
        step(own.co2_of, water=water),
    )


def _book(ledger: Ledger, process: str, raw: RawWater, goal: Goal) -> tuple[BookDose, float, dict[str, float]] | None:
    """The dose by the books, and the amounts of its chemicals as steps; None where it cannot be, as noted."""
    excess = books.EXCESS_LIME
    try:
        calcium, magnesium = books.targets(process, raw, goal)
        if magnesium < raw.magnesium:
            entered = ledger.read("dose.excess")
            if entered is None:
                return None
            excess = entered
        book = books.book_dose(process, raw, goal, excess)
    except InputError as error:
        where = "dose.magnesium" if error.field == "magnesium" else "dose.target"
        ledger.problems[where] = Problem(where, "error", str(error))
        return None
    amounts = _amounts(ledger, process, raw, (calcium, magnesium), excess)
    if not any(amounts.values()):
        text = "The water is no harder than that already: nothing needs to be dosed."
        ledger.problems["dose.target"] = Problem("dose.target", "warning", text)
        return None
    return book, excess, amounts


def _amounts(ledger: Ledger, process: str, raw: RawWater, left: tuple[float, float], excess: float) -> dict[str, float]:
    """The dose of each chemical [mmol/L], a step each: the formulas `book_dose` uses."""
    step = ledger.working.step
    calcium = step(own.to_remove, there=raw.calcium, left=left[0], note="calcium")
    if process == "soda":
        return {"soda_ash": step(books.soda_for_calcium, removed=calcium)}
    if process in ("lime", "lime-soda"):
        return _lime_for_calcium(ledger, process, raw, calcium)
    magnesium = step(own.to_remove, there=raw.magnesium, left=left[1], note="magnesium")
    if process == "excess-lime-soda":
        common = {"alkalinity": raw.alkalinity, "magnesium": magnesium}
        lime = step(books.lime_for_magnesium, co2=raw.co2, excess=excess if magnesium else 0.0, **common)
        return {"lime": lime, "soda_ash": step(books.soda_after_lime, calcium=raw.calcium, target=left[0], **common)}
    return _caustic(ledger, process, raw, (calcium, magnesium), excess)


def _lime_for_calcium(ledger: Ledger, process: str, raw: RawWater, calcium: float) -> dict[str, float]:
    step = ledger.working.step
    if not calcium:
        return {"lime": 0.0}
    held = step(books.carbonate_calcium, calcium=raw.calcium, alkalinity=raw.alkalinity)
    taken = step(own.by_lime, removed=calcium, carbonate=held)
    amounts = {"lime": step(books.lime_for_calcium, co2=raw.co2, carbonate=taken)}
    if process == "lime-soda":
        rest = step(own.left_to_soda, removed=calcium, taken=taken)
        amounts["soda_ash"] = step(books.soda_for_calcium, removed=rest)
    return amounts


def _caustic(
    ledger: Ledger, process: str, raw: RawWater, remove: tuple[float, float], excess: float
) -> dict[str, float]:
    step = ledger.working.step
    calcium, magnesium = remove
    most = step(own.carbonate_by_caustic, co2=raw.co2, alkalinity=raw.alkalinity)
    if magnesium:
        caustic = step(
            books.caustic_for_magnesium,
            co2=raw.co2,
            alkalinity=raw.alkalinity,
            magnesium=magnesium,
            excess=2.0 * excess,
        )
    elif calcium:
        taken = step(own.by_lime, removed=calcium, carbonate=most)
        caustic = step(books.caustic_for_calcium, co2=raw.co2, removed=taken)
    else:
        caustic = 0.0
    amounts = {"caustic": caustic}
    if process == "caustic-soda":
        rest = step(own.left_to_soda, removed=calcium, taken=most)
        amounts["soda_ash"] = step(books.soda_for_calcium, removed=rest)
    return amounts


def _residuals(
    ledger: Ledger,
    water: Solution,
    raw: RawWater,
    book: BookDose,
    target: float,
    fed: tuple[Fed, ...],
    amounts: dict[str, float],
) -> list[Answer]:
    """Hardness left in practice, which leads; by the textbook, at equilibrium; and the dose itself."""
    textbook = _textbook(ledger, water, book)
    dose = {name: amounts.get(name, 0.0) for name in ("soda_ash", "lime", "caustic")}
    settled = ledger.working.step(own.equilibrium_hardness, water=water, **dose)
    low, high = books.PRACTICAL_CALCIUM
    left = {
        "calcium_left": book.calcium,
        "calcium": raw.calcium,
        "magnesium": book.practice_magnesium,
        "floor": 0.0 if book.excess else settled,
    }
    practice = ledger.working.step(own.practice_hardness, unsettled=(low + high) / 2.0, **left)
    ends = tuple(own.practice_hardness(unsettled=end, **left) for end in (low, high))
    marks = (
        Mark("textbook", _hard(textbook), "definition"),
        Mark("equilibrium", _hard(settled), "PB82"),
        Mark("wanted", _hard(target)),
    )
    leading = ledger.working.leading_to
    doses = ", ".join(f"{{dose_{i}}} of {f.words}" for i, f in enumerate(fed))
    shown = {f"dose_{i}": Amount(f.dose, "g/m³") for i, f in enumerate(fed)}
    missed = "" if book.reached else " This chemical alone cannot come down to what is wanted."
    reached = "practice {low} to {high}" if ends[1] > ends[0] else "and practice no lower"
    text = f"With {doses}, as sold: textbook {{book}}, equilibrium {{settled}}, {reached}.{missed}"
    words = say(text, **shown, book=_hard(textbook), settled=_hard(settled), low=_hard(ends[0]), high=_hard(ends[1]))
    tone = "watch" if not book.reached or ends[1] > target * 1.001 else "plain"
    return [
        Answer(
            "practice",
            "Practical residual",
            _hard(practice),
            words,
            leading(practice),
            marks,
            tone=tone,
        ),
        Answer(
            "textbook",
            "Textbook residual (product rule)",
            _hard(textbook),
            say("By equivalents and the solubility product alone: water does not keep to it."),
            leading(textbook),
        ),
        Answer(
            "equilibrium",
            "Equilibrium residual",
            _hard(settled),
            say(_compared(settled, textbook, book.excess)),
            leading(settled),
        ),
        *[f.answer for f in fed],
    ]


def _textbook(ledger: Ledger, water: Solution, book: BookDose) -> float:
    step = ledger.working.step
    ksp = step(own.solubility_product, water=water)
    over = step(own.carbonate_over, calcium_left=book.calcium)
    calcium = step(ideal_calcium, solubility_product=ksp, carbonate=over)
    return step(own.textbook_hardness, calcium=calcium, magnesium=book.magnesium)


def _compared(settled: float, textbook: float, excess: float) -> str:
    if excess:
        return "Before CO₂: the calcium of the excess lime is still in it, until CO₂ takes it out."
    if settled > 1.05 * textbook:
        return "What the water comes to in time: CO₂, bicarbonate, ion pairs and activity keep more in it."
    if settled < 0.95 * textbook:
        return "What the water comes to in time: it also drops lime that it held too much of by itself."
    return "What the water comes to in time; near the textbook here."


def _hard(value: float) -> Amount:
    return Amount(value, "mmol/L", "hardness")


def _sodium(ledger: Ledger, amounts: dict[str, float]) -> list[Answer]:
    step = ledger.working.step
    soda, caustic = amounts.get("soda_ash", 0.0), amounts.get("caustic", 0.0)
    if not soda and not caustic:
        return []
    added = step(books.sodium_from, soda_ash=soda, caustic=caustic)
    before = ledger.read("water.sodium")
    if before is None:
        words = say("The sodium of the raw water comes on top: enter it to hold the sum against the limits.")
        steps = ledger.working.leading_to(added)
        return [Answer("sodium_added", "Sodium added", Amount(added, "mg/L Na", "sodium"), words, steps)]
    total = step(own.sodium_sum, sodium=before, added=added)
    return [sodium_sum(total, ledger.working.leading_to(total))]
