"""Units of what is dissolved: hardness, alkalinity, and the ions as reports print them.

Hardness, alkalinity and ions are tied by charge: 1 mmol of CaCO3 is 2 meq. Factors follow from the legal
definitions [EXACT] and the atomic weights [IUPAC21] at full precision; the rounded factors met in print
(17.1, 17.8, 2.497) are not used. The definitions of the degrees are those of the German, French and English
unit acts and customs as collected in [DIN38409-6] and [ISO6059].
"""

from __future__ import annotations

from core.constants import (
    ATOMIC_WEIGHTS,
    GRAIN,
    IMPERIAL_GALLON,
    MOLAR_MASS_CACO3,
    MOLAR_MASS_CAO,
    US_GALLON,
    molar_mass,
)
from core.units.unit import Row, Unit, units

_CA = ATOMIC_WEIGHTS["Ca"]
_MG = ATOMIC_WEIGHTS["Mg"]
_GERMAN = 10.0 * MOLAR_MASS_CACO3 / MOLAR_MASS_CAO  # 10 mg CaO per litre
_FRENCH = 10.0  # 10 mg CaCO3 per litre
_ENGLISH = GRAIN / IMPERIAL_GALLON  # a grain of CaCO3 per imperial gallon
_AMERICAN = GRAIN / US_GALLON  # a grain of CaCO3 per US gallon

_CACO3_ALIASES = "ppm CaCO3|ppm as CaCO3|mg/L as CaCO3|mg CaCO3/L|g/m3 CaCO3|CaCO3|calcium carbonate"
_GPG_ALIASES = (
    "grains|grain|gr|gr/gal|grains/gal|grains per gallon|grain/US gal|gr/US gal|gpg CaCO3|gpg US|US gpg"
    "|US grains per gallon"
)
_FRENCH_ALIASES = "°f|f|fH|°F|°TH|TH|french degrees|degrees french|french"
_ENGLISH_ALIASES = (
    "e|°Clark|clark|clark degrees|degrees clark|english degrees|degrees english|english|°eH|eH"
    "|gr/imp gal|grain/imp gal|grains per imperial gallon|gpg imp|imp gpg"
)

# Base: mg/L as CaCO3.
HARDNESS = units(
    "hardness",
    ("mg/L CaCO3", 1.0, 0, _CACO3_ALIASES + "|american degrees"),
    ("mmol/L", MOLAR_MASS_CACO3, 2, "mmol|mol/m3|mmol/L CaCO3|mmol CaCO3/L|mmol/L Ca+Mg"),
    ("meq/L", MOLAR_MASS_CACO3 / 2, 2, "meq|mval|mval/L|me/L|mequiv/L|eq/m3|°Ж|Ж|°rH"),
    ("gpg", _AMERICAN, 1, _GPG_ALIASES),
    ("°dH", _GERMAN, 1, "°d|d|dGH|°dGH|german degrees|degrees german|german|deutsche Härte"),
    ("°fH", _FRENCH, 1, _FRENCH_ALIASES),
    ("°e", _ENGLISH, 1, _ENGLISH_ALIASES),
    ("mg/L Ca", MOLAR_MASS_CACO3 / _CA, 0, "ppm Ca|mg/L as Ca|mg Ca/L|Ca|calcium"),
    ("mg/L CaO", MOLAR_MASS_CACO3 / MOLAR_MASS_CAO, 0, "ppm CaO|mg CaO/L|CaO"),
    ("mg/L Mg", MOLAR_MASS_CACO3 / _MG, 0, "ppm Mg|mg/L as Mg|mg Mg/L|magnesium"),
)

HARDNESS_UNITS: tuple[str, ...] = tuple(unit.symbol for unit in HARDNESS)

# Base: meq/L. K_S4.3 is the acid capacity to pH 4.3: mmol of acid, so one to one with meq.
_EQ = MOLAR_MASS_CACO3 / 2  # mg CaCO3 in a meq
ALKALINITY = units(
    "alkalinity",
    ("mg/L CaCO3", 1.0 / _EQ, 0, _CACO3_ALIASES),
    ("mmol/L K_S4.3", 1.0, 2, "mmol/L|mmol|mol/m3|K S4.3|KS4.3|K_S4.3 mmol/L|KS4,3|mmol/L H+|SBV"),
    ("meq/L", 1.0, 2, "meq|mval|mval/L|me/L|mequiv/L|eq/m3"),
    ("mg/L HCO3", 1.0 / molar_mass(H=1, C=1, O=3), 0, "ppm HCO3|mg/L as HCO3|mg HCO3/L|HCO3|bicarbonate"),
    ("°dKH", _GERMAN / _EQ, 1, "dKH|°dH|°d|d|dH|german degrees|degrees german|german"),
    ("°fH", _FRENCH / _EQ, 1, "°f|f|fH|°F|°TAC|TAC|french degrees|degrees french|french"),
    ("°e", _ENGLISH / _EQ, 1, _ENGLISH_ALIASES),
    ("gpg", _AMERICAN / _EQ, 1, _GPG_ALIASES),
)

# quantity, formula on the report, molar mass, charge counted, decimals
_IONS = (
    ("calcium", "Ca", _CA, 2, 0),
    ("magnesium", "Mg", _MG, 2, 1),
    ("sodium", "Na", ATOMIC_WEIGHTS["Na"], 1, 0),
    ("potassium", "K", ATOMIC_WEIGHTS["K"], 1, 1),
    ("iron", "Fe", ATOMIC_WEIGHTS["Fe"], 2, 2),  # as the dissolved, divalent ion
    ("manganese", "Mn", ATOMIC_WEIGHTS["Mn"], 2, 2),
    ("strontium", "Sr", ATOMIC_WEIGHTS["Sr"], 2, 2),
    ("barium", "Ba", ATOMIC_WEIGHTS["Ba"], 2, 3),
    ("aluminium", "Al", ATOMIC_WEIGHTS["Al"], 3, 2),
    ("zinc", "Zn", ATOMIC_WEIGHTS["Zn"], 2, 2),
    ("ammonium", "NH4", molar_mass(N=1, H=4), 1, 2),
    ("bicarbonate", "HCO3", molar_mass(H=1, C=1, O=3), 1, 0),
    ("carbonate", "CO3", molar_mass(C=1, O=3), 2, 0),
    ("sulfate", "SO4", molar_mass(S=1, O=4), 2, 0),
    ("chloride", "Cl", ATOMIC_WEIGHTS["Cl"], 1, 0),
    ("nitrate", "NO3", molar_mass(N=1, O=3), 1, 1),
    ("fluoride", "F", ATOMIC_WEIGHTS["F"], 1, 2),
    ("silica", "SiO2", molar_mass(Si=1, O=2), 0, 1),
    ("carbon dioxide", "CO2", molar_mass(C=1, O=2), 2, 0),  # two equivalents: what lime needs for it
)

# The same ion reported as its element: quantity -> (symbol, molar mass of what is weighed, aliases)
_AS_ELEMENT = {
    "nitrate": ("mg/L NO3-N", ATOMIC_WEIGHTS["N"], "mg/L N|mg/L as N|ppm N|NO3-N|nitrate nitrogen"),
    "ammonium": (
        "mg/L NH4-N",
        ATOMIC_WEIGHTS["N"],
        "mg/L N|mg/L as N|mg/L NH3-N|ppm N|NH4-N|NH3-N",
    ),
    "sulfate": ("mg/L SO4-S", ATOMIC_WEIGHTS["S"], "mg/L S|mg/L as S|SO4-S|ppm S"),
    "silica": ("mg/L Si", ATOMIC_WEIGHTS["Si"], "mg/L as Si|ppm Si"),
}

_PLAIN_IS_AMBIGUOUS = ("nitrate", "ammonium")  # as the ion in Europe, as nitrogen in America
_OFTEN_AS_CACO3 = ("calcium", "magnesium", "bicarbonate", "carbonate")  # so a bare ppm could be either


def _ion(quantity: str, formula: str, mass: float, charge: int, decimals: int) -> tuple[Unit, ...]:
    """The ways in which one ion is reported. Base: mmol/L."""
    own = f"mg/L as {formula}|mg {formula}/L|ppm {formula}"
    if quantity not in _PLAIN_IS_AMBIGUOUS:
        own += "|mg/L|g/m3" + ("" if quantity in _OFTEN_AS_CACO3 else "|ppm")
    rows: list[Row] = [(f"mg/L {formula}", 1.0 / mass, decimals, own)]
    if quantity in _AS_ELEMENT:
        symbol, weighed, aliases = _AS_ELEMENT[quantity]
        rows.append((symbol, 1.0 / weighed, decimals, aliases))
    rows.append((f"µg/L {formula}", 1e-3 / mass, 0, f"µg/L|ppb|mg/m3|µg {formula}/L|ppb {formula}"))
    rows.append(("mmol/L", 1.0, 2, "mmol|mol/m3"))
    rows.append(("µmol/L", 1e-3, 0, "µmol"))
    if charge:
        rows.append(("meq/L", 1.0 / charge, 2, "meq|mval|mval/L|me/L|mequiv/L|eq/m3"))
        rows.append(("mg/L CaCO3", 2.0 / charge / MOLAR_MASS_CACO3, 1, _CACO3_ALIASES))
    if formula in ("Ca", "Mg"):
        rows += [(u.symbol, u.factor / MOLAR_MASS_CACO3, 1, "|".join(u.aliases)) for u in HARDNESS[3:7]]
        rows += [("mg/L CaO", 1.0 / MOLAR_MASS_CAO, 1, "CaO")] if formula == "Ca" else []
    return units(quantity, *rows)


IONS: dict[str, tuple[Unit, ...]] = {row[0]: _ion(*row) for row in _IONS}

# Other names of the ions, as a report or a chemist writes them.
ION_NAMES = {
    **{row[1].lower(): row[0] for row in _IONS},
    "aluminum": "aluminium",
    "sulphate": "sulfate",
    "hydrogencarbonate": "bicarbonate",
    "hydrogen carbonate": "bicarbonate",
}

# What cannot be told apart even when the quantity is known: quantity -> text -> choices.
_BARE_HARDNESS = ("mg/L CaCO3", "mg/L Ca")
_DEGREES = ("°dH", "°fH", "°e")
AMBIGUOUS: dict[str, dict[str, tuple[str, ...]]] = {
    "hardness": {
        **dict.fromkeys(("mg/L", "ppm", "mg/L hardness", "g/m3"), _BARE_HARDNESS),
        **dict.fromkeys(("GH", "total hardness"), ("°dH", "mg/L CaCO3")),
        **dict.fromkeys(("°", "degrees of hardness"), _DEGREES),
    },
    "alkalinity": {
        **dict.fromkeys(("mg/L", "ppm", "mg/L alkalinity", "g/m3"), ("mg/L CaCO3", "mg/L HCO3")),
        **dict.fromkeys(("KH", "carbonate hardness"), ("°dKH", "mg/L CaCO3")),
        **dict.fromkeys(("°", "degrees of hardness"), ("°dKH", "°fH", "°e")),
    },
    **{
        name: dict.fromkeys(("mg/L", "ppm", "g/m3"), (IONS[name][0].symbol, IONS[name][1].symbol))
        for name in _PLAIN_IS_AMBIGUOUS
    },
    **{name: {"ppm": (IONS[name][0].symbol, "mg/L CaCO3")} for name in _OFTEN_AS_CACO3},
}
