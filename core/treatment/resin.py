"""Resin: what it can take up for a given dose of salt, by the trade's table, and how well that uses the salt.

trade_table() -> CapacityTable                            doses [g/L], capacities [eq/L], sources
capacity_table(salt_doses, capacities, name) -> CapacityTable       a supplier's own curve, checked
trade_capacity(salt_dose [g/L], table=None) -> eq/L       NaN outside the table
why_no_capacity(salt_dose, table=None) -> str             "" where the table answers
salt_efficiency(capacity [eq/L], salt_dose [g/L]) -> mol/kg
share_of_stoichiometric(efficiency [mol/kg], salt="NaCl") -> share
potassium_chloride_dose(salt_dose [g/L]) -> g/L;  common_salt_dose(potassium_chloride [g/L]) -> g/L
practice_capacity(ceiling [eq/L], factor=0.75) -> eq/L    from the equilibrium model to what beds do
STOICHIOMETRIC_EFFICIENCY                                 {"NaCl": 8.556, "KCl": 6.707} mol/kg
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cache
from itertools import pairwise
from math import isfinite, isnan

from core.constants import CUBIC_FOOT, GRAIN, MOLAR_MASS_CACO3, MOLAR_MASS_KCL, MOLAR_MASS_NACL, POUND
from core.data import number, read_table
from core.errors import InputError
from core.treatment.broadcast import Number, broadcasts, either, interpolate, ratio
from core.working import formula

POUND_PER_CUBIC_FOOT = POUND / CUBIC_FOOT  # g/L
KILOGRAIN_PER_CUBIC_FOOT = 2.0 * GRAIN / MOLAR_MASS_CACO3 / CUBIC_FOOT  # eq/L
STOICHIOMETRIC_EFFICIENCY = {
    "NaCl": 500.0 / MOLAR_MASS_NACL,
    "KCl": 500.0 / MOLAR_MASS_KCL,
}  # mol hardness / kg salt
PRACTICE_FACTOR = 0.75  # trade table over the equilibrium model of `column_run`, middle for 80 to 320 g/L
PRACTICE_RANGE = (0.67, 0.84)  # lowest and highest of that ratio, ten and twenty cells, a hard limestone water
_ROUNDING = 0.002  # a dose rounded to the whole gram per litre still counts as the end of the table


@dataclass(frozen=True, slots=True)
class CapacityTable:
    """Capacity of a resin against its salt dose; doses rising, capacities never falling."""

    name: str
    salt_doses: tuple[float, ...]  # g/L
    capacities: tuple[float, ...]  # eq/L
    lowest: tuple[float, ...]  # eq/L, the lowest printed for that dose
    source: str
    status: tuple[str, ...]  # of each row


@cache
def trade_table() -> CapacityTable:
    """Capacity [eq/L] against salt dose [g/L] as the trade prints it: [TRADE-PRESS], [TRADE-SIZING], common
    practice.

    The pages differ by 10 to 15 %; a supplier's own curve is better.
    """
    rows = read_table("salt_capacity").rows
    return CapacityTable(
        "trade table",
        tuple(number(row, "salt_lb_ft3") * POUND_PER_CUBIC_FOOT for row in rows),
        tuple(number(row, "capacity_kgr_ft3") * KILOGRAIN_PER_CUBIC_FOOT for row in rows),
        tuple(number(row, "lowest_kgr_ft3") * KILOGRAIN_PER_CUBIC_FOOT for row in rows),
        "TRADE-SIZING",
        tuple(row["status"] for row in rows),
    )


def capacity_table(
    salt_doses: Sequence[float], capacities: Sequence[float], name: str = "supplier's curve"
) -> CapacityTable:
    """Curve typed in by the user: doses [g/L] and capacities [eq/L], checked.

    Raises InputError where there are fewer than two rows, a number is missing or not above zero, the doses
    do not rise, the capacity falls with more salt, or a row promises more than its salt can give.
    """
    doses, values = tuple(map(float, salt_doses)), tuple(map(float, capacities))
    if len(doses) != len(values) or len(doses) < 2:
        raise InputError("capacity table", len(doses), "A capacity table needs at least two rows of dose and capacity.")
    if not all(isfinite(value) and value > 0.0 for value in doses + values):
        raise InputError("capacity table", doses, "Each row needs a salt dose and a capacity above zero.")
    if any(second <= first for first, second in pairwise(doses)):
        raise InputError("salt dose", doses, "The salt doses must rise from row to row.")
    if any(second < first for first, second in pairwise(values)):
        raise InputError("capacity", values, "More salt cannot give less capacity; look at the row that falls.")
    if any(
        value / 2.0 > dose / 1000.0 * STOICHIOMETRIC_EFFICIENCY["NaCl"]
        for dose, value in zip(doses, values, strict=True)
    ):
        raise InputError("capacity", values, "One row has more capacity than its salt can regenerate; check the units.")
    return CapacityTable(name, doses, values, values, "entered by the user", ("entered",) * len(doses))


@formula(
    "Capacity of the resin at this salt dose",
    "straight line between the rows of the table",
    unit="eq/L",
    takes={"salt_dose": "g/L"},
    source="TRADE-SIZING",
    validity="64 to 320 g/L for the trade table, co-current; its sources differ by 10 to 15 %. Never extrapolated.",
)
@broadcasts
def trade_capacity(salt_dose: Number, table: CapacityTable | None = None) -> Number:
    """Capacity of the resin for a salt dose by a table of the trade [eq/L]; NaN outside the table."""
    table = table or trade_table()
    least, most = table.salt_doses[0], table.salt_doses[-1]
    dose = either((salt_dose < least) & (salt_dose >= least * (1.0 - _ROUNDING)), least, salt_dose)
    dose = either((dose > most) & (dose <= most * (1.0 + _ROUNDING)), most, dose)
    return interpolate(dose, table.salt_doses, table.capacities)


def why_no_capacity(salt_dose: float, table: CapacityTable | None = None) -> str:
    """Why the table gives no capacity for this dose, in a sentence; empty where it does."""
    table = table or trade_table()
    if not isnan(trade_capacity(salt_dose, table)):
        return ""
    if isnan(salt_dose):
        return "The salt dose is missing."
    if salt_dose < table.salt_doses[0]:
        return (
            f"The salt dose lies below the lowest row of the {table.name}: nothing is known there. "
            "Take more salt, or enter the supplier's own curve."
        )
    return (
        f"The salt dose lies above the highest row of the {table.name}: more salt would hardly add capacity. "
        "Take less salt, or enter the supplier's own curve."
    )


@formula(
    "Salt efficiency",
    "efficiency = capacity ÷ 2 ÷ salt dose × 1000",
    unit="mol/kg",
    takes={"capacity": "eq/L", "salt_dose": "g/L"},
    source="definition",
)
@broadcasts
def salt_efficiency(capacity: Number, salt_dose: Number) -> Number:
    """Hardness removed per kilogram of salt, if the whole capacity is used. [mol/kg]"""
    return ratio(500.0 * capacity, salt_dose)


@formula(
    "Share of the salt that works",
    "share = efficiency ÷ what the salt could exchange",
    unit="",
    takes={"efficiency": "mol/kg", "salt": ""},
    source="IUPAC21",
    validity="1 kg of sodium chloride can exchange 8.556 mol of hardness, of potassium chloride 6.707 mol.",
)
@broadcasts
def share_of_stoichiometric(efficiency: Number, salt: str = "NaCl") -> Number:
    """Part of the salt's exchange power that ends in removed hardness. [-]"""
    return efficiency / STOICHIOMETRIC_EFFICIENCY[salt]


@formula(
    "Potassium chloride for the same capacity",
    "dose KCl = dose NaCl × 74.548 ÷ 58.440",
    unit="g/L",
    takes={"salt_dose": "g/L"},
    source="IUPAC21",
    validity="By stoichiometry. Practice takes 10 to 30 % more; it dissolves less in the cold.",
)
@broadcasts
def potassium_chloride_dose(salt_dose: Number) -> Number:
    """Dose of potassium chloride that carries as many equivalents as a dose of common salt. [g/L]"""
    return salt_dose * (MOLAR_MASS_KCL / MOLAR_MASS_NACL)


@formula(
    "Common salt that does the same",
    "common salt = potassium chloride × 58.44 ÷ 74.55",
    unit="g/L",
    takes={"potassium_chloride": "g/L"},
    source="IUPAC21",
    validity="By equivalents; in practice potassium chloride does 10 to 30 % less.",
)
@broadcasts
def common_salt_dose(potassium_chloride: Number) -> Number:
    """Dose of common salt that regenerates as much as this dose of potassium chloride. [g/L]"""
    return potassium_chloride * (MOLAR_MASS_NACL / MOLAR_MASS_KCL)


@formula(
    "Capacity in practice",
    "capacity = equilibrium ceiling × factor",
    unit="eq/L",
    takes={"ceiling": "eq/L", "factor": ""},
    source="TRADE-SIZING",
    validity="The factor is the trade's table divided by the equilibrium model: 0.67 to 0.84 for 80 to "
    "320 g/L. It "
    "stands for slow exchange at high flow, channelling, cold water, old resin and an early end of the run.",
)
@broadcasts
def practice_capacity(ceiling: Number, factor: Number = PRACTICE_FACTOR) -> Number:
    """Capacity to count on where a model at equilibrium gives the ceiling. [eq/L]"""
    return ceiling * factor
