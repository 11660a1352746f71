"""The two carbonate data sets: which species there are, how they form, and where each constant stands.

Every species forms from a few master activities: the ion of the total it counts in (`of`), and H+, CO3-2, SO4-2
and H2O in the numbers given by `made`. Its constant is log10 K of that reaction as

    log10 K = A1 + A2 T + A3/T + A4 log10 T + A5/T² + A6 T²,   T in kelvin

"pb1982" is the calcite family of Plummer and Busenberg [PB82] with the ion pairs of the classic USGS file [USGS15].
"usgs2024" is the USGS file of May 2024 [USGS24]: a new calcite fit, a weaker CaHCO3+, no NaCO3-.
Brucite stands in neither file and is taken from [WATEQ4F]; vaterite from [PB82] in both.
Left out as too small to matter in water people use: the dimer of CO2, complexes with HSO4-, second chlorides and
nitrates of manganese.
"""

from __future__ import annotations

from typing import NamedTuple

Coefficients = tuple[float, float, float, float, float, float]

GAS = 8.314462618  # J/mol/K [EXACT]
LN10 = 2.302585092994046
KCAL = 4184.0  # J, thermochemical [EXACT]
T25 = 298.15  # K

ZERO: Coefficients = (0.0, 0.0, 0.0, 0.0, 0.0, 0.0)


def _fit(
    a1: float, a2: float = 0.0, a3: float = 0.0, a4: float = 0.0, a5: float = 0.0, a6: float = 0.0
) -> Coefficients:
    return (a1, a2, a3, a4, a5, a6)


def _at_25(log_k: float, heat: float = 0.0) -> Coefficients:
    """Constant at 25 °C and heat of reaction [J/mol], as van 't Hoff's line in 1/T."""
    slope = heat / (LN10 * GAS)
    return (log_k + slope / T25, 0.0, -slope, 0.0, 0.0, 0.0)


def _sum(*parts: Coefficients) -> Coefficients:
    a, b, c, d, e, f = (sum(column) for column in zip(*parts, strict=True))
    return (a, b, c, d, e, f)


class Species(NamedTuple):
    """One dissolved species: what it is made of, its constant, its Debye-Hückel numbers, its source."""

    name: str
    of: str  # the total it counts in; "" for what is made of water, carbonate and sulfate alone
    charge: int
    made: tuple[int, int, int, int]  # of H+, CO3-2, SO4-2, H2O
    log_k: Coefficients
    size: float | None  # ion size in Å; None: Davies if charged
    linear: float | None  # b of the term b·I; None: 0 if charged and sized, 0.1 if neutral
    source: str
    partner: str = ""  # a second total it counts in (fluoride, chloride)


class Solid(NamedTuple):
    """One solid: the ion it holds, and log10 of that ion's activity = log K + made · log10(H+, CO3-2, SO4-2, H2O)."""

    name: str
    of: str
    made: tuple[int, int, int, int]
    log_k: Coefficients
    source: str


HCO3 = _fit(107.8871, 0.03252849, -5151.79, -38.92561, 563713.9)
CO2 = _fit(464.1965, 0.09344813, -26986.16, -165.75951, 2248628.9)
WATER = _fit(293.29227, 0.1360833, -10576.913, -123.73158, 0.0, -6.996455e-5)

_C = "USGS15"  # the classic file
_N = "USGS24"  # the file of 2024
_B = "USGS15 USGS24"  # the same line in both

_COMMON: tuple[Species, ...] = (
    # water, carbonate, sulfate
    Species("H+", "", 1, (1, 0, 0, 0), ZERO, 9.0, None, _B),
    Species("OH-", "", -1, (-1, 0, 0, 1), WATER, 3.5, None, _B),
    Species("CO3-2", "", -2, (0, 1, 0, 0), ZERO, 5.4, None, _B),
    Species("HCO3-", "", -1, (1, 1, 0, 0), HCO3, 5.4, None, "PB82 " + _B),
    Species("CO2", "", 0, (2, 1, 0, -1), CO2, None, None, "PB82 " + _B),
    Species("SO4-2", "", -2, (0, 0, 1, 0), ZERO, 5.0, -0.04, _B),
    Species("HSO4-", "", -1, (1, 0, 1, 0), _fit(-56.889, 0.006473, 2307.9, 19.8858), None, None, _B),
    # calcium
    Species("Ca+2", "Ca", 2, (0, 0, 0, 0), ZERO, 5.0, 0.165, _B),
    Species("CaCO3", "Ca", 0, (0, 1, 0, 0), _fit(-1228.732, -0.29944, 35512.75, 485.818), None, None, "PB82 " + _B),
    Species(
        "CaHCO3+", "Ca", 1, (1, 1, 0, 0),
        _fit(1317.0071, 0.34546894, -39916.84, -517.70761, 563713.9), 6.0, None, "PB82 " + _C,
    ),
    Species("CaSO4", "Ca", 0, (0, 0, 1, 0), _at_25(2.25, 1.325 * KCAL), None, None, _B),
    Species("CaOH+", "Ca", 1, (-1, 0, 0, 1), _at_25(-12.78), None, None, _B),
    # magnesium
    Species("Mg+2", "Mg", 2, (0, 0, 0, 0), ZERO, 5.5, 0.20, _B),
    Species("MgCO3", "Mg", 0, (0, 1, 0, 0), _fit(0.991, 0.00667), None, None, _B),
    Species(
        "MgHCO3+", "Mg", 1, (1, 1, 0, 0),
        _fit(48.6721, 0.03252849, -2614.335, -18.00263, 563713.9), 4.0, None, _B,
    ),
    Species("MgSO4", "Mg", 0, (0, 0, 1, 0), _at_25(2.37, 4.55 * KCAL), None, None, _C),
    Species("MgOH+", "Mg", 1, (-1, 0, 0, 1), _at_25(-11.44, 15.952 * KCAL), 6.5, None, _B),
    Species("MgF+", "Mg", 1, (0, 0, 0, 0), _at_25(1.82, 3.2 * KCAL), 4.5, None, _B, "F"),
    # sodium, potassium, ammonium
    Species("Na+", "Na", 1, (0, 0, 0, 0), ZERO, 4.08, 0.082, _B),
    Species("NaCO3-", "Na", -1, (0, 1, 0, 0), _at_25(1.27, 8.91 * KCAL), None, None, _C),
    Species("NaHCO3", "Na", 0, (1, 1, 0, 0), _sum(HCO3, _at_25(-0.25, -1.0 * KCAL)), None, None, _C),
    Species("NaSO4-", "Na", -1, (0, 0, 1, 0), _at_25(0.7, 1.12 * KCAL), 5.4, None, _C),
    Species("NaF", "Na", 0, (0, 0, 0, 0), _at_25(-0.24), None, None, _B, "F"),
    Species("K+", "K", 1, (0, 0, 0, 0), ZERO, 3.5, 0.015, _B),
    Species("KSO4-", "K", -1, (0, 0, 1, 0), _fit(3.106, 0.0, -673.6), 5.4, None, _C),
    Species("NH4+", "NH4", 1, (0, 0, 0, 0), ZERO, 2.5, None, _B),
    Species("NH3", "NH4", 0, (-1, 0, 0, 0), _fit(0.6322, -0.001225, -2835.76), None, None, _B),
    Species("NH4SO4-", "NH4", -1, (0, 0, 1, 0), _at_25(1.11), None, None, _C),
    # iron(II), manganese(II)
    Species("Fe+2", "Fe", 2, (0, 0, 0, 0), ZERO, 6.0, None, _B),
    Species("FeCO3", "Fe", 0, (0, 1, 0, 0), _at_25(4.38), None, None, _B),
    Species("FeHCO3+", "Fe", 1, (1, 1, 0, 0), _sum(HCO3, _at_25(2.0)), None, None, _B),
    Species("FeSO4", "Fe", 0, (0, 0, 1, 0), _at_25(2.25, 3.23 * KCAL), None, None, _B),
    Species("FeOH+", "Fe", 1, (-1, 0, 0, 1), _at_25(-9.5, 13.2 * KCAL), 5.0, None, _B),
    Species("Fe(OH)2", "Fe", 0, (-2, 0, 0, 2), _at_25(-20.57, 28.565 * KCAL), None, None, _B),
    Species("Fe(OH)3-", "Fe", -1, (-3, 0, 0, 3), _at_25(-31.0, 30.3 * KCAL), 5.0, None, _B),
    Species("FeCl+", "Fe", 1, (0, 0, 0, 0), _at_25(0.14), None, None, _B, "Cl"),
    Species("FeF+", "Fe", 1, (0, 0, 0, 0), _at_25(1.0), None, None, _B, "F"),
    Species("Mn+2", "Mn", 2, (0, 0, 0, 0), ZERO, 6.0, None, _B),
    Species("MnCO3", "Mn", 0, (0, 1, 0, 0), _at_25(4.9), None, None, _B),
    Species("MnHCO3+", "Mn", 1, (1, 1, 0, 0), _sum(HCO3, _at_25(1.95)), 5.0, None, _B),
    Species("MnSO4", "Mn", 0, (0, 0, 1, 0), _at_25(2.25, 3.37 * KCAL), None, None, _B),
    Species("MnOH+", "Mn", 1, (-1, 0, 0, 1), _at_25(-10.59, 14.4 * KCAL), 5.0, None, _B),
    Species("Mn(OH)3-", "Mn", -1, (-3, 0, 0, 3), _at_25(-34.8), 5.0, None, _B),
    Species("MnCl+", "Mn", 1, (0, 0, 0, 0), _at_25(0.61), 5.0, None, _B, "Cl"),
    Species("MnF+", "Mn", 1, (0, 0, 0, 0), _at_25(0.84), 5.0, None, _B, "F"),
    # strontium, barium
    Species("Sr+2", "Sr", 2, (0, 0, 0, 0), ZERO, 5.26, 0.121, _B),
    Species("SrCO3", "Sr", 0, (0, 1, 0, 0), _fit(-1.019, 0.012826), None, None, _B),
    Species(
        "SrHCO3+", "Sr", 1, (1, 1, 0, 0),
        _fit(104.6391, 0.04739549, -5151.79, -38.92561, 563713.9), 5.4, None, _B,
    ),
    Species("SrSO4", "Sr", 0, (0, 0, 1, 0), _at_25(2.29, 2.08 * KCAL), None, None, _B),
    Species("SrOH+", "Sr", 1, (-1, 0, 0, 1), _at_25(-13.29), 5.0, None, _B),
    Species("Ba+2", "Ba", 2, (0, 0, 0, 0), ZERO, 4.0, 0.153, _B),
    Species("BaCO3", "Ba", 0, (0, 1, 0, 0), _fit(0.113, 0.008721), None, None, _B),
    Species("BaHCO3+", "Ba", 1, (1, 1, 0, 0), _sum(HCO3, _fit(-3.0938, 0.013669)), None, None, _B),
    Species("BaSO4", "Ba", 0, (0, 0, 1, 0), _at_25(2.7), None, None, _B),
    Species("BaOH+", "Ba", 1, (-1, 0, 0, 1), _at_25(-13.47), 5.0, None, _B),
    # silica, and the anions that hold no carbonate
    Species("H4SiO4", "Si", 0, (0, 0, 0, 0), ZERO, None, None, _B),
    Species(
        "H3SiO4-", "Si", -1, (-1, 0, 0, 0),
        _fit(-302.3724, -0.050698, 15669.69, 108.18466, -1119669.0), 4.0, None, _B,
    ),
    Species(
        "H2SiO4-2", "Si", -2, (-2, 0, 0, 0),
        _fit(-294.0184, -0.07265, 11204.49, 108.18466, -1119669.0), 5.4, None, _B,
    ),
    Species("Cl-", "Cl", -1, (0, 0, 0, 0), ZERO, 3.63, 0.017, _B),
    Species("NO3-", "NO3", -1, (0, 0, 0, 0), ZERO, 3.0, None, _B),
    Species("F-", "F", -1, (0, 0, 0, 0), ZERO, 3.5, None, _B),
    Species("HF", "F", 0, (1, 0, 0, 0), _fit(-2.033, 0.012645, 429.01), None, None, _B),
)  # fmt: skip

_MGSO4_2024 = _fit(0.0, 9.64e-3, -136.0)
_NEW_2024: dict[str, Species | None] = {  # what the file of 2024 changes; None: it has no such species
    "NaCO3-": None,
    "CO2": Species("CO2", "", 0, (2, 1, 0, -1), CO2, None, 0.066, "PB82 USGS24"),
    "CaHCO3+": Species("CaHCO3+", "Ca", 1, (1, 1, 0, 0), _fit(-6.009, 3.377e-2, 2044.0), 6.0, None, _N),
    "MgSO4": Species("MgSO4", "Mg", 0, (0, 0, 1, 0), _MGSO4_2024, None, 0.2, _N),
    "Mg(SO4)2-2": Species(
        "Mg(SO4)2-2", "Mg", -2, (0, 0, 2, 0),
        _sum(_MGSO4_2024, _fit(0.0, -1.51e-3, 0.0, 0.0, 8.604e4)), 7.0, 0.047, _N,
    ),
    "NaHCO3": Species("NaHCO3", "Na", 0, (1, 1, 0, 0), _sum(HCO3, _at_25(-0.06, 21e3)), None, 0.2, _N),
    "NaSO4-": Species(
        "NaSO4-", "Na", -1, (0, 0, 1, 0),
        _fit(255.903, 0.10057, 0.0, -111.138, -8.5983e5), 5.5, None, _N,
    ),
    "KSO4-": Species("KSO4-", "K", -1, (0, 0, 1, 0), _fit(-3.0246, 9.986e-3, 0.0, 0.0, 1.093e5), 5.4, 0.19, _N),
    "KHCO3": Species("KHCO3", "K", 0, (1, 1, 0, 0), _sum(HCO3, _at_25(-0.35, 12e3)), None, 9.4e-3, _N),
    "NH4SO4-": Species("NH4SO4-", "NH4", -1, (0, 0, 1, 0), _at_25(1.211, 8.56e3), 2.08, -0.0416, _N),
}  # fmt: skip


def _renewed(species: tuple[Species, ...], changes: dict[str, Species | None]) -> tuple[Species, ...]:
    kept = [changes.get(s.name, s) for s in species]
    known = {s.name for s in species}
    return tuple(s for s in (*kept, *(s for n, s in changes.items() if n not in known)) if s is not None)


_SOLIDS: tuple[Solid, ...] = (
    Solid("calcite", "Ca", (0, -1, 0, 0), _fit(-171.9065, -0.077993, 2839.319, 71.595), "PB82"),
    Solid("aragonite", "Ca", (0, -1, 0, 0), _fit(-171.9773, -0.077993, 2903.293, 71.595), "PB82"),
    Solid("vaterite", "Ca", (0, -1, 0, 0), _fit(-172.1295, -0.077993, 3074.688, 71.595), "PB82"),
    Solid("brucite", "Mg", (2, 0, 0, -2), _at_25(16.84, -27.1 * KCAL), "WATEQ4F"),
    Solid("gypsum", "Ca", (0, 0, -1, -2), _fit(68.2401, 0.0, -3221.51, -25.0627), _C),
    Solid("siderite", "Fe", (0, -1, 0, 0), _at_25(-10.89, -2.48 * KCAL), _B),
    Solid("rhodochrosite", "Mn", (0, -1, 0, 0), _at_25(-11.13, -1.43 * KCAL), _B),
)
_SOLIDS_2024 = {
    "calcite": Solid("calcite", "Ca", (0, -1, 0, 0), _fit(17.118, -0.046528, -3496.0), _N),
    "gypsum": Solid("gypsum", "Ca", (0, 0, -1, -2), _fit(93.7, 5.99e-3, -4e3, -35.019), _N),
}

CO2_GAS = _fit(108.3865, 0.01985076, -6919.53, -40.45154, 669365.0)  # CO2(g) = CO2, atm [PB82]

DATA_SETS = ("pb1982", "usgs2024")
SPECIES: dict[str, tuple[Species, ...]] = {"pb1982": _COMMON, "usgs2024": _renewed(_COMMON, _NEW_2024)}
SOLIDS: dict[str, dict[str, Solid]] = {
    "pb1982": {s.name: s for s in _SOLIDS},
    "usgs2024": {s.name: _SOLIDS_2024.get(s.name, s) for s in _SOLIDS},
}
GAS_CONSTANTS: dict[str, Coefficients] = {
    "pb1982": CO2_GAS,
    "usgs2024": _fit(10.5624, -2.3547e-2, -3972.8, 0.0, 5.8746e5, 1.9194e-5),  # [USGS24]
}
