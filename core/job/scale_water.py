"""The water of a job as the chemistry sees it: formulas with cards, so that working can show them."""

from __future__ import annotations

from core.chemistry import Solution, at_temperature, complete, speciate
from core.constants import ATOMIC_WEIGHTS
from core.working import formula

WHOLE = ("calcium", "magnesium", "sodium", "chloride", "sulfate")  # with these five an analysis counts as full


@formula(
    "Water, completed from the reading",
    "what was not measured is filled in so that the charges balance",
    unit="",
    takes={
        "temp_c": "°C",
        "ph": "",
        "hardness": "mmol/L",
        "alkalinity": "meq/L",
        "conductivity": "µS/cm",
        "calcium": "mmol/L",
        "magnesium": "mmol/L",
    },
    source="SM1030E",
    validity="The saturation index moves by a few hundredths with what is filled in. 1 L is taken as 1 kg.",
)
def water_from_reading(
    temp_c: float,
    ph: float,
    hardness: float,
    alkalinity: float,
    conductivity: float | None = None,
    calcium: float | None = None,
    magnesium: float | None = None,
) -> Solution:
    """A charge-balanced water from a field reading; see `core.chemistry.field.complete`."""
    share = None
    if calcium is not None and magnesium is not None and calcium + magnesium > 0.0:
        share = magnesium / (calcium + magnesium)
    return complete(
        temp_c=temp_c,
        ph=ph,
        hardness=hardness,
        alkalinity=alkalinity,
        conductivity=conductivity,
        magnesium_share=share,
    ).solution


@formula(
    "Water, as analysed",
    "the ions as entered",
    unit="",
    takes={
        "temp_c": "°C",
        "ph": "",
        "alkalinity": "meq/L",
        "calcium": "mmol/L",
        "magnesium": "mmol/L",
        "sodium": "mmol/L",
        "chloride": "mmol/L",
        "sulfate": "mmol/L",
        "potassium": "mmol/L",
        "nitrate": "mmol/L",
    },
    source="definition",
    validity="1 L is taken as 1 kg.",
)
def water_from_analysis(
    temp_c: float,
    ph: float,
    alkalinity: float,
    calcium: float,
    magnesium: float,
    sodium: float,
    chloride: float,
    sulfate: float,
    potassium: float = 0.0,
    nitrate: float = 0.0,
) -> Solution:
    """A water with its main ions given."""
    return Solution(
        temp_c=temp_c,
        ph=ph,
        alkalinity=alkalinity,
        ca=calcium,
        mg=magnesium,
        na=sodium,
        k=potassium,
        cl=chloride,
        so4=sulfate,
        no3=nitrate,
    )


@formula(
    "Water, heated",
    "the same totals at another temperature, closed to gas: pH is solved anew",
    unit="",
    takes={"solution": "", "temp_c": "°C"},
    source="PB82",
    validity="0 to 90 °C.",
)
def heated(solution: Solution, temp_c: float) -> Solution:
    """The same water at another temperature."""
    return at_temperature(solution, temp_c)


@formula(
    "Saturation index of calcite",
    "SI = log({Ca²⁺} {CO₃²⁻} ÷ Ksp), ion pairs and activities counted",
    unit="",
    takes={"solution": ""},
    source="PB82",
    validity="0 to 90 °C. Above 0 lime can deposit, below 0 it dissolves; in cold water little forms under 0.5.",
)
def calcite_index(solution: Solution) -> float:
    """Saturation index of calcite. [-]"""
    return speciate(solution).si_calcite


@formula(
    "Sodium in moles",
    "sodium = sodium ÷ 22.990",
    unit="mmol/L",
    takes={"sodium": "mg/L Na"},
    source="IUPAC21",
)
def sodium_in_mmol(sodium: float) -> float:
    """Sodium as the chemistry counts it. [mmol/L]"""
    return sodium / ATOMIC_WEIGHTS["Na"]


@formula(
    "Lime thrown out",
    "none where the water would dissolve lime",
    unit="mg/kg CaCO3",
    takes={"potential": "mg/kg CaCO3"},
    source="definition",
)
def thrown_out(potential: float) -> float:
    """What of a precipitation potential falls out: all of it, or nothing where it is below zero. [mg/kg CaCO3]"""
    return max(potential, 0.0)
