"""A dose in the operator's hands: product as sold, solution, pump, kilograms a day, days from a bag."""

from __future__ import annotations

from dataclasses import dataclass
from math import isnan

from core.chemistry.reagents import REAGENTS
from core.errors import InputError
from core.job import dose_formulas as own
from core.job.answers import Amount, Answer, Assumption, Missing, Phrase, Problem, say
from core.job.ledger import Ledger
from core.treatment import dosing
from core.treatment import precipitation as books
from core.treatment.dosing import FeedPlan, Product

ENTRIES = {"soda_ash": "soda", "lime": "lime", "caustic": "caustic"}  # chemical -> how its entries are named
WORDS = {"soda_ash": "soda ash", "lime": "lime", "caustic": "caustic"}
LITTLE = 1e-9  # mmol/L


@dataclass(frozen=True, slots=True)
class Fed:
    """One chemical of the dose: the product, its dose as sold [mg/L], and the steps that led there."""

    chemical: str
    product: Product
    pure: float  # mg/L
    dose: float  # mg/L as sold
    purity: float
    answer: Answer

    @property
    def words(self) -> str:
        """What the product is called."""
        return _words(self.product)

    @property
    def pure_as_reagent(self) -> float:
        """The pure dose as the chemistry counts it: quicklime as the hydrated lime it turns into. [mg/L]"""
        return self.pure * REAGENTS[self.chemical].molar_mass / self.product.molar_mass


def _words(product: Product) -> str:
    """What it is called: the grade of soda ash matters to the hopper, not to the dose."""
    return "soda ash" if product.pure == "soda_ash" else product.words


def fed_products(ledger: Ledger, amounts: dict[str, float]) -> tuple[Fed, ...]:
    """The products that these amounts of pure chemicals [mmol/L] take."""
    keys = {"soda_ash": "soda-ash", "lime": ledger.choice("dose.lime"), "caustic": ledger.choice("dose.caustic")}
    return tuple(
        _fed(ledger, chemical, dosing.products()[keys[chemical]], amount)
        for chemical, amount in amounts.items()
        if amount > LITTLE
    )


def _fed(ledger: Ledger, chemical: str, product: Product, amount: float) -> Fed:
    w = ledger.working
    pure = w.step(books.mass, amount=amount, molar_mass=product.molar_mass)
    purity = _purity(ledger, chemical, product)
    dose = w.step(dosing.product_dose, pure=pure, purity=purity)
    words = say(
        "In each m³ of water, as sold at {purity}; {pure} of the pure chemical.",
        purity=Amount(purity, "1", "share"),
        pure=Amount(pure, "g/m³"),
    )
    answer = Answer(
        chemical, _words(product)[0].upper() + _words(product)[1:], Amount(dose, "g/m³"), words, w.leading_to(dose)
    )
    return Fed(chemical, product, pure, dose, purity, answer)


def _purity(ledger: Ledger, chemical: str, product: Product) -> float:
    key = f"dose.{ENTRIES[chemical]}_purity"
    entered = ledger.read(key) if chemical != "caustic" else None
    if entered is not None:
        return entered
    low, high = (f"{100 * end:g}" for end in product.purity_range)
    if chemical != "caustic":
        why = f"Usual for {product.words}, which is sold at {low} to {high} %: read the bag."
        ledger.assumptions[key] = Assumption(key, Amount(product.purity, "1", "share"), why, product.source)
    return product.purity


def feed_answers(ledger: Ledger, fed: tuple[Fed, ...]) -> list[Answer]:
    """Pump, bags, batches and tanks for each product, as far as flow and volumes were entered."""
    flow, daily, tank = (ledger.read(f"dose.{name}") for name in ("flow", "volume", "tank"))
    if not (flow or daily or tank):
        text = "Enter the flow, the water a day or the tank: for the pump, the bags, or what to weigh in."
        ledger.missing["dose.flow"] = Missing("dose.flow", text)
        return []
    answers: list[Answer] = []
    for product in fed:
        answers += _tank(ledger, product, tank) if tank else []
        answers += _pumped(ledger, product, flow, daily) if flow or daily else []
    return answers


def _tank(ledger: Ledger, fed: Fed, tank: float) -> list[Answer]:
    w = ledger.working
    kg = w.step(dosing.used, volume=tank, dose=fed.dose)
    words = say("For the tank of {tank}. Dissolve it first, then stir it in.", tank=Amount(tank, "L", "volume", "tank"))
    label = f"{fed.answer.label}, for the tank"
    return [Answer(f"{fed.chemical}_tank", label, Amount(kg, "kg", "mass"), words, w.leading_to(kg))]


def _pumped(ledger: Ledger, fed: Fed, flow: float | None, daily: float | None) -> list[Answer]:
    strength, temperature = _strength(ledger, fed), ledger.read("dose.solution_temperature")
    if temperature is None or strength == 0.0:
        return []
    try:
        plan = dosing.feed_plan(
            fed.product.key,
            fed.pure,
            flow or 0.0,
            daily or 0.0,
            strength=strength,
            purity=fed.purity,
            temperature=temperature,
        )
    except InputError as error:
        key = "dose.solution_temperature" if error.field == "temperature" else _strength_key(fed)
        ledger.problems[key] = Problem(key, "error", str(error))
        return []
    if strength is None:
        _assume_strength(ledger, fed, plan, temperature)
    answers = _feed(ledger, fed, plan, flow) if flow else []
    return [*answers, *(_daily(ledger, fed, daily) if daily else []), *_batch(ledger, fed, plan, daily)]


def _strength_key(fed: Fed) -> str:
    return f"dose.{ENTRIES[fed.chemical]}_strength"


def _strength(ledger: Ledger, fed: Fed) -> float | None:
    """The strength as entered; None where it was left open, 0 where what was entered is refused."""
    key = _strength_key(fed)
    entered = ledger.read(key)
    return 0.0 if entered is None and key in ledger.job.entries else entered


def _assume_strength(ledger: Ledger, fed: Fed, plan: FeedPlan, temperature: float) -> None:
    key, source = _strength_key(fed), "common practice, no source"
    if fed.product.feed == "liquid":
        why, source = "Fed as it comes.", fed.product.source
    elif fed.product.pure == "soda_ash":
        most = dosing.largest_strength(dosing.solubility("soda_ash", temperature))
        why = f"At {temperature:.0f} °C {100 * most:.1f} % dissolves at the most; this stays clear."
        source = "CRC-HANDBOOK"
    else:
        why = "Usual: it runs without settling in the hose."
    ledger.assumptions[key] = Assumption(key, Amount(plan.strength, "1", "share"), why, source)


def _in_slurry(ledger: Ledger, fed: Fed) -> float:
    """The dose as the pump feeds it: of quicklime the hydrated lime it was slaked to. [mg/L]"""
    if fed.product.feed != "slaked":
        return fed.pure
    hydrated = dosing.products()["hydrated-lime"].molar_mass
    return ledger.working.step(own.slaked, dose=fed.pure, ratio=hydrated / fed.product.molar_mass)


def _feed(ledger: Ledger, fed: Fed, plan: FeedPlan, flow: float) -> list[Answer]:
    w = ledger.working
    dose = _in_slurry(ledger, fed)
    feed = w.step(dosing.feed_rate, flow=flow, dose=dose, strength=plan.strength, density=plan.density)
    kind = "slurry" if fed.product.feed in ("slurry", "slaked") else "solution"
    answers = [
        Answer(
            f"{fed.chemical}_feed",
            f"Pump, {WORDS[fed.chemical]} {kind}",
            Amount(feed, "mL/min"),
            _feed_words(ledger, plan, feed, flow),
            w.leading_to(feed),
        )
    ]
    capacity = ledger.read("dose.pump_capacity")
    if capacity is not None:
        setting = w.step(dosing.pump_setting, feed=feed, capacity=capacity)
        low, high = dosing.PUMP_RANGE
        if setting > 1.0:
            words, tone = "The pump is too small: a larger one, or a stronger solution.", "bad"
        elif not low <= setting <= high:
            words, tone = "Outside 10 to 90 % a pump loses its accuracy: change the strength or the stroke.", "watch"
        else:
            words, tone = "Of its full stroke and speed. Check it with a graduated cylinder.", "good"
        answers.append(
            Answer(
                f"{fed.chemical}_setting",
                f"Pump setting, {WORDS[fed.chemical]}",
                Amount(setting, "1", "share"),
                say(words),
                w.leading_to(setting),
                tone=tone,
            )
        )
    return answers


def _feed_words(ledger: Ledger, plan: FeedPlan, feed: float, flow: float) -> Phrase:
    shown = {"strength": Amount(plan.strength, "1", "share"), "flow": Amount(flow, "L/min", "flow")}
    stroke = ledger.read("dose.stroke")
    if stroke is None:
        return say("Of {strength} by weight, while {flow} of water runs.", **shown)
    rate = ledger.working.step(dosing.strokes, feed=feed, stroke=stroke)
    text = "{rate} strokes a minute, of {strength} by weight, while {flow} of water runs."
    return say(text, rate=Amount(rate, ""), **shown)


def _daily(ledger: Ledger, fed: Fed, daily: float) -> list[Answer]:
    w = ledger.working
    kg = w.step(own.daily_mass, volume=daily, concentration=fed.dose)
    entered = ledger.read("dose.bag")
    bag = fed.product.bag if entered is None else entered
    label = f"{fed.answer.label}, a day"
    if isnan(bag):
        words = say("As sold.")
        steps = w.leading_to(kg)
    else:
        days = w.step(dosing.days_per_bag, bag=bag, daily=kg)
        words = say("A bag of {bag} lasts {days}.", bag=Amount(bag, "kg", "mass"), days=Amount(days, "day", "time"))
        steps = w.leading_to(kg, days)
    return [Answer(f"{fed.chemical}_daily", label, Amount(kg, "kg/day", "mass flow"), words, steps)]


def _batch(ledger: Ledger, fed: Fed, plan: FeedPlan, daily: float | None) -> list[Answer]:
    batch = ledger.read("dose.batch")
    if batch is None or (fed.product.feed == "liquid" and plan.strength > 0.999 * fed.purity):
        return []
    w = ledger.working
    as_fed = fed.purity / (_in_slurry(ledger, fed) / fed.pure)  # of quicklime, what a kilogram gives in the slurry
    kg = w.step(dosing.batch_product, volume=batch, strength=plan.strength, density=plan.density, purity=as_fed)
    water = w.step(dosing.batch_water, volume=batch, density=plan.density, product=kg)
    text = "Into {water} of water, to make {batch}."
    shown = {"water": Amount(water, "L", "volume", "tank"), "batch": Amount(batch, "L", "volume", "tank")}
    if daily:
        need = dosing.used(daily, fed.dose)
        text += " Lasts {days}."
        shown["days"] = Amount(dosing.days_per_bag(kg, need), "day", "time")
    label = f"{fed.answer.label}, for a batch"
    return [
        Answer(f"{fed.chemical}_batch", label, Amount(kg, "kg", "mass"), say(text, **shown), w.leading_to(kg, water))
    ]
