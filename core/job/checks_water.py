"""Checks of the water's readings against each other and against what waters are like; see `core.job.checks`."""

from __future__ import annotations

from collections.abc import Iterator

from core.chemistry.quality import conductivity_from_ions
from core.job.fields import FIELDS
from core.job.known import Known, amount
from core.job.odd import Odd, did_you_mean, differ, other_units
from core.units import convert

HARDNESS, CALCIUM, MAGNESIUM = "water.hardness", "water.calcium", "water.magnesium"
ALKALINITY, PH, CONDUCTIVITY = "water.alkalinity", "water.ph", "water.conductivity"

VERY_HARD = 10.0  # mmol/L, 1000 mg/L CaCO3; common practice, no source
SOFT = 0.5  # mmol/L, 50 mg/L CaCO3
BUFFERED = 1.0  # meq/L of alkalinity, much for a soft natural water; common practice, no source
NO_ALKALINITY = 4.5  # pH below which there is none: it is what acid takes to pH 4.3 [DIN38409-7]
LOG_K1 = 6.42  # of carbonic acid at 15 °C [PB82]
FIZZY = 300.0  # mg/L of free CO2, more than tap waters hold; common practice, no source
CO2_MASS = 44.009  # g/mol [IUPAC21]
LEAST_CONDUCTIVITY = 0.75  # of what the hardness alone gives: the relation holds to 10 %, hard waters lie lower
WARM = 30.0  # °C; common practice, no source
PH_RANGE = (6.5, 9.5)  # of drinking water [EU2020-2184]
STAINS = {"water.iron": (0.3, "Iron"), "water.manganese": (0.05, "Manganese")}  # mg/L [EPA-DWR]
UNLIKELY_METAL = 20.0  # mg/L; common practice, no source
LIMITS = {  # mg/L [EU2020-2184]
    "water.sodium": (200.0, "mg/L Na"),
    "water.chloride": (250.0, "mg/L Cl"),
    "water.sulfate": (250.0, "mg/L SO4"),
    "water.nitrate": (50.0, "mg/L NO3"),
}
_AGAIN = "Look at both units, then measure again."


def hardness_against_ions(known: Known) -> Iterator[Odd]:
    """Hardness is calcium and magnesium together."""
    values = known.all(HARDNESS, CALCIUM, MAGNESIUM)
    if values is None:
        return
    hardness, calcium, magnesium = values
    sides = [known.side(key) for key in (HARDNESS, CALCIUM, MAGNESIUM)]
    if not differ(hardness, calcium + magnesium, *sides):
        return
    what = (
        f"The hardness of {known.shown(HARDNESS)} and calcium and magnesium, together "
        f"{known.in_unit_of(HARDNESS, calcium + magnesium)}, do not agree."
    )
    yield Odd(HARDNESS, what, _mixed_up(known, hardness, calcium, magnesium, sides[0]))


def _mixed_up(known: Known, hardness: float, calcium: float, magnesium: float, side: float) -> str:
    """Which other unit of one reading, or of both ions, would make them agree."""
    ions = calcium + magnesium
    units = other_units(known, HARDNESS, FIELDS[HARDNESS].units, lambda value: not differ(value, ions))
    if units:
        return did_you_mean(known, HARDNESS, units, _AGAIN)
    as_caco3 = known.as_unit(CALCIUM, "mg/L CaCO3") + known.as_unit(MAGNESIUM, "mg/L CaCO3")
    if not differ(as_caco3, hardness, side):
        return (
            f"Read as mg/L CaCO3 they would be {known.in_unit_of(HARDNESS, as_caco3)}: did you mean mg/L CaCO3 for "
            "calcium and magnesium?"
        )
    for key, other in ((CALCIUM, magnesium), (MAGNESIUM, calcium)):
        units = other_units(known, key, FIELDS[key].units, lambda value, o=other: not differ(value + o, hardness, side))
        if units:
            return did_you_mean(known, key, units, _AGAIN)
    return _AGAIN


def ion_above_hardness(known: Known) -> Iterator[Odd]:
    """Calcium alone, or magnesium alone, cannot be more than both."""
    for key, other in ((CALCIUM, MAGNESIUM), (MAGNESIUM, CALCIUM)):
        values = known.all(HARDNESS, key)
        if values is None or known[other] is not None:
            continue
        hardness, ion = values
        if ion <= hardness or not differ(ion, hardness, known.side(HARDNESS), known.side(key)):
            continue
        units = other_units(known, key, FIELDS[key].units, lambda value, h=hardness: 0.3 * h <= value <= h)
        what = f"{FIELDS[key].label} alone, {known.shown(key)}, is more than the hardness of {known.shown(HARDNESS)}."
        yield Odd(key, what, did_you_mean(known, key, units, _AGAIN))


def magnesium_above_calcium(known: Known) -> Iterator[Odd]:
    """Most waters hold more calcium than magnesium."""
    values = known.all(CALCIUM, MAGNESIUM)
    if values is not None and values[1] > 1.2 * values[0] and values[1] > SOFT:
        what = f"There is more magnesium ({known.shown(MAGNESIUM)}) than calcium ({known.shown(CALCIUM)}) in mmol."
        yield Odd(MAGNESIUM, what, "That is rare: are the two figures, or their units, swapped?")


def sample_softened(known: Known) -> Iterator[Odd]:
    """Next to no hardness beside much alkalinity is what a softener leaves."""
    values = known.all(HARDNESS, ALKALINITY)
    if values is not None and values[0] < SOFT and values[1] > BUFFERED and values[1] > 4.0 * values[0]:
        what = f"The water is soft ({known.shown(HARDNESS)}) and yet has an alkalinity of {known.shown(ALKALINITY)}."
        yield Odd(HARDNESS, what, "Was the sample taken behind a softener? Take one before it.")


def alkalinity_above_hardness(known: Known) -> Iterator[Odd]:
    """What alkalinity goes beyond hardness is held by sodium or potassium, so there must be as much of them."""
    values = known.all(HARDNESS, ALKALINITY)
    if values is None:
        return
    hardness, alkalinity = values
    excess = alkalinity - 2.0 * hardness
    sides = (2.0 * known.side(HARDNESS), known.side(ALKALINITY))
    if excess <= 0.0 or hardness < SOFT or not differ(alkalinity, 2.0 * hardness, *sides):
        return
    what = f"The alkalinity of {known.shown(ALKALINITY)} is above the hardness of {known.shown(HARDNESS)}"
    units = other_units(
        known,
        ALKALINITY,
        ("mg/L HCO3", "°dKH", "°fH", "mg/L CaCO3"),
        lambda value: 0.8 * hardness <= value <= 2.1 * hardness,
    )
    sodium = known["water.sodium"]
    if sodium is not None:
        held = convert(sodium, "mg/L Na", "meq/L", quantity="sodium") + (known["water.potassium"] or 0.0)
        if held < excess and differ(held, excess, *sides):
            what += f", and sodium and potassium, {amount(held, 'meq/L')}, are too little for the rest."
            yield Odd(ALKALINITY, what, did_you_mean(known, ALKALINITY, units, _AGAIN))
        return
    step = did_you_mean(known, ALKALINITY, units, "Have sodium measured, or look at the units.")
    yield Odd(ALKALINITY, f"{what}: the rest must be held by sodium, which is rare.", step)


def alkalinity_without_buffer(known: Known) -> Iterator[Odd]:
    """Alkalinity is what acid takes to pH 4.3: below that there is none."""
    values = known.all(PH, ALKALINITY)
    if values is not None and values[0] < NO_ALKALINITY and values[1] > max(0.1, known.side(ALKALINITY)):
        what = f"At pH {values[0]:g} there is no alkalinity, but {known.shown(ALKALINITY)} was entered."
        yield Odd(PH, what, "One of the two is wrong: read the pH again with a meter set on the day.")


def too_much_carbon_dioxide(known: Known) -> Iterator[Odd]:
    """Much alkalinity at a low pH means more carbon dioxide than tap water holds."""
    values = known.all(PH, ALKALINITY)
    if values is None or values[0] < NO_ALKALINITY:
        return
    ph, alkalinity = values
    dioxide = alkalinity * 10.0 ** (LOG_K1 - ph - known.side(PH)) * CO2_MASS
    if dioxide > FIZZY:
        what = (
            f"With an alkalinity of {known.shown(ALKALINITY)}, pH {ph:g} means over {amount(dioxide, 'mg/L')} of CO2."
        )
        yield Odd(PH, what, "Tap water does not fizz: read the pH again, on site.")


def conductivity_against_hardness(known: Known) -> Iterator[Odd]:
    """The ions of the hardness alone conduct about 100 µS/cm for each meq/L."""
    values = known.all(HARDNESS, CONDUCTIVITY)
    if values is None:
        return
    hardness, conductivity = values
    least = max(0.0, hardness - known.side(HARDNESS))
    expected = float(conductivity_from_ions(2.0 * least))
    if conductivity + known.side(CONDUCTIVITY) >= LEAST_CONDUCTIVITY * expected:
        return
    what = (
        f"The hardness alone conducts about {amount(float(conductivity_from_ions(2.0 * hardness)), 'µS/cm')}, but "
        f"{known.shown(CONDUCTIVITY)} was entered."
    )
    units = other_units(
        known, CONDUCTIVITY, ("mS/cm", "µS/cm"), lambda value: 0.9 * expected <= value <= 5.0 * expected
    )
    if units:
        yield Odd(CONDUCTIVITY, what, did_you_mean(known, CONDUCTIVITY, units, _AGAIN))
        return
    units = other_units(
        known, HARDNESS, FIELDS[HARDNESS].units, lambda value: 0.4 <= 200.0 * value / conductivity <= 1.1
    )
    yield Odd(HARDNESS, what, did_you_mean(known, HARDNESS, units, _AGAIN))


def ph_out_of_range(known: Known) -> Iterator[Odd]:
    """Drinking water lies between pH 6.5 and 9.5."""
    ph = known[PH]
    if ph is not None and not PH_RANGE[0] <= ph <= PH_RANGE[1]:
        what = f"pH {ph:g} is outside what drinking water may have ({PH_RANGE[0]:g} to {PH_RANGE[1]:g})."
        yield Odd(PH, what, "Read it again on site; if it stays so, treat the pH before anything else.")


def warm_tap(known: Known) -> Iterator[Odd]:
    """Cold water is seldom warmer than 30 °C."""
    key = "water.temperature"
    value = known[key]
    if value is not None and value > WARM:
        units = other_units(known, key, ("°F", "°C"), lambda celsius: 0.0 <= celsius <= WARM)
        what = f"{known.shown(key)} is warm for cold water."
        yield Odd(key, what, did_you_mean(known, key, units, "Let the tap run, then read again."))


def extremely_hard(known: Known) -> Iterator[Odd]:
    """Above 1000 mg/L CaCO3 a tap water is a rarity, and a slip of the unit likelier."""
    hardness = known[HARDNESS]
    if hardness is not None and hardness > VERY_HARD:
        units = other_units(known, HARDNESS, ("mg/L CaCO3", "°fH", "°dH"), lambda value: 1.0 <= value <= VERY_HARD)
        what = f"A hardness of {known.shown(HARDNESS)} is extreme."
        step = did_you_mean(known, HARDNESS, units, "Measure again with a diluted sample before sizing anything.")
        yield Odd(HARDNESS, what, step)


def metals(known: Known) -> Iterator[Odd]:
    """Iron and manganese above their limits stain; far above, the unit is likelier to be wrong."""
    for key, (limit, name) in STAINS.items():
        value = known[key]
        if value is None or value <= limit:
            continue
        symbol = FIELDS[key].core_unit.rpartition(" ")[2]
        if value > UNLIKELY_METAL:
            units = other_units(known, key, (f"µg/L {symbol}",), lambda in_mg: in_mg < UNLIKELY_METAL)
            step = did_you_mean(known, key, units, "Have a laboratory measure it.")
            yield Odd(key, f"{name} of {known.shown(key)} is more than wells hold.", step, "common practice, no source")
        else:
            what = f"{name} of {known.shown(key)} is above {limit:g} mg/L, from where it stains."
            yield Odd(
                key, what, "Find out how much of it is dissolved: what is already rust or slime, a filter must take."
            )


def over_limits(known: Known) -> Iterator[Odd]:
    """Ions above their limits in drinking water."""
    for key, (limit, unit) in LIMITS.items():
        value = known[key]
        if value is None:
            continue
        field = FIELDS[key]
        in_mg = convert(value, field.core_unit, unit, quantity=field.quantity)
        if in_mg <= limit:
            continue
        what = f"{field.label}: {known.shown(key)} is above the limit of drinking water, {amount(limit, unit)}."
        if key == "water.nitrate":
            units = other_units(
                known,
                key,
                ("mg/L NO3",),
                lambda v, f=field: convert(v, f.core_unit, "mg/L NO3", quantity="nitrate") <= 50.0,
            )
            step = did_you_mean(
                known, key, units, "A softener leaves it. Nobody gives it to infants; ask the supplier."
            )
        elif key == "water.sodium":
            step = "Softening with common salt adds to it: leave the drinking tap unsoftened, or look for another way."
        else:
            step = "A softener does not lower it: say so to the customer."
        yield Odd(key, what, step)
