"""Constants of nature and of law: value, unit, source. One vintage, changed all together or not at all.

Atomic weights are the abridged or conventional standard values of IUPAC's commission of 2021 [IUPAC21].
Lengths, masses and volumes are exact by their legal definitions [EXACT].
"""

from __future__ import annotations

ZERO_CELSIUS = 273.15  # K [EXACT]
GAS_CONSTANT = 8.314462618  # J/mol/K [EXACT]

# Exact legal definitions [EXACT]
GRAIN = 64.79891  # mg
POUND = 453.59237  # g
US_GALLON = 3.785411784  # L
IMPERIAL_GALLON = 4.54609  # L
CUBIC_FOOT = 28.316846592  # L
INCH = 25.4  # mm

# Standard atomic weights [IUPAC21], g/mol
ATOMIC_WEIGHTS = {
    "H": 1.008,
    "C": 12.011,
    "N": 14.007,
    "O": 15.999,
    "F": 18.998403162,
    "Na": 22.98976928,
    "Mg": 24.305,
    "Al": 26.9815384,
    "Si": 28.085,
    "S": 32.06,
    "Cl": 35.45,
    "K": 39.0983,
    "Ca": 40.078,
    "Mn": 54.938043,
    "Fe": 55.845,
    "Zn": 65.38,
    "Sr": 87.62,
    "Ba": 137.327,
}


def molar_mass(**atoms: int) -> float:
    """Molar mass of a formula given as element=count. [g/mol]"""
    return sum(ATOMIC_WEIGHTS[element] * count for element, count in atoms.items())


MOLAR_MASS_CACO3 = molar_mass(Ca=1, C=1, O=3)  # 100.086 g/mol [IUPAC21]
MOLAR_MASS_CAO = molar_mass(Ca=1, O=1)  # 56.077 g/mol [IUPAC21]
MOLAR_MASS_NACL = molar_mass(Na=1, Cl=1)  # 58.43976928 g/mol [IUPAC21]
MOLAR_MASS_KCL = molar_mass(K=1, Cl=1)  # 74.5483 g/mol [IUPAC21]
