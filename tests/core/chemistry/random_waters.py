"""Seeded random waters of the kinds people meet, 2 to 70 °C, ionic strength to about 0.07 mol/kg."""

from __future__ import annotations

import numpy as np

from core.chemistry import Solution
from core.chemistry.thermodynamics import log_k

# kind -> number of waters, then low and high of pH, ca, mg, na, so4 and alkalinity (mmol/kg, meq/kg)
KINDS = {
    "tap": (120, (6.5, 8.5), (0.3, 4.0), (0.05, 1.5), (0.1, 3.0), (0.02, 1.5), (0.8, 7.0)),
    "soft": (40, (5.6, 8.0), (0.02, 0.4), (0.01, 0.2), (0.05, 0.6), (0.01, 0.2), (0.05, 0.6)),
    "softened": (40, (6.8, 8.4), (0.001, 0.1), (0.001, 0.05), (4.0, 12.0), (0.1, 1.5), (3.0, 8.0)),
    "gypsum": (40, (6.6, 8.2), (3.0, 9.0), (0.5, 4.0), (0.5, 5.0), (3.0, 10.0), (1.5, 6.0)),
    "brackish": (40, (6.8, 8.6), (1.0, 5.0), (0.5, 5.0), (10.0, 30.0), (1.0, 5.0), (1.0, 8.0)),
    "limed": (40, (9.0, 11.3), (0.1, 2.0), (0.01, 0.8), (0.5, 4.0), (0.05, 1.0), (0.5, 2.0)),
}
FIELDS = ("temp_c", "ph", "ca", "mg", "na", "k", "cl", "so4", "no3", "alkalinity")


def random_waters(seed: int = 20260217) -> dict[str, np.ndarray]:
    """Columns of all kinds one after the other, each water in charge balance by chloride or sodium."""
    rng = np.random.default_rng(seed)
    parts = []
    for count, *ranges in KINDS.values():
        drawn = [rng.uniform(low, high, count) for low, high in ranges]
        columns = dict(zip(("ph", "ca", "mg", "na", "so4", "alkalinity"), drawn, strict=True))
        columns |= {"temp_c": rng.uniform(2.0, 70.0, count), "k": rng.uniform(0.01, 0.3, count)}
        columns["no3"] = rng.uniform(0.0, 0.8, count)
        parts.append(columns)
    water = {name: np.concatenate([part[name] for part in parts]) for name in parts[0]}
    hydroxide = 1000.0 * 10.0 ** (np.asarray(log_k("OH-", water["temp_c"])) + water["ph"])
    water["alkalinity"] = water["alkalinity"] + 1.6 * hydroxide  # so that a limed water has room for carbonate
    spare = 2 * (water["ca"] + water["mg"] - water["so4"]) + water["na"] + water["k"]
    spare -= water["no3"] + water["alkalinity"]
    water["cl"] = np.maximum(spare, 0.05)
    water["na"] = water["na"] + water["cl"] - spare
    return {name: water[name] for name in FIELDS}


def as_solution(water: dict[str, np.ndarray], data: str = "pb1982") -> Solution:
    """The columns as one Solution of many waters."""
    return Solution(**water, data=data)


def each(water: dict[str, np.ndarray]) -> list[dict[str, float]]:
    """The waters one by one."""
    return [dict(zip(water, map(float, row), strict=True)) for row in zip(*water.values(), strict=True)]
