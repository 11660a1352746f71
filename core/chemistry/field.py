"""A full water from a thin field reading: hardness, alkalinity, pH, temperature, and conductivity if there is one.

What was not measured is assumed, in a way that balances the charge, and each assumption is said in words. The
saturation index moves by a few hundredths with these assumptions; chloride, sulfate and sodium themselves are only
place-holders and must not be read as measured.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from core.chemistry.solution import HIGHEST, Solution, Value, common_shape, number, within

Floats = NDArray[np.float64]

MAGNESIUM_SHARE = 0.25  # of hardness, by moles (common practice, no source)
SULFATE_SHARE = 0.5  # of the charge of chloride and sulfate (common practice, no source)
PER_MEQ = 100.0  # µS/cm at 25 °C per meq/L of cations [SM1030E]


@dataclass(frozen=True, slots=True)
class FieldWater:
    """A water completed from a field reading, and what was assumed to complete it, in sentences."""

    solution: Solution
    assumptions: tuple[str, ...]


def complete(
    *,
    temp_c: ArrayLike,
    ph: ArrayLike,
    hardness: ArrayLike,
    alkalinity: ArrayLike,
    conductivity: ArrayLike | None = None,
    magnesium_share: ArrayLike | None = None,
    data: str = "pb1982",
) -> FieldWater:
    """A charge-balanced water from what a field kit gives; numbers or arrays that broadcast.

    temp_c in °C; hardness, calcium and magnesium together, in mmol/kg; alkalinity in meq/kg; conductivity in µS/cm
    at 25 °C; magnesium_share, the part of hardness that is magnesium, by moles, 0 to 1.

    Conductivity gives the sum of cations, 1 meq/L for each 100 µS/cm [SM1030E]; what hardness leaves of it is sodium.
    Anions beyond alkalinity are half chloride, half sulfate by charge. Where alkalinity alone exceeds the cations,
    sodium makes up for it, as in softened water.
    """
    hard = within("hardness", number("hardness", hardness), 0.0, HIGHEST, "mmol/kg")
    share = MAGNESIUM_SHARE if magnesium_share is None else number("magnesium_share", magnesium_share)
    share = within("magnesium_share", share, 0.0, 1.0, "")
    alk = within("alkalinity", number("alkalinity", alkalinity), 0.0, HIGHEST, "meq/kg")
    said = []
    common_shape(hard, share, alk, 0.0 if conductivity is None else number("conductivity", conductivity))
    if magnesium_share is None:
        said.append(
            f"Magnesium was taken as {100 * MAGNESIUM_SHARE:.0f} % of the hardness by moles, the rest as calcium."
        )
    least = 2.0 * np.asarray(hard)
    if conductivity is None:
        cations = least
        said.append("No conductivity was given: the water was taken to hold no more ions than hardness and alkalinity.")
    else:
        measured = within("conductivity", number("conductivity", conductivity), 0.0, 1e6, "µS/cm")
        cations = np.asarray(measured) / PER_MEQ
        said += _from_conductivity(cations, least)
        cations = np.maximum(cations, least)
    short = np.asarray(alk) > cations
    if np.any(short):
        said.append("Where alkalinity exceeds the other cations, sodium was added to balance it, as in softened water.")
    cations = np.maximum(cations, alk)
    rest = cations - np.asarray(alk)
    if np.any(rest > 0.0):
        said.append("Charge that alkalinity does not balance was taken as half chloride, half sulfate.")
    said.append("Potassium, nitrate and all other ions were left out.")
    solution = Solution(
        temp_c=temp_c,  # type: ignore[arg-type]
        ph=ph,  # type: ignore[arg-type]
        alkalinity=alk,
        ca=hard * (1.0 - share),
        mg=hard * share,
        na=_plain(cations - least),
        cl=_plain((1.0 - SULFATE_SHARE) * rest),
        so4=_plain(0.5 * SULFATE_SHARE * rest),
        data=data,
    )
    return FieldWater(solution, tuple(said))


def _from_conductivity(cations: Floats, least: Floats) -> list[str]:
    said = [
        "The sum of cations was taken from conductivity, 1 meq/L for each 100 µS/cm; what is not hardness is sodium."
    ]
    if np.any(cations < 0.9 * least):
        said.append(
            "Conductivity is lower than hardness alone explains, by more than a tenth: one of the two readings is in "
            "doubt. Hardness was kept, and no sodium assumed."
        )
    return said


def _plain(value: Floats) -> Value:
    return float(value) if np.ndim(value) == 0 else value
