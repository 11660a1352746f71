"""Pure water: density, dielectric constant, viscosity, and the Debye-Hückel slopes that follow from them.

Each function takes temperatures in °C, scalar or array, and holds from 0 to 100 °C at the pressure of the room
unless it says otherwise. NaN travels.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from core.constants import ZERO_CELSIUS

Floats = NDArray[np.float64]

CRITICAL_TEMPERATURE = 647.096  # K [WP02]
AVOGADRO = 6.02214076e23  # 1/mol [EXACT]
CHARGE_SQUARED = 1.671008e-3  # cm·K, e²/(4πε₀k); over εT it is the Bjerrum length [PA13]
ATMOSPHERE = 1.01325  # bar [EXACT]


def _kelvin(temp_c: ArrayLike) -> Floats:
    return np.asarray(temp_c, dtype=float) + ZERO_CELSIUS


def water_density(temp_c: ArrayLike) -> Floats:
    """Density of pure water along its boiling line, after [WP02]; 0 to 370 °C. [kg/L]"""
    theta = 1.0 - _kelvin(temp_c) / CRITICAL_TEMPERATURE
    third = np.cbrt(theta)
    sixteen = third**16
    return 0.322 * (
        1.0
        + 1.99274064 * third
        + 1.09965342 * third**2
        - 0.510839303 * third**5
        - 1.75493479 * sixteen
        - 45.5170352 * sixteen**2 * third**11
        - 6.7469445e5 * sixteen**6 * third**14
    )


def dielectric_constant(temp_c: ArrayLike, pressure: float = ATMOSPHERE) -> Floats:
    """Relative permittivity of water, after [BP79]; 0 to 350 °C, pressure in bar. [-]"""
    t = _kelvin(temp_c)
    at_1000_bar = 342.79 * np.exp(-5.0866e-3 * t + 9.469e-7 * t * t)
    c = -2.0525 + 3115.9 / (t - 182.89)
    b = -8032.5 + 4.2142e6 / t + 2.1417 * t
    return at_1000_bar + c * np.log((b + pressure) / (b + 1000.0))


def debye_huckel_slopes(temp_c: ArrayLike) -> tuple[Floats, Floats]:
    """Debye-Hückel A and B, from density and dielectric constant, as [PA13]. [kg^½/mol^½; kg^½/mol^½/Å]

    Natural units of the field: log10 γ = -A z² √I / (1 + B a √I), I in mol/kg, a in Å.
    """
    t = _kelvin(temp_c)
    length = CHARGE_SQUARED / (dielectric_constant(temp_c) * t)  # cm
    b = np.sqrt(8.0 * np.pi * AVOGADRO * length * water_density(temp_c) / 1000.0)  # 1/cm
    return b * length / (2.0 * np.log(10.0)), b * 1e-8


def debye_huckel_slopes_simple(temp_c: ArrayLike) -> tuple[Floats, Floats]:
    """Debye-Hückel A and B by the older, simpler expressions of [TJ74]; 0 to 100 °C. [as above]

    A second road to the same slopes, within 0.15 % of the first.
    """
    t_c = np.asarray(temp_c, dtype=float)
    t = _kelvin(temp_c)
    density = 1.0 - (t_c - 3.9863) ** 2 * (t_c + 288.9414) / (508929.2 * (t_c + 68.12963))
    epsilon = 2727.586 + 0.6224107 * t - 466.9151 * np.log(t) - 52000.87 / t
    root = np.sqrt(density)
    return 1.824827e6 * root * (epsilon * t) ** -1.5, 50.2905 * root * (epsilon * t) ** -0.5


def water_viscosity(temp_c: ArrayLike) -> Floats:
    """Viscosity of pure water, after [KESTIN78]; -8 to 150 °C. [mPa·s]"""
    t = np.asarray(temp_c, dtype=float)
    below = 20.0 - t
    return 1.002 * 10.0 ** (below / (t + 96.0) * (1.2364 - 1.37e-3 * below + 5.7e-6 * below * below))
