"""Load, reserve, days between regenerations, and what a year costs in salt and water.

    iron_rules() -> dict[str, IronRule]  .iron .manganese in mmol hardness per mg
    true_hardness(hardness [mmol/L], iron=0, manganese=0 [mg/L]) -> mmol/L       exact equivalents
    compensated_hardness(hardness, iron=0, manganese=0, rule="iron-4") -> mmol/L  rule of thumb of the trade
    daily_load(volume [L/day], hardness, target=0 [mmol/L]) -> mol/day
    bed_capacity(resin_volume [L], capacity [eq/L]) -> mol
    salt_per_regeneration(resin_volume [L], salt_dose [g/L]) -> kg
    reserve_days(kind) -> day;  reserve_share(kind) -> share
    reserve_of_days(load [mol/day], days=1) -> mol;  reserve_of_share(capacity [mol], share=0.25) -> mol
    usable_capacity(capacity [mol], reserve [mol]) -> mol
    days_between(usable [mol], load [mol/day], longest=inf [day]) -> day
    meter_setting(usable [mol], hardness [mmol/L]) -> L
    regenerations_per_year(interval [day]) -> 1/year;  salt_per_year(salt [kg], interval) -> kg/year
    water_per_year(water [L], interval) -> L/year
    effective_efficiency(interval, load, salt [kg]) -> mol/kg              the reserve thrown away counted
    regeneration_water_per_mol(water [L], interval, load) -> L/mol

The resin is in `resin`, the vessel and its flows in `vessel`, the regeneration step by step in
`regeneration`, the choice of a size in `search`.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache
from math import inf

from core.constants import ATOMIC_WEIGHTS, GRAIN, MOLAR_MASS_CACO3, US_GALLON
from core.data import number, read_table
from core.errors import InputError
from core.treatment.broadcast import Number, broadcasts, larger, only_where, ratio, smaller
from core.treatment.demand import DAYS_PER_YEAR
from core.working import formula

GRAIN_PER_GALLON = GRAIN / MOLAR_MASS_CACO3 / US_GALLON  # mmol/L
PUBLIC_IRON_LIMIT = 0.3  # mg/L of iron and manganese together on the resin of a public plant [VAC590-900]
HOUSEHOLD_IRON_LIMITS = (
    1.0,
    5.0,
)  # mg/L of dissolved iron, by valve and resin cleaner; common practice, no source
DEFAULT_IRON_RULE = "iron-4"


@dataclass(frozen=True, slots=True)
class IronRule:
    """A rule of the trade: hardness added for each mg of dissolved iron and manganese."""

    key: str
    words: str
    iron: float  # mmol hardness per mg
    manganese: float  # mmol hardness per mg
    source: str
    status: str


@cache
def iron_rules() -> dict[str, IronRule]:
    """Rules of the trade for iron and manganese; they allow for fouling and are far above the true
    equivalents.
    """
    return {
        row["key"]: IronRule(
            row["key"],
            row["words"],
            number(row, "iron_gpg") * GRAIN_PER_GALLON,
            number(row, "manganese_gpg") * GRAIN_PER_GALLON,
            row["source"],
            row["status"],
        )
        for row in read_table("iron_rules").rows
    }


@formula(
    "Hardness with iron and manganese, true equivalents",
    "true = hardness + Fe ÷ 55.845 + Mn ÷ 54.938",
    unit="mmol/L",
    takes={"hardness": "mmol/L", "iron": "mg/L", "manganese": "mg/L"},
    source="IUPAC21",
    validity="What the ions take up on clean resin, all of it dissolved and two-valent.",
)
@broadcasts
def true_hardness(hardness: Number, iron: Number = 0.0, manganese: Number = 0.0) -> Number:
    """Hardness plus the exact equivalents of dissolved iron and manganese. [mmol/L]"""
    return hardness + iron * (1.0 / ATOMIC_WEIGHTS["Fe"]) + manganese * (1.0 / ATOMIC_WEIGHTS["Mn"])


@formula(
    "Compensated hardness",
    "compensated = hardness + iron factor × Fe + manganese factor × Mn",
    unit="mmol/L",
    takes={"hardness": "mmol/L", "iron": "mg/L", "manganese": "mg/L", "rule": ""},
    source="TRADE-SIZING",
    validity="A rule of thumb that allows for fouling: 3 to 5 gpg for each mg/L of dissolved iron. "
    "Above 1 to 5 mg/L of iron, by the equipment, remove it first.",
)
@broadcasts
def compensated_hardness(
    hardness: Number, iron: Number = 0.0, manganese: Number = 0.0, rule: str = DEFAULT_IRON_RULE
) -> Number:
    """Hardness a softener is sized for, iron and manganese counted by a rule of the trade. [mmol/L]"""
    rules = iron_rules()
    if rule not in rules:
        raise InputError("iron rule", rule, f"No iron rule is called {rule}. Known are: {', '.join(rules)}.")
    return hardness + iron * rules[rule].iron + manganese * rules[rule].manganese


@formula(
    "Daily load",
    "load = volume × (hardness − target) ÷ 1000",
    unit="mol/day",
    takes={"volume": "L/day", "hardness": "mmol/L", "target": "mmol/L"},
    source="definition",
    validity="The volume is all the water that leaves at the target, raw and softened parts together.",
)
@broadcasts
def daily_load(volume: Number, hardness: Number, target: Number = 0.0) -> Number:
    """Hardness the resin takes up on an average day [mol/day]; none where the target is above the raw
    water.
    """
    return volume * larger(hardness - target, 0.0) / 1000.0


@formula(
    "Capacity of the bed",
    "capacity = resin × capacity per litre ÷ 2",
    unit="mol",
    takes={"resin_volume": "L", "capacity": "eq/L"},
    source="definition",
)
@broadcasts
def bed_capacity(resin_volume: Number, capacity: Number) -> Number:
    """Hardness a bed takes up between two regenerations if run to its end. [mol]"""
    return resin_volume * capacity / 2.0


@formula(
    "Salt per regeneration",
    "salt = resin × dose ÷ 1000",
    unit="kg",
    takes={"resin_volume": "L", "salt_dose": "g/L"},
    source="definition",
)
@broadcasts
def salt_per_regeneration(resin_volume: Number, salt_dose: Number) -> Number:
    """Salt for one regeneration. [kg]"""
    return resin_volume * salt_dose / 1000.0


@formula(
    "Days kept in reserve",
    "one tank: a day; two tanks in turn: none",
    unit="day",
    takes={"kind": ""},
    source="common practice, no source",
    validity="One tank regenerates in the night after its reserve is touched; of two tanks one is always ready.",
)
def reserve_days(kind: str) -> float:
    """Days of average load kept in reserve by a "single", "twin" or "counter-current" softener. [day]"""
    return {"single": 1.0, "twin": 0.0, "counter-current": 1.0}[kind]


@formula(
    "Share kept in reserve",
    "two tanks in turn: 3 % of each",
    unit="",
    takes={"kind": ""},
    source="common practice, no source",
    validity="0 to 3 % is usual where the other tank takes over at once.",
)
def reserve_share(kind: str) -> float:
    """Share of its capacity that a softener of this kind keeps in reserve. [-]"""
    return {"single": 0.0, "twin": 0.03, "counter-current": 0.0}[kind]


@formula(
    "Reserve",
    "reserve = load × days",
    unit="mol",
    takes={"load": "mol/day", "days": "day"},
    source="common practice, no source",
    validity="One tank that regenerates at night: one average day is usual. Two tanks in turn need next to none.",
)
@broadcasts
def reserve_of_days(load: Number, days: Number = 1.0) -> Number:
    """Capacity kept back for the hours until the regeneration, as days of average load. [mol]"""
    return load * days


@formula(
    "Reserve",
    "reserve = capacity × share",
    unit="mol",
    takes={"capacity": "mol", "share": ""},
    source="common practice, no source",
    validity="20 to 30 % is usual for one tank that regenerates at night.",
)
@broadcasts
def reserve_of_share(capacity: Number, share: Number = 0.25) -> Number:
    """Capacity kept back for the hours until the regeneration, as a share of the bed's. [mol]"""
    return capacity * share


@formula(
    "Usable capacity",
    "usable = capacity − reserve",
    unit="mol",
    takes={"capacity": "mol", "reserve": "mol"},
    source="definition",
)
@broadcasts
def usable_capacity(capacity: Number, reserve: Number) -> Number:
    """Capacity used between two regenerations [mol]; none where the reserve is all of it."""
    return larger(capacity - reserve, 0.0)


@formula(
    "Days between regenerations",
    "days = usable ÷ load, not above the longest interval allowed",
    unit="day",
    takes={"usable": "mol", "load": "mol/day", "longest": "day"},
    source="definition",
    validity="On average days.",
)
@broadcasts
def days_between(usable: Number, load: Number, longest: Number = inf) -> Number:
    """Days from one regeneration to the next on average use [day]; NaN where nothing is used or taken up."""
    return smaller(ratio(usable, load), longest)


@formula(
    "Meter setting",
    "setting = usable × 1000 ÷ hardness",
    unit="L",
    takes={"usable": "mol", "hardness": "mmol/L"},
    source="definition",
    validity="For a meter that counts the water through the resin. One behind the blending valve counts "
    "the bypass too: "
    "give it hardness − target.",
)
@broadcasts
def meter_setting(usable: Number, hardness: Number) -> Number:
    """Water the meter lets pass before it calls for a regeneration. [L]"""
    return ratio(1000.0 * usable, hardness)


@formula(
    "Regenerations a year",
    "number = 365 ÷ days between",
    unit="1/year",
    takes={"interval": "day"},
    source="definition",
)
@broadcasts
def regenerations_per_year(interval: Number) -> Number:
    """Regenerations in a year. [1/year]"""
    return ratio(DAYS_PER_YEAR, interval)


@formula(
    "Salt a year",
    "salt a year = salt × 365 ÷ days between",
    unit="kg/year",
    takes={"salt": "kg", "interval": "day"},
    source="definition",
)
@broadcasts
def salt_per_year(salt: Number, interval: Number) -> Number:
    """Salt used in a year. [kg/year]"""
    return ratio(DAYS_PER_YEAR * salt, interval)


@formula(
    "Regeneration water a year",
    "water a year = water × 365 ÷ days between",
    unit="L/year",
    takes={"water": "L", "interval": "day"},
    source="definition",
)
@broadcasts
def water_per_year(water: Number, interval: Number) -> Number:
    """Water that goes to the drain in a year of regenerations. [L/year]"""
    return ratio(DAYS_PER_YEAR * water, interval)


@formula(
    "Salt efficiency in use",
    "efficiency = load × days between ÷ salt",
    unit="mol/kg",
    takes={"interval": "day", "load": "mol/day", "salt": "kg"},
    source="definition",
    validity="Counts the reserve that each regeneration throws away.",
)
@broadcasts
def effective_efficiency(interval: Number, load: Number, salt: Number) -> Number:
    """Hardness really removed per kilogram of salt, the reserve thrown away counted. [mol/kg]"""
    return ratio(interval * load, salt)


@formula(
    "Regeneration water per hardness removed",
    "water per mol = water ÷ (load × days between)",
    unit="L/mol",
    takes={"water": "L", "interval": "day", "load": "mol/day"},
    source="definition",
)
@broadcasts
def regeneration_water_per_mol(water: Number, interval: Number, load: Number) -> Number:
    """Water to the drain for each mol of hardness removed. [L/mol]"""
    return ratio(water, interval * load)


@formula(
    "Iron and manganese together",
    "sum = Fe + Mn",
    unit="mg/L",
    takes={"iron": "mg/L", "manganese": "mg/L"},
    source="definition",
    validity="Public plants: not above 0.3 mg/L on the resin [VAC590-900]. Homes: above 1 to 5 mg/L, by "
    "the equipment, "
    "remove it first (common practice).",
)
@broadcasts
def iron_and_manganese(iron: Number, manganese: Number = 0.0) -> Number:
    """Dissolved iron and manganese together, to hold against the limits for the resin [mg/L]; NaN below
    zero.
    """
    return only_where((iron >= 0.0) & (manganese >= 0.0), iron + manganese)
