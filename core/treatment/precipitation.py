"""Softening by lime, soda ash and caustic, reckoned as the books do: by equivalents.

    carbonate_calcium(calcium, alkalinity) -> mmol/L;  carbonate_magnesium(calcium, magnesium, alkalinity) -> mmol/L
    lime_for_calcium(co2, carbonate) -> mmol/L              selective: CO2 and calcium bicarbonate
    lime_for_magnesium(co2, alkalinity, magnesium, excess=0.625) -> mmol/L
    soda_for_calcium(removed) -> mmol/L                     one for one
    soda_after_lime(calcium, magnesium, alkalinity, target=0) -> mmol/L
    caustic_for_calcium(co2, removed) -> mmol/L
    caustic_for_magnesium(co2, alkalinity, magnesium, excess=1.25) -> mmol/L
    mass(amount [mmol/L], molar_mass [g/mol]) -> mg/L
    sodium_from(soda_ash, caustic [mmol/L]) -> mg/L
    lime_sludge(calcium, lime, calcium_left) -> mg/L;  magnesium_sludge(magnesium, magnesium_left) -> mg/L
    wet_sludge(dry [mg/L], solids=0.05) -> mL/L
    co2_first(excess, magnesium_left) -> mg/L;  co2_second(calcium_left, magnesium_left) -> mg/L
    book_dose(process, raw, goal, ...) -> BookDose          .dose .calcium .magnesium .practice

In mmol/L of the ion or pure chemical, alkalinity in meq/L, unless the unit says otherwise. Solubility, which the books
leave out, is `precipitation_water`'s; what plants reach, and nobody can compute, is `practice` here.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from core.constants import ATOMIC_WEIGHTS, MOLAR_MASS_CACO3, molar_mass
from core.errors import InputError
from core.treatment.broadcast import Number, broadcasts, larger, ratio, smaller
from core.working import formula

MOLAR_MASS_BRUCITE = molar_mass(Mg=1, O=2, H=2)  # g/mol [IUPAC21]
MOLAR_MASS_CO2 = molar_mass(C=1, O=2)  # g/mol [IUPAC21]
EXCESS_LIME = 1.25 / 2.0  # mmol/L beyond the equivalents, to lift the pH until magnesium falls out [LIME-COURSE]
EXCESS_LIME_COLD = 1.75 / 2.0  # in cold water, 1.5 to 2 meq/L; from memory
PRACTICAL_CALCIUM = (30.0 / MOLAR_MASS_CACO3, 40.0 / MOLAR_MASS_CACO3)  # mmol/L left in practice: books, typical
PRACTICAL_MAGNESIUM = 10.0 / MOLAR_MASS_CACO3  # mmol/L left in practice where it is precipitated [LIME-COURSE]
HEATER_MAGNESIUM = 40.0 / MOLAR_MASS_CACO3  # mmol/L; more than this left in the water deposits in heaters; from memory

PROCESSES = {
    "soda": "soda ash alone",
    "lime": "lime alone, for carbonate hardness of calcium",
    "lime-soda": "lime and soda ash, for calcium",
    "excess-lime-soda": "lime in excess and soda ash, for calcium and magnesium",
    "caustic": "caustic soda alone",
    "caustic-soda": "caustic soda and soda ash",
}
WITH_MAGNESIUM = ("excess-lime-soda", "caustic", "caustic-soda")


@dataclass(frozen=True, slots=True)
class Dose:
    """Pure chemicals added to a water, mmol/L each; lime counts alike slaked or not."""

    soda_ash: Any = 0.0
    lime: Any = 0.0
    caustic: Any = 0.0


@dataclass(frozen=True, slots=True)
class RawWater:
    """What the books ask of the raw water, mmol/L; alkalinity in meq/L."""

    calcium: float
    magnesium: float
    alkalinity: float
    co2: float


@dataclass(frozen=True, slots=True)
class Goal:
    """What is to be left, mmol/L. Give calcium, or total hardness; magnesium where it is to be lowered too."""

    calcium: float | None = None
    magnesium: float | None = None
    hardness: float | None = None


@dataclass(frozen=True, slots=True)
class BookDose:
    """A dose by the books, and what it leaves: by equivalents, and in practice (low and high)."""

    process: str
    dose: Dose
    excess: float  # mmol/L of lime (or half of the caustic) beyond the equivalents, part of the dose
    calcium: float  # mmol/L left, by equivalents; the excess lime's own calcium not counted
    magnesium: float
    practice_calcium: tuple[float, float]  # what is not dosed for, and 30 to 40 mg/L as CaCO3 that plants are left with
    practice_magnesium: float
    reached: bool  # whether this process can come down to the goal at all, by equivalents

    @property
    def hardness(self) -> float:
        """Total hardness left, by equivalents. [mmol/L]"""
        return self.calcium + self.magnesium

    @property
    def practice_hardness(self) -> tuple[float, float]:
        """Total hardness left in practice, low and high. [mmol/L]"""
        low, high = self.practice_calcium
        return low + self.practice_magnesium, high + self.practice_magnesium


_RAW = {"calcium": "mmol/L", "magnesium": "mmol/L", "alkalinity": "meq/L"}


@formula(
    "Calcium held by bicarbonate",
    "the smaller of calcium and half the alkalinity",
    unit="mmol/L",
    takes={"calcium": "mmol/L", "alkalinity": "meq/L"},
    source="definition",
    validity="The books' way of keeping count, calcium first; ions in water belong to nobody.",
)
@broadcasts
def carbonate_calcium(calcium: Number, alkalinity: Number) -> Number:
    """Carbonate hardness of calcium. [mmol/L]"""
    return smaller(calcium, larger(alkalinity, 0.0) / 2.0)


@formula(
    "Magnesium held by bicarbonate",
    "the smaller of magnesium and what calcium leaves of half the alkalinity",
    unit="mmol/L",
    takes=_RAW,
    source="definition",
    validity="The books' way of keeping count, calcium first.",
)
@broadcasts
def carbonate_magnesium(calcium: Number, magnesium: Number, alkalinity: Number) -> Number:
    """Carbonate hardness of magnesium. [mmol/L]"""
    return smaller(magnesium, larger(larger(alkalinity, 0.0) / 2.0 - calcium, 0.0))


@formula(
    "Lime for calcium",
    "lime = CO₂ + calcium bicarbonate to remove",
    unit="mmol/L",
    takes={"co2": "mmol/L", "carbonate": "mmol/L"},
    source="LIME-COURSE",
    validity="Selective softening: Ca(HCO₃)₂ + Ca(OH)₂ → 2 CaCO₃; magnesium stays. × 74.09: mg/L hydrated lime.",
)
@broadcasts
def lime_for_calcium(co2: Number, carbonate: Number) -> Number:
    """Lime that removes so much calcium bicarbonate, and the CO2 before it. [mmol/L]"""
    return co2 + carbonate


@formula(
    "Lime for calcium and magnesium",
    "lime = CO₂ + alkalinity ÷ 2 + magnesium to remove + excess",
    unit="mmol/L",
    takes={"co2": "mmol/L", "alkalinity": "meq/L", "magnesium": "mmol/L", "excess": "mmol/L"},
    source="LIME-COURSE",
    validity="All bicarbonate turns to carbonate before magnesium falls out, that of sodium too. The excess lifts the "
    "pH; cold water needs more.",
)
@broadcasts
def lime_for_magnesium(co2: Number, alkalinity: Number, magnesium: Number, excess: Number = EXCESS_LIME) -> Number:
    """Lime that removes all calcium bicarbonate and so much magnesium. [mmol/L]"""
    return co2 + alkalinity / 2.0 + magnesium + excess


@formula(
    "Soda ash for calcium",
    "soda ash = calcium to remove",
    unit="mmol/L",
    takes={"removed": "mmol/L"},
    source="definition",
    validity="CaX + Na₂CO₃ → CaCO₃ + Na₂X, one for one. CO₂ and solubility take their part besides.",
)
@broadcasts
def soda_for_calcium(removed: Number) -> Number:
    """Soda ash that removes so much calcium, by equivalents. [mmol/L]"""
    return larger(removed, 0.0)


@formula(
    "Soda ash after excess lime",
    "soda ash = calcium + magnesium removed − alkalinity ÷ 2 − calcium wanted, or 0",
    unit="mmol/L",
    takes={**_RAW, "target": "mmol/L"},
    source="LIME-COURSE",
    validity="Non-carbonate hardness: what the bicarbonate of the water cannot take out as CaCO₃.",
)
@broadcasts
def soda_after_lime(calcium: Number, magnesium: Number, alkalinity: Number, target: Number = 0.0) -> Number:
    """Soda ash for the non-carbonate hardness, with lime removing so much magnesium. [mmol/L]"""
    return larger(calcium + magnesium - alkalinity / 2.0 - target, 0.0)


@formula(
    "Caustic for calcium",
    "caustic = 2 × CO₂ + calcium to remove beyond it",
    unit="mmol/L",
    takes={"co2": "mmol/L", "removed": "mmol/L"},
    source="LIME-COURSE",
    validity="Each mole makes a mole of carbonate out of bicarbonate; no more than CO₂ and alkalinity give.",
)
@broadcasts
def caustic_for_calcium(co2: Number, removed: Number) -> Number:
    """Caustic that makes as much carbonate as calcium is to be removed. [mmol/L]"""
    return 2.0 * co2 + larger(removed - co2, 0.0)


@formula(
    "Caustic for calcium and magnesium",
    "caustic = 2 × CO₂ + alkalinity + 2 × magnesium to remove + excess",
    unit="mmol/L",
    takes={"co2": "mmol/L", "alkalinity": "meq/L", "magnesium": "mmol/L", "excess": "mmol/L"},
    source="LIME-COURSE",
    validity="All bicarbonate turns to carbonate before magnesium falls out.",
)
@broadcasts
def caustic_for_magnesium(
    co2: Number, alkalinity: Number, magnesium: Number, excess: Number = 2.0 * EXCESS_LIME
) -> Number:
    """Caustic that turns all bicarbonate to carbonate and removes so much magnesium. [mmol/L]"""
    return 2.0 * co2 + alkalinity + 2.0 * magnesium + excess


@formula(
    "Dose by weight",
    "dose = amount × molar mass",
    unit="mg/L",
    takes={"amount": "mmol/L", "molar_mass": "g/mol"},
    source="IUPAC21",
    validity="Of the pure chemical.",
)
@broadcasts
def mass(amount: Number, molar_mass: Number) -> Number:
    """Weight of so many mmol of a pure chemical. [mg/L]"""
    return amount * molar_mass


@formula(
    "Sodium from soda ash and caustic",
    "sodium = 22.990 × (2 × soda ash + caustic)",
    unit="mg/L",
    takes={"soda_ash": "mmol/L", "caustic": "mmol/L"},
    source="IUPAC21",
)
@broadcasts
def sodium_from(soda_ash: Number, caustic: Number) -> Number:
    """Sodium that the chemicals add to the water. [mg/L]"""
    return ATOMIC_WEIGHTS["Na"] * (2.0 * soda_ash + caustic)


@formula(
    "Calcium carbonate in the sludge",
    "sludge = 100.086 × (calcium + lime − calcium left)",
    unit="mg/L",
    takes={"calcium": "mmol/L", "lime": "mmol/L", "calcium_left": "mmol/L"},
    source="IUPAC21",
    validity="Dry. The calcium of the lime falls out too: with lime the sludge is twice the hardness removed.",
)
@broadcasts
def lime_sludge(calcium: Number, lime: Number, calcium_left: Number) -> Number:
    """Dry calcium carbonate that settles from a litre. [mg/L]"""
    return MOLAR_MASS_CACO3 * larger(calcium + lime - calcium_left, 0.0)


@formula(
    "Magnesium hydroxide in the sludge",
    "sludge = 58.319 × (magnesium − magnesium left)",
    unit="mg/L",
    takes={"magnesium": "mmol/L", "magnesium_left": "mmol/L"},
    source="IUPAC21",
    validity="Dry.",
)
@broadcasts
def magnesium_sludge(magnesium: Number, magnesium_left: Number) -> Number:
    """Dry magnesium hydroxide that settles from a litre. [mg/L]"""
    return MOLAR_MASS_BRUCITE * larger(magnesium - magnesium_left, 0.0)


@formula(
    "Wet sludge",
    "sludge = dry ÷ solids ÷ 1000",
    unit="mL/L",
    takes={"dry": "mg/L", "solids": ""},
    source="common practice, no source",
    validity="Solids by weight, 2 to 15 %; a gram of wet sludge counts as a millilitre.",
)
@broadcasts
def wet_sludge(dry: Number, solids: Number = 0.05) -> Number:
    """Volume of sludge drawn off, as it settles, from a litre of water. [mL/L]"""
    return ratio(dry, 1000.0 * solids)


@formula(
    "CO₂, first stage",
    "CO₂ = 44.009 × (excess lime + magnesium left)",
    unit="mg/L",
    takes={"excess": "mmol/L", "magnesium_left": "mmol/L"},
    source="LIME-COURSE",
    validity="Turns the excess lime and the hydroxide of magnesium to carbonate; settle before the second stage.",
)
@broadcasts
def co2_first(excess: Number, magnesium_left: Number) -> Number:
    """CO2 that takes up the excess lime. [mg/L]"""
    return MOLAR_MASS_CO2 * (excess + magnesium_left)


@formula(
    "CO₂, second stage",
    "CO₂ = 44.009 × (calcium left + magnesium left)",
    unit="mg/L",
    takes={"calcium_left": "mmol/L", "magnesium_left": "mmol/L"},
    source="LIME-COURSE",
    validity="Turns what carbonate is left to bicarbonate, about pH 8.5.",
)
@broadcasts
def co2_second(calcium_left: Number, magnesium_left: Number) -> Number:
    """CO2 that turns the carbonate left to bicarbonate. [mg/L]"""
    return MOLAR_MASS_CO2 * (calcium_left + magnesium_left)


def book_dose(process: str, raw: RawWater, goal: Goal | None = None, excess: float = EXCESS_LIME) -> BookDose:
    """Dose by equivalents for a goal (None: all that the process can take), with what practice leaves.

    excess: lime beyond the equivalents where magnesium is to go [mmol/L]; twice that of caustic. InputError where the
    process or the goal cannot be.
    """
    if process not in PROCESSES:
        raise InputError("process", process, f"No process is called “{process}”; known are {', '.join(PROCESSES)}.")
    calcium, magnesium = targets(process, raw, goal or Goal())
    takes_magnesium = magnesium < raw.magnesium
    remove = (max(raw.calcium - calcium, 0.0), raw.magnesium - magnesium)
    beyond = excess if takes_magnesium else 0.0
    dose = _doses(process, raw, remove, calcium, beyond)
    left = _left(process, raw, dose, remove[1], beyond)
    low, high = PRACTICAL_CALCIUM
    return BookDose(
        process,
        dose,
        beyond,
        left,
        magnesium,
        (min(left + low, raw.calcium), min(left + high, raw.calcium)) if dose != Dose() else (raw.calcium,) * 2,
        min(magnesium + PRACTICAL_MAGNESIUM, raw.magnesium) if takes_magnesium else raw.magnesium,
        left <= calcium * (1.0 + 1e-9) + 1e-9,
    )


def targets(process: str, raw: RawWater, goal: Goal) -> tuple[float, float]:
    """Calcium and magnesium to be left by equivalents [mmol/L]; InputError where the goal cannot be.

    Of a total hardness magnesium keeps what it has where the process leaves it, and none where it takes it.
    """
    for name in ("calcium", "magnesium", "hardness"):
        value = getattr(goal, name)
        if value is not None and not value >= 0.0:
            raise InputError(name, value, f"The {name} wanted is missing or below zero.")
    lowers = process == "excess-lime-soda" or (process in WITH_MAGNESIUM and goal.magnesium is not None)
    if goal.magnesium is not None and goal.magnesium < raw.magnesium and process not in WITH_MAGNESIUM:
        named = PROCESSES[process].partition(",")[0].capitalize()
        text = f"Magnesium stays in the water with this process ({named}): take lime in excess, or caustic."
        raise InputError("magnesium", goal.magnesium, text)
    magnesium = min(goal.magnesium, raw.magnesium) if goal.magnesium is not None else 0.0 if lowers else raw.magnesium
    if goal.calcium is not None:
        return min(goal.calcium, raw.calcium), magnesium
    if goal.hardness is None:
        return 0.0, magnesium
    if goal.hardness < magnesium:
        text = "Magnesium alone is harder than the hardness wanted: take a process that lowers magnesium too."
        raise InputError("hardness", goal.hardness, text)
    return min(goal.hardness - magnesium, raw.calcium), magnesium


def _doses(process: str, raw: RawWater, remove: tuple[float, float], calcium: float, excess: float) -> Dose:
    from_calcium, from_magnesium = remove
    bicarbonate = carbonate_calcium(raw.calcium, raw.alkalinity)
    if process == "soda":
        return Dose(soda_ash=soda_for_calcium(from_calcium))
    if process in ("lime", "lime-soda"):
        if not from_calcium:
            return Dose()
        lime = lime_for_calcium(raw.co2, min(from_calcium, bicarbonate))
        soda = soda_for_calcium(from_calcium - bicarbonate) if process == "lime-soda" else 0.0
        return Dose(soda_ash=soda, lime=lime)
    if process == "excess-lime-soda":
        lime = lime_for_magnesium(raw.co2, raw.alkalinity, from_magnesium, excess)
        return Dose(soda_ash=soda_after_lime(raw.calcium, from_magnesium, raw.alkalinity, calcium), lime=lime)
    carbonate = raw.co2 + raw.alkalinity
    if from_magnesium:
        caustic = caustic_for_magnesium(raw.co2, raw.alkalinity, from_magnesium, 2.0 * excess)
    else:
        caustic = caustic_for_calcium(raw.co2, min(from_calcium, carbonate)) if from_calcium else 0.0
    soda = soda_for_calcium(from_calcium - carbonate) if process == "caustic-soda" else 0.0
    return Dose(soda_ash=soda, caustic=caustic)


def _left(process: str, raw: RawWater, dose: Dose, from_magnesium: float, excess: float) -> float:
    """Calcium left by equivalents: all there is, less the carbonate there is to take it. [mmol/L]"""
    if process in ("soda", "lime", "lime-soda"):
        taken = max(dose.lime - raw.co2, 0.0) + dose.soda_ash
        return max(raw.calcium - taken, 0.0)
    if process == "excess-lime-soda":
        return max(raw.calcium + from_magnesium - raw.alkalinity / 2.0 - dose.soda_ash, 0.0)
    made = min(max(dose.caustic - raw.co2, 0.0), raw.co2 + raw.alkalinity) if dose.caustic else 0.0
    return max(raw.calcium - made - dose.soda_ash, 0.0)
