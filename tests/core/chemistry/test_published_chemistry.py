"""Every row of the table of outside check values for chemistry, mapped to a call."""

from __future__ import annotations

import numpy as np
import pytest

from core.chemistry import (
    Solution,
    add,
    at_temperature,
    mix,
    precipitation_potential,
    residual_calcium,
    scale_per_year,
    scale_potential,
    speciate,
    stability,
    to_saturation,
)
from core.chemistry.indices import (
    aggressiveness,
    langelier,
    puckorius_ph,
    saturation_ph_simple,
    saturation_ph_SM2330,
)
from core.chemistry.quality import (
    accepted_charge_error,
    anion_sum,
    calculated_tds,
    cation_sum,
    charge_error_by_mean,
    charge_error_by_sum,
    ionic_strength_from_tds,
)
from core.chemistry.residual import ideal_calcium
from core.chemistry.thermodynamics import log10_k1, log10_k2, log_gamma_davies, log_gamma_extended, log_k
from core.chemistry.water import debye_huckel_slopes, debye_huckel_slopes_simple, water_viscosity
from core.constants import ATOMIC_WEIGHTS, MOLAR_MASS_CACO3, molar_mass
from tests.published import rows

WEIGHTS = {
    "ca": ATOMIC_WEIGHTS["Ca"], "mg": ATOMIC_WEIGHTS["Mg"], "na": ATOMIC_WEIGHTS["Na"], "k": ATOMIC_WEIGHTS["K"],
    "alkalinity": MOLAR_MASS_CACO3 / 2, "so4": molar_mass(S=1, O=4), "no3": molar_mass(N=1, O=3),
    "cl": ATOMIC_WEIGHTS["Cl"],
}  # fmt: skip
MG_PER_L = {  # the waters in the head of the table: °C, pH, then Ca Mg Na K Alk SO4 NO3 Cl
    "W1": (10, 7.20, 10, 2, 6, 1, 25, 7, 2, 9.7),
    "W2": (15, 7.60, 60, 12, 20, 3, 150, 45, 10, 29.5),
    "W3": (11, 7.15, 120, 25, 15, 2, 330, 60, 25, 17.8),
    "W4": (11, 7.15, 0.6, 0.12, 199.0, 2, 330, 60, 25, 17.8),
    "W5": (12, 7.40, 220, 45, 60, 4, 210, 560, 5, 51.6),
}


def water(name):
    """A named water as a Solution."""
    temp_c, ph, *ions = MG_PER_L[name]
    return Solution(temp_c=temp_c, ph=ph, **{f: mg / w for (f, w), mg in zip(WEIGHTS.items(), ions, strict=True)})


def ion_sums(solution):
    """Charge of cations and anions."""
    return {"cations": cation_sum(solution), "anions": anion_sum(solution)}


def solid_in_pure_water(solid, temp_c, data, p_co2=None):
    """Calcium and magnesium [µmol/kg] and pH of pure water left with a solid."""
    pure = Solution(temp_c=temp_c, alkalinity=0.0, dic=0.0, data=data)
    left = to_saturation(pure, solid, p_co2=p_co2).solution
    return {"calcium": 1000 * left.ca, "magnesium": 1000 * left.mg, "ph": left.ph}


def residual(soda_ash, temp_c, data="pb1982"):
    """Calcium beside soda ash [µmol/kg], its ratio to the ideal, the dissolved pair."""
    found = residual_calcium(temp_c=temp_c, soda_ash=soda_ash, data=data)
    return {"calcium": 1e6 * found.equilibrium, "ph": found.ph, "ratio": found.ratio, "pair": 1e6 * found.ion_pair}


def ideal(carbonate, ksp=None, log_ksp=None):
    """Calcium by Ksp alone. [µmol/kg]"""
    return {"calcium": 1e6 * ideal_calcium(10.0**log_ksp if ksp is None else ksp, carbonate)}


def falling(temperatures, **ends):
    """Whether more soda ash always leaves less calcium."""
    soda = np.geomspace(ends["from"], ends["to"], 40)
    temps = np.array([float(t) for t in temperatures.split()])[:, None]
    return {"falls": bool(np.all(np.diff(residual_calcium(temps, soda).equilibrium, axis=1) < 0.0))}


def soda_on_chloride(calcium_chloride, soda_ash, temp_c):
    """Calcium left of calcium chloride after soda ash. [mg/kg CaCO3]"""
    pure = Solution(temp_c=temp_c, alkalinity=0.0, dic=0.0)
    left = to_saturation(add(pure, calcium_chloride=calcium_chloride, soda_ash=soda_ash), "calcite").solution
    return {"caco3": MOLAR_MASS_CACO3 * left.ca, "ph": left.ph}


def all_indices(solution):
    """Every stability index of a water, names with underscores."""
    return {name.replace(" ", "_"): value for name, value in stability(solution).values.items()}


def saturation_ph(solution):
    """Saturation pH with ionic strength from calculated dissolved solids."""
    ph = saturation_ph_SM2330(
        solution.temp_c,
        solution.ca / 1000,
        solution.alkalinity / 1000,
        ionic_strength_from_tds(calculated_tds(solution)),
    )
    return {"ph": ph}


def excess_lime_soda(temp_c, ca_mg, mg_mg, co2_mg, alkalinity_mg, na, k, so4, lime, soda_ash):
    """The pH after lime and soda ash once calcite and brucite have fallen out."""
    ca, mg = ca_mg / WEIGHTS["ca"], mg_mg / WEIGHTS["mg"]
    alkalinity = alkalinity_mg / WEIGHTS["alkalinity"]
    raw = Solution(
        temp_c=temp_c, ca=ca, mg=mg, na=na, k=k, so4=so4, alkalinity=alkalinity,
        cl=2 * ca + 2 * mg + na + k - 2 * so4 - alkalinity, dic=alkalinity + co2_mg / molar_mass(C=1, O=2),
    )  # fmt: skip
    dosed = add(raw, lime=lime, soda_ash=soda_ash)
    return {"ph": to_saturation(dosed, "calcite", "brucite", may_dissolve=False).solution.ph}


def judged(blend):
    """The pH, saturation and precipitation potential of a blend."""
    return {
        "ph": blend.ph,
        "saturation_index": speciate(blend).si_calcite,
        "precipitation_potential": precipitation_potential(blend),
    }


def two_saturated(temp_c, log_p_one, log_p_other):
    """Two waters saturated with calcite under different CO2, half and half."""
    pure = Solution(temp_c=temp_c, alkalinity=0.0, dic=0.0)
    parts = [to_saturation(pure, "calcite", p_co2=10.0**p).solution for p in (log_p_one, log_p_other)]
    return judged(mix(parts, [0.5, 0.5]))


def half_and_half(one, other, temp_c):
    """Two waters blended half and half at one temperature."""
    return judged(mix([at_temperature(one, temp_c), at_temperature(other, temp_c)], [0.5, 0.5]))


def blended_to(raw, soft, target):
    """Share of raw water that gives the target hardness, and the sodium of the blend. [mg/kg]"""
    hard = [MOLAR_MASS_CACO3 * (w.ca + w.mg) for w in (raw, soft)]
    share = (target - hard[1]) / (hard[0] - hard[1])
    return {"raw_share": share, "sodium": WEIGHTS["na"] * mix([raw, soft], [share, 1.0 - share]).na}


def scale_in_a_year(solution, temp_c, volume):
    """Scale of a day's hot water over a year. [kg]"""
    return {"kg": scale_per_year(scale_potential(solution, temp_c).plain, volume)}


def scale_when_heated(solution, temp_c):
    """Calcite that heating throws out, by either data set. [mg/kg CaCO3]"""
    views = scale_potential(solution, temp_c).views
    return {data: views[data, "calcite"] for data in ("pb1982", "usgs2024")}


CALLS = {
    "ion sums": ion_sums,
    "charge error by sum": lambda **x: {"percent": charge_error_by_sum(**x)},
    "charge error by mean": lambda **x: {"percent": charge_error_by_mean(**x)},
    "charge verdict": lambda **x: {"accepted": bool(abs(charge_error_by_sum(**x)) <= accepted_charge_error(**x))},
    "calculated TDS": lambda solution: {"mg_l": calculated_tds(solution)},
    "pK1": lambda temp_c: {"value": -log10_k1(temp_c)},
    "pK2": lambda temp_c: {"value": -log10_k2(temp_c)},
    "pKw": lambda temp_c: {"value": -log_k("OH-", temp_c)},
    "log K": lambda name, temp_c, data: {"value": log_k(name, temp_c, data=data)},
    "log K from bicarbonate": lambda name, temp_c, data: {
        "value": log_k(name, temp_c, data=data) - log_k("HCO3-", temp_c, data=data)
    },
    "Debye-Hückel slopes": lambda temp_c: dict(zip("ab", debye_huckel_slopes(temp_c), strict=True)),
    "Debye-Hückel slopes, simple": lambda temp_c: dict(zip("ab", debye_huckel_slopes_simple(temp_c), strict=True)),
    "activity coefficient": lambda charge, strength, temp_c, size, linear: {
        "gamma": 10.0 ** log_gamma_extended(charge, strength, temp_c, size=size, linear=linear)
    },
    "activity coefficient, Davies": lambda charge, strength, temp_c: {
        "gamma": 10.0 ** log_gamma_davies(charge, strength, temp_c)
    },
    "viscosity": lambda temp_c: {"mpa_s": water_viscosity(temp_c)},
    "solid in pure water": solid_in_pure_water,
    "residual calcium": residual,
    "ideal calcium": ideal,
    "residual to ideal": residual,
    "ion pair at saturation": lambda temp_c: residual(0.0, temp_c),
    "residual falls with soda ash": falling,
    "soda ash on calcium chloride": soda_on_chloride,
    "stability": all_indices,
    "saturation pH SM 2330": saturation_ph,
    "Langelier, simple": lambda ph, **x: {"langelier": langelier(ph, saturation_ph_simple(**x))},
    "aggressiveness": lambda **x: {"index": aggressiveness(**x)},
    "Puckorius pH": lambda alkalinity: {"ph": puckorius_ph(alkalinity)},
    "scale when heated": scale_when_heated,
    "scale in a year": scale_in_a_year,
    "excess lime-soda": excess_lime_soda,
    "two saturated waters": two_saturated,
    "half and half": half_and_half,
    "raw and softened to a hardness": blended_to,
}


@pytest.mark.parametrize("row", rows("chemistry"), ids=lambda row: row.id)
def test_check_value(row):
    """What the core computes agrees with the outside value within the tolerance of its row."""
    inputs = {name: water(value) if value in MG_PER_L else value for name, value in row.inputs.items()}
    if "water" in inputs:
        inputs["solution"] = inputs.pop("water")

    row.check(**CALLS[row.what](**inputs))
