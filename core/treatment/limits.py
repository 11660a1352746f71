"""Limits and advice for what is dissolved in drinking water, by rule set, and whether a water keeps them.

    PARAMETERS: dict[str, Parameter]             .words .unit; what can be limited, and the unit of the core for it
    rule_sets() -> dict[str, str]                key -> whose rules, in words: "WHO", "EU", "DE", "DE mixed", "US"
    limits_of(rule_set, advice=False) -> tuple[Limit, ...]    in the core's units
    typed_limit(parameter, low=-inf, high=inf, temperature=None) -> Limit
    margin(value, limit) -> share                0.1 = a tenth of the limit to spare, negative = beyond it
    keeps(value, limit) -> bool
    exceeded(analysis, limits) -> tuple[Limit, ...]
    unknown(analysis, limits) -> tuple[Limit, ...]            limits that nothing was measured for
    calcite_rule(capacity [mg/L CaCO3], ph, mixed=False) -> CalciteVerdict    German rule, with its pH shortcut
    efficiency_rules() -> dict[str, EfficiencyRule];  efficiency_allowed(efficiency [mol/kg], rule_set="US-CA") -> bool

Rules change. Each limit carries its source and how well it was read; the law's text in force comes first.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from functools import cache
from math import inf, isfinite, isnan, nan

from core.constants import GRAIN, MOLAR_MASS_CACO3, POUND, molar_mass
from core.data import Row, number, read_table
from core.errors import InputError
from core.units import convert


@dataclass(frozen=True, slots=True)
class Parameter:
    """Something a limit may be set for: its words, its unit in the core, whether it mixes by share."""

    words: str
    unit: str
    mixes: bool = True  # the blend has the mean of its parts, weighted by share


PARAMETERS: dict[str, Parameter] = {
    "hardness": Parameter("total hardness", "mmol/L"),
    "calcium": Parameter("calcium", "mmol/L"),
    "magnesium": Parameter("magnesium", "mmol/L"),
    "alkalinity": Parameter("alkalinity", "meq/L"),
    "sodium": Parameter("sodium", "mg/L Na"),
    "potassium": Parameter("potassium", "mmol/L"),
    "chloride": Parameter("chloride", "mmol/L"),
    "sulfate": Parameter("sulfate", "mmol/L"),
    "nitrate": Parameter("nitrate", "mmol/L"),
    "nitrite": Parameter("nitrite", "mg/L NO2"),
    "ammonium": Parameter("ammonium", "mg/L NH4"),
    "iron": Parameter("iron", "mg/L Fe"),
    "manganese": Parameter("manganese", "mg/L Mn"),
    "fluoride": Parameter("fluoride", "mg/L F"),
    "silica": Parameter("silica", "mg/L SiO2"),
    "arsenic": Parameter("arsenic", "mg/L As"),
    "boron": Parameter("boron", "mg/L B"),
    "uranium": Parameter("uranium", "mg/L U"),
    "copper": Parameter("copper", "mg/L Cu"),
    "lead": Parameter("lead", "mg/L Pb"),
    "tds": Parameter("total dissolved solids", "mg/L"),
    "conductivity": Parameter("conductivity", "µS/cm"),
    "temperature": Parameter("temperature", "°C"),
    "ph": Parameter("pH", "", mixes=False),
    "saturation": Parameter("saturation index of calcite", "", mixes=False),
    "ccpp": Parameter("lime that would precipitate", "mg/L CaCO3", mixes=False),
    "calcite dissolution": Parameter("lime that would dissolve", "mg/L CaCO3", mixes=False),
}
# Printed units that core.units does not know, in the unit of the core.
_PRINTED = {"mg/L NO2-N": molar_mass(N=1, O=2) / molar_mass(N=1)}
ROUNDING = 1e-8  # relative: a sum of shares may miss the limit it was set to by the last digits of a float
PH_SHORTCUT = 7.7  # at the outlet of the works [TRINKWV2023]
GRAIN_PER_POUND = GRAIN / MOLAR_MASS_CACO3 / POUND  # mol of hardness per kg of salt


@dataclass(frozen=True, slots=True)
class Limit:
    """A lowest and a highest value for one parameter, in the unit of the core; infinite is none."""

    parameter: str
    low: float = -inf
    high: float = inf
    kind: str = "typed"  # typed, regulation, guideline, advice
    words: str = ""
    source: str = ""
    status: str = ""
    rule_set: str = ""
    temperature: float | None = None  # °C at which pH, saturation and lime are meant; None: as the water is
    kept_from_ph: float = inf  # from this pH on the limit counts as kept, whatever the value

    @property
    def typed(self) -> bool:
        """Whether somebody asked for this limit by itself; one of a rule set may go unchecked, this may not."""
        return self.kind == "typed"


@dataclass(frozen=True, slots=True)
class CalciteVerdict:
    """How a water stands under the German rule on dissolving lime."""

    met: bool
    by_capacity: bool  # the capacity itself keeps the limit
    by_ph: bool  # the pH is high enough for the rule to count as kept
    limit: float  # mg/L CaCO3


@dataclass(frozen=True, slots=True)
class EfficiencyRule:
    """The least salt efficiency a softener may be sold with."""

    rule_set: str
    words: str
    least: float  # mol of hardness per kg of salt
    source: str
    status: str


@cache
def rule_sets() -> dict[str, str]:
    """Whose rules are known: key -> words."""
    table = read_table("limits")
    keys = dict.fromkeys(row["rule_set"] for row in table.rows)
    return {key: table.notes[key] for key in keys}


@cache
def limits_of(rule_set: str, *, advice: bool = False) -> tuple[Limit, ...]:
    """Limits of one rule set, in the core's units; its advice for some people only if asked for."""
    if rule_set not in rule_sets():
        raise InputError(
            "rule set", rule_set, f"No rules are known under “{rule_set}”; known are {', '.join(rule_sets())}."
        )
    rows = (row for row in read_table("limits").rows if row["rule_set"] == rule_set)
    return tuple(_limit(row) for row in rows if advice or row["kind"] != "advice")


def _limit(row: Row) -> Limit:
    low, high = (_in_core_unit(number(row, side), row["unit"], row["parameter"]) for side in ("low", "high"))
    return Limit(
        row["parameter"],
        -inf if isnan(low) else low,
        inf if isnan(high) else high,
        row["kind"],
        row["words"],
        row["source"],
        row["status"],
        row["rule_set"],
        kept_from_ph=PH_SHORTCUT if (row["rule_set"], row["parameter"]) == ("DE", "calcite dissolution") else inf,
    )


def _in_core_unit(value: float, unit: str, parameter: str) -> float:
    wanted = PARAMETERS[parameter].unit
    if unit in ("-", wanted):
        return value
    if unit in _PRINTED:
        return value * _PRINTED[unit]
    return convert(value, unit, wanted, parameter)


def typed_limit(parameter: str, low: float = -inf, high: float = inf, temperature: float | None = None) -> Limit:
    """A limit somebody typed, in the core's units; InputError in a sentence where it cannot be one."""
    if parameter not in PARAMETERS:
        raise InputError("limit", parameter, f"“{parameter}” cannot be limited; known are {', '.join(PARAMETERS)}.")
    words = PARAMETERS[parameter].words
    if isnan(low) or isnan(high) or not (isfinite(low) or isfinite(high)):
        raise InputError(
            "limit", (low, high), f"The limit for {words} has no number. Enter a lowest or a highest value."
        )
    if low > high:
        raise InputError("limit", (low, high), f"The lowest {words} is above the highest. Check which is which.")
    return Limit(parameter, low, high, temperature=temperature)


def margin(value: float, limit: Limit) -> float:
    """What is left to the nearer side of a limit, as a share of that side [-]; negative beyond it, NaN unknown.

    A side at zero has no share to count in: the distance itself is given, in the unit of the parameter.
    """
    if isnan(value):
        return nan
    sides = ((limit.high, limit.high - value), (limit.low, value - limit.low))
    return min(room / abs(side) if side else room for side, room in sides if isfinite(side))


def exceeded(analysis: Mapping[str, float], limits: Iterable[Limit]) -> tuple[Limit, ...]:
    """Limits that a water does not keep, in their order; what was not measured is not judged: see `unknown`."""
    known = ((limit, analysis.get(limit.parameter, nan)) for limit in limits)
    return tuple(limit for limit, value in known if not isnan(value) and not keeps(value, limit))


def keeps(value: float, limit: Limit) -> bool:
    """Whether a value lies within a limit, the rounding of arithmetic (not of readings) forgiven; never for NaN."""
    slack = ROUNDING * max(abs(side) for side in (limit.low, limit.high, 1e-6) if isfinite(side))
    return limit.low - slack <= value <= limit.high + slack


def unknown(analysis: Mapping[str, float], limits: Iterable[Limit]) -> tuple[Limit, ...]:
    """Limits that cannot be judged, because nothing was measured for them."""
    return tuple(limit for limit in limits if isnan(analysis.get(limit.parameter, nan)))


def calcite_rule(capacity: float, ph: float, *, mixed: bool = False) -> CalciteVerdict:
    """Whether a water keeps the German rule on dissolving lime [TRINKWV2023].

    capacity: calcite that the water dissolves, mg/L CaCO3 (minus the precipitation potential). At the outlet of the
    works at most 5 mg/L, and the rule counts as kept where the pH is 7.7 or more; mixed in the network 10 mg/L.
    """
    rules = limits_of("DE mixed" if mixed else "DE")
    limit = next(rule.high for rule in rules if rule.parameter == "calcite dissolution")
    by_capacity = capacity <= limit
    by_ph = not mixed and ph >= PH_SHORTCUT
    return CalciteVerdict(by_capacity or by_ph, by_capacity, by_ph, limit)


@cache
def efficiency_rules() -> dict[str, EfficiencyRule]:
    """Least salt efficiencies by rule set."""
    return {
        row["rule_set"]: EfficiencyRule(
            row["rule_set"],
            row["words"],
            number(row, "least_gr_lb") * GRAIN_PER_POUND,
            row["source"],
            row["status"],
        )
        for row in read_table("limits_efficiency").rows
    }


def efficiency_allowed(efficiency: float, rule_set: str = "US-CA") -> bool:
    """Whether a softener of this salt efficiency [mol of hardness per kg of salt] may be sold new."""
    rules = efficiency_rules()
    if rule_set not in rules:
        raise InputError("rule set", rule_set, f"No rule on salt efficiency is known under “{rule_set}”.")
    return efficiency >= rules[rule_set].least * (1.0 - 1e-12)
