"""A jar test: six jars around a computed dose, what to expect in each, and the dose corrected by what was seen.

    jar_sheet(water, dose, vary, ...) -> JarSheet          .jars: dose, mL of stock, expected residuals and pH
    correct(sheet, observed, target, quantity="hardness") -> Correction

How the dose is corrected is part of the answer, `Correction.method`:
    interpolation   the target lies between two jars: a straight line between them, after jars that contradict one
                    another (more chemical, more hardness) have been evened out
    fit             no jar came down to the target: the computed curve is stretched in dose (0.5 to 1.2 of the chemical
                    works) and lifted (0 to 1 mmol/L that does not settle) until it lies nearest to what was seen, and
                    followed to at most half as much again as the fullest jar
    lowest jar      the emptiest jar was below the target already: try less
    none            the target was not reached, and the fitted curve does not reach it either
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from math import nan

import numpy as np
from numpy.typing import NDArray

from core.chemistry import Solution, speciate
from core.chemistry.reagents import REAGENTS
from core.errors import InputError
from core.treatment.precipitation import PRACTICAL_CALCIUM, PRACTICAL_MAGNESIUM, Dose
from core.treatment.precipitation_water import settle

Floats = NDArray[np.float64]

FACTORS = (0.6, 0.8, 1.0, 1.2, 1.4, 1.6)  # of the computed dose, a jar each; common practice, no source
STOCK = 10.0  # g/L of product: 1 mL in a litre is 10 mg/L; common practice, no source
EFFICIENCIES = np.linspace(0.5, 1.2, 71)  # part of the chemical that works
MOST_LIFT = 1.0  # mmol/L that does not settle
BEYOND = 1.5  # of the fullest jar: how far a fitted curve is followed
POINTS = 65  # of the computed curve
QUANTITIES = ("hardness", "calcium")


@dataclass(frozen=True, slots=True)
class Jar:
    """One jar, and what to expect in it."""

    dose: float  # mg/L of the pure chemical that is varied
    stock: float  # mL of stock solution for the jar
    calcium: float  # mmol/L left at equilibrium
    magnesium: float
    hardness: float
    ph: float
    practice: float  # mmol/L of hardness: no less than what plants are left with


@dataclass(frozen=True, slots=True)
class JarSheet:
    """Six jars around a dose. `held` is fed to every jar, mg/L of pure chemical."""

    water: Solution
    dose: Dose  # the computed one
    vary: str
    jars: tuple[Jar, ...]
    held: dict[str, float]


@dataclass(frozen=True, slots=True)
class Correction:
    """The dose that what was seen in the jars asks for."""

    method: str  # see the module
    dose: float  # mg/L of the pure chemical varied; NaN for "none"
    factor: float  # of the computed dose
    between: tuple[float, float]  # doses of the jars on either side; NaN where there is none
    efficiency: float  # part of the chemical that works, by the fit; NaN otherwise
    lift: float  # mmol/L that does not settle, by the fit
    misfit: float  # mmol/L, root mean square between fit and jars


def jar_sheet(
    water: Solution,
    dose: Dose,
    vary: str,
    *,
    factors: Sequence[float] = FACTORS,
    jar: float = 1.0,
    stock: float = STOCK,
    purity: float = 1.0,
) -> JarSheet:
    """Jars with one chemical of a dose varied: "soda_ash", "lime" or "caustic".

    jar: litres of water in each; stock: g of product in a litre of stock solution (of lime a slurry, shaken before
    each draw); purity of that product. InputError where the dose holds none of the chemical.
    """
    if vary not in ("soda_ash", "lime", "caustic") or not getattr(dose, vary) > 0.0:
        raise InputError("vary", vary, "Vary a chemical that the dose holds.")
    amounts = getattr(dose, vary) * np.asarray(factors, dtype=float)
    solved = speciate(water).solution
    settled = settle(solved, replace(dose, **{vary: amounts}))
    calcium, magnesium, ph = (np.asarray(getattr(settled.water, name)) for name in ("ca", "mg", "ph"))
    practice = np.maximum(calcium, min(PRACTICAL_CALCIUM[0], water.ca)) + np.maximum(  # type: ignore[type-var]
        magnesium,
        min(PRACTICAL_MAGNESIUM, water.mg),  # type: ignore[type-var]
    )
    doses = amounts * REAGENTS[vary].molar_mass
    jars = [
        Jar(*map(float, (d, d / purity * jar / stock, ca, mg, ca + mg, p, least)))
        for d, ca, mg, p, least in zip(doses, calcium, magnesium, ph, practice, strict=True)
    ]
    others = {name: getattr(dose, name) for name in ("soda_ash", "lime", "caustic") if name != vary}
    held = {name: amount * REAGENTS[name].molar_mass for name, amount in others.items() if amount}
    return JarSheet(solved, dose, vary, tuple(jars), held)


def correct(sheet: JarSheet, observed: Sequence[float], target: float, quantity: str = "hardness") -> Correction:
    """The dose for a target [mmol/L], by what was measured in the jars [mmol/L; NaN: not measured]."""
    if quantity not in QUANTITIES:
        raise InputError("quantity", quantity, f"Enter one of {', '.join(QUANTITIES)} as seen in the jars.")
    if len(observed) != len(sheet.jars):
        raise InputError(
            "observed", len(observed), f"There are {len(sheet.jars)} jars: enter a reading for each, or none."
        )
    if not target >= 0.0:
        raise InputError("target", target, "Enter the hardness wanted, zero or more.")
    doses = np.array([jar.dose for jar in sheet.jars])
    seen = np.asarray(observed, dtype=float)
    read = np.isfinite(seen)
    if not read.any():
        raise InputError("observed", None, "Enter what was measured in at least one jar.")
    order = np.argsort(doses[read])
    return _corrected(sheet, doses[read][order], seen[read][order], target, quantity)


def _corrected(sheet: JarSheet, doses: Floats, seen: Floats, target: float, quantity: str) -> Correction:
    computed = getattr(sheet.dose, sheet.vary) * REAGENTS[sheet.vary].molar_mass
    smooth = falling(seen)
    if smooth[0] <= target:
        return Correction(
            "lowest jar", float(doses[0]), float(doses[0]) / computed, (nan, float(doses[0])), nan, nan, nan
        )
    if smooth[-1] <= target:
        after = int(np.flatnonzero(smooth <= target)[0])
        share = (smooth[after - 1] - target) / (smooth[after - 1] - smooth[after])
        dose = float(doses[after - 1] + share * (doses[after] - doses[after - 1]))
        between = (float(doses[after - 1]), float(doses[after]))
        return Correction("interpolation", dose, dose / computed, between, nan, nan, nan)
    return _fitted(sheet, doses, seen, target, quantity, computed)


def falling(seen: Floats) -> Floats:
    """The nearest values, by squares, that never rise from jar to jar: neighbours that contradict are evened out."""
    blocks: list[list[float]] = []
    for value in seen:
        blocks.append([float(value), 1.0])
        while len(blocks) > 1 and blocks[-2][0] < blocks[-1][0]:
            last, count = blocks.pop()
            mean, held = blocks[-1]
            blocks[-1] = [(mean * held + last * count) / (held + count), held + count]
    return np.concatenate([np.full(int(count), mean) for mean, count in blocks])


def _fitted(sheet: JarSheet, doses: Floats, seen: Floats, target: float, quantity: str, computed: float) -> Correction:
    molar = REAGENTS[sheet.vary].molar_mass
    axis = np.linspace(0.0, BEYOND * EFFICIENCIES[-1] * doses[-1], POINTS)
    settled = settle(sheet.water, replace(sheet.dose, **{sheet.vary: axis / molar}))
    curve = np.asarray(settled.hardness if quantity == "hardness" else settled.water.ca)
    efficiencies = EFFICIENCIES if len(doses) > 1 else np.ones(1)  # one jar cannot tell stretching from lifting
    model = np.interp(efficiencies[:, None] * doses, axis, curve)
    lifts = np.clip((seen - model).mean(axis=1), 0.0, MOST_LIFT)
    misfits = np.sqrt(((model + lifts[:, None] - seen) ** 2).mean(axis=1))
    best = int(misfits.argmin())
    efficiency, lift, misfit = float(efficiencies[best]), float(lifts[best]), float(misfits[best])
    tried = np.linspace(doses[-1], BEYOND * doses[-1], 8 * POINTS)
    enough = np.flatnonzero(np.interp(efficiency * tried, axis, curve) + lift <= target)
    if not enough.size:
        return Correction("none", nan, nan, (float(doses[-1]), nan), efficiency, lift, misfit)
    dose = float(tried[enough[0]])
    return Correction("fit", dose, dose / computed, (float(doses[-1]), nan), efficiency, lift, misfit)
