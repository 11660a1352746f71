"""A dose in the operator's hands: products and their purity, solutions, pump, bags.

    products() -> dict[str, Product]
    product_dose(pure [mg/L], purity) -> mg/L
    solubility(pure, temperature [°C]) -> g per 100 g water;  largest_strength(per_100g) -> share by weight
    check_strength(product, strength, temperature) -> None          InputError says what dissolves at this temperature
    solution_density(pure, strength) -> kg/L;  slurry_density(strength) -> kg/L
    solution_per_m3(dose [mg/L pure], strength, density) -> mL/m³
    feed_rate(flow [L/min], dose, strength, density) -> mL/min
    strokes(feed [mL/min], stroke [mL]) -> 1/min;  pump_setting(feed, capacity [mL/min]) -> share
    batch_product(volume [L], strength, density, purity) -> kg;  batch_water(volume, density, product [kg]) -> L
    used(volume [L or L/day], dose [mg/L product]) -> kg or kg/day;  days_per_bag(bag [kg], daily [kg/day]) -> day
    feed_plan(product, dose, flow, daily_volume, ...) -> FeedPlan   all of it for one product

Strength and purity are shares by weight of the pure chemical, of the solution and of the product as sold.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from math import isnan, nan

from core.chemistry.reagents import REAGENTS
from core.data import number, read_table
from core.errors import InputError
from core.treatment.broadcast import Number, broadcasts, interpolate, ratio
from core.treatment.precipitation import Dose
from core.working import formula

LIME_DENSITY = 2.24  # kg/L of solid hydrated lime; from memory
PUMP_RANGE = (0.1, 0.9)  # of its capacity, where a metering pump keeps its accuracy; common practice, no source
SPARE = 0.8  # of what dissolves: a solution this strong stays clear on a cold night; our choice
SLURRY_MOST = 0.10  # by weight; thicker lime slurry settles in hoses and valves; common practice, no source


@dataclass(frozen=True, slots=True)
class Product:
    """A chemical as it is sold."""

    key: str
    words: str
    pure: str  # "soda_ash", "lime", "caustic", "co2": the chemical of the dose it supplies
    formula: str
    molar_mass: float  # g/mol
    feed: str  # "solution", "slurry", "slaked", "liquid", "gas"
    purity: float  # share by weight, usual
    purity_range: tuple[float, float]
    density: float  # kg/L, of liquids; else NaN
    freezes: float  # °C, of liquids; else NaN
    bag: float  # kg; NaN if not sold in bags
    certificate: str
    source: str
    status: str


@dataclass(frozen=True, slots=True)
class FeedPlan:
    """How one product is fed."""

    product: Product
    dose: float  # mg/L of the pure chemical
    product_dose: float  # mg/L as sold
    strength: float  # of what the pump feeds, share by weight; NaN for gas
    density: float  # kg/L
    per_m3: float  # mL of solution
    feed: float  # mL/min
    strokes: float  # 1/min; NaN where the stroke was not given
    setting: float  # share of the pump's capacity; NaN where it was not given
    in_range: bool  # whether the pump keeps its accuracy there; False where not known
    daily: float  # kg/day of product
    days_per_bag: float
    batch_product: float  # kg for one batch of solution; NaN where no batch was given or the product is liquid
    batch_water: float  # L
    batch_days: float


_FORMULAS = {"CaO": "quicklime", "Ca(OH)2": "lime", "Na2CO3": "soda_ash", "NaOH": "caustic", "CO2": "co2"}


@cache
def products() -> Mapping[str, Product]:
    """The chemicals as they are sold, by key: [AWWA-B201], [AWWA-B202], [AWWA-B501], common practice."""
    return {
        row["key"]: Product(
            row["key"],
            row["words"],
            row["pure"],
            row["formula"],
            REAGENTS[_FORMULAS[row["formula"]]].molar_mass,
            row["feed"],
            number(row, "purity") / 100.0,
            (number(row, "purity_low") / 100.0, number(row, "purity_high") / 100.0),
            number(row, "density"),
            number(row, "freezes_c"),
            number(row, "bag_kg"),
            row["certificate"],
            row["source"],
            row["status"],
        )
        for row in read_table("chemicals").rows
    }


def doses_of(dose: Dose, lime: str = "hydrated-lime", caustic: str = "caustic-50") -> dict[str, float]:
    """The products that a dose takes, with the dose of each as pure chemical. [mg/L]"""
    amounts = {"soda-ash": dose.soda_ash, lime: dose.lime, caustic: dose.caustic}
    return {key: amount * products()[key].molar_mass for key, amount in amounts.items() if amount}


@formula(
    "Product dose",
    "product = pure ÷ purity",
    unit="mg/L",
    takes={"pure": "mg/L", "purity": ""},
    source="definition",
)
@broadcasts
def product_dose(pure: Number, purity: Number) -> Number:
    """Dose of the product as it is sold. [mg/L]"""
    return ratio(pure, purity)


@broadcasts
def solubility(pure: str, temperature: Number) -> Number:
    """What dissolves in water [g per 100 g of water]: straight lines in [CRC-HANDBOOK]; NaN outside its range."""
    rows = [row for row in read_table("solubility").rows if row["pure"] == pure]
    if not rows:
        raise InputError("chemical", pure, f"No solubility is known for “{pure}”.")
    return interpolate(
        temperature, [number(row, "temperature_c") for row in rows], [number(row, "per_100g") for row in rows]
    )


@formula(
    "Strongest solution",
    "strength = dissolved ÷ (100 + dissolved)",
    unit="",
    takes={"per_100g": "g/100 g water"},
    source="definition",
    validity="Saturated; mix weaker, as it clogs at the first cold spot.",
)
@broadcasts
def largest_strength(per_100g: Number) -> Number:
    """Strength by weight of a saturated solution. [-]"""
    return ratio(per_100g, 100.0 + per_100g)


def check_strength(product: Product, strength: float, temperature: float) -> None:
    """Refuse a solution that cannot be: InputError says what does dissolve, or keep from freezing, here."""
    if not 0.0 < strength < 1.0:
        raise InputError("strength", strength, "The strength of the solution must lie between 0 and 100 %.")
    if product.feed in ("slurry", "slaked"):
        if strength > SLURRY_MOST:
            text = f"A slurry of more than {100 * SLURRY_MOST:.0f} % settles in hoses and valves. Mix it thinner."
            raise InputError("strength", strength, text)
        return
    if product.feed == "liquid":
        if strength > product.purity * (1.0 + 1e-9):
            text = f"The product holds {100 * product.purity:.0f} %: a solution cannot be stronger."
            raise InputError("strength", strength, text)
        if temperature <= product.freezes and strength > 0.9 * product.purity:
            text = f"It freezes at about {product.freezes:.0f} °C. Keep it warmer or buy it weaker."
            raise InputError("temperature", temperature, text)
        return
    if product.pure == "soda_ash":
        most = largest_strength(solubility("soda_ash", temperature))
        if isnan(most):
            raise InputError(
                "temperature", temperature, "Solubility is known from 0 to 60 °C. Enter such a temperature."
            )
        if strength > most:
            text = (
                f"At {temperature:.0f} °C no more than {100 * most:.1f} % of soda ash dissolves. Mix at most "
                f"{100 * SPARE * most:.0f} %, or keep the solution warmer."
            )
            raise InputError("strength", strength, text)


@broadcasts
def solution_density(pure: str, strength: Number) -> Number:
    """Density of a solution at 20 °C [kg/L]: straight lines in [CRC-HANDBOOK]; NaN outside its range."""
    rows = [row for row in read_table("chemicals_density").rows if row["pure"] == pure]
    if not rows:
        raise InputError("chemical", pure, f"No density is known for solutions of “{pure}”.")
    percents = [number(row, "percent") for row in rows]
    return interpolate(100.0 * strength, percents, [number(row, "density") for row in rows])


@formula(
    "Density of a lime slurry",
    "density = 1 ÷ (1 − strength × (1 − 1 ÷ 2.24))",
    unit="kg/L",
    takes={"strength": ""},
    source="common practice, no source",
    validity="Hydrated lime, 2.24 kg/L, in water of 1 kg/L; volumes add up.",
)
@broadcasts
def slurry_density(strength: Number) -> Number:
    """Density of a slurry of hydrated lime. [kg/L]"""
    return ratio(1.0, 1.0 - strength * (1.0 - 1.0 / LIME_DENSITY))


@formula(
    "Solution for a cubic metre",
    "solution = dose ÷ (strength × density)",
    unit="mL/m³",
    takes={"dose": "mg/L", "strength": "", "density": "kg/L"},
    source="definition",
    validity="Dose of the pure chemical.",
)
@broadcasts
def solution_per_m3(dose: Number, strength: Number, density: Number) -> Number:
    """Volume of solution that a cubic metre of water takes. [mL/m³]"""
    return ratio(dose, strength * density)


@formula(
    "Feed of the pump",
    "feed = flow × dose ÷ (strength × density × 1000)",
    unit="mL/min",
    takes={"flow": "L/min", "dose": "mg/L", "strength": "", "density": "kg/L"},
    source="definition",
    validity="Dose of the pure chemical. Check it by drawing from a graduated cylinder.",
)
@broadcasts
def feed_rate(flow: Number, dose: Number, strength: Number, density: Number) -> Number:
    """What the pump has to feed. [mL/min]"""
    return ratio(flow * dose, strength * density * 1000.0)


@formula(
    "Strokes of the pump",
    "strokes = feed ÷ stroke",
    unit="1/min",
    takes={"feed": "mL/min", "stroke": "mL"},
    source="definition",
    validity="The stroke as set, at the pressure it works against: less than at no pressure.",
)
@broadcasts
def strokes(feed: Number, stroke: Number) -> Number:
    """Strokes a minute that feed so much. [1/min]"""
    return ratio(feed, stroke)


@formula(
    "Setting of the pump",
    "setting = feed ÷ capacity",
    unit="",
    takes={"feed": "mL/min", "capacity": "mL/min"},
    source="definition",
    validity="Capacity at full stroke and speed, against the pressure of the line.",
)
@broadcasts
def pump_setting(feed: Number, capacity: Number) -> Number:
    """Part of its capacity that the pump runs at. [-]"""
    return ratio(feed, capacity)


@formula(
    "Product for a batch",
    "product = volume × density × strength ÷ purity",
    unit="kg",
    takes={"volume": "L", "strength": "", "density": "kg/L", "purity": ""},
    source="definition",
)
@broadcasts
def batch_product(volume: Number, strength: Number, density: Number, purity: Number) -> Number:
    """Product to weigh in for a batch of solution. [kg]"""
    return ratio(volume * density * strength, purity)


@formula(
    "Water for a batch",
    "water = volume × density − product",
    unit="L",
    takes={"volume": "L", "density": "kg/L", "product": "kg"},
    source="definition",
    validity="1 kg of water counts as 1 L. Water first, then the chemical into it, slowly.",
)
@broadcasts
def batch_water(volume: Number, density: Number, product: Number) -> Number:
    """Water for a batch of solution. [L]"""
    return volume * density - product


@formula(
    "Product used",
    "used = volume × dose ÷ 1 000 000",
    unit="kg",
    takes={"volume": "L", "dose": "mg/L"},
    source="definition",
    validity="Of a day where the volume is that of a day; of a tank where it is a tank's.",
)
@broadcasts
def used(volume: Number, dose: Number) -> Number:
    """Product that so much water takes. [kg]"""
    return volume * dose / 1e6


@formula(
    "Days from a bag",
    "days = bag ÷ used a day",
    unit="day",
    takes={"bag": "kg", "daily": "kg/day"},
    source="definition",
)
@broadcasts
def days_per_bag(bag: Number, daily: Number) -> Number:
    """Days that a bag lasts. [day]"""
    return ratio(bag, daily)


def feed_plan(
    product: str,
    dose: float,
    flow: float,
    daily_volume: float,
    *,
    strength: float | None = None,
    purity: float | None = None,
    temperature: float = 15.0,
    pump_capacity: float = nan,
    stroke: float = nan,
    batch: float = nan,
    bag: float | None = None,
) -> FeedPlan:
    """Everything an operator sets for one product, for a dose of pure chemical. [mg/L]

    flow in L/min while the pump runs, daily_volume in L/day. strength of what is fed, by weight; left out, a liquid
    is fed as it comes, soda ash at 0.8 of what dissolves at the temperature of the solution [°C] (no more than 10 %),
    lime as slurry of 5 %. pump_capacity [mL/min] at full stroke, stroke [mL] as set, batch of solution [L], bag [kg].
    InputError where the product is not known, or the solution cannot be.
    """
    if product not in products():
        raise InputError("product", product, f"No product is called “{product}”; known are {', '.join(products())}.")
    sold = products()[product]
    share = sold.purity if purity is None else purity
    if not 0.0 < share <= 1.0:
        raise InputError("purity", share, "The purity must lie between 0 and 100 %.")
    as_sold = product_dose(dose, share)
    daily = used(daily_volume, as_sold)
    content = sold.bag if bag is None else bag
    lasts = days_per_bag(content, daily)
    if sold.feed == "gas":
        return FeedPlan(sold, dose, as_sold, *([nan] * 6), False, daily, lasts, nan, nan, nan)
    fed = _usual_strength(sold, share, temperature) if strength is None else strength
    check_strength(sold, fed, temperature)
    # Quicklime is slaked first: the slurry then holds hydrated lime, 74.09 g for 56.08 g.
    slaked = REAGENTS["lime"].molar_mass / sold.molar_mass if sold.feed == "slaked" else 1.0
    density = _density(sold, fed)
    feed = feed_rate(flow, dose * slaked, fed, density)
    setting = pump_setting(feed, pump_capacity)
    weighed = batch_product(batch, fed / slaked, density, share)
    return FeedPlan(
        sold,
        dose,
        as_sold,
        fed,
        density,
        solution_per_m3(dose * slaked, fed, density),
        feed,
        strokes(feed, stroke),
        setting,
        PUMP_RANGE[0] <= setting <= PUMP_RANGE[1],
        daily,
        lasts,
        weighed,
        batch_water(batch, density, weighed),
        ratio(batch * 1000.0, solution_per_m3(dose * slaked, fed, density) * daily_volume / 1000.0),
    )


def _usual_strength(product: Product, purity: float, temperature: float) -> float:
    if product.feed == "liquid":
        return purity
    if product.feed == "solution":
        if product.pure == "soda_ash":
            return min(0.10, SPARE * largest_strength(solubility("soda_ash", temperature)))
        return 0.10
    return 0.05


def _density(product: Product, strength: float) -> float:
    if product.feed == "liquid" and abs(strength - product.purity) < 1e-9:
        return product.density
    return slurry_density(strength) if product.pure == "lime" else solution_density(product.pure, strength)
