"""The stability indices of the trade, each with its card: what it says, where it holds, what its bands mean.

All but the saturation index and the precipitation potential are rules of thumb, and none of them measures
corrosion. A softened water reads strongly negative on Langelier's scale through its low calcium alone; that by
itself does not prove that it takes up more metal.

Arguments are numbers or arrays that broadcast; NaN travels; hardness and alkalinity are in mg/L CaCO3.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from core.chemistry.thermodynamics import log10_k2, log_k
from core.constants import ZERO_CELSIUS
from core.working import formula

Floats = NDArray[np.float64]
Value = float | Floats

_PH = {"ph": "", "ph_saturation": ""}


def _plain(value: Floats) -> Value:
    return float(value) if np.ndim(value) == 0 else value


def _log10(value: ArrayLike) -> Floats:
    """log10, NaN for what is not above zero."""
    x = np.asarray(value, dtype=float)
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.where(x > 0.0, np.log10(x), np.nan)[()]


@formula(
    "Saturation pH, simple form",
    "pHs = 9.3 + A + B − C − D; A = (log TDS − 1)/10; B = 34.55 − 13.12 log(t + 273); C = log Ca − 0.4; D = log Alk",
    unit="",
    takes={"tds": "mg/L", "temp_c": "°C", "calcium_hardness": "mg/L CaCO3", "alkalinity": "mg/L CaCO3"},
    source="CARRIER",
    validity="made for about 25 °C and low TDS; reads 0.1 to 0.3 low against full speciation",
)
def saturation_ph_simple(
    tds: ArrayLike, temp_c: ArrayLike, calcium_hardness: ArrayLike, alkalinity: ArrayLike
) -> Value:
    """The pH at which calcite would be saturated, by the short formula of the trade [CARRIER]. [-]"""
    a = (_log10(tds) - 1.0) / 10.0
    b = -13.12 * _log10(np.asarray(temp_c, dtype=float) + 273.0) + 34.55
    c = _log10(calcium_hardness) - 0.4
    return _plain(9.3 + a + b - c - _log10(alkalinity))


def _slope_SM2330(temp_c: ArrayLike) -> Floats:
    """Debye-Hückel slope as the method writes it [SM2330]. [kg^½/mol^½]"""
    t = np.asarray(temp_c, dtype=float) + ZERO_CELSIUS
    epsilon = 60954.0 / (t + 116.0) - 68.937
    return 1.82e6 * (epsilon * t) ** -1.5


@formula(
    "Saturation pH",
    "pHs = pK₂ − pKs + p[Ca] + p[HCO₃] + 5 pf;  pf = A (√I/(1 + √I) − 0.3 I)",
    unit="",
    takes={"temp_c": "°C", "calcium": "mol/L", "bicarbonate": "mol/L", "ionic_strength": "mol/L"},
    source="SM2330",
    validity="0 to 90 °C, ionic strength to 0.5, pH 6 to 9; better still with the free ions of a speciation",
)
def saturation_ph_SM2330(
    temp_c: ArrayLike, calcium: ArrayLike, bicarbonate: ArrayLike, ionic_strength: ArrayLike
) -> Value:
    """The pH at which calcite would be saturated, with constants by temperature and activities [SM2330]. [-]"""
    strength = np.asarray(ionic_strength, dtype=float)
    root = np.sqrt(strength)
    pf = _slope_SM2330(temp_c) * (root / (1.0 + root) - 0.3 * strength)
    constants = -log10_k2(temp_c) + np.asarray(log_k("calcite", temp_c))
    return _plain(constants - _log10(calcium) - _log10(bicarbonate) + 5.0 * pf)


@formula(
    "Langelier index",
    "LSI = pH − pHs",
    unit="",
    takes=_PH,
    source="SM2330",
    validity="direction only, not an amount or a rate; within ±0.3 to ±0.5 it says nothing",
)
def langelier(ph: ArrayLike, ph_saturation: ArrayLike) -> Value:
    """Langelier index: above zero the water tends to scale, below to dissolve. [-]"""
    return _plain(np.asarray(ph, dtype=float) - np.asarray(ph_saturation, dtype=float))


@formula(
    "Ryznar index",
    "RSI = 2 pHs − pH",
    unit="",
    takes=_PH,
    source="CARRIER",
    validity="a rule of thumb from steel mains; bands differ between authors",
)
def ryznar(ph: ArrayLike, ph_saturation: ArrayLike) -> Value:
    """Ryznar index: low values scale, high values are held to corrode steel. [-]"""
    return _plain(2.0 * np.asarray(ph_saturation, dtype=float) - np.asarray(ph, dtype=float))


@formula(
    "pH that the alkalinity would bring about",
    "pHeq = 1.465 log Alk + 4.54",
    unit="",
    takes={"alkalinity": "mg/L CaCO3"},
    source="PUCKORIUS91",
    validity="cooling water in contact with air",
)
def puckorius_ph(alkalinity: ArrayLike) -> Value:
    """The pH Puckorius puts in place of the measured one, from alkalinity [PUCKORIUS91]. [-]"""
    return _plain(1.465 * _log10(alkalinity) + 4.54)


@formula(
    "Puckorius index",
    "PSI = 2 pHs − pHeq",
    unit="",
    takes={"ph_saturation": "", "ph_equilibrium": ""},
    source="PUCKORIUS91",
    validity="made for cooling towers",
)
def puckorius(ph_saturation: ArrayLike, ph_equilibrium: ArrayLike) -> Value:
    """Puckorius index: below 6 scaling, above 7 dissolving [PUCKORIUS91]. [-]"""
    return _plain(2.0 * np.asarray(ph_saturation, dtype=float) - np.asarray(ph_equilibrium, dtype=float))


@formula(
    "Aggressiveness index",
    "AI = pH + log (Alk × Ca)",
    unit="",
    takes={"ph": "", "alkalinity": "mg/L CaCO3", "calcium_hardness": "mg/L CaCO3"},
    source="AWWA-C400",
    validity="asbestos-cement pipe only",
)
def aggressiveness(ph: ArrayLike, alkalinity: ArrayLike, calcium_hardness: ArrayLike) -> Value:
    """Aggressiveness index of a water to asbestos-cement pipe [AWWA-C400]. [-]"""
    product = np.asarray(alkalinity, dtype=float) * np.asarray(calcium_hardness, dtype=float)
    return _plain(np.asarray(ph, dtype=float) + _log10(product))


def _share(part: Floats, whole: ArrayLike) -> Value:
    divisor = np.asarray(whole, dtype=float)
    with np.errstate(divide="ignore", invalid="ignore"):
        return _plain(np.where(divisor > 0.0, part / divisor, np.nan)[()])


@formula(
    "Larson ratio",
    "(Cl + SO₄) / (HCO₃ + CO₃), equivalents",
    unit="",
    takes={"chloride": "meq/L", "sulfate": "meq/L", "alkalinity": "meq/L"},
    source="LARSON58",
    validity="unlined steel and iron; found on waters of the Great Lakes",
)
def larson_ratio(chloride: ArrayLike, sulfate: ArrayLike, alkalinity: ArrayLike) -> Value:
    """Larson ratio: how far chloride and sulfate outweigh alkalinity for iron and steel [LARSON58]. [-]"""
    return _share(np.asarray(chloride, dtype=float) + np.asarray(sulfate, dtype=float), alkalinity)


@formula(
    "Ratio S1, galvanised steel",
    "S₁ = (Cl + NO₃ + 2 SO₄) / K(S4.3), mol",
    unit="",
    takes={"chloride": "mmol/L", "nitrate": "mmol/L", "sulfate": "mmol/L", "acid_capacity": "mmol/L"},
    source="EN12502-3",
    validity="hot-dip galvanised pipe, pitting",
)
def galvanised_ratio(chloride: ArrayLike, nitrate: ArrayLike, sulfate: ArrayLike, acid_capacity: ArrayLike) -> Value:
    """Ratio S1 of salts to acid capacity for galvanised steel [EN12502-3]. [-]"""
    salts = (
        np.asarray(chloride, dtype=float) + np.asarray(nitrate, dtype=float) + 2.0 * np.asarray(sulfate, dtype=float)
    )
    return _share(salts, acid_capacity)


@formula(
    "Ratio S, copper and hot water",
    "S = K(S4.3) / SO₄, mol",
    unit="",
    takes={"acid_capacity": "mmol/L", "sulfate": "mmol/L"},
    source="EN12502-2",
    validity="copper pipe, pitting in hot water",
)
def copper_ratio(acid_capacity: ArrayLike, sulfate: ArrayLike) -> Value:
    """Ratio S of acid capacity to sulfate for copper in hot water [EN12502-2]. [-]"""
    return _share(np.asarray(acid_capacity, dtype=float), sulfate)
