"""Does an analysis hang together? Charge balance, dissolved solids, conductivity, hardness, carbonate.

Formulas do the arithmetic; `check_analysis` compares, and says for each comparison what was found, what is
accepted, and whether the water lies in the range the relation was made for. One litre is taken as one kilogram.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from core.chemistry.solution import Solution, Value
from core.chemistry.speciation import speciate
from core.constants import ATOMIC_WEIGHTS, MOLAR_MASS_CACO3, molar_mass
from core.errors import InputError
from core.working import formula

Floats = NDArray[np.float64]

CATIONS = {"ca": 2, "mg": 2, "na": 1, "k": 1, "nh4": 1, "fe": 2, "mn": 2, "sr": 2, "ba": 2}
ANIONS = {"cl": 1, "so4": 2, "no3": 1, "f": 1}
# g/mol as written in an analysis [IUPAC21]; silica as SiO2
WEIGHTS = {
    "ca": ATOMIC_WEIGHTS["Ca"],
    "mg": ATOMIC_WEIGHTS["Mg"],
    "na": ATOMIC_WEIGHTS["Na"],
    "k": ATOMIC_WEIGHTS["K"],
    "cl": ATOMIC_WEIGHTS["Cl"],
    "so4": molar_mass(S=1, O=4),
    "no3": molar_mass(N=1, O=3),
    "f": ATOMIC_WEIGHTS["F"],
    "si": molar_mass(Si=1, O=2),
}
EQUIVALENT_CACO3 = MOLAR_MASS_CACO3 / 2.0  # mg/meq
BEYOND_REPAIR = 30.0  # % of charge; above it an entry is wrong, not imprecise (common practice, no source)


def _plain(value: Floats) -> Value:
    return float(value) if np.ndim(value) == 0 else value


def cation_sum(solution: Solution) -> Value:
    """Charge of the cations of an analysis, H+ left out; it counts below pH 4. [meq/kg]"""
    return _plain(np.asarray(sum(z * np.asarray(getattr(solution, name)) for name, z in CATIONS.items())))


def anion_sum(solution: Solution) -> Value:
    """Charge of the anions of an analysis, alkalinity standing for carbonate and hydroxide. [meq/kg]"""
    acid = sum(z * np.asarray(getattr(solution, name)) for name, z in ANIONS.items())
    alkalinity = solution.alkalinity if solution.alkalinity is not None else speciate(solution).alkalinity
    return _plain(np.asarray(acid + np.asarray(alkalinity)))


@formula(
    "Charge balance, by the sum",
    "e = 100 (cations − anions) / (cations + anions)",
    unit="%",
    takes={"cations": "meq/L", "anions": "meq/L"},
    source="SM1030E",
    validity="say which form is shown: the other is twice this",
)
def charge_error_by_sum(cations: ArrayLike, anions: ArrayLike) -> Value:
    """Charge balance error against the sum of cations and anions [SM1030E]. [%]"""
    plus, minus = np.asarray(cations, dtype=float), np.asarray(anions, dtype=float)
    with np.errstate(divide="ignore", invalid="ignore"):
        return _plain(100.0 * (plus - minus) / (plus + minus))


@formula(
    "Charge balance, by the mean",
    "e = 100 (cations − anions) / mean(cations, anions)",
    unit="%",
    takes={"cations": "meq/L", "anions": "meq/L"},
    source="DIN38402-62",
    validity="pH 3 to 10; twice the form by the sum",
)
def charge_error_by_mean(cations: ArrayLike, anions: ArrayLike) -> Value:
    """Charge balance error against the mean of cations and anions [DIN38402-62]. [%]"""
    return _plain(2.0 * np.asarray(charge_error_by_sum(cations, anions)))


@formula(
    "Accepted charge difference",
    "0.2 meq/L up to 3 meq/L of anions; 2 % of the sum up to 10; 5 % above",
    unit="%",
    takes={"anions": "meq/L", "cations": "meq/L"},
    source="SM1030E",
    validity="older editions end at 800 meq/L",
)
def accepted_charge_error(anions: ArrayLike, cations: ArrayLike) -> Value:
    """Largest charge balance error by the sum that the method accepts [SM1030E]. [%]"""
    minus, plus = np.asarray(anions, dtype=float), np.asarray(cations, dtype=float)
    with np.errstate(divide="ignore", invalid="ignore"):
        small = 100.0 * 0.2 / (minus + plus)
    return _plain(np.where(minus <= 3.0, small, np.where(minus <= 10.0, 2.0, 5.0))[()])


@formula(
    "Dissolved solids, calculated",
    "TDS = 0.6 Alk + Na + K + Ca + Mg + Cl + SO₄ + SiO₂ + NO₃ + F",
    unit="mg/L",
    takes={"solution": ""},
    source="SM1030E",
    validity="bicarbonate loses half its mass on drying, hence 0.6",
)
def calculated_tds(solution: Solution) -> Value:
    """Dissolved solids as they would be left on drying, from the ions [SM1030E]. [mg/kg]"""
    ions = sum(weight * np.asarray(getattr(solution, name)) for name, weight in WEIGHTS.items())
    alkalinity = solution.alkalinity if solution.alkalinity is not None else speciate(solution).alkalinity
    return _plain(np.asarray(ions + 0.6 * EQUIVALENT_CACO3 * np.asarray(alkalinity)))


@formula(
    "Conductivity from the ions",
    "EC = 100 × cations",
    unit="µS/cm at 25 °C",
    takes={"cations": "meq/L"},
    source="SM1030E",
    validity="within 10 %; made for dilute natural waters",
)
def conductivity_from_ions(cations: ArrayLike) -> Value:
    """Conductivity at 25 °C to be expected from the cations [SM1030E]. [µS/cm]"""
    return _plain(100.0 * np.asarray(cations, dtype=float))


@formula(
    "Ionic strength from conductivity",
    "I = 1.6×10⁻⁵ × EC",
    unit="mol/L",
    takes={"conductivity": "µS/cm at 25 °C"},
    source="SM2330",
    validity="hard natural waters; reads about 45 % high on softened water",
)
def ionic_strength_from_conductivity(conductivity: ArrayLike) -> Value:
    """Ionic strength guessed from conductivity at 25 °C [SM2330]. [mol/L]"""
    return _plain(1.6e-5 * np.asarray(conductivity, dtype=float))


@formula(
    "Ionic strength from dissolved solids",
    "I = TDS / 40 000",
    unit="mol/L",
    takes={"tds": "mg/L"},
    source="SM2330",
    validity="TDS below 1000 mg/L",
)
def ionic_strength_from_tds(tds: ArrayLike) -> Value:
    """Ionic strength guessed from dissolved solids [SM2330]. [mol/L]"""
    return _plain(np.asarray(tds, dtype=float) / 40_000.0)


@dataclass(frozen=True, slots=True)
class Check:
    """One comparison within an analysis: what was found, what is accepted, in words too."""

    name: str
    value: float
    low: float
    high: float
    unit: str
    words: str
    source: str
    note: str = ""  # the range the relation was made for, where this water is outside it

    @property
    def passed(self) -> bool | None:
        """Whether the value lies within what is accepted; None where it is not known."""
        return None if self.value != self.value else self.low <= self.value <= self.high


def check_analysis(
    solution: Solution,
    *,
    conductivity: float | None = None,
    measured_tds: float | None = None,
    hardness: float | None = None,
    co2: float | None = None,
) -> tuple[Check, ...]:
    """All comparisons that one analysis allows; `solution` is a single water.

    Measured beside the ions: conductivity [µS/cm at 25 °C], measured_tds [mg/L], hardness [mg/L CaCO3],
    co2, free CO2 by titration or calculation of a laboratory [mg/L].
    """
    if solution.shape != ():
        raise InputError("solution", solution.shape, "An analysis is checked one water at a time; give a single water.")
    checks = [_charge(solution)]
    tds = float(calculated_tds(solution))
    if measured_tds is not None:
        checks.append(_ratio("dissolved solids, measured to calculated", measured_tds, tds, 1.0, 1.2, "SM1030E"))
    if conductivity is not None:
        checks.append(_solids_to_conductivity(tds, conductivity))
        checks.append(_conductivity(solution, conductivity))
    if hardness is not None:
        ions = MOLAR_MASS_CACO3 * (float(solution.ca) + float(solution.mg))
        checks.append(
            _ratio(
                "hardness, titrated to calcium and magnesium", hardness, ions, 0.9, 1.1, "common practice, no source"
            )
        )
    if co2 is not None:
        computed = float(speciate(solution).co2) * molar_mass(C=1, O=2)
        checks.append(
            _ratio("carbonate: CO2 measured to CO2 from pH", co2, computed, 0.7, 1.4, "common practice, no source")
        )
    return tuple(checks)


def _charge(solution: Solution) -> Check:
    cations, anions = float(cation_sum(solution)), float(anion_sum(solution))
    limit = float(accepted_charge_error(anions, cations))
    value = float(charge_error_by_sum(cations, anions))
    words = f"Cations {cations:.2f}, anions {anions:.2f} meq/L: {value:+.1f} % of their sum, accepted ±{limit:.1f} %."
    ph = float(solution.ph if solution.ph is not None else speciate(solution).ph)
    note = "" if 4.0 <= ph <= 10.0 else "Made for pH 4 to 10: outside, H+ or OH- carry charge that is not counted."
    return Check("charge balance", value, -limit, limit, "%", words, "SM1030E", note)


def _ratio(name: str, part: float, whole: float, low: float, high: float, source: str) -> Check:
    value = part / whole if whole > 0.0 else float("nan")
    words = f"{part:.4g} to {whole:.4g} is {value:.2f}; accepted is {low:g} to {high:g}."
    return Check(name, value, low, high, "", words, source)


def _solids_to_conductivity(tds: float, conductivity: float) -> Check:
    check = _ratio("dissolved solids to conductivity", tds, conductivity, 0.55, 0.7, "SM1030E")
    note = "Soft waters rich in bicarbonate lie a little lower without fault." if 0.45 <= check.value < 0.55 else ""
    return Check(check.name, check.value, check.low, check.high, "", check.words, check.source, note)


def _conductivity(solution: Solution, measured: float) -> Check:
    cations = float(cation_sum(solution))
    expected = float(conductivity_from_ions(cations))
    check = _ratio("conductivity, measured to expected", measured, expected, 0.9, 1.1, "SM1030E")
    note = "" if 90.0 <= measured <= 3000.0 else "The relation is for 90 to 3000 µS/cm."
    return Check(check.name, check.value, check.low, check.high, "", check.words, check.source, note)


def require_balance(solution: Solution, limit: float = BEYOND_REPAIR) -> None:
    """Raise InputError, naming the first water whose charge balance is beyond repair (default ±30 % of the sum)."""
    error = np.atleast_1d(np.asarray(charge_error_by_sum(cation_sum(solution), anion_sum(solution))))
    wrong = np.abs(error) > limit
    if wrong.any():
        place = tuple(int(i) for i in np.argwhere(wrong)[0])
        where = "" if solution.shape == () else f" at index {place[0] if len(place) == 1 else place}"
        raise InputError(
            "charge balance",
            float(error[place]),
            f"Cations and anions differ by {error[place]:+.0f} % of their sum{where}; up to ±{limit:g} % is accepted. "
            "An ion is missing, or a value has the wrong unit.",
        )
