"""The loop that finds the equilibrium of many waters at once: residual, step, freeze.

Unknown are the logarithms of the activities of H+, CO3-2 and SO4-2. Given them, each cation follows from its own
balance in closed form, or from a solid it is in contact with; so three balances remain: protons (relative to CO3-2
and H2O), carbon, sulfur. Their matrix of slopes is that of a convex function, so Newton's step needs no pivoting.
Ionic strength is a fourth unknown with its own balance. The activity of water, and the partners of fluoride and
chloride, follow one step behind: they hardly move.

Each water leaves the loop when it has converged: what its neighbours do never changes its answer.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from core.chemistry.first_guess import known_ph, scanned
from core.chemistry.model import COUNT, STRENGTH, SUMS, C, H, S, product
from core.chemistry.newton import SMALLEST, newton_step
from core.chemistry.problem import KNOWN_PH_ALK, Problem
from core.chemistry.water import debye_huckel_slopes

Floats = NDArray[np.float64]

# The step squares its error, so that the answer is far closer than the last step was long
LAST_STEP = 1e-6  # in ln(activity) and, relative, in ionic strength
TOLERANCE = 1e-10  # of the partners of fluoride and chloride, which follow a step behind
WATER_STEP = 1e-9  # in ln of the activity of water, which moves what it touches by as much and no more
ITERATIONS = 80
LARGEST_STEP = 2.5  # in ln(activity)
CHUNK = 1500  # waters at a time, so that the species table stays in the processor's cache
WATER_ACTIVITY = 0.017  # kg/mol, Raoult: a(H2O) = 1 - 0.017 Σ m, as [PA13]


@dataclass(slots=True, eq=False, repr=False)
class State:
    """Where the loop ended: activities and the molality of every species."""

    x: Floats  # 3 × waters: ln activity of H+, CO3-2, SO4-2
    ln_water: Floats
    strength: Floats  # mol/kg
    molality: Floats  # species × waters
    ion: Floats  # components × waters: activity of the free ion
    sums: Floats  # SUMS × waters
    converged: NDArray[np.bool_]

    def copy(self) -> State:
        """The same, free to be changed."""
        return State(*(getattr(self, name).copy() for name in State.__slots__))

    def put(self, rows: NDArray[np.intp], other: State, chosen: NDArray[np.bool_] | None = None) -> None:
        """Replace some of the waters by others, or by the chosen ones of them."""
        for name in State.__slots__:
            new = getattr(other, name)
            getattr(self, name)[..., rows] = new if chosen is None else new[..., chosen]


def solve(problem: Problem) -> State:
    """Equilibrium of every water in the problem; those not found are marked in `converged`."""
    n = problem.temp_c.size
    if n <= CHUNK:
        return _solve_chunk(problem)
    parts = [slice(i, i + CHUNK) for i in range(0, n, CHUNK)]
    return _joined([_solve_chunk(problem.part(part)) for part in parts])


def _joined(states: list[State]) -> State:
    fields = (np.concatenate([getattr(s, f) for s in states], axis=-1) for f in State.__slots__)
    return State(*fields)


def _first_strength(problem: Problem) -> Floats:
    """Ionic strength if nothing were paired and bicarbonate made up the charge. [mol/kg]"""
    if not problem.activity:
        return np.zeros_like(problem.temp_c)
    squares = np.square(problem.model.ion_charge)
    alkalinity = 2.0 * problem.balance[C] - problem.balance[H]
    return 0.5 * (squares @ problem.totals + 4.0 * problem.balance[S] + np.abs(alkalinity)) + 1e-7


def _start(problem: Problem, constants: tuple[Floats, Floats], strength: Floats) -> Floats:
    if problem.ln_h is None:
        return scanned(problem, constants, strength)
    by_alkalinity = problem.closure is KNOWN_PH_ALK
    return known_ph(problem, constants, strength, problem.ln_h, by_alkalinity=by_alkalinity)


class _Batch:
    """The waters still in the loop, and what the loop carries from step to step."""

    def __init__(self, problem: Problem, constants: tuple[Floats, Floats], x: Floats, strength: Floats) -> None:
        self.problem = problem
        self.ln_k, self.slopes = constants
        self.moves = np.array(problem.closure.moves, dtype=float).T
        self.x = x.copy()
        self.strength = strength.copy() if problem.activity else np.zeros_like(strength)
        self.ln_water = np.zeros_like(strength)
        self.partner = np.maximum(problem.totals[problem.model.partners], SMALLEST)

    def keep(self, live: NDArray[np.bool_]) -> None:
        """Drop the waters that have converged."""
        self.problem = self.problem.part(live)
        self.ln_k, self.slopes = self.ln_k[:, live], self.slopes[:, live]
        self.x, self.strength, self.ln_water = self.x[:, live], self.strength[live], self.ln_water[live]
        self.partner = self.partner[:, live]

    def take(self, rows: NDArray[np.intp], other: _Batch, chosen: NDArray[np.bool_]) -> None:
        """Put waters of another batch where they belong in this one."""
        self.x[:, rows] = other.x[:, chosen]
        self.strength[rows] = other.strength[chosen]
        self.ln_water[rows] = other.ln_water[chosen]
        self.partner[:, rows] = other.partner[:, chosen]

    def tie(self) -> None:
        """Put the activities that gas or solids hold where they must be."""
        if self.problem.ln_gas is not None:
            self.x[1] = self.problem.ln_gas - 2.0 * self.x[0] + self.ln_water
        if self.problem.ln_tie is not None:
            self.x[2] = self.x[1] + self.problem.ln_tie - 2.0 * self.ln_water

    def species(self) -> tuple[Floats, Floats, Floats, Floats]:
        """Molality of every species, activity of each free ion, each ion's total, slopes of the Debye-Hückel terms."""
        model, problem = self.problem.model, self.problem
        terms, by_strength = model.debye_terms(self.slopes, self.strength)
        exponent = product(model.exponents, np.concatenate((terms, self.x, self.ln_water[None])))
        exponent += self.ln_k
        for ln_partner, rows in zip(np.log(self.partner), model.partner_rows, strict=True):
            exponent[rows] += ln_partner
        molality = np.exp(exponent, out=exponent)
        per_activity = product(model.belongs, molality[model.base :])
        ion = problem.totals / np.maximum(per_activity, SMALLEST)
        for contact in problem.contacts:
            held = contact.ln_k + np.array(contact.made, dtype=float) @ self.x + contact.water * self.ln_water
            ion[contact.component] = np.exp(held)
        molality[model.base :] *= ion[model.of]
        self._share_partners(molality, ion, per_activity)
        return molality, ion, ion * per_activity, by_strength

    def _share_partners(self, molality: Floats, ion: Floats, per_activity: Floats) -> None:
        model = self.problem.model
        for k, (component, rows, own) in enumerate(
            zip(model.partners, model.partner_rows, model.partner_own, strict=True)
        ):
            bound = molality[rows].sum(axis=0) / self.partner[k]
            free = self.problem.totals[component] / (per_activity[component] + bound)
            molality[own] *= free / np.maximum(ion[component], SMALLEST)
            ion[component] = free
            per_activity[component] += bound
            self.partner[k] = np.maximum(free, SMALLEST)

    def strength_of_guess(self) -> Floats:
        """Ionic strength of the first guess, where a solid or gas may have changed it a thousandfold."""
        self.tie()
        molality, *_ = self.species()
        return np.clip(self.problem.model.sums[STRENGTH] @ molality, 1e-7, 3.0)

    def step(self) -> NDArray[np.bool_]:
        """One Newton step for every water in the batch; says which have converged."""
        self.tie()
        partner_before = self.partner.copy()
        ln_water_before = self.ln_water
        molality, _, totals, by_strength = self.species()
        model = self.problem.model
        sums = product(model.sums, molality)
        molality *= product(model.debye_slopes, by_strength)
        strength_sums = product(model.strength_sums, molality)
        moved = newton_step(self.problem, sums, strength_sums, totals, self.strength)
        self._move(moved)
        if self.problem.activity:
            self.ln_water = np.log(np.maximum(1.0 - WATER_ACTIVITY * sums[COUNT], 0.01))
        done = np.max(np.abs(moved[:-1]), axis=0) < LAST_STEP
        done &= np.abs(moved[-1]) < LAST_STEP * (self.strength + 1e-6)
        done &= np.abs(self.ln_water - ln_water_before) < WATER_STEP
        if self.partner.size:
            done &= np.max(np.abs(self.partner / partner_before - 1.0), axis=0) < TOLERANCE
        return done

    def _move(self, moved: Floats) -> None:
        """Go where the step says, but not too far at once."""
        activities = moved[:-1]
        np.clip(activities, -LARGEST_STEP, LARGEST_STEP, out=activities)
        self.x += self.moves @ activities
        self.strength = np.clip(self.strength + moved[-1], 0.2 * self.strength, 5.0 * self.strength)


def _solve_chunk(problem: Problem) -> State:
    n = problem.temp_c.size
    constants = problem.model.ln_k(problem.temp_c), np.array(debye_huckel_slopes(problem.temp_c))
    strength = _first_strength(problem)
    with np.errstate(all="ignore"):
        x = _start(problem, constants, strength)
        final = _Batch(problem, constants, x, strength)
        batch = _Batch(problem, constants, x, strength)
        if problem.activity and (problem.contacts or problem.ln_gas is not None):
            batch.strength = batch.strength_of_guess()
    where = np.arange(n)
    converged = np.zeros(n, dtype=bool)
    with np.errstate(all="ignore"):
        for _ in range(ITERATIONS):
            done = batch.step()
            if done.any():
                fresh = done & ~converged[where]
                final.take(where[fresh], batch, fresh)
                converged[where[fresh]] = True
                live = ~converged[where]
                left = np.count_nonzero(live)
                if left == 0:
                    break
                if left < 0.7 * where.size:
                    batch.keep(live)
                    where = where[live]
        live = ~converged[where]
        final.x[:, where[live]] = batch.x[:, live]
        return _closing_state(final, converged)


def _closing_state(final: _Batch, converged: NDArray[np.bool_]) -> State:
    with np.errstate(all="ignore"):
        final.tie()
        molality, ion, _, _ = final.species()
        sums = product(final.problem.model.sums[:SUMS], molality)
    return State(final.x, final.ln_water, final.strength, molality, ion, sums, converged)
