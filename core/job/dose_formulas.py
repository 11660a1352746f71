"""What the Dose section reckons beyond the formulas of the treatment: each with a card, so that working can show it."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

from core.chemistry import Solution, speciate
from core.chemistry.thermodynamics import log_k
from core.treatment.broadcast import Number, broadcasts, larger, smaller
from core.treatment.precipitation import Dose, Goal
from core.treatment.precipitation_plan import Plan, plan
from core.treatment.precipitation_water import Settled, settle
from core.working import formula

_WATER = {"water": ""}
_DOSE = {"water": "", "soda_ash": "mmol/L", "lime": "mmol/L", "caustic": "mmol/L"}


@formula("Calcium of the water", "as analysed or completed", unit="mmol/L", takes=_WATER, source="definition")
def calcium_of(water: Solution) -> float:
    """Calcium of a water. [mmol/L]"""
    return float(water.ca)  # type: ignore[arg-type]


@formula("Magnesium of the water", "as analysed or completed", unit="mmol/L", takes=_WATER, source="definition")
def magnesium_of(water: Solution) -> float:
    """Magnesium of a water. [mmol/L]"""
    return float(water.mg)  # type: ignore[arg-type]


@formula("CO₂ of the water", "from pH, alkalinity and temperature", unit="mmol/L", takes=_WATER, source="PB82")
def co2_of(water: Solution) -> float:
    """Carbon dioxide dissolved in a water. [mmol/L]"""
    return float(speciate(water).co2)  # type: ignore[arg-type]


@formula("Alkalinity of the water", "none below zero", unit="meq/L", takes=_WATER, source="definition")
def alkalinity_of(water: Solution) -> float:
    """Alkalinity as the books count it. [meq/L]"""
    return max(float(speciate(water).alkalinity), 0.0)  # type: ignore[arg-type]


@formula(
    "To be removed",
    "removed = there − to be left",
    unit="mmol/L",
    takes={"there": "mmol/L", "left": "mmol/L"},
    source="definition",
)
@broadcasts
def to_remove(there: Number, left: Number) -> Number:
    """Calcium or magnesium to be removed. [mmol/L]"""
    return larger(there - left, 0.0)


@formula(
    "Of that as bicarbonate",
    "the smaller of what is to go and what bicarbonate holds",
    unit="mmol/L",
    takes={"removed": "mmol/L", "carbonate": "mmol/L"},
    source="definition",
)
@broadcasts
def by_lime(removed: Number, carbonate: Number) -> Number:
    """Calcium that lime or caustic can take out of its bicarbonate. [mmol/L]"""
    return smaller(removed, carbonate)


@formula(
    "What is left to soda ash",
    "to be removed − taken by the other chemical",
    unit="mmol/L",
    takes={"removed": "mmol/L", "taken": "mmol/L"},
    source="definition",
)
@broadcasts
def left_to_soda(removed: Number, taken: Number) -> Number:
    """Calcium that needs soda ash. [mmol/L]"""
    return larger(removed - taken, 0.0)


@formula(
    "Carbonate that caustic makes at most",
    "CO₂ + alkalinity",
    unit="mmol/L",
    takes={"co2": "mmol/L", "alkalinity": "meq/L"},
    source="LIME-COURSE",
)
@broadcasts
def carbonate_by_caustic(co2: Number, alkalinity: Number) -> Number:
    """Carbonate there is once all CO2 and bicarbonate are turned. [mmol/L]"""
    return co2 + alkalinity


@formula(
    "Solubility product of calcite",
    "Ksp at the temperature of the water",
    unit="(mol/kg)²",
    takes=_WATER,
    source="PB82",
)
def solubility_product(water: Solution) -> float:
    """Ksp of calcite. [(mol/kg)²]"""
    return float(10.0 ** log_k("calcite", water.temp_c, data=water.data))


@formula(
    "Carbonate beyond calcium",
    "carbonate − calcium, by equivalents; below zero calcium is left over",
    unit="mol/kg",
    takes={"calcium_left": "mmol/L"},
    source="definition",
)
@broadcasts
def carbonate_over(calcium_left: Number) -> Number:
    """What carbonate there is beyond calcium once both were put together. [mol/kg]"""
    return -calcium_left / 1000.0


@formula(
    "Hardness left by the textbook",
    "1000 × calcium + magnesium",
    unit="mmol/L",
    takes={"calcium": "mol/kg", "magnesium": "mmol/L"},
    source="definition",
    validity="Equivalents and Ksp alone: no CO₂ in the way, no hydrolysis, activity or ion pairs.",
)
@broadcasts
def textbook_hardness(calcium: Number, magnesium: Number) -> Number:
    """Hardness by the product rule and the magnesium that stays. [mmol/L]"""
    return 1000.0 * calcium + magnesium


@formula(
    "Hardness left in practice",
    "calcium left + what does not settle, at most the calcium there is, + magnesium left; no less than the floor",
    unit="mmol/L",
    takes={
        "calcium_left": "mmol/L",
        "unsettled": "mmol/L",
        "calcium": "mmol/L",
        "magnesium": "mmol/L",
        "floor": "mmol/L",
    },
    source="LIME-COURSE",
    validity="30 to 40 mg/L of calcium as CaCO₃ stay where plants settle for hours, and 10 mg/L of magnesium where it "
    "is taken out. The floor is equilibrium, or none while excess lime still stands in the water.",
)
@broadcasts
def practice_hardness(
    calcium_left: Number, unsettled: Number, calcium: Number, magnesium: Number, floor: Number
) -> Number:
    """Hardness that plants are left with. [mmol/L]"""
    return larger(smaller(calcium_left + unsettled, calcium) + magnesium, floor)


class _Held:
    """A water as a key of a cache: one key press asks for the same water many times."""

    def __init__(self, water: Solution) -> None:
        self.water = water

    def __hash__(self) -> int:
        water = self.water
        return hash((water.temp_c, water.ph, water.alkalinity, water.ca, water.mg))

    def __eq__(self, other: object) -> bool:
        return isinstance(other, _Held) and self.water == other.water


@lru_cache(maxsize=64)
def _settled(held: _Held, soda_ash: float, lime: float, caustic: float) -> Settled:
    return settle(held.water, Dose(soda_ash, lime, caustic))


@lru_cache(maxsize=8)
def _planned(held: _Held, process: str, goal: Goal, excess: float, stages: int, ph: float, heated: float) -> Plan:
    return plan(process, held.water, goal, excess=excess, stages=stages, ph=ph, heated=heated)


def settled_after(water: Solution, soda_ash: float, lime: float, caustic: float) -> Settled:
    """The water after a dose [mmol/L], in balance with what fell out."""
    return _settled(_Held(water), soda_ash, lime, caustic)


@formula(
    "Hardness left at equilibrium",
    "what is oversaturated falls out as calcite and brucite",
    unit="mmol/L",
    takes=_DOSE,
    source="PB82",
    validity="The floor: CO₂, hydrolysis, activity and ion pairs counted, time not. Closed to air, 0 to 90 °C.",
)
def equilibrium_hardness(water: Solution, soda_ash: float, lime: float, caustic: float) -> float:
    """Hardness left once the water is in balance with what it threw out. [mmol/L]"""
    return float(settled_after(water, soda_ash, lime, caustic).hardness)


@formula("pH at equilibrium", "after settling, before CO₂", unit="", takes=_DOSE, source="PB82")
def equilibrium_ph(water: Solution, soda_ash: float, lime: float, caustic: float) -> float:
    """pH once what is oversaturated has fallen out."""
    return float(settled_after(water, soda_ash, lime, caustic).water.ph)  # type: ignore[arg-type]


@formula("Alkalinity at equilibrium", "after settling, before CO₂", unit="meq/L", takes=_DOSE, source="PB82")
def equilibrium_alkalinity(water: Solution, soda_ash: float, lime: float, caustic: float) -> float:
    """Alkalinity once what is oversaturated has fallen out. [meq/L]"""
    return float(settled_after(water, soda_ash, lime, caustic).water.alkalinity)  # type: ignore[arg-type]


@formula(
    "Sodium in the dosed water",
    "sodium of the water + sodium of the chemicals",
    unit="mg/L",
    takes={"sodium": "mg/L", "added": "mg/L"},
    source="definition",
)
@broadcasts
def sodium_sum(sodium: Number, added: Number) -> Number:
    """Sodium after dosing. [mg/L]"""
    return sodium + added


@formula(
    "As hydrated lime",
    "hydrated lime = quicklime × 74.09 ÷ 56.08",
    unit="mg/L",
    takes={"dose": "mg/L", "ratio": ""},
    source="IUPAC21",
    validity="Slaked: what the slurry then holds.",
)
@broadcasts
def slaked(dose: Number, ratio: Number) -> Number:
    """Hydrated lime that quicklime turns into. [mg/L]"""
    return dose * ratio


@formula(
    "A day's amount",
    "amount = volume × concentration ÷ 1 000 000",
    unit="kg/day",
    takes={"volume": "L/day", "concentration": "mg/L"},
    source="definition",
)
@broadcasts
def daily_mass(volume: Number, concentration: Number) -> Number:
    """What a day's water holds of something. [kg/day]"""
    return volume * concentration / 1e6


@dataclass(frozen=True, slots=True)
class Asked:
    """One question about a dose: the same for each of the answers below."""

    process: str
    target: float
    magnesium: float | None
    excess: float
    stages: int
    ph: float
    heated: float

    def __str__(self) -> str:
        return "this process, target and CO₂"


def plan_of(water: Solution, asked: Asked) -> Plan:
    """The dose three ways; InputError where it cannot be."""
    goal = Goal(hardness=asked.target, magnesium=asked.magnesium)
    return _planned(_Held(water), asked.process, goal, asked.excess, asked.stages, asked.ph, asked.heated)


_TAKES = {"water": "", "asked": ""}


@formula(
    "Dose of soda ash that equilibrium asks for",
    "the smallest dose at whose equilibrium the target is met",
    unit="mmol/L",
    takes=_TAKES,
    source="PB82",
    validity="No time in it: plants need more, or longer.",
)
def equilibrium_soda(water: Solution, asked: Asked) -> float:
    """Soda ash of the smallest dose that reaches the target at equilibrium. [mmol/L]"""
    return float(plan_of(water, asked).equilibrium.dose.soda_ash)


@formula(
    "Dose of lime that equilibrium asks for",
    "the smallest dose at whose equilibrium the target is met",
    unit="mmol/L",
    takes=_TAKES,
    source="PB82",
    validity="No time in it: plants need more, or longer.",
)
def equilibrium_lime(water: Solution, asked: Asked) -> float:
    """Lime of the smallest dose that reaches the target at equilibrium. [mmol/L]"""
    return float(plan_of(water, asked).equilibrium.dose.lime)


@formula(
    "Dose of caustic that equilibrium asks for",
    "the smallest dose at whose equilibrium the target is met",
    unit="mmol/L",
    takes=_TAKES,
    source="PB82",
    validity="No time in it: plants need more, or longer.",
)
def equilibrium_caustic(water: Solution, asked: Asked) -> float:
    """Caustic of the smallest dose that reaches the target at equilibrium. [mmol/L]"""
    return float(plan_of(water, asked).equilibrium.dose.caustic)


@formula(
    "pH after settling",
    "the water of a plant: what does not settle is still in it, before CO₂",
    unit="",
    takes=_TAKES,
    source="PB82",
)
def practice_ph(water: Solution, asked: Asked) -> float:
    """pH of the water a plant is left with, before CO2."""
    return float(plan_of(water, asked).practice.ph)  # type: ignore[arg-type]


@formula("pH after CO₂", "of the water of a plant, after the last stage", unit="", takes=_TAKES, source="PB82")
def final_ph(water: Solution, asked: Asked) -> float:
    """pH of the finished water."""
    return float(plan_of(water, asked).final.ph)  # type: ignore[arg-type]


@formula("Alkalinity after treatment", "of the finished water", unit="meq/L", takes=_TAKES, source="PB82")
def final_alkalinity(water: Solution, asked: Asked) -> float:
    """Alkalinity of the finished water. [meq/L]"""
    return float(plan_of(water, asked).final.alkalinity)  # type: ignore[arg-type]


@formula("Saturation index after treatment", "of the finished water", unit="", takes=_TAKES, source="PB82")
def final_saturation(water: Solution, asked: Asked) -> float:
    """Saturation index of calcite of the finished water."""
    return float(plan_of(water, asked).saturation)


@formula(
    "CO₂ needed",
    "until the water of a plant has the pH wanted; in two stages first to the least calcium",
    unit="mg/L",
    takes=_TAKES,
    source="PB82",
    validity="What dissolves: feeders lose some to the air.",
)
def co2_needed(water: Solution, asked: Asked) -> float:
    """CO2 of all stages together. [mg/L]"""
    return float(sum(stage.mg_l for stage in plan_of(water, asked).recarbonation))


@formula(
    "Dry sludge",
    "calcium carbonate and magnesium hydroxide that settle in practice",
    unit="mg/L",
    takes=_TAKES,
    source="IUPAC21",
    validity="Without what CO₂ settles, and without dirt.",
)
def dry_sludge(water: Solution, asked: Asked) -> float:
    """Dry sludge of a litre of water. [mg/L]"""
    return float(plan_of(water, asked).sludge[0])


@formula(
    "Lime that heating throws out afterwards",
    "of the finished water at the heater",
    unit="mg/kg CaCO3",
    takes=_TAKES,
    source="PB82",
)
def lime_heated(water: Solution, asked: Asked) -> float:
    """Calcium carbonate the finished water can still throw out when heated. [mg/kg CaCO3]"""
    return float(plan_of(water, asked).lime_heated)
