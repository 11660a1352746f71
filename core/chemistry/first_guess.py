"""Where the equilibrium loop starts: the same balances without ion pairs, read off a coarse scan of pH.

The scan cannot miss: the proton balance rises with pH, so its change of sign brackets the answer to half a unit
whatever the water. Pairs shift it by a few tenths at most, which Newton's steps make good.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from core.chemistry.model import LN10
from core.chemistry.problem import Contact, Problem

Floats = NDArray[np.float64]

SCAN = np.exp(-LN10 * np.arange(-1.0, 15.6, 1.0))[:, None]  # activity of H+, falling
LOWEST = 1e-12  # activity of CO3-2 to start from where the balance leaves none


def _factors(problem: Problem, constants: tuple[Floats, Floats], strength: Floats) -> dict[str, Floats]:
    """Molality per unit of activity product, for the species that stand without pairs."""
    rows = {n: problem.model.index(n) for n in ("H+", "OH-", "CO3-2", "HCO3-", "CO2", "SO4-2")}
    rows.update({c: problem.model.index(f"{c}+2") for c in ("Ca", "Mg")})
    ln_k, slopes = constants
    terms, _ = problem.model.debye_terms(slopes, strength)
    chosen = list(rows.values())
    values = np.exp(ln_k[chosen] + problem.model.debye[chosen] @ terms)
    return dict(zip(rows, values, strict=True))


def known_ph(
    problem: Problem, constants: tuple[Floats, Floats], strength: Floats, ln_h: Floats, *, by_alkalinity: bool
) -> Floats:
    """Starting activities where pH is known, with alkalinity or dissolved carbon."""
    k = _factors(problem, constants, strength)
    h = np.exp(ln_h)
    if by_alkalinity:
        wanted = 2.0 * problem.balance[1] - k["OH-"] / h + k["H+"] * h
        carbonate = wanted / (2.0 * k["CO3-2"] + k["HCO3-"] * h)
    else:
        carbonate = problem.balance[1] / (k["CO3-2"] + k["HCO3-"] * h + k["CO2"] * h * h)
    sulfate = problem.balance[2] / k["SO4-2"]
    return np.array([ln_h, np.log(np.maximum(carbonate, LOWEST)), np.log(sulfate)])


def scanned(problem: Problem, constants: tuple[Floats, Floats], strength: Floats) -> Floats:
    """Starting activities where pH is to be found, closed or open, with or without solids."""
    k = _factors(problem, constants, strength)
    carbonate, miss = _scan(problem, k)
    upper = np.clip(np.count_nonzero(miss < 0.0, axis=0), 1, len(SCAN) - 1)
    column = np.arange(strength.size)
    low, high = miss[upper - 1, column], miss[upper, column]
    share = np.clip(low / (low - high), 0.0, 1.0)
    share = np.where(np.isfinite(share), share, 0.5)
    ln_scan = np.log(SCAN[:, 0])
    ln_h = ln_scan[upper - 1] + share * (ln_scan[upper] - ln_scan[upper - 1])
    ln_c = np.log(carbonate)
    start = ln_c[upper - 1, column] + share * (ln_c[upper, column] - ln_c[upper - 1, column])
    return np.array([ln_h, start, np.log(_sulfate(problem, k))])


def _held(problem: Problem, ion: str, *, by: int) -> Contact | None:
    """The solid that holds an ion through the activity numbered `by`, if there is one."""
    for contact in problem.contacts:
        if problem.model.components[contact.component] == ion and contact.made[by]:
            return contact
    return None


def _scan(problem: Problem, k: dict[str, Floats]) -> tuple[Floats, Floats]:
    """Activity of CO3-2 and excess of base over the scan of pH."""
    h = SCAN
    total = dict(zip(problem.model.components, problem.totals, strict=True))
    protons, carbon, sulfur = problem.balance
    per_carbonate = k["CO3-2"] + k["HCO3-"] * h + k["CO2"] * h * h
    excess = k["OH-"] / h - k["H+"] * h
    calcite = _held(problem, "Ca", by=1)
    tied = 0.0 if problem.ln_tie is None else np.exp(problem.ln_tie) * k["SO4-2"]
    free = 0.0 if calcite is None else np.exp(calcite.ln_k) * k["Ca"]  # calcium times CO3-2 activity
    if problem.ln_gas is not None:
        c = np.exp(problem.ln_gas) / (h * h)
        miss = excess + c * (2.0 * k["CO3-2"] + k["HCO3-"] * h) - (2.0 * carbon - protons)
        if calcite is not None:
            miss += 2.0 * (total["Ca"] - free / c)
        if problem.ln_tie is not None:
            miss += 2.0 * (tied * c - sulfur)
    else:
        c = _carbonate(problem, per_carbonate + tied, free, total["Ca"], tied=problem.ln_tie is not None)
        miss = excess - c * (k["HCO3-"] * h + 2.0 * k["CO2"] * h * h) + protons
    brucite = _held(problem, "Mg", by=0)
    if brucite is not None:
        miss -= 2.0 * (np.exp(brucite.ln_k) * h * h * k["Mg"] - total["Mg"])
    return c, miss


def _carbonate(problem: Problem, per_carbonate: Floats, free: Floats | float, calcium: Floats, *, tied: bool) -> Floats:
    """Activity of CO3-2 from the carbon balance: linear without a solid, quadratic with one."""
    carbon = problem.balance[1]
    if isinstance(free, float):
        return carbon / per_carbonate
    spare = carbon - calcium + (problem.balance[2] if tied else 0.0)
    return _positive_root(spare, per_carbonate, free)


def _sulfate(problem: Problem, k: dict[str, Floats]) -> Floats:
    gypsum = _held(problem, "Ca", by=2)
    sulfur = problem.balance[2]
    if gypsum is None:
        return sulfur / k["SO4-2"]
    calcium = problem.totals[gypsum.component]
    return _positive_root(sulfur - calcium, k["SO4-2"], np.exp(gypsum.ln_k) * k["Ca"])


def _positive_root(spare: Floats, per: Floats, product: Floats) -> Floats:
    """The x > 0 of per·x - product/x = spare, in the form that loses no digits."""
    root = np.sqrt(spare * spare + 4.0 * per * product)
    return np.where(spare > 0.0, (spare + root) / (2.0 * per), 2.0 * product / np.maximum(root - spare, 1e-300))
