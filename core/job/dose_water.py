"""What the dose of a job does to the water: pH, alkalinity, CO2, sludge, heating; and the dose equilibrium asks for."""

from __future__ import annotations

from math import isnan

from core.chemistry.reagents import REAGENTS
from core.errors import InputError
from core.job import dose_formulas as own
from core.job.answers import Amount, Answer, Mark, Part, Problem, say
from core.job.dose import Dosing
from core.job.dose_formulas import Asked
from core.job.ledger import Ledger
from core.job.scale import DEAD_BAND
from core.treatment import precipitation as books
from core.treatment.precipitation_plan import Plan

SOLIDS = 0.05  # of settled sludge by weight; common practice, no source
DRINKABLE = (6.5, 9.5)  # pH [EU2020-2184]
LITTLE_LIME = 10.0  # mg/kg CaCO3 that no heater minds; our choice
AT_EQUILIBRIUM = {
    "soda_ash": own.equilibrium_soda,
    "lime": own.equilibrium_lime,
    "caustic": own.equilibrium_caustic,
}


def assess_dose_water(dosing: Dosing) -> Part:
    """The finished water, and what comes with it."""
    if dosing.book is None or dosing.water is None or dosing.goal is None:
        return Part("dose_water")
    ledger = Ledger(dosing.ledger.job, dosing.ledger.working)
    ph, heated = ledger.read("dose.ph_after"), ledger.read("scale.heater_temperature")
    if ph is None or heated is None:
        return ledger.part("dose_water", [])
    stages = int(ledger.choice("dose.stages"))
    asked = Asked(dosing.process, dosing.target, dosing.goal.magnesium, dosing.excess, stages, ph, heated)
    try:
        plan = own.plan_of(dosing.water, asked)
    except InputError as error:
        ledger.problems["dose.target"] = Problem("dose.target", "error", str(error))
        return ledger.part("dose_water", [])
    answers = [
        *_ph(ledger, dosing, asked),
        *_co2(ledger, dosing, asked, plan),
        _alkalinity(ledger, dosing, asked),
        _saturation(ledger, dosing, asked),
        _heated(ledger, dosing, asked, plan),
        *_sludge(ledger, dosing, asked),
        *_by_equilibrium(ledger, dosing, asked, plan),
    ]
    return ledger.part("dose_water", [answer for answer in answers if not isnan(answer.amount.value)])


def _ph(ledger: Ledger, dosing: Dosing, asked: Asked) -> list[Answer]:
    step = ledger.working.step
    settled = step(own.practice_ph, water=dosing.water, asked=asked)
    answers = [_ph_answer(ledger, "ph", "pH after dosing", settled, last=not asked.stages)]
    if asked.stages:
        final = step(own.final_ph, water=dosing.water, asked=asked)
        answers.append(_ph_answer(ledger, "ph_after", "pH after CO₂", final, last=True))
    return answers


def _ph_answer(ledger: Ledger, key: str, label: str, ph: float, *, last: bool) -> Answer:
    marks = (Mark("highest, EU", Amount(DRINKABLE[1], ""), "EU2020-2184"),)
    if ph <= DRINKABLE[1]:
        words, tone = "Within the range for drinking water.", "good"
    elif last:
        words, tone = "Too high for drinking water: bring it down with CO₂, or dose less.", "bad"
    else:
        words, tone = "Before CO₂; nobody drinks it like this.", "plain"
    return Answer(key, label, Amount(ph, ""), say(words), ledger.working.leading_to(ph), marks, tone=tone)


def _co2(ledger: Ledger, dosing: Dosing, asked: Asked, plan: Plan) -> list[Answer]:
    if not asked.stages:
        return []
    co2 = ledger.working.step(own.co2_needed, water=dosing.water, asked=asked)
    book = sum(plan.co2_book)
    if not all(stage.reached for stage in plan.recarbonation):
        words, tone = say("No amount of CO₂ brings this water to the pH wanted."), "bad"
    elif asked.stages == 1:
        words, tone = say("To pH {ph}; {book} by equivalents.", ph=Amount(asked.ph, ""), book=_gram(book)), "plain"
    else:
        first, second = (stage.mg_l for stage in plan.recarbonation)
        words = say(
            "{first}, settle, then {second} to pH {ph}; {book} by equivalents.",
            first=_gram(first),
            second=_gram(second),
            ph=Amount(asked.ph, ""),
            book=_gram(book),
        )
        tone = "plain"
    return [Answer("co2", "CO₂ needed", _gram(co2), words, ledger.working.leading_to(co2), tone=tone)]


def _gram(value: float) -> Amount:
    return Amount(value, "g/m³")


def _alkalinity(ledger: Ledger, dosing: Dosing, asked: Asked) -> Answer:
    value = ledger.working.step(own.final_alkalinity, water=dosing.water, asked=asked)
    words = say("Of the finished water: what buffers its pH.")
    amount = Amount(value, "meq/L", "alkalinity")
    return Answer("alkalinity", "Alkalinity after treatment", amount, words, ledger.working.leading_to(value))


def _saturation(ledger: Ledger, dosing: Dosing, asked: Asked) -> Answer:
    value = ledger.working.step(own.final_saturation, water=dosing.water, asked=asked)
    if value > DEAD_BAND:
        words, tone = "Still lays down lime on filters and in pipes; CO₂ takes it back.", "watch"
    elif value < -DEAD_BAND:
        words, tone = "Dissolves lime: too much CO₂, or too far softened.", "watch"
    else:
        words, tone = "Near balance.", "good"
    marks = (Mark("balance", Amount(0.0, "")),)
    label = "Saturation index after treatment"
    return Answer(
        "saturation",
        label,
        Amount(round(value, 2) + 0.0, ""),
        say(words),
        ledger.working.leading_to(value),
        marks,
        tone=tone,
    )


def _heated(ledger: Ledger, dosing: Dosing, asked: Asked, plan: Plan) -> Answer:
    value = ledger.working.step(own.lime_heated, water=dosing.water, asked=asked)
    heater = Amount(asked.heated, "°C", "temperature")
    text, tone = "As CaCO₃, at {heater}.", "plain"
    if value <= LITTLE_LIME:
        text, tone = "Next to none falls out at {heater}.", "good"
    if plan.magnesium_for_heaters:
        text, tone = f"{text} So much magnesium is left that it can deposit in heaters where the pH is high.", "watch"
    words = say(text, heater=heater)
    return Answer("heated", "Lime when heated", _gram(value), words, ledger.working.leading_to(value), tone=tone)


def _sludge(ledger: Ledger, dosing: Dosing, asked: Asked) -> list[Answer]:
    step = ledger.working.step
    dry = step(own.dry_sludge, water=dosing.water, asked=asked)
    wet = step(books.wet_sludge, dry=dry, solids=SOLIDS)
    daily = ledger.read("dose.volume")
    if not daily:
        words = say("Dry; {wet} as it settles, at 5 % solids.", wet=Amount(wet, "L/m³"))
        return [Answer("sludge", "Sludge", _gram(dry), words, ledger.working.leading_to(dry, wet))]
    kg = step(own.daily_mass, volume=daily, concentration=dry)
    words = say(
        "Dry, and {wet} of wet sludge, at 5 % solids; {gram} of water.",
        wet=Amount(wet * daily / 1000.0, "L/day", "flow", "daily volume"),
        gram=_gram(dry),
    )
    amount = Amount(kg, "kg/day", "mass flow")
    return [Answer("sludge", "Sludge a day", amount, words, ledger.working.leading_to(kg, wet))]


def _by_equilibrium(ledger: Ledger, dosing: Dosing, asked: Asked, plan: Plan) -> list[Answer]:
    answers = []
    for fed in dosing.fed:
        step = ledger.working.step
        amount = step(AT_EQUILIBRIUM[fed.chemical], water=dosing.water, asked=asked)
        pure = step(books.mass, amount=amount, molar_mass=REAGENTS[fed.chemical].molar_mass)
        if plan.equilibrium.reached:
            words, tone = "Pure, to come to the target at equilibrium; {book} by the textbook.", "plain"
        else:
            words, tone = "Pure: beyond this more does not help, and the target is not reached at equilibrium.", "watch"
        answers.append(
            Answer(
                f"equilibrium_{fed.chemical}",
                f"{REAGENT_NAMES[fed.chemical]} that equilibrium asks for",
                _gram(pure),
                say(words, book=_gram(fed.pure_as_reagent)),
                ledger.working.leading_to(pure),
                tone=tone,
            )
        )
    return answers


REAGENT_NAMES = {"soda_ash": "Soda ash", "lime": "Hydrated lime", "caustic": "Caustic"}
