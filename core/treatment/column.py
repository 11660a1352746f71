"""A softener column as a row of mixing cells at local equilibrium: regeneration, then service to an end
point.

    FeedWater(calcium, magnesium, sodium, potassium=0, chloride=0 [mmol/L], pairing=None)
    feed_water(solution) -> FeedWater  with the ion pairs of a core.chemistry Solution
    fresh(water, ...) / exhausted(water, ...) -> Column  resin in sodium form / in equilibrium with the water
    regenerate(column, water, salt_dose, ...) -> Waste              changes the column
    serve(column, water, bed_volumes, steps) -> Curve               changes the column

A whole cycle with its figures is `column_run.run_column`.

What it is: an equilibrium ceiling. Kinetics, channelling and wear take 16 to 30 % off it in practice: see
`resin.PRACTICE_FACTOR`. 1 L of water counts as 1 kg; the bed's voids hold their volume of water.

Two ways to move water, chosen by what the water does to the resin:
* brine and displacement pass as plugs, one cell at a time: each cell's water is replaced by its upstream
neighbour's
  and comes to equilibrium with the resin it now touches;
* service water is hundreds of times weaker than the resin, so it passes in larger steps through stirred cells
  (implicit in time), and all cells on one diagonal of the (step, cell) table are solved at once.
Both keep the amount of every ion exactly.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike, NDArray

from core.chemistry import Solution, Speciation, speciate
from core.constants import MOLAR_MASS_KCL, MOLAR_MASS_NACL
from core.errors import InputError
from core.treatment.exchange import CHARGE, IONS, RESIN_CAPACITY, Floats, equilibrate, exchange_constants

VOIDS = 0.38  # of a settled bed; 0.36 to 0.40, from memory
CELLS = 20
STEPS = 320  # of service water; halving them moves the breakthrough by less than 0.3 %
_SALTS = {"NaCl": (2, MOLAR_MASS_NACL), "KCl": (3, MOLAR_MASS_KCL)}
_FREE_IONS = (("ca", "Ca+2"), ("mg", "Mg+2"), ("na", "Na+"), ("k", "K+"))


@dataclass(frozen=True, slots=True)
class FeedWater:
    """Water that a column softens; arrays broadcast, one element a case."""

    calcium: ArrayLike  # mmol/L
    magnesium: ArrayLike  # mmol/L
    sodium: ArrayLike  # mmol/L
    potassium: ArrayLike = 0.0  # mmol/L
    chloride: ArrayLike = 0.0  # mmol/L, only for what goes to the drain
    pairing: Floats | None = None  # total / free of Ca, Mg, Na, K as it comes and softened, axes (2, ion, case)

    def equivalents(self) -> Floats:
        """Ca, Mg, Na, K of the water, first axis the ion. [eq/kg]"""
        ions = np.broadcast_arrays(self.calcium, self.magnesium, self.sodium, self.potassium)
        ions = np.stack([np.asarray(ion, dtype=float).reshape(-1) for ion in ions])
        return ions * CHARGE[:, None] / 1000.0


def feed_water(solution: Solution) -> FeedWater:
    """Feed of a column from a water of core.chemistry, with what its anions bind before and after softening.

    Ions in mmol/kg water, taken as mmol/L. The pairs (CaSO4, MgHCO3+ and the like) hold back part of the
    hardness from the resin, so they raise the leakage: by a tenth in usual water, by a quarter in gypsum
    water.
    """
    raw = speciate(solution)
    hardness = np.add(solution.ca, solution.mg)
    trace = 1e-6  # of the hardness is left, so that what remains has a ratio
    softened = replace(
        raw.solution,
        ph=None,
        alkalinity=raw.alkalinity,
        dic=raw.dic,
        ca=np.multiply(solution.ca, trace),
        mg=np.multiply(solution.mg, trace),
        na=solution.na + 2.0 * (1.0 - trace) * hardness,
    )
    waters = ((solution, raw), (softened, speciate(softened)))
    pairing = np.array([[_total_over_free(*water, *ion) for ion in _FREE_IONS] for water in waters])
    return FeedWater(solution.ca, solution.mg, solution.na, solution.k, solution.cl, pairing.reshape(2, len(IONS), -1))


def _total_over_free(water: Solution, species: Speciation, field: str, ion: str) -> Floats:
    total = np.asarray(getattr(water, field), dtype=float)
    if not np.any(total):
        return np.ones(total.shape)  # none of it in the water, and none among its species
    free = 1000.0 * np.asarray(species.molalities[ion], dtype=float)
    return np.where(total > 0.0, total / np.where(total > 0.0, free, 1.0), 1.0) * np.ones_like(water.temp_c)


@dataclass(frozen=True, slots=True)
class Resin:
    """A resin in its bed."""

    capacity: float = RESIN_CAPACITY  # eq/L of settled bed
    voids: float = VOIDS
    constants: tuple[float, float, float, float] | None = None  # as `exchange_constants`, which they replace

    def exchange_constants(self) -> Floats:
        """Gaines-Thomas constants of Ca, Mg, Na and K."""
        return exchange_constants(self.capacity) if self.constants is None else np.array(self.constants)


STANDARD_RESIN = Resin()


@dataclass(slots=True)
class Column:
    """State of a column: ions on the resin and in the voids, eq per litre of bed, axes (ion, case, cell)."""

    resin: Floats
    pore: Floats
    log_x: Floats  # (case, cell)
    capacity: float  # eq/L
    voids: float
    constants: Floats  # (4,)

    @property
    def fractions(self) -> Floats:
        """Equivalent fractions on the resin, axes (ion, case, cell). [-]"""
        return self.resin / self.capacity

    def turned(self) -> Column:
        """The same column seen from its other end; a view, so what happens to it happens to this one."""
        return Column(
            self.resin[..., ::-1],
            self.pore[..., ::-1],
            self.log_x[..., ::-1],
            self.capacity,
            self.voids,
            self.constants,
        )


class Waste(NamedTuple):
    """What a regeneration sends to the drain, per litre of bed and case."""

    volume: Floats  # kg water per L of bed (BV)
    brine: Floats  # BV, the part of it that was brine
    fed: Floats  # eq per L of bed that went in, axes (ion, case)
    ions: Floats  # eq per L of bed that came out, axes (ion, case)
    peak: Floats  # mmol/L of hardness, the highest


class Curve(NamedTuple):
    """What leaves a column in service."""

    volume: Floats  # BV fed, axes (case, step)
    ions: Floats  # eq/kg, axes (ion, case, step)

    @property
    def hardness(self) -> Floats:
        """Hardness that leaves, axes (case, step). [mmol/L]"""
        return 500.0 * (self.ions[0] + self.ions[1])


def _column(water: Floats, resin_share: Floats, log_x: float, cells: int, resin: Resin) -> Column:
    capacity, voids = resin.capacity, resin.voids
    cases = water.shape[1]
    spread = np.ones((1, 1, cells))
    return Column(
        resin_share[..., None] * capacity * spread,
        water[..., None] * voids * spread,
        np.full((cases, cells), log_x),
        capacity,
        voids,
        resin.exchange_constants(),
    )


def fresh(water: FeedWater, *, cells: int = CELLS, resin: Resin = STANDARD_RESIN) -> Column:
    """Column of new resin in sodium form, its voids filled with the softened water."""
    feed = _softened(water.equivalents())
    share = np.zeros_like(feed)
    share[2] = 1.0
    return _column(feed, share, 4.0, cells, resin)


def exhausted(water: FeedWater, *, cells: int = CELLS, resin: Resin = STANDARD_RESIN) -> Column:
    """Column whose resin is in equilibrium with the water as it comes: nothing is left to exchange."""
    feed = water.equivalents()
    column = _column(feed, np.full_like(feed, 0.25), 2.0, cells, resin)
    paired = 1.0 if water.pairing is None else water.pairing[0]
    free = (feed / CHARGE[:, None] / paired)[..., None]
    # With the water held, the fractions are K m x^z: solve their sum for x (a quadratic).
    two, one = (column.constants[:, None, None] * free)[:2].sum(0), (column.constants[:, None, None] * free)[2:].sum(0)
    x = 2.0 / (one + np.sqrt(one * one + 4.0 * two))
    power = np.where(CHARGE[:, None, None] == 2.0, x * x, x)
    column.resin[:] = column.capacity * column.constants[:, None, None] * free * power
    column.log_x[:] = np.log(x)
    return column


def _softened(feed: Floats) -> Floats:
    """The water with its hardness exchanged for sodium. [eq/kg]"""
    soft = feed.copy()
    soft[2] += soft[0] + soft[1]
    soft[:2] = 0.0
    return soft


def regenerate(
    column: Column,
    water: FeedWater,
    salt_dose: ArrayLike,
    *,
    brine_strength: float = 0.10,
    slow_rinse: float = 1.5,
    fast_rinse: float = 1.5,
    counter_current: bool = False,
    soft_displacement: bool | None = None,
    salt: str = "NaCl",
) -> Waste:
    """Pass brine, displacement and rinse through the column, which is changed; returns what went to the
    drain.

    salt_dose [g/L of bed], one per case; brine_strength by weight; slow and fast rinse [BV]. Counter-
    current passes brine and slow rinse from the outlet end; the fast rinse always goes with the service
    flow. The slow rinse is softened water in counter-current and raw water in co-current, unless
    soft_displacement says otherwise.
    """
    feed = water.equivalents()
    cases = column.log_x.shape[0]
    feed = np.broadcast_to(feed, (4, cases))
    ion, molar_mass = salt_of(salt)
    molality = brine_strength / (1.0 - brine_strength) / molar_mass * 1000.0
    brine = np.zeros((4, cases))
    brine[ion] = molality
    volume = np.broadcast_to(np.asarray(salt_dose, dtype=float).reshape(-1) / molar_mass / molality, (cases,))
    soft = counter_current if soft_displacement is None else soft_displacement
    rinse = _softened(feed) if soft else feed
    bed = column.turned() if counter_current else column
    plug = _displace(bed, brine, rinse, volume, slow_rinse, water)
    if fast_rinse <= 0.0:
        return plug
    curve = serve(column, water, np.full(cases, fast_rinse), 20)
    step = curve.volume[:, :1]
    return Waste(
        plug.volume + fast_rinse,
        plug.brine,
        plug.fed + feed * fast_rinse,
        plug.ions + (curve.ions * step).sum(-1),
        np.maximum(plug.peak, curve.hardness.max(-1)),
    )


def salt_of(name: str) -> tuple[int, float]:
    """Index of the salt's ion in IONS and its molar mass [g/mol]; raises InputError for an unknown salt."""
    if name not in _SALTS:
        raise InputError("salt", name, f"The salt is {name}; accepted are: {', '.join(_SALTS)}.")
    return _SALTS[name]


def _displace(
    column: Column, brine: Floats, rinse: Floats, brine_volume: Floats, rinse_volume: float, water: FeedWater
) -> Waste:
    """Plug flow, one cell a step: brine first, then rinse; each case as long as its own brine and the rinse
    take.
    """
    cells = column.log_x.shape[1]
    pore = column.voids / cells
    brine_steps = brine_volume / pore
    steps = np.ceil(brine_steps + rinse_volume / pore - 1e-9).astype(int)
    order = np.argsort(-steps, kind="stable")  # longest first: those still running are always the first few
    resin, voids, log_x = column.resin[:, order], column.pore[:, order], column.log_x[order]
    pairs = _Pairing(water, column.constants, order)
    raw = np.ones((len(order), cells))
    left, peak = np.zeros((4, len(order))), np.zeros(len(order))
    longest = steps[order]
    for step in range(int(longest[0])):
        running = int(np.searchsorted(-longest, -step, side="left"))
        now = slice(0, running)
        leaving = voids[:, now, -1] / cells
        left[:, now] += leaving
        peak[now] = np.maximum(peak[now], 500.0 * leaving[:2].sum(0) / pore)
        salty = np.clip(brine_steps[order[now]] - step, 0.0, 1.0)
        voids[:, now, 1:] = voids[:, now, :-1].copy()
        voids[:, now, 0] = column.voids * (salty * brine[:, order[now]] + (1.0 - salty) * rinse[:, order[now]])
        raw[now, 1:] = raw[now, :-1].copy()
        raw[now, 0] = 1.0 - salty
        # A parcel keeps its strength, so its last x is the best guess; one that enters has none yet.
        sodium_form = np.maximum(resin[2:, now, 0].sum(0) / column.capacity, 0.02)
        first = np.log(sodium_form * column.voids / voids[:, now, 0].sum(0))
        guess = np.concatenate((first[:, None], log_x[now, :-1]), axis=1)
        found = equilibrate(
            resin[:, now] + voids[:, now],
            column.capacity,
            column.voids,
            pairs.constants(voids[:, now] / column.voids, now, raw[now]),
            guess,
        )
        voids[:, now] = CHARGE[:, None, None] * column.voids * found.molality
        resin[:, now], log_x[now] = found.resin, found.log_x
    column.resin[:, order], column.pore[:, order], column.log_x[order] = resin, voids, log_x
    back = np.argsort(order, kind="stable")
    fed = brine * brine_volume + rinse * (steps * pore - brine_volume)
    return Waste(steps * pore, brine_volume, fed, left[:, back], peak[back])


class _Pairing:
    """Constants of exchange, lowered for the ions that the water's anions bind in pairs; cases in the order given."""

    def __init__(self, water: FeedWater, constants: Floats, order: NDArray[np.int_]) -> None:
        self._plain = constants[:, None, None]
        self._bound = water.pairing is not None
        if not self._bound:
            return
        hard, soft = np.broadcast_to(water.pairing, (2, len(IONS), len(order)))[:, :, order, None]
        feed = water.equivalents()
        feed_hardness = np.broadcast_to(feed[0] + feed[1], order.shape)[order, None]
        self._excess = soft - 1.0
        self._rise = hard - soft  # from softened water to water as it comes
        self._per_hardness = 1.0 / feed_hardness

    def constants(self, inflow: Floats, now: slice, raw: ArrayLike = 1.0) -> Floats:
        """Constants for water of this composition [eq/kg], raw being the part of it that is not brine."""
        if not self._bound:
            return self._plain
        hardness = np.minimum((inflow[0] + inflow[1]) * self._per_hardness[now], 1.0)
        return self._plain / (1.0 + raw * (self._excess[:, now] + self._rise[:, now] * hardness))


def serve(column: Column, water: FeedWater, bed_volumes: ArrayLike, steps: int = STEPS) -> Curve:
    """Pass water through the column, which is changed; returns what leaves, step by step.

    bed_volumes [BV], one per case, are fed in equal steps.
    """
    cases, cells = column.log_x.shape
    feed = np.broadcast_to(water.equivalents(), (4, cases))
    pairs = _Pairing(water, column.constants, np.arange(cases))
    portion = (np.broadcast_to(np.asarray(bed_volumes, dtype=float).reshape(-1), (cases,)) / steps)[:, None]
    per_cell = portion * cells  # kg of water a step per litre of cell
    out = np.empty((4, cases, steps))
    flowing = np.zeros((4, cases, cells))
    position = np.arange(cells)
    charge = CHARGE[:, None, None]
    for step in range(steps + cells - 1):
        entering = np.concatenate((feed[..., None], flowing[..., :-1]), axis=2)
        active = (position <= step) & (step - position < steps)
        volume = np.where(active, per_cell, 0.0)
        found = equilibrate(
            column.resin + column.pore + volume * entering,
            column.capacity,
            column.voids + volume,
            pairs.constants(entering, slice(None)),
            column.log_x,
        )
        flowing = charge * found.molality
        column.pore[:] = column.voids * flowing
        column.resin[:], column.log_x[:] = found.resin, found.log_x
        if step >= cells - 1:
            out[:, :, step - cells + 1] = flowing[..., -1]
    return Curve(portion * np.arange(1, steps + 1), out)
