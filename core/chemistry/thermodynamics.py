"""Equilibrium constants by temperature, and activity coefficients.

Constants come from `core.chemistry.reactions`; the fits hold from 0 to 90 °C [PB82]. Activity coefficients are
extended Debye-Hückel with an ion size and a linear term where the source gives them [TJ74], Davies where it gives
none [DAVIES62], and 10^(0.1 I) for what carries no charge [PA13].
"""

from __future__ import annotations

from functools import lru_cache

import numpy as np
from numpy.typing import ArrayLike, NDArray

from core.chemistry.reactions import DATA_SETS, GAS_CONSTANTS, SOLIDS, SPECIES, Coefficients
from core.chemistry.water import debye_huckel_slopes
from core.constants import ZERO_CELSIUS
from core.errors import InputError

Floats = NDArray[np.float64]

DAVIES_LINEAR = 0.3  # b of Davies' form as used by [PA13]
NEUTRAL_LINEAR = 0.1  # log10 γ = 0.1 I for uncharged species, as used by [PA13]
FIT_RANGE = (0.0, 90.0)  # °C, of the calcite family [PB82]


def check_data(data: str) -> str:
    """The name of a data set, refused kindly if there is none of that name."""
    if data not in DATA_SETS:
        accepted = " or ".join(f'"{name}"' for name in DATA_SETS)
        raise InputError("data", data, f"data is {data!r}; the carbonate data sets are {accepted}.")
    return data


def temperature_terms(temp_c: ArrayLike) -> Floats:
    """The six temperature functions of a fitted constant, one row each. [K powers]"""
    t = np.asarray(temp_c, dtype=float) + ZERO_CELSIUS
    inverse = 1.0 / t
    return np.array([np.ones_like(t), t, inverse, np.log10(t), inverse * inverse, t * t])


def evaluate(coefficients: Coefficients, temp_c: ArrayLike) -> Floats:
    """log10 K of one fitted constant at the temperatures given. [-]"""
    return np.tensordot(np.array(coefficients), temperature_terms(temp_c), axes=1)


@lru_cache(maxsize=1)
def _named_constants() -> dict[tuple[str, str], Coefficients]:
    named = {(d, s.name): s.log_k for d in DATA_SETS for s in SPECIES[d]}
    named.update({(d, s.name): s.log_k for d in DATA_SETS for s in SOLIDS[d].values()})
    named.update({(d, "CO2(g)"): GAS_CONSTANTS[d] for d in DATA_SETS})
    return named


def log_k(name: str, temp_c: ArrayLike = 25.0, *, data: str = "pb1982") -> float | Floats:
    """Equilibrium constant as log10, of a species, a solid or "CO2(g)"; 0 to 90 °C. [-]

    A species such as "CaHCO3+" is formed from Ca+2, CO3-2, H+ and H2O; calcite, aragonite, vaterite, gypsum,
    siderite and rhodochrosite dissolve into their ions; brucite + 2 H+ = Mg+2 + 2 H2O; CO2(g) = CO2, in atm.
    """
    known = _named_constants()
    key = (check_data(data), name)
    if key not in known:
        names = ", ".join(sorted(n for d, n in known if d == data))
        raise InputError("name", name, f"{name!r} has no constant in {data}; known are {names}.")
    value = evaluate(known[key], temp_c)
    return float(value) if value.ndim == 0 else value


def log10_k1(temp_c: ArrayLike) -> Floats:
    """First dissociation of carbonic acid, CO2 + H2O = H+ + HCO3-, as log10; 0 to 90 °C [PB82]. [-]"""
    return np.asarray(log_k("HCO3-", temp_c)) - np.asarray(log_k("CO2", temp_c))


def log10_k2(temp_c: ArrayLike) -> Floats:
    """Second dissociation of carbonic acid, HCO3- = H+ + CO3-2, as log10; 0 to 90 °C [PB82]. [-]"""
    return -np.asarray(log_k("HCO3-", temp_c))


def log_gamma_extended(
    charge: ArrayLike,
    ionic_strength: ArrayLike,
    temp_c: ArrayLike = 25.0,
    *,
    size: float,
    linear: float = 0.0,
) -> Floats:
    """Activity coefficient as log10 by the extended Debye-Hückel form [TJ74]; useful to I about 0.5 mol/kg. [-]

    Ion size in Å, linear term in kg/mol.
    """
    a, b = debye_huckel_slopes(temp_c)
    strength = np.asarray(ionic_strength, dtype=float)
    root = np.sqrt(strength)
    return -a * np.square(charge) * root / (1.0 + b * size * root) + linear * strength


def log_gamma_davies(charge: ArrayLike, ionic_strength: ArrayLike, temp_c: ArrayLike = 25.0) -> Floats:
    """Activity coefficient as log10 by Davies' equation [DAVIES62]; fair to I about 0.1, rough to 0.5 mol/kg. [-]"""
    a, _ = debye_huckel_slopes(temp_c)
    strength = np.asarray(ionic_strength, dtype=float)
    root = np.sqrt(strength)
    return -a * np.square(charge) * (root / (1.0 + root) - DAVIES_LINEAR * strength)
