"""Units met around the plant: volumes, flows, pressures, salt, resin, time. Metric, US and imperial.

All factors follow from exact legal definitions [EXACT], with the atomic weights [IUPAC21] where an amount of
CaCO3 is meant. A bare "gal" is never guessed: US and imperial gallons differ by a fifth.
"""

from __future__ import annotations

from core.constants import (
    CUBIC_FOOT,
    GRAIN,
    IMPERIAL_GALLON,
    INCH,
    MOLAR_MASS_CACO3,
    MOLAR_MASS_CAO,
    POUND,
    US_GALLON,
)
from core.units.unit import DAYS_PER_YEAR, HOURS_PER_DAY, Unit, units

_FOOT = 12 * INCH / 1000  # m
_SQUARE_FOOT = _FOOT**2  # m2
_STANDARD_GRAVITY = 9.80665  # m/s2 [EXACT]
_PSI = POUND / 1000 * _STANDARD_GRAVITY / (INCH / 1000) ** 2 / 1000  # kPa
_BTU = 1055.05585262  # J, the international table one [EXACT]
_CALORIE = 4.1868  # J, likewise [EXACT]
_POUND_KG = POUND / 1000
_MINUTES = 60  # in an hour
_US_LOADING = US_GALLON * _MINUTES / 1000 / _SQUARE_FOOT  # m/h in a gpm per square foot
_IMPERIAL_LOADING = IMPERIAL_GALLON * _MINUTES / 1000 / _SQUARE_FOOT
_GRAIN_MOL = GRAIN / 1000 / MOLAR_MASS_CACO3  # mol CaCO3 in a grain of it
_GERMAN_M3 = 10.0 / MOLAR_MASS_CAO  # mol in a cubic metre of one German degree
_FRENCH_M3 = 10.0 / MOLAR_MASS_CACO3  # the same of one French degree

_TABLES: tuple[tuple[Unit, ...], ...] = (
    units(  # base: L
        "volume",
        ("L", 1.0, 0, "l|litre|liter|dm3"),
        ("mL", 1e-3, 0, "ml|cm3|cc|cubic cm"),
        ("m³", 1e3, 2, "m3|cubic metre|cu m|cbm|kL"),
        ("US gal", US_GALLON, 0, "gal US|US gallon|usg|gal (US)|american gallon"),
        ("imp gal", IMPERIAL_GALLON, 0, "gal imp|imperial gallon|UK gal|UK gallon|gal UK|gal (imp)"),
        ("ft³", CUBIC_FOOT, 2, "ft3|cu ft|cubic foot|cf|cuft"),
    ),
    units(  # base: L/h
        "flow",
        ("L/min", 60.0, 1, "lpm|l/m|L/min."),
        ("L/h", 1.0, 0, "lph|L/hr"),
        ("L/s", 3600.0, 2, "lps"),
        ("m³/h", 1000.0, 2, "m3/h|cmh|cubic metre/h"),
        ("L/day", 1.0 / HOURS_PER_DAY, 0, "L/d|lpd"),
        ("m³/day", 1000.0 / HOURS_PER_DAY, 1, "m3/d|m3/day|cmd"),
        ("gpm", US_GALLON * _MINUTES, 1, "US gpm|US gal/min|usgpm|gal (US)/min"),
        ("gph", US_GALLON, 0, "US gph|US gal/h"),
        ("gpd", US_GALLON / HOURS_PER_DAY, 0, "US gpd|US gal/day|US gal/d"),
        ("imp gpm", IMPERIAL_GALLON * _MINUTES, 1, "igpm|imp gal/min|UK gpm|UK gal/min"),
        ("imp gal/day", IMPERIAL_GALLON / HOURS_PER_DAY, 0, "imp gpd|igpd|UK gal/day|imp gal/d"),
        ("ft³/min", CUBIC_FOOT * _MINUTES, 2, "cfm|cu ft/min|ft3/min"),
        ("MGD", 1e6 * US_GALLON / HOURS_PER_DAY, 3, "US MGD|million US gal/day"),
    ),
    units(  # base: L per person and day
        "water use",
        (
            "L/person/day",
            1.0,
            0,
            "L/p/d|L/(p·d)|lpcd|L/head/day|L/person d|L/p d|L/d/person",
        ),
        ("US gal/person/day", US_GALLON, 0, "gpcd|US gal/capita/day|US gal/p/d|US gal per person per day"),
        ("imp gal/person/day", IMPERIAL_GALLON, 0, "imp gal/capita/day|imp gal/p/d|UK gal/person/day"),
        ("m³/person/year", 1000.0 / DAYS_PER_YEAR, 1, "m3/p/a|m3/person/year|m3/capita/year|m3/p/y"),
    ),
    units(  # base: m
        "length",
        ("m", 1.0, 2, "metre|meter"),
        ("cm", 1e-2, 1, ""),
        ("mm", 1e-3, 0, ""),
        ("in", INCH / 1000, 1, 'inch|inches|″|"'),
        ("ft", _FOOT, 1, "foot|feet|′|'"),
    ),
    units(  # base: m2
        "area",
        ("m²", 1.0, 3, "m2|sq m|square metre"),
        ("cm²", 1e-4, 0, "cm2|sq cm"),
        ("ft²", _SQUARE_FOOT, 3, "ft2|sq ft|square foot|sqft"),
        ("in²", (INCH / 1000) ** 2, 0, "in2|sq in|square inch"),
    ),
    units(  # base: kg
        "mass",
        ("kg", 1.0, 1, "kilo|kilogram"),
        ("g", 1e-3, 0, "gram|gramme"),
        ("mg", 1e-6, 0, "milligram"),
        ("t", 1e3, 2, "tonne|metric ton"),
        ("lb", _POUND_KG, 1, "lbs|pound|pounds|#"),
        ("oz", _POUND_KG / 16, 1, "ounce|ounces"),
        ("grain", GRAIN * 1e-6, 0, "grains"),
        ("US ton", 2000 * _POUND_KG, 2, "short ton"),
        ("imp ton", 2240 * _POUND_KG, 2, "long ton|UK ton"),
    ),
    units(  # base: kg/day
        "mass flow",
        ("kg/day", 1.0, 2, "kg/d"),
        ("g/day", 1e-3, 0, "g/d"),
        ("kg/h", 1.0 * HOURS_PER_DAY, 2, "kg/hr"),
        ("g/h", 1e-3 * HOURS_PER_DAY, 0, "g/hr"),
        ("kg/year", 1.0 / DAYS_PER_YEAR, 0, "kg/a|kg/y|kg/yr"),
        ("lb/day", _POUND_KG, 2, "lb/d|lbs/day|ppd"),
        ("lb/h", _POUND_KG * HOURS_PER_DAY, 2, "lb/hr|pph"),
        ("lb/year", _POUND_KG / DAYS_PER_YEAR, 0, "lb/y|lb/yr|lbs/year"),
    ),
    units(  # base: kPa
        "pressure",
        ("bar", 100.0, 2, "barg|bar g"),
        ("mbar", 0.1, 0, "hPa"),
        ("kPa", 1.0, 0, ""),
        ("psi", _PSI, 0, "psig|lb/in2|lbf/in2|pounds per square inch"),
        ("m H₂O", _STANDARD_GRAVITY, 1, "mH2O|mWS|mWC|mwc|m head|m of water|metres of water"),
        ("ft H₂O", _FOOT * _STANDARD_GRAVITY, 1, "ftH2O|ft head|ft of water|feet of head|ft WC"),
        ("kg/cm²", 98.0665, 2, "kgf/cm2|kp/cm2|at|kg/cm2"),
        ("atm", 101.325, 2, "atmosphere"),
    ),
    units(  # base: kPa per m of bed
        "pressure gradient",
        ("kPa/m", 1.0, 1, ""),
        ("bar/m", 100.0, 3, ""),
        ("psi/ft", _PSI / _FOOT, 2, ""),
    ),
    (  # base: °C
        Unit("°C", "temperature", 1.0, 0.0, 1, ("C", "celsius", "deg C", "degrees celsius", "centigrade")),
        Unit("°F", "temperature", 5.0 / 9.0, 32.0, 0, ("F", "fahrenheit", "deg F", "degrees fahrenheit")),
        Unit("K", "temperature", 1.0, 273.15, 1, ("kelvin", "°K")),
    ),
    units(  # base: µS/cm
        "conductivity",
        ("µS/cm", 1.0, 0, "uS/cm|micro S/cm|µmho/cm|µS|microsiemens/cm"),
        ("mS/cm", 1e3, 2, "mmho/cm|mS"),
        ("mS/m", 10.0, 1, ""),
        ("S/m", 1e4, 3, ""),
    ),
    units(  # base: mg/L, mass of anything dissolved or dosed
        "concentration",
        ("mg/L", 1.0, 0, "ppm|g/m3|mg/dm3|mg/litre"),
        ("g/L", 1e3, 1, "kg/m3|g/dm3"),
        ("µg/L", 1e-3, 0, "ppb|mg/m3"),
        ("% w/v", 1e4, 2, "g/100 mL|%w/v"),
        ("grain/US gal", GRAIN / US_GALLON, 1, "gr/US gal|grains/US gal"),
        ("grain/imp gal", GRAIN / IMPERIAL_GALLON, 1, "gr/imp gal|grains/imp gal"),
        ("lb/US gal", POUND * 1000 / US_GALLON, 2, "lb/gal US|ppg US"),
        ("lb/imp gal", POUND * 1000 / IMPERIAL_GALLON, 2, "lb/gal imp"),
        ("lb/1000 US gal", POUND / US_GALLON, 2, "lb/kgal|lb/1000 gal US|lb/kgal US"),
        ("lb/MG", POUND / US_GALLON / 1000, 0, "lb/million US gal"),
    ),
    units(  # base: mmol/L
        "molar concentration",
        ("mmol/L", 1.0, 2, "mol/m3"),
        ("mol/L", 1e3, 4, "molar"),
        ("µmol/L", 1e-3, 0, ""),
    ),
    units(  # base: kg/L
        "density",
        ("kg/L", 1.0, 3, "g/mL|g/cm3|g/cc|specific gravity|SG|kg/dm3"),
        ("kg/m³", 1e-3, 0, "g/L"),
        ("lb/US gal", _POUND_KG / US_GALLON, 2, "lb/gal US"),
        ("lb/imp gal", _POUND_KG / IMPERIAL_GALLON, 2, "lb/gal imp"),
        ("lb/ft³", _POUND_KG / CUBIC_FOOT, 1, "lb/cu ft|pcf"),
    ),
    units(  # base: g salt per L resin
        "salt dose",
        ("g/L", 1.0, 0, "g/L resin|kg/m3|g NaCl/L|g salt/L"),
        ("lb/ft³", POUND / CUBIC_FOOT, 1, "lb/cu ft|lb/ft3|lbs/ft3|lb/cf|pcf|lb salt/ft3"),
    ),
    units(  # base: eq/L
        "resin capacity",
        ("eq/L", 1.0, 2, "val/L|equiv/L|eq/L resin|meq/mL"),
        ("mol/L", 2.0, 2, "mol CaCO3/L|mol/L resin|mol Ca/L"),
        ("g CaCO3/L", 2.0 / MOLAR_MASS_CACO3, 0, "g/L CaCO3|g CaCO3/L resin|kg CaCO3/m3|g/L as CaCO3"),
        (
            "kgr/ft³",
            2.0 * 1000 * _GRAIN_MOL / CUBIC_FOOT,
            1,
            "kgr/cu ft|kilograins/ft3|kgr/cf|kgr",
        ),
        ("grain/ft³", 2.0 * _GRAIN_MOL / CUBIC_FOOT, 0, "gr/ft3|grains/ft3|grains per cubic foot|gr/cu ft"),
        ("m³·°dH/L", 2.0 * _GERMAN_M3, 2, "°dH·m3/L|m3 °dH/L|°dH m3/L"),
    ),
    units(  # base: mol Ca+Mg
        "exchanged amount",
        ("mol", 1.0, 2, "mol CaCO3|mol hardness"),
        ("eq", 0.5, 2, "val|equiv|equivalent|equivalents"),
        ("g CaCO3", 1.0 / MOLAR_MASS_CACO3, 0, "g as CaCO3|gram CaCO3"),
        ("kg CaCO3", 1e3 / MOLAR_MASS_CACO3, 2, "kg as CaCO3"),
        ("grain", _GRAIN_MOL, 0, "gr|grains|gr CaCO3|grain CaCO3"),
        ("kgr", 1000 * _GRAIN_MOL, 1, "kilograin|kilograins|kgrain|1000 grains|thousand grains"),
        ("m³·°dH", _GERMAN_M3, 1, "°dH·m3|m3 °dH|m3xdH|dH m3|°d m3|m3 °d"),
        ("m³·°fH", _FRENCH_M3, 1, "°f·m3|m3 °f|fH m3|°fH·m3|m3 °TH|°TH m3"),
    ),
    units(  # base: mol Ca+Mg per day
        "load",
        ("mol/day", 1.0, 2, "mol/d"),
        ("eq/day", 0.5, 2, "eq/d|val/d"),
        ("g CaCO3/day", 1.0 / MOLAR_MASS_CACO3, 0, "g CaCO3/d"),
        ("grain/day", _GRAIN_MOL, 0, "gr/day|grains/day|grains per day|gr/d"),
        ("m³·°dH/day", _GERMAN_M3, 1, "m3 °dH/d|°dH m3/d|°dH m3/day"),
    ),
    units(  # base: g CaCO3 removed per kg salt
        "salt efficiency",
        ("g/kg", 1.0, 0, "g CaCO3/kg|g CaCO3/kg salt|g CaCO3/kg NaCl"),
        ("mol/kg", MOLAR_MASS_CACO3, 1, "mol/kg salt|mol/kg NaCl|mol CaCO3/kg"),
        ("eq/kg", MOLAR_MASS_CACO3 / 2, 1, "eq/kg salt|val/kg"),
        (
            "grain/lb",
            GRAIN / POUND,
            0,
            "gr/lb|grains/lb|gr/lb salt|grains per pound of salt",
        ),
        ("kgr/lb", 1000 * GRAIN / POUND, 2, "kilograins/lb|kgrain/lb"),
    ),
    units(  # base: L per mol exchanged
        "regeneration water",
        ("L/mol", 1.0, 0, ""),
        ("US gal/kgr", US_GALLON / (1000 * _GRAIN_MOL), 1, "US gal/1000 grains|US gal/1000 gr|gal US/kgr"),
        ("imp gal/kgr", IMPERIAL_GALLON / (1000 * _GRAIN_MOL), 1, "imp gal/1000 grains"),
        ("L/m³·°dH", 1.0 / _GERMAN_M3, 1, "L/(m3·°dH)|L/(°dH·m3)|L per m3 °dH"),
    ),
    units(  # base: m/h
        "surface loading",
        ("m/h", 1.0, 1, "m3/m2/h|m3/(m2 h)|m/hr|m3/m2 h"),
        ("gpm/ft²", _US_LOADING, 1, "gpm/sq ft|gpm/ft2|US gpm/ft2|gpm/sf"),
        ("L/s/m²", 3.6, 1, "L/(s m2)|L/s m2"),
        (
            "imp gpm/ft²",
            _IMPERIAL_LOADING,
            1,
            "igpm/ft2|imp gpm/sq ft|UK gpm/ft2",
        ),
    ),
    units(  # base: bed volumes per hour
        "specific flow",
        ("BV/h", 1.0, 1, "BV/hr|bed volumes/h|bed volumes per hour|m3/m3/h|L/L/h|1/h"),
        ("gpm/ft³", US_GALLON * _MINUTES / CUBIC_FOOT, 1, "gpm/cu ft|gpm/ft3|US gpm/ft3|gpm/cf"),
    ),
    units(  # base: m/s
        "velocity",
        ("m/s", 1.0, 2, "metres per second"),
        ("cm/s", 1e-2, 1, ""),
        ("ft/s", _FOOT, 1, "fps|feet per second"),
        ("ft/min", _FOOT / 60, 0, "fpm"),
    ),
    units(  # base: kWh
        "energy",
        ("kWh", 1.0, 0, "kwh"),
        ("MJ", 1.0 / 3.6, 0, "megajoule"),
        ("kcal", _CALORIE / 3600, 0, "kilocalorie"),
        ("BTU", _BTU / 3.6e6, 0, "btu"),
        ("therm", 1e5 * _BTU / 3.6e6, 1, "therms"),
    ),
    units(  # base: h
        "time",
        ("day", 24.0, 1, "d|days"),
        ("h", 1.0, 1, "hr|hour|hrs|hours"),
        ("min", 1.0 / 60, 0, "minute|minutes|mins"),
        ("s", 1.0 / 3600, 0, "sec|second|seconds"),
        ("week", 168.0, 1, "weeks|wk"),
        ("year", 24.0 * DAYS_PER_YEAR, 1, "years|yr|a|y"),
    ),
    units(  # base: the pure number
        "share",
        ("%", 0.01, 0, "percent|per cent|pct"),
        ("1", 1.0, 2, "fraction|ratio|share|-"),
    ),
)

PLANT: dict[str, tuple[Unit, ...]] = {table[0].quantity: table for table in _TABLES}

# What cannot be told apart even when the quantity is known: quantity -> text -> choices.
AMBIGUOUS: dict[str, dict[str, tuple[str, ...]]] = {
    "volume": {"gal": ("US gal", "imp gal")},
    "flow": {
        "gal/min": ("gpm", "imp gpm"),
        **dict.fromkeys(("gal/day", "gal/d"), ("gpd", "imp gal/day")),
    },
    "water use": dict.fromkeys(
        ("gal/person/day", "gal/p/d", "gal/capita/day", "gal/day"),
        ("US gal/person/day", "imp gal/person/day"),
    ),
    "density": {"lb/gal": ("lb/US gal", "lb/imp gal")},
    "mass": {"ton": ("t", "US ton", "imp ton"), "gr": ("grain", "g")},
    "temperature": {"°": ("°C", "°F")},
    "concentration": {"grain/gal": ("grain/US gal", "grain/imp gal"), "lb/gal": ("lb/US gal", "lb/imp gal")},
    "regeneration water": dict.fromkeys(("gal/kgr", "gal/1000 grains"), ("US gal/kgr", "imp gal/kgr")),
}
