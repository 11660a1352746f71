"""What is asked of the equilibrium loop: totals, what is known of the carbonate, gas and solids in contact."""

from __future__ import annotations

from dataclasses import dataclass
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from core.chemistry.model import Model

Floats = NDArray[np.float64]


NOTHING = 1e-25  # mol/kg that stands for none in a balance solved for a logarithm


class Closure(NamedTuple):
    """Which activities move freely (columns of `moves`), and which sums of the balances they answer to."""

    moves: tuple[tuple[int, ...], ...]  # each a column over ln H+, ln CO3-2, ln SO4-2
    answers: tuple[tuple[int, ...], ...]


CLOSED = Closure(((1, 0, 0), (0, 1, 0), (0, 0, 1)), ((1, 0, 0), (0, 1, 0), (0, 0, 1)))
OPEN = Closure(((1, -2, 0), (0, 0, 1)), ((1, -2, 0), (0, 0, 1)))  # CO3-2 tied to CO2 gas
KNOWN_PH_DIC = Closure(((0, 1, 0), (0, 0, 1)), ((0, 1, 0), (0, 0, 1)))
KNOWN_PH_ALK = Closure(((0, 1, 0), (0, 0, 1)), ((-1, 2, 0), (0, 0, 1)))
CLOSED_TIED = Closure(((1, 0, 0), (0, 1, 1)), ((1, 0, 0), (0, 1, 1)))  # SO4-2 tied to CO3-2 by two calcium solids
OPEN_TIED = Closure(((1, -2, -2),), ((1, -2, -2),))


class Contact(NamedTuple):
    """A solid that fixes a cation: ln activity = ln_k + made · (ln H+, ln CO3-2, ln SO4-2) + water · ln a_w."""

    component: int
    made: tuple[int, int, int]
    water: int
    ln_k: Floats  # per water


@dataclass(slots=True, eq=False, repr=False)
class Problem:
    """What is known of a batch of waters; arrays end in the axis of the waters."""

    model: Model
    temp_c: Floats
    totals: Floats  # components × waters, mol/kg
    balance: Floats  # 3 × waters: protons, carbon, sulfur, mol/kg
    closure: Closure
    contacts: tuple[Contact, ...] = ()
    ln_gas: Floats | None = None  # ln of {CO3-2}{H+}²/a_w held by CO2 gas, if open
    ln_tie: Floats | None = None  # ln of {SO4-2}/{CO3-2}·a_w² held by gypsum and a carbonate together
    ln_h: Floats | None = None  # ln {H+}, if known
    activity: bool = True  # False: all activity coefficients 1, as the textbook does

    def part(self, rows: slice | NDArray[np.bool_]) -> Problem:
        """The same question for some of the waters."""
        return Problem(
            self.model,
            self.temp_c[rows],
            self.totals[:, rows],
            self.balance[:, rows],
            self.closure,
            tuple(c._replace(ln_k=c.ln_k[rows]) for c in self.contacts),
            None if self.ln_gas is None else self.ln_gas[rows],
            None if self.ln_tie is None else self.ln_tie[rows],
            None if self.ln_h is None else self.ln_h[rows],
            self.activity,
        )
