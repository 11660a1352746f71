"""What the water of a job does: lime in the heater, balance at the tap, attack on pipes."""

from __future__ import annotations

from math import isfinite

from core.chemistry import Solution, precipitation_potential, scale_per_year, scale_potential, speciate, stability
from core.chemistry.index_bands import SCALES
from core.errors import InputError
from core.job import scale_water
from core.job.answers import Amount, Answer, Assumption, Mark, Part, Problem, say
from core.job.cautions import SCALD, scale_cautions
from core.job.demand import Demand
from core.job.ledger import Ledger
from core.job.record import Job
from core.treatment.demand import hot_water_volume

INDEX_NAMES = {
    "langelier full": "Langelier index",
    "ryznar": "Ryznar index",
    "puckorius": "Puckorius index",
    "aggressiveness": "Aggressiveness index",
    "larson": "Larson ratio",
    "galvanised": "Ratio S1, galvanised steel",
    "copper": "Ratio S, copper in hot water",
}
DEAD_BAND = 0.5  # of the saturation index, as of the Langelier index; common practice, no source
NO_SUCH_WATER = "No water has this pH together with this alkalinity and hardness: look at the three readings again."
LITTLE_SCALE = 0.1  # kg a year, below which the heater is called safe; our choice


def assess_scale(job: Job, demand: Demand) -> Part:
    """Scale in the heater a year, saturation cold and hot, and the indices, with their working."""
    ledger = Ledger(job)
    water = water_of(ledger)
    heater = ledger.read("scale.heater_temperature")
    if water is None or heater is None:
        return ledger.part("scale", [], scale_cautions())
    try:
        answers = _answers(ledger, water, heater, demand)
    except InputError as error:
        ledger.problems["water.ph"] = Problem("water.ph", "error", str(error))
        answers = []
    return ledger.part("scale", answers, (SCALD, *scale_cautions()))


def water_of(ledger: Ledger) -> Solution | None:
    """The water of the job as the chemistry takes it; None where something is missing or cannot be, as noted."""
    temp_c = ledger.read("water.temperature")
    hardness = ledger.need("water.hardness", "Enter the hardness of the water.")
    ph = ledger.need("water.ph", "Enter the pH, to see whether the water lays down lime or dissolves it.")
    alkalinity = ledger.need("water.alkalinity", "Enter the alkalinity, to see how much lime heating throws out.")
    if None in (temp_c, hardness, ph, alkalinity):
        return None
    known = {"temp_c": temp_c, "ph": ph, "alkalinity": alkalinity}
    try:
        if all(f"water.{ion}" in ledger.job.entries for ion in scale_water.WHOLE):
            return _analysed(ledger, known)
        return _completed(ledger, known | {"hardness": hardness})
    except InputError as error:
        ledger.problems["water.alkalinity"] = Problem("water.alkalinity", "error", str(error))
        return None


def _analysed(ledger: Ledger, known: dict[str, float]) -> Solution | None:
    ions = {ion: ledger.read(f"water.{ion}") for ion in scale_water.WHOLE}
    if None in ions.values():
        return None
    ions |= _entered(ledger, "potassium", "nitrate")
    ions["sodium"] = ledger.working.step(scale_water.sodium_in_mmol, sodium=ions["sodium"])
    return ledger.working.step(scale_water.water_from_analysis, **known, **ions)


def _completed(ledger: Ledger, known: dict[str, float]) -> Solution:
    known |= _entered(ledger, "conductivity", "calcium", "magnesium")
    ledger.assumptions["water.other"] = Assumption(
        "water.other",
        None,
        "Ions that were not entered are filled in so that the charges balance; a full analysis (calcium, magnesium, "
        "sodium, chloride, sulfate) is used as it is.",
        "SM1030E",
    )
    return ledger.working.step(scale_water.water_from_reading, **known)


def _entered(ledger: Ledger, *names: str) -> dict[str, float]:
    found = {name: ledger.read(f"water.{name}") for name in names if f"water.{name}" in ledger.job.entries}
    return {name: value for name, value in found.items() if value is not None}


def _answers(ledger: Ledger, water: Solution, heater: float, demand: Demand) -> list[Answer]:
    step = ledger.working.step
    hot = step(scale_water.heated, solution=water, temp_c=heater)
    potential = step(precipitation_potential, solution=hot)
    _note_ranges(ledger, water, hot)
    cold_index, hot_index = (step(scale_water.calcite_index, solution=solution) for solution in (water, hot))
    answers = [
        *_scale_a_year(ledger, water, heater, demand, potential),
        _index("hot", "Saturation index in the heater", hot_index, ledger),
        _index("cold", "Saturation index at the tap", cold_index, ledger),
        Answer(
            "potential",
            "Lime that heating can throw out",
            Amount(potential, "mg/L CaCO3"),
            say("So many grams in each cubic metre of hot water; below zero it would dissolve lime instead."),
            ledger.working.leading_to(potential),
        ),
        *_indices(ledger, water),
    ]
    found = [answer for answer in answers if isfinite(answer.amount.value)]
    if not found:
        ledger.problems["water.ph"] = Problem("water.ph", "error", NO_SUCH_WATER)
    return found


def _note_ranges(ledger: Ledger, *waters: Solution) -> None:
    """Say where a water lies outside the range its constants were fitted in; it is computed all the same."""
    said = dict.fromkeys(note for water in waters for note in speciate(water).notes)
    if said:
        ledger.problems["water.conductivity"] = Problem("water.conductivity", "warning", " ".join(said), "PB82")


def _scale_a_year(ledger: Ledger, water: Solution, heater: float, demand: Demand, potential: float) -> list[Answer]:
    if demand.total is None:
        ledger.take(demand.ledger)
        return []
    ledger.take(demand.ledger, demand.total)
    share = ledger.read("scale.hot_share")
    if share is None:
        return []
    step = ledger.working.step
    volume = step(hot_water_volume, volume=demand.total, hot_share=share)
    lime = step(scale_water.thrown_out, potential=potential)
    year = step(scale_per_year, potential=lime, volume=volume)
    band = scale_potential(water, heater)
    low, high = (scale_per_year(end, volume) for end in (band.low, band.high))
    degrees = Amount(heater, "°C", "temperature")
    if high < LITTLE_SCALE:
        words, tone = say("Next to no lime falls out in the heater at {heater}.", heater=degrees), "good"
    else:
        words = say(
            "So much lime a year in the heater at {heater}: {low} to {high}, by the constants and its form; an upper "
            "bound.",
            heater=degrees,
            low=Amount(low, "kg", "mass"),
            high=Amount(high, "kg", "mass"),
        )
        tone = "watch"
    return [
        Answer(
            "scale_year",
            "Lime in the heater a year",
            Amount(year, "kg", "mass"),
            words,
            ledger.working.leading_to(year),
            band=(low, high),
            tone=tone,
        )
    ]


def _index(key: str, label: str, value: float, ledger: Ledger) -> Answer:
    if value > DEAD_BAND:
        words, tone = "Lays down lime.", "watch"
    elif value < -DEAD_BAND:
        words, tone = "Dissolves lime: no protecting layer, cement and bare metal are attacked.", "watch"
    else:
        words, tone = "Near balance: neither lays down nor dissolves much.", "good"
    marks = (Mark("balance", Amount(0.0, "")),)
    return Answer(key, label, Amount(value, ""), say(words), ledger.working.leading_to(value), marks, tone=tone)


def _indices(ledger: Ledger, water: Solution) -> list[Answer]:
    found = stability(water)
    ledger.working.steps += found.working.steps
    answers = []
    for name, label in INDEX_NAMES.items():
        value = found.values[name]
        scale = SCALES["langelier" if name.startswith("langelier") else name]
        band = scale.band(float(value))
        if band is None:
            continue
        words = say(f"{band.words.capitalize()}. Made for {scale.made_for}; an index, not a measurement.")
        answers.append(
            Answer(
                name.replace(" ", "_"), label, Amount(float(value), ""), words, ledger.working.leading_to(value, water)
            )
        )
    return answers
