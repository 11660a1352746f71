"""What a water throws out, or takes up, until it is in balance with solids: by mass balance, closed or open to CO2."""

from __future__ import annotations

from dataclasses import dataclass
from types import MappingProxyType
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from core.chemistry.columns import (
    LN10,
    MILLI,
    OK,
    Columns,
    as_solution,
    columns,
    find,
    ln_gas,
    mark_unknown,
    settle,
    with_nan,
)
from core.chemistry.equilibrium import State
from core.chemistry.model import S, product
from core.chemistry.problem import CLOSED, CLOSED_TIED, OPEN, OPEN_TIED, Contact
from core.chemistry.reactions import SOLIDS
from core.chemistry.solution import Solution, Value
from core.chemistry.speciation import NO_WATER, Speciation, pressure
from core.chemistry.thermodynamics import check_data, evaluate
from core.constants import MOLAR_MASS_CACO3
from core.errors import InputError
from core.working import formula

Floats = NDArray[np.float64]

CARBONATES = ("calcite", "aragonite", "vaterite")
FORMING = (*CARBONATES, "brucite", "gypsum")
ROUNDS = 8  # of choosing which solids form; there are at most three
HAIR = 1e-9  # in SI: less than this above zero is saturation, not oversaturation


@dataclass(frozen=True, slots=True, eq=False)
class Saturated:
    """A water in balance with solids, and what left it to get there.

    by_solid: solid -> amount that precipitated, negative where it dissolved. [mmol/kg]
    precipitated: that amount itself where one solid was named, else the same mapping. [mmol/kg]
    solution: the water that is left, holding pH, alkalinity and dissolved carbon alike.
    speciation: its species. why: why a water has no answer (its numbers are NaN); empty where it has one.
    """

    by_solid: MappingProxyType[str, Value]
    solution: Solution
    speciation: Speciation
    data: str

    @property
    def precipitated(self) -> Any:
        """Amount that precipitated; a number for one solid, a mapping for several. [mmol/kg]"""
        return next(iter(self.by_solid.values())) if len(self.by_solid) == 1 else self.by_solid

    @property
    def why(self) -> str | NDArray[np.object_]:
        """Why a water has no answer; empty where it has one."""
        return self.speciation.why


def to_saturation(
    solution: Solution,
    *solids: str,
    may_dissolve: bool = True,
    p_co2: ArrayLike | None = None,
    data: str | None = None,
) -> Saturated:
    """A water brought into balance with one or several solids, by mass balance.

    solids: "calcite" (if none is named), "aragonite", "vaterite", "brucite", "gypsum"; of the three forms of calcium
    carbonate at most one, as two cannot both be in balance with one water. may_dissolve: there is solid in plenty to
    dissolve; False: only what oversaturation drives out. p_co2: open to CO2 at this pressure in atm, else closed.
    Amounts in mmol/kg water; arrays broadcast. Constants hold from 0 to 90 °C.
    """
    named = _named(solids)
    gas = None if p_co2 is None else pressure(p_co2)
    cols = columns(solution, data and check_data(data), *(() if gas is None else (gas,)))
    settled = settle(cols, solution)
    open_to = None if gas is None else ln_gas(cols, gas)
    if gas is not None:
        mark_unknown(cols, gas)
    if may_dissolve:
        state, amounts = _in_contact(cols, named, open_to)
    else:
        start = settled if open_to is None else None
        state, amounts = _oversaturated(cols, named, open_to, start)
    return _result(cols, state, solution, amounts)


def _named(solids: tuple[str, ...]) -> tuple[str, ...]:
    named = tuple(dict.fromkeys(solids)) or ("calcite",)
    for solid in named:
        if solid not in FORMING:
            raise InputError(
                "solids", solid, f"{solid!r} is not a solid known here; accepted are {', '.join(FORMING)}."
            )
    carbonates = [s for s in named if s in CARBONATES]
    if len(carbonates) > 1:
        said = " and ".join(carbonates)
        raise InputError("solids", said, f"{said} cannot both be in balance with one water; name one form of CaCO3.")
    return named


def contact_with(cols: Columns, solid: str) -> Contact:
    """A solid as the equilibrium loop takes it."""
    record = SOLIDS[cols.data][solid]
    h, c, s, water = record.made
    ln_k = LN10 * evaluate(record.log_k, cols.temp_c)
    return Contact(cols.components.index(record.of), (h, c, s), water, ln_k)


def _in_contact(cols: Columns, solids: tuple[str, ...], open_to: Floats | None) -> tuple[State, dict[str, Floats]]:
    """Every solid named is there and in balance; what each gave or took."""
    contacts = {solid: contact_with(cols, solid) for solid in solids}
    carbonate = next((s for s in solids if s in CARBONATES), None)
    ln_tie = None
    if "gypsum" in contacts and carbonate:
        ln_tie = contacts.pop("gypsum").ln_k - contacts[carbonate].ln_k
    closure = (CLOSED, CLOSED_TIED, OPEN, OPEN_TIED)[2 * (open_to is not None) + (ln_tie is not None)]
    state = find(cols, closure=closure, contacts=tuple(contacts.values()), ln_gas=open_to, ln_tie=ln_tie)
    return state, _amounts(cols, state, solids, tied=ln_tie is not None)


def _amounts(cols: Columns, state: State, solids: tuple[str, ...], *, tied: bool) -> dict[str, Floats]:
    model = cols.model()
    left = product(model.belongs, state.molality[model.base :])
    lost = dict(zip(cols.components, cols.totals - left, strict=True))
    amounts: dict[str, Floats] = {}
    for solid in solids:
        amounts[solid] = lost[SOLIDS[cols.data][solid].of]
    if tied:
        gypsum = cols.sulfur - state.sums[S]
        for solid in solids:
            if solid in CARBONATES:
                amounts[solid] = lost["Ca"] - gypsum
        amounts["gypsum"] = gypsum
    return amounts


def _oversaturated(
    cols: Columns, solids: tuple[str, ...], open_to: Floats | None, start: State | None
) -> tuple[State, dict[str, Floats]]:
    """Only solids that the water is oversaturated with form; found by trying, a few rounds, which ones do."""
    state = start.copy() if start else find(cols, closure=CLOSED if open_to is None else OPEN, ln_gas=open_to)
    forms = np.array([_index(cols, state, solid) > HAIR for solid in solids])
    amounts = {solid: np.zeros_like(cols.temp_c) for solid in solids}
    pending = np.any(forms, axis=0) & (cols.why == OK)
    for _ in range(ROUNDS):
        if not pending.any():
            break
        for pattern in np.unique(forms[:, pending], axis=1).T:
            rows = np.flatnonzero(pending & np.all(forms == pattern[:, None], axis=0))
            _try_pattern(cols, solids, pattern, rows, open_to, state, amounts, forms, pending)
    return state, amounts


def _try_pattern(
    cols: Columns,
    solids: tuple[str, ...],
    pattern: NDArray[np.bool_],
    rows: NDArray[np.intp],
    open_to: Floats | None,
    state: State,
    amounts: dict[str, Floats],
    forms: NDArray[np.bool_],
    pending: NDArray[np.bool_],
) -> None:
    """Solve the waters in which the same solids form; keep those where that was right, mend the others."""
    part = cols.part(rows)
    gas = None if open_to is None else open_to[rows]
    chosen = tuple(s for s, yes in zip(solids, pattern, strict=True) if yes)
    if chosen:
        found, made = _in_contact(part, chosen, gas)
    else:
        found, made = find(part, closure=CLOSED if gas is None else OPEN, ln_gas=gas), {}
    wrong = np.zeros(rows.size, dtype=bool)
    for i, solid in enumerate(solids):
        if solid in made:
            turned = made[solid] < 0.0
            forms[i, rows[turned]] = False
        else:
            turned = _index(part, found, solid) > HAIR
            forms[i, rows[turned]] = True
        wrong |= turned
        amounts[solid][rows] = made.get(solid, np.zeros(rows.size))
    state.put(rows, found)
    cols.why[rows] = part.why
    pending[rows] = wrong & (part.why == OK)


def _index(cols: Columns, state: State, solid: str) -> Floats:
    return Speciation(cols, state, NO_WATER).flat_si(solid)


def _result(cols: Columns, state: State, given: Solution, amounts: dict[str, Floats]) -> Saturated:
    changed: dict[str, Floats] = {}
    fields = {"Ca": "ca", "Mg": "mg"}
    for solid, amount in amounts.items():
        of = SOLIDS[cols.data][solid].of
        before = changed.get(fields[of], cols.totals[cols.components.index(of)])
        changed[fields[of]] = before - amount
        if solid == "gypsum":
            changed["so4"] = cols.sulfur - amount
    by_solid = {solid: cols.out(with_nan(cols, amount / MILLI)) for solid, amount in amounts.items()}
    left = as_solution(cols, state, given, **changed)
    return Saturated(MappingProxyType(by_solid), left, Speciation(cols, state, left), cols.data)


@formula(
    "Calcium carbonate precipitation potential",
    "CCPP = 100.086 × (Ca before − Ca in balance with calcite)",
    unit="mg/kg CaCO3",
    takes={"solution": "", "solid": ""},
    source="SM2330",
    validity="closed to gas; 0 to 90 °C; what could precipitate, not how fast",
)
def precipitation_potential(solution: Solution, solid: str = "calcite", *, data: str | None = None) -> Value:
    """Calcium carbonate that must precipitate (+) or dissolve (-) for balance, closed to gas [SM2330]. [mg/kg CaCO3]"""
    return MOLAR_MASS_CACO3 * to_saturation(solution, _carbonate_only(solid), data=data).precipitated


@formula(
    "Calcite dissolution capacity",
    "D = −CCPP",
    unit="mg/kg CaCO3",
    takes={"solution": "", "solid": ""},
    source="DIN38404-10",
    validity="closed to gas; 0 to 90 °C",
)
def dissolution_capacity(solution: Solution, solid: str = "calcite", *, data: str | None = None) -> Value:
    """Calcium carbonate the water would dissolve, minus the precipitation potential [DIN38404-10]. [mg/kg CaCO3]"""
    return -1.0 * precipitation_potential(solution, solid, data=data)


def ph_at_saturation(solution: Solution, solid: str = "calcite", *, data: str | None = None) -> Value:
    """The pH of the water once it has dissolved or precipitated CaCO3 to balance, closed to gas. [-]"""
    left = to_saturation(solution, _carbonate_only(solid), data=data).solution
    return left.ph  # type: ignore[return-value]


def _carbonate_only(solid: str) -> str:
    if solid not in CARBONATES:
        raise InputError("solid", solid, f"{solid!r} is not a form of CaCO3; accepted are {', '.join(CARBONATES)}.")
    return solid
