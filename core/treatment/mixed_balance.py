"""Waters that each are in balance with lime may not be once they are mixed: which way, how far, at which share.

    mixed_balance(waters, shares) -> MixedBalance            .ph .saturation .ccpp .of_parts .tendency()
    least_balanced(first, second) -> MixedBalance            the share at which two waters dissolve most lime

Alkalinity, carbon and ions mix by share; pH is solved. CO2 falls faster than in proportion as pH rises, so that a
mixture of waters in balance holds more CO2 than it needs: it dissolves lime. 1 L counts as 1 kg, closed to gas.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from core.chemistry import Solution, mix, precipitation_potential, speciate

NEAR = 5.0  # mg/L CaCO3: nearer than this to balance counts as in balance; the German limit at the works [TRINKWV2023]
SCAN = 41  # shares looked at

Value = float | np.ndarray


@dataclass(frozen=True, slots=True)
class MixedBalance:
    """Waters mixed, and how the mixture stands to calcite."""

    water: Solution
    shares: tuple[ArrayLike, ...]
    ph: Value
    saturation: Value  # index of calcite
    ccpp: Value  # mg/L CaCO3 that would precipitate (+) or dissolve (-)
    of_parts: tuple[Value, ...]  # the same of each water by itself
    of_mean: Value  # what one would expect: the mean of the parts by share

    def tendency(self, near: float = NEAR) -> str:
        """Of one mixture: "dissolves", "deposits" or "in balance"; nearer than `near` mg/L is balance."""
        return _tendency(float(np.asarray(self.ccpp)), near)

    def tendencies(self, near: float = NEAR) -> tuple[str, ...]:
        """The same of each part by itself."""
        return tuple(_tendency(float(np.asarray(part)), near) for part in self.of_parts)


def _tendency(ccpp: float, near: float) -> str:
    if ccpp != ccpp:
        return "unknown"
    return "deposits" if ccpp > near else "dissolves" if ccpp < -near else "in balance"


def mixed_balance(waters: Sequence[Solution], shares: Sequence[ArrayLike], *, data: str | None = None) -> MixedBalance:
    """Waters mixed in shares (taken relative to their sum; arrays broadcast), with pH, saturation and lime."""
    water = mix(waters, shares, data=data)
    species = speciate(water)
    parts = tuple(precipitation_potential(part, data=data) for part in waters)
    whole = sum(np.asarray(share, dtype=float) for share in shares)
    mean = sum(np.asarray(share) / whole * part for share, part in zip(shares, parts, strict=True))
    return MixedBalance(
        water,
        tuple(shares),
        species.ph,
        species.si_calcite,
        precipitation_potential(water, data=data),
        parts,
        float(mean) if np.ndim(mean) == 0 else mean,
    )


def least_balanced(first: Solution, second: Solution, *, data: str | None = None) -> MixedBalance:
    """The mixture of two waters that dissolves most lime (or deposits least), to the nearest 1/40 of share."""
    share = np.linspace(0.0, 1.0, SCAN)
    potential = precipitation_potential(mix([first, second], [share, 1.0 - share], data=data), data=data)
    if np.all(np.isnan(potential)):
        return mixed_balance([first, second], [0.5, 0.5], data=data)
    worst = float(share[int(np.nanargmin(potential))])
    return mixed_balance([first, second], [worst, 1.0 - worst], data=data)
