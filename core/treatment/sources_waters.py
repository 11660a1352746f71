"""Sources as waters of the chemistry, and many blends of them at once.

    Waters(case).blend(parts) -> Solution               one blend
    Waters(case).blends(x, temperature=None)            many, one a row of shares
    Waters(case).values(x, limits) -> one row a limit   pH, saturation index, lime that would precipitate or dissolve

Alkalinity, dissolved carbon and every ion mix by share and are summed here for all blends in one product; pH follows.
1 L counts as 1 kg. What was not measured counts as none; of hardness without its calcium a quarter, by moles, is
magnesium. `assumed` names both.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from core.chemistry import Solution, precipitation_potential, speciate
from core.chemistry.field import MAGNESIUM_SHARE
from core.constants import ATOMIC_WEIGHTS, molar_mass
from core.treatment.limits import Limit
from core.treatment.sources_case import Case

Floats = NDArray[np.float64]

# Field of a Solution -> (parameter, its core units in a mmol)
_TOTALS = {
    "ca": ("calcium", 1.0),
    "mg": ("magnesium", 1.0),
    "na": ("sodium", ATOMIC_WEIGHTS["Na"]),
    "k": ("potassium", 1.0),
    "nh4": ("ammonium", molar_mass(N=1, H=4)),
    "cl": ("chloride", 1.0),
    "so4": ("sulfate", 1.0),
    "no3": ("nitrate", 1.0),
    "f": ("fluoride", ATOMIC_WEIGHTS["F"]),
    "si": ("silica", molar_mass(Si=1, O=2)),
}
_CARRIED = ("temp_c", "alkalinity", "dic", *_TOTALS)
_MOVING = ("alkalinity", "dic", "ca")  # what moves pH and saturation most


class Waters:
    """The sources that are on, as waters, and blends of them."""

    def __init__(self, case: Case) -> None:
        self.tried = 0
        given = {
            "temp_c": case.values("temperature"),
            "ph": case.values("ph"),
            "alkalinity": case.values("alkalinity"),
        }
        assumed = []
        hardness = case.values("hardness")
        for name, (parameter, unit) in _TOTALS.items():
            values = case.values(parameter) / unit
            if np.isnan(values).any():
                assumed.append(parameter)
                share = {"ca": 1.0 - MAGNESIUM_SHARE, "mg": MAGNESIUM_SHARE}.get(name, 0.0)
                values = np.where(np.isnan(values), share * hardness, values)
            given[name] = values
        self.assumed = tuple(assumed)
        solved = speciate(Solution(**given)).solution
        count = len(case.sources)
        self.carried = np.array([np.broadcast_to(getattr(solved, name), (count,)) for name in _CARRIED])

    def directions(self) -> Floats:
        """What moves pH and saturation most, one row a quantity, one column a source."""
        return self.carried[[_CARRIED.index(name) for name in _MOVING]]

    def blend(self, parts: Floats) -> Solution:
        """One blend of the sources in these parts."""
        mixed = self.carried @ (parts / parts.sum())
        return Solution(**{name: float(value) for name, value in zip(_CARRIED, mixed, strict=True)})

    def blends(self, x: Floats, temperature: float | None = None) -> Solution:
        """Blends in these shares, one a row; warmed or cooled without loss of gas where a temperature is given."""
        parts = np.clip(x, 0.0, None)
        mixed = self.carried @ (parts / parts.sum(axis=1, keepdims=True)).T
        fields = dict(zip(_CARRIED, mixed, strict=True))
        if temperature is not None:
            fields["temp_c"] = np.full(len(x), temperature)
        return Solution(**fields)

    def values(self, x: Floats, limits: Sequence[Limit]) -> Floats:
        """Value for each limit, one a row, of each blend, one a column.

        Where a rule counts a limit as kept from some pH on, a value beyond it is given as the limit itself.
        """
        self.tried += len(x)
        found = np.full((len(limits), len(x)), np.nan)
        for temperature in dict.fromkeys(limit.temperature for limit in limits):
            here = [i for i, limit in enumerate(limits) if limit.temperature == temperature]
            asked = {limits[i].parameter for i in here}
            if any(np.isfinite(limits[i].kept_from_ph) for i in here):
                asked.add("ph")
            known = _known(self.blends(x, temperature), asked)
            for i in here:
                value, limit = known[limits[i].parameter], limits[i]
                if np.isfinite(limit.kept_from_ph):
                    excused = known["ph"] >= limit.kept_from_ph
                    value = np.where(excused, np.clip(value, limit.low, limit.high), value)
                found[i] = value
        return found


def _known(water: Solution, asked: set[str]) -> dict[str, Floats]:
    known: dict[str, Floats] = {}
    if asked & {"ph", "saturation"}:
        species = speciate(water)
        known.update(ph=species.ph, saturation=species.si_calcite)  # type: ignore[arg-type]
    if asked & {"ccpp", "calcite dissolution"}:
        potential = precipitation_potential(water)
        known.update({"ccpp": potential, "calcite dissolution": -potential})  # type: ignore[dict-item]
    return known
