"""The jar test of a job: six jars around the dose, what to expect in each, and the dose that what was seen asks for."""

from __future__ import annotations

from math import nan

from core.chemistry.reagents import REAGENTS
from core.errors import InputError
from core.job.answers import Amount, Answer, Part, Phrase, Problem, say
from core.job.dose import Dosing
from core.job.dose_feed import WORDS, Fed
from core.job.dose_fields import JARS
from core.job.ledger import Ledger
from core.treatment.dosing import product_dose
from core.treatment.precipitation_jars import Correction, Jar, JarSheet, correct, jar_sheet
from core.working import formula


@formula(
    "Hardness to expect in a jar",
    "at equilibrium, and no less than plants are left with",
    unit="mmol/L",
    takes={"sheet": "", "jar": ""},
    source="PB82",
)
def jar_hardness(sheet: JarSheet, jar: str) -> float:
    """Hardness to expect in one jar. [mmol/L]"""
    return sheet.jars[int(jar) - 1].practice


@formula(
    "Dose by what was seen",
    "a straight line between the two jars on either side of the target; beyond them the computed curve, fitted",
    unit="mg/L",
    takes={"sheet": "", "seen": "mmol/L", "target": "mmol/L"},
    source="definition",
    validity="As good as the jars: same water, same mixing and settling as in the plant.",
)
def corrected_dose(sheet: JarSheet, seen: tuple[float, ...], target: float) -> float:
    """Pure chemical that the jars ask for. [mg/L]"""
    return correct(sheet, seen, target).dose


def assess_jars(dosing: Dosing) -> Part:
    """Six jars with one chemical varied, the others held; then the corrected dose."""
    if dosing.book is None or dosing.water is None or not dosing.fed:
        return Part("jars")
    ledger = Ledger(dosing.ledger.job, dosing.ledger.working)
    size, stock = ledger.read("dose.jar_size"), ledger.read("dose.stock")
    if size is None or stock is None:
        return ledger.part("jars", [])
    varied = dosing.fed[-1]  # soda ash where there is any: it has the last word on calcium
    slaked = REAGENTS[varied.chemical].molar_mass / varied.product.molar_mass
    sheet = jar_sheet(
        dosing.water, dosing.book.dose, varied.chemical, jar=size, stock=stock, purity=varied.purity * slaked
    )
    seen = tuple(ledger.read(f"dose.jar_{number}") for number in range(1, JARS + 1))
    jars = [_jar(ledger, sheet, number, jar, seen[number - 1], varied) for number, jar in enumerate(sheet.jars, 1)]
    return ledger.part("jars", [*_corrected(ledger, sheet, seen, dosing, varied), *jars, *_held(dosing, varied)])


def _jar(ledger: Ledger, sheet: JarSheet, number: int, jar: Jar, seen: float | None, varied: Fed) -> Answer:
    step = ledger.working.step
    expected = step(jar_hardness, sheet=sheet, jar=str(number))
    dose = jar.dose * _as_product(varied) / varied.purity
    shown = {
        "dose": Amount(dose, "mg/L"),
        "stock": Amount(jar.stock, "mL"),
        "ph": Amount(round(jar.ph, 1), ""),
        "least": Amount(jar.hardness, "mmol/L", "hardness"),
    }
    text = "{dose}: {stock} of stock. At equilibrium {least} and pH {ph}."
    if seen is not None:
        text += " Seen: {seen}."
        shown["seen"] = Amount(seen, "mmol/L", "hardness")
    amount = Amount(expected, "mmol/L", "hardness")
    return Answer(
        f"jar_{number}", f"Jar {number}, to expect", amount, say(text, **shown), ledger.working.leading_to(expected)
    )


def _as_product(varied: Fed) -> float:
    """Pure chemical of the product for a unit of the reagent of the chemistry: quicklime weighs less than its lime."""
    return varied.product.molar_mass / REAGENTS[varied.chemical].molar_mass


def _held(dosing: Dosing, varied: Fed) -> list[Answer]:
    """What goes into every jar alike."""
    return [
        Answer(
            f"held_{fed.chemical}",
            f"{fed.answer.label}, in every jar",
            Amount(fed.dose, "mg/L"),
            say("First, and stirred in, before the jars differ."),
            fed.answer.steps,
        )
        for fed in dosing.fed
        if fed is not varied
    ]


def _corrected(
    ledger: Ledger, sheet: JarSheet, seen: tuple[float | None, ...], dosing: Dosing, varied: Fed
) -> list[Answer]:
    if all(value is None for value in seen):
        return []
    values = tuple(nan if value is None else value for value in seen)
    try:
        found = correct(sheet, values, dosing.target)
    except InputError as error:
        ledger.problems["dose.jar_1"] = Problem("dose.jar_1", "error", str(error))
        return []
    if found.method == "none":
        text = "The target was not reached in any jar, and more of it would not get there either."
        ledger.problems[f"dose.jar_{JARS}"] = Problem(f"dose.jar_{JARS}", "warning", text)
        return []
    step = ledger.working.step
    pure = step(corrected_dose, sheet=sheet, seen=tuple(v for v in seen), target=dosing.target)
    dose = step(product_dose, pure=pure * _as_product(varied), purity=varied.purity)
    words, tone = _method(found, varied)
    amount = Amount(dose, "g/m³")
    label = f"{WORDS[varied.chemical].capitalize()} by the jars, as sold"
    return [Answer("corrected", label, amount, words, ledger.working.leading_to(dose, pure), tone=tone)]


def _method(found: Correction, varied: Fed) -> tuple[Phrase, str]:
    factor = Amount(found.factor, "1", "share")
    computed = Amount(varied.dose, "g/m³")
    if found.method == "interpolation":
        text = "Between the two jars on either side of the target: {factor} of the computed {computed}."
        return say(text, factor=factor, computed=computed), "good"
    if found.method == "lowest jar":
        text = "The emptiest jar met the target already: {factor} of the computed {computed} or less. Try lower doses."
        return say(text, factor=factor, computed=computed), "watch"
    text = (
        "No jar met the target. By the computed curve laid through them: {factor} of {computed}. Try it in a jar first."
    )
    return say(text, factor=factor, computed=computed), "watch"
