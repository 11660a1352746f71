"""All stability indices of one water together, with the working that leads to each."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from core.chemistry import indices
from core.chemistry.index_bands import Band, band
from core.chemistry.quality import EQUIVALENT_CACO3, calculated_tds, ionic_strength_from_tds
from core.chemistry.saturation import precipitation_potential
from core.chemistry.solution import Solution, Value
from core.chemistry.speciation import Speciation, speciate
from core.constants import MOLAR_MASS_CACO3
from core.working import Working


@dataclass(frozen=True, slots=True)
class Stability:
    """Index -> value in the shape of the water, the speciation behind them, and their working."""

    values: Mapping[str, Value]
    speciation: Speciation
    working: Working
    data: str

    def band(self, index: str) -> Band | None:
        """What the value of an index is taken to mean; for a single water."""
        return band(index, float(self.values[index]))


def stability(solution: Solution, *, data: str | None = None) -> Stability:
    """Saturation index, precipitation potential and the indices of the trade for a water; 1 L taken as 1 kg.

    Names: "saturation index", "precipitation potential" [mg/kg CaCO3], "langelier" (simple form), "langelier full"
    [SM2330], "ryznar", "puckorius" (both on the simple form), "aggressiveness", "larson", "galvanised", "copper".
    """
    found = speciate(solution, data=data)
    water = found.solution
    working = Working()
    step = working.step
    alkalinity = EQUIVALENT_CACO3 * np.asarray(water.alkalinity)[()]
    calcium = MOLAR_MASS_CACO3 * np.asarray(water.ca)[()]
    tds = step(calculated_tds, solution=water)
    simple = step(
        indices.saturation_ph_simple, tds=tds, temp_c=water.temp_c, calcium_hardness=calcium, alkalinity=alkalinity
    )
    full = step(
        indices.saturation_ph_SM2330,
        temp_c=water.temp_c,
        calcium=np.asarray(water.ca)[()] / 1000.0,
        bicarbonate=np.asarray(water.alkalinity)[()] / 1000.0,
        ionic_strength=step(ionic_strength_from_tds, tds=tds),
        note="all alkalinity taken as bicarbonate, all calcium as free",
    )
    acid = water.alkalinity
    values = {
        "saturation index": found.si_calcite,
        "precipitation potential": step(precipitation_potential, solution=water),
        "langelier": step(indices.langelier, ph=water.ph, ph_saturation=simple),
        "langelier full": step(indices.langelier, ph=water.ph, ph_saturation=full),
        "ryznar": step(indices.ryznar, ph=water.ph, ph_saturation=simple),
        "puckorius": step(
            indices.puckorius,
            ph_saturation=simple,
            ph_equilibrium=step(indices.puckorius_ph, alkalinity=alkalinity),
        ),
        "aggressiveness": step(indices.aggressiveness, ph=water.ph, alkalinity=alkalinity, calcium_hardness=calcium),
        "larson": step(
            indices.larson_ratio, chloride=water.cl, sulfate=2.0 * np.asarray(water.so4)[()], alkalinity=acid
        ),
        "galvanised": step(
            indices.galvanised_ratio, chloride=water.cl, nitrate=water.no3, sulfate=water.so4, acid_capacity=acid
        ),
        "copper": step(indices.copper_ratio, acid_capacity=acid, sulfate=water.so4),
    }
    return Stability(values, found, working, found.data)
