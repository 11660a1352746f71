"""A data set laid out as arrays: one row a species, so that a loop over thousands of waters is a few array calls.

Rows are grouped by the total they count in: first what is made of water, carbonate and sulfate alone, then each
ion with its pairs. Only totals that occur get rows.
"""

from __future__ import annotations

import re
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from core.chemistry.reactions import SPECIES, Species
from core.chemistry.thermodynamics import DAVIES_LINEAR, NEUTRAL_LINEAR, temperature_terms
from core.chemistry.water import debye_huckel_slopes

Floats = NDArray[np.float64]

LN10 = float(np.log(10.0))
DAVIES = -1.0  # stands for an ion without a size
ALWAYS = ("Ca", "Mg", "Na", "Cl")  # totals that get rows even where they are zero
HELD = ("Ca", "Mg")  # ions that a solid may hold
PARTNERS = ("F", "Cl")  # anions that pair with cations besides carbonate and sulfate

# Rows of the sums taken over all species in one matrix product: protons, carbon, sulfur and ionic strength; their
# slopes by ln of the activities of H+, CO3-2 and SO4-2, were no total shared; all molalities together.
H, C, S, STRENGTH = range(4)
SLOPES = slice(4, 16)
COUNT = 16
SUMS = 17


ONE_THREAD = 250_000  # multiplications in a product that the linear-algebra library does without a second thread


def product(matrix: Floats, columns: Floats) -> Floats:
    """Matrix product, in pieces small enough for one thread: waking a second costs more than it brings here."""
    rows, inner = matrix.shape
    n = columns.shape[1]
    width = ONE_THREAD // (rows * inner)
    if n <= width:
        return matrix @ columns
    out = np.empty((rows, n))
    for start in range(0, n, width):
        part = slice(start, start + width)
        np.matmul(matrix, columns[:, part], out=out[:, part])
    return out


class Model:
    """Species of one data set for the totals that occur; `pairs=False` keeps free ions and the carbonic acid only."""

    def __init__(self, data: str, components: tuple[str, ...], pairs: bool) -> None:
        self.data = data
        self.components = components
        self.species = _rows(data, components, pairs)
        self.names = tuple(s.name for s in self.species)
        bare = {re.sub(r"[+-]\d?$", "", name): i for i, name in enumerate(self.names)}
        self.row_of = bare | {name: i for i, name in enumerate(self.names)}
        self.base = sum(1 for s in self.species if not s.of)
        made = np.array([s.made for s in self.species], dtype=float).T
        self.made = np.ascontiguousarray(made[:3].T)  # species × (H+, CO3-2, SO4-2)
        self.water = made[3][:, None]
        self.charge = np.array([s.charge for s in self.species], dtype=float)
        self.coefficients = np.array([s.log_k for s in self.species])
        self.ion_charge = np.array([next(s.charge for s in self.species if s.of == of) for of in components], float)
        self._lay_out_sums(made[:3])
        self._lay_out_activity()
        self._lay_out_partners()

    def _lay_out_sums(self, made: Floats) -> None:
        h, c, s = made
        z = 0.5 * self.charge**2  # so that its sum is the ionic strength
        slopes = [row * by for row in (h, c, s, z) for by in (h, c, s)]
        belongs = np.array([[s.of == of for s in self.species] for of in self.components], dtype=float)
        several = belongs.sum(axis=1) > 1.0
        self.paired = [i for i, of in enumerate(self.components) if several[i] or of in HELD]
        alone = np.delete(belongs, self.paired, axis=0).sum(axis=0)  # their molality is their total, come what may
        self.moves_with_strength = (1.0 - alone)[:, None]
        by_ion = [row * belongs[i] for row in (h, c, s, z) for i in self.paired]
        self.sums = np.array([h, c, s, z, *slopes, np.ones_like(h), *by_ion])
        self.strength_sums = np.array([h, c, s, z, *(belongs[i] for i in self.paired)])
        self.belongs = np.ascontiguousarray(belongs[:, self.base :])
        self.of = np.array([self.components.index(s.of) for s in self.species[self.base :]], dtype=int)

    def _lay_out_partners(self) -> None:
        present = [p for p in PARTNERS if any(s.partner == p for s in self.species)]
        self.partners = [self.components.index(p) for p in present]
        self.partner_rows = [[i for i, s in enumerate(self.species) if s.partner == p] for p in present]
        self.partner_own = [[i for i, s in enumerate(self.species) if s.of == p] for p in present]

    def _lay_out_activity(self) -> None:
        """Activity coefficients as a product of matrices: one column per ion size met, two linear in I and A·I."""
        sizes = [DAVIES if s.size is None else s.size for s in self.species]
        self.sizes = np.array(sorted({a for a, s in zip(sizes, self.species, strict=True) if s.charge}))
        self.is_davies = (self.sizes == DAVIES)[:, None]
        known = len(self.sizes)
        self.debye = np.zeros((len(self.species), known + 2))
        for row, (size, s) in enumerate(zip(sizes, self.species, strict=True)):
            if s.charge:
                self.debye[row, np.flatnonzero(self.sizes == size)] = LN10 * s.charge**2
            if s.charge and size == DAVIES:
                self.debye[row, known + 1] = -LN10 * DAVIES_LINEAR * s.charge**2
            elif s.linear is not None or not s.charge:
                self.debye[row, known] = -LN10 * (NEUTRAL_LINEAR if s.linear is None else s.linear)
        self.debye_slopes = self.debye * self.moves_with_strength
        self.exponents = np.hstack((self.debye, self.made, self.water))

    def index(self, name: str) -> int:
        """Row of a species, by its name with or without the charge: "Ca+2" or "Ca". KeyError if there is none."""
        return self.row_of[name]

    def ln_k(self, temp_c: Floats) -> Floats:
        """ln K of each species (rows) in each water (columns)."""
        return LN10 * product(self.coefficients, temperature_terms(temp_c))

    def debye_terms(self, slopes: Floats, strength: Floats) -> tuple[Floats, Floats]:
        """What `debye` multiplies to minus ln of the activity coefficients, and its slope by ionic strength.

        slopes: A and B of Debye and Hückel, one row each.
        """
        a, b = slopes
        root = np.sqrt(strength)
        known = len(self.sizes)
        terms = np.empty((known + 2, strength.size))
        by_strength = np.empty_like(terms)
        part = np.where(self.is_davies, 1.0, self.sizes[:, None] * b)
        part *= root
        part += 1.0
        np.reciprocal(part, out=part)
        np.multiply(part, a * root, out=terms[:known])
        part *= part
        np.multiply(part, a * (0.5 / np.maximum(root, 1e-9)), out=by_strength[:known])
        terms[known], by_strength[known] = strength, 1.0
        terms[known + 1], by_strength[known + 1] = a * strength, a
        return terms, by_strength

    def ln_gamma(self, row: int, temp_c: Floats, strength: Floats) -> Floats:
        """ln of the activity coefficient of one species."""
        terms, _ = self.debye_terms(np.array(debye_huckel_slopes(temp_c)), strength)
        return -(self.debye[row] @ terms)


@lru_cache(maxsize=64)
def model_for(data: str, components: tuple[str, ...], pairs: bool = True) -> Model:
    """The layout for one data set and the totals that occur, made once and kept."""
    return Model(data, components, pairs)


def _rows(data: str, components: tuple[str, ...], pairs: bool) -> tuple[Species, ...]:
    order = ("", *components)
    chosen = [
        s
        for s in SPECIES[data]
        if s.of in order
        and (not s.partner or s.partner in components)
        and (pairs or not s.of or s.made == (0, 0, 0, 0))
    ]
    if not pairs:
        chosen = [s for s in chosen if not s.partner]
    return tuple(sorted(chosen, key=lambda s: order.index(s.of)))
