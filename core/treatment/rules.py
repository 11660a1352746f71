"""Rules and hygiene by region, as data; where nothing is known for a region, the stricter reading and a sentence.

REGIONS: dict[str, str]                                   key -> name
rules_for(region) -> dict[str, Rule]                      by topic; .value in the core's units, .borrowed
air_gap(bore [mm], region=None) -> mm
public_capacity_allowed(capacity [eq/L], salt_dose [g/L]) -> bool
efficiency_ratings() -> tuple[Rating, ...];  ratings_met(efficiency [mol/kg], water [L/mol]) -> tuple[str, ...]
starting_points() -> dict[str, StartingPoint]             hotel, laundry, boiler feed
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cache
from math import isnan, nan

from core.constants import GRAIN, INCH, MOLAR_MASS_CACO3, POUND, US_GALLON
from core.data import Row, number, read_table
from core.errors import InputError
from core.treatment.broadcast import Number, broadcasts, larger
from core.treatment.regions import REGIONS
from core.treatment.resin import KILOGRAIN_PER_CUBIC_FOOT
from core.treatment.vessel import GPM_PER_SQUARE_FOOT
from core.working import formula

_PARENT = {"US-CA": "US", "US-PUBLIC": "US", "DE": "EU", "UK": "EU"}
_GRAIN = GRAIN / 1000.0 / MOLAR_MASS_CACO3  # mol
GRAIN_PER_POUND = _GRAIN / POUND * 1000.0  # mol/kg
GALLON_PER_KILOGRAIN = US_GALLON / (1000.0 * _GRAIN)  # L/mol
_FACTORS = {
    "gr/lb": GRAIN_PER_POUND,
    "gal/kgr": GALLON_PER_KILOGRAIN,
    "kgr/ft3": KILOGRAIN_PER_CUBIC_FOOT,
    "gpm/ft2": GPM_PER_SQUARE_FOOT,
    "in": INCH / 1000.0,  # m
}
_UNITS = {"gr/lb": "mol/kg", "gal/kgr": "L/mol", "kgr/ft3": "eq/L", "gpm/ft2": "m/h", "in": "m"}
# Where several regions have a figure: which of them is the stricter reading.
_STRICTER_IS_LOWER = {"interval-longest", "water", "service"}
# Rules of public works are not a stricter reading for a house: they are for another kind of plant.
_ONLY_THEIR_OWN = {"US-PUBLIC"}
# A region that is known and silent on these takes the stricter rule of another: they keep people from harm.
_ALWAYS = {"interval-longest", "air-gap"}
PUBLIC_SALT_PER_KILOGRAIN = 0.3  # lb, at least [VAC590-900]


@dataclass(frozen=True, slots=True)
class Rule:
    """One rule: what it asks for, where it comes from, and whether it was borrowed from another region."""

    topic: str
    region: str  # the region it comes from
    value: float  # in the core's units; 1 for a plain requirement
    unit: str
    words: str
    source: str
    status: str
    borrowed: bool = False  # nothing is known for the region asked, so the stricter rule of another stands in

    @property
    def sentence(self) -> str:
        """The rule in words, with a remark where it was borrowed."""
        if not self.borrowed:
            return self.words
        place = REGIONS[self.region]
        return f"{self.words} (Nothing is known here for your region; this is the stricter rule, from: {place}.)"


@dataclass(frozen=True, slots=True)
class Rating:
    """A published rating of efficiency."""

    key: str
    region: str
    words: str
    salt: float  # mol/kg, at least
    water: float  # L/mol, at most; NaN where it says nothing of water
    binding: bool
    source: str
    status: str


@dataclass(frozen=True, slots=True)
class StartingPoint:
    """Water use of a kind of customer, to start from."""

    key: str
    words: str
    counted: str  # what one unit is
    litres: float
    low: float
    high: float
    building: str  # building type of DIN 1988-300, empty where none fits
    note: str
    source: str
    status: str


@cache
def _rules() -> tuple[Rule, ...]:
    return tuple(_rule(row) for row in read_table("rules").rows)


def _rule(row: Row) -> Rule:
    unit = row["unit"]
    value = number(row, "value") * _FACTORS.get(unit, 1.0)
    return Rule(row["topic"], row["region"], value, _UNITS.get(unit, unit), row["words"], row["source"], row["status"])


def rules_for(region: str | None) -> dict[str, Rule]:
    """Rules of a region by topic; for None, not known, the stricter rule of all regions on every topic.

    Interval limits of hygiene and the air gap are borrowed in this way for a known but silent region too.

    Topics: interval-longest and interval-shortest [day], efficiency [mol/kg], water [L/mol], air-gap [mm],
    outside-taps, brine-discharge, drinking-tap, backflow, service [day], licence, brine-tank; for US-PUBLIC also
    iron [mg/L], capacity-cap [eq/L], surface-loading [m/h], bed-depth [m]. Raises InputError for a region that is
    not in REGIONS.
    """
    if region is not None and region not in REGIONS:
        raise InputError("region", region, f"No rules are known for {region}. Known are: {', '.join(REGIONS)}.")
    lineage = [region, _PARENT.get(region or "")]
    found: dict[str, Rule] = {}
    for topic in dict.fromkeys(rule.topic for rule in _rules()):
        here = [rule for rule in _rules() if rule.topic == topic]
        own = next((rule for place in lineage for rule in here if rule.region == place), None)
        others = [rule for rule in here if rule.region not in _ONLY_THEIR_OWN]
        if own is not None:
            found[topic] = own
        elif others and (region is None or topic in _ALWAYS):
            found[topic] = replace(_strictest(topic, others), borrowed=True)
    return found


def _strictest(topic: str, rules: list[Rule]) -> Rule:
    choose = min if topic in _STRICTER_IS_LOWER else max
    return choose(rules, key=lambda rule: rule.value)


@formula(
    "Air gap",
    "gap = the larger of twice the bore and the least gap",
    unit="mm",
    takes={"bore": "mm", "least": "mm"},
    source="UPC603",
    validity="Between the end of the drain line and the highest water at the drain. Local code comes first.",
)
@broadcasts
def air_gap(bore: Number, least: Number = INCH) -> Number:
    """Free fall between the drain line and the drain; `rules_for(region)["air-gap"].value` is the least. [mm]"""
    return larger(2.0 * bore, least)


def public_capacity_allowed(capacity: float, salt_dose: float) -> bool:
    """Whether a public plant may be designed for this capacity [eq/L] at this salt dose [g/L] [VAC590-900]."""
    cap = rules_for("US-PUBLIC")["capacity-cap"].value
    highest_efficiency = 1000.0 / PUBLIC_SALT_PER_KILOGRAIN * GRAIN_PER_POUND  # mol/kg
    slack = 1.0 + 1e-9
    return capacity <= cap * slack and 500.0 * capacity / salt_dose <= highest_efficiency * slack


@cache
def efficiency_ratings() -> tuple[Rating, ...]:
    """Published ratings of salt and water efficiency: [NSF44], [CA-HSC116785], [US-DISTRICT], [DIN19636-100]."""
    return tuple(
        Rating(
            row["key"],
            row["region"],
            row["words"],
            number(row, "least_salt") * _FACTORS.get(row["salt_unit"], 1.0),
            number(row, "most_water_gal_kgr") * GALLON_PER_KILOGRAIN,
            row["binding"] == "yes",
            row["source"],
            row["status"],
        )
        for row in read_table("efficiency_ratings").rows
    )


def ratings_met(efficiency: float, water: float = nan) -> tuple[str, ...]:
    """Keys of the ratings that this salt efficiency [mol/kg] and regeneration water [L/mol] meet.

    A rating that limits the water is not met where the water is not known. The figures are those at the stated lowest
    dose, the whole capacity used.
    """
    slack = 1.0 + 1e-9
    return tuple(
        rating.key
        for rating in efficiency_ratings()
        if efficiency * slack >= rating.salt and (isnan(rating.water) or water <= rating.water * slack)
    )


@cache
def starting_points() -> dict[str, StartingPoint]:
    """Kinds of customer with a first figure of their use; each is only a start until a meter was read."""
    return {
        row["key"]: StartingPoint(
            row["key"],
            row["words"],
            row["counted"],
            number(row, "litres"),
            number(row, "low"),
            number(row, "high"),
            "" if row["building"] == "-" else row["building"],
            row["note"],
            row["source"],
            row["status"],
        )
        for row in read_table("starting_points").rows
    }
