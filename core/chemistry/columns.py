"""Waters as columns: the fields of a Solution laid out for the equilibrium loop, and what comes back from it."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from core.chemistry.equilibrium import ITERATIONS, State, solve
from core.chemistry.model import ALWAYS, LN10, C, H, Model, model_for
from core.chemistry.problem import CLOSED, KNOWN_PH_ALK, KNOWN_PH_DIC, NOTHING, OPEN, Closure, Problem
from core.chemistry.reactions import GAS_CONSTANTS
from core.chemistry.solution import IONS, TOTALS, Solution, Value, common_shape, solved
from core.chemistry.thermodynamics import evaluate
from core.errors import InputError

Floats = NDArray[np.float64]

MILLI = 1e-3
READ_TO, READ_TO_SHARE = 1e-6, 0.01  # mol/kg and share of it that a titration is read to
MOST_CARBON = 10.0  # mol/kg; far above what water holds at any pressure met
OK, UNKNOWN, NO_CARBON, CARBON, LOST = range(5)
REASONS = (
    "",
    "An input is not known (NaN).",
    "Even without carbonate this pH means more alkalinity than was given: pH and alkalinity do not fit together.",
    "This pH and alkalinity would need more dissolved CO2 than water holds: they do not fit together.",
    f"No equilibrium was found within {ITERATIONS} steps.",
)


@dataclass(slots=True, eq=False, repr=False)
class Columns:
    """Flat arrays of n waters, mol/kg: what the loop works on, and how to give its results their shape back."""

    shape: tuple[int, ...]
    data: str
    temp_c: Floats
    components: tuple[str, ...]
    totals: Floats
    sulfur: Floats
    ph: Floats | None
    alkalinity: Floats | None
    dic: Floats | None
    why: NDArray[np.int8]

    def out(self, flat: Floats) -> Value:
        """A result in the shape of the water: a float for one water."""
        return float(flat[0]) if self.shape == () else flat.reshape(self.shape)

    def reasons(self) -> str | NDArray[np.object_]:
        """Why a water has no answer, in words; empty where it has one."""
        if self.shape == ():
            return REASONS[self.why[0]]
        return np.array(REASONS, dtype=object)[self.why].reshape(self.shape)

    def part(self, rows: NDArray[np.intp]) -> Columns:
        """Some of the waters, as a row."""
        return Columns(
            (rows.size,),
            self.data,
            self.temp_c[rows],
            self.components,
            self.totals[:, rows],
            self.sulfur[rows],
            None if self.ph is None else self.ph[rows],
            None if self.alkalinity is None else self.alkalinity[rows],
            None if self.dic is None else self.dic[rows],
            self.why[rows],
        )

    def model(self, pairs: bool = True) -> Model:
        """The species of these waters."""
        return model_for(self.data, self.components, pairs)


def columns(solution: Solution, data: str | None = None, *others: Value) -> Columns:
    """The fields of a water as flat columns; `others` only widen the shape they broadcast to."""
    shape = common_shape(np.empty(solution.shape), *others)
    present = {IONS[name]: value for name, value in solution.items() if name in IONS}
    components = tuple(c for c in IONS.values() if c in present or c in ALWAYS)
    totals = np.zeros((len(components), int(np.prod(shape, dtype=int))))
    for i, component in enumerate(components):
        if component in present:
            totals[i] = MILLI * flat(present[component], shape)
    known = {name: getattr(solution, name) for name in ("ph", "alkalinity", "dic")}
    if all(value is not None for value in known.values()):
        known["ph"] = None  # a solved water: alkalinity and carbon are what is conserved
    made = Columns(
        shape,
        data or solution.data,
        flat(solution.temp_c, shape).copy(),
        components,
        totals,
        MILLI * flat(solution.so4, shape),
        None if known["ph"] is None else flat(known["ph"], shape).copy(),
        None if known["alkalinity"] is None else MILLI * flat(known["alkalinity"], shape),
        None if known["dic"] is None else MILLI * flat(known["dic"], shape),
        np.zeros(totals.shape[1], dtype=np.int8),
    )
    _set_aside_unknown(made, solution.why)
    return made


def flat(value: Value, shape: tuple[int, ...]) -> Floats:
    """A field as one flat column."""
    return np.broadcast_to(np.asarray(value, dtype=float), shape).reshape(-1)


def _set_aside_unknown(made: Columns, why: str | NDArray[np.object_]) -> None:
    """Mark waters with an unknown input, and put plain water in their place so that the loop stays quiet."""
    parts = [made.temp_c, made.sulfur, *(p for p in (made.ph, made.alkalinity, made.dic) if p is not None)]
    unknown = np.isnan(sum(parts) + made.totals.sum(axis=0))
    if not unknown.any():
        return
    told = np.broadcast_to(np.asarray(why, dtype=object), made.shape).reshape(-1)
    made.why[unknown] = [REASONS.index(said) if said in REASONS[1:] else UNKNOWN for said in told[unknown]]
    made.totals[:, unknown] = 0.0
    for part, plain in (
        (made.temp_c, 25.0),
        (made.sulfur, 0.0),
        (made.ph, 7.0),
        (made.alkalinity, 0.0),
        (made.dic, 0.0),
    ):
        if part is not None:
            part[unknown] = plain


def mark_unknown(cols: Columns, value: Value) -> None:
    """Mark waters for which a further input (a temperature, a pressure) is not known."""
    cols.why[np.isnan(flat(value, cols.shape)) & (cols.why == OK)] = UNKNOWN


def balance(cols: Columns) -> Floats:
    """Totals of protons (relative to CO3-2 and H2O), carbon and sulfur from alkalinity and carbon. [mol/kg]"""
    none = np.zeros_like(cols.temp_c)
    alkalinity, dic = (none if part is None else part for part in (cols.alkalinity, cols.dic))
    return np.array([2.0 * dic - alkalinity, np.maximum(dic, NOTHING), np.maximum(cols.sulfur, NOTHING)])


def find(cols: Columns, **more: Any) -> State:
    """Equilibrium of waters whose alkalinity and dissolved carbon are known (or the CO2 gas they are open to)."""
    activity = more.pop("activity", True)
    closure = more.pop("closure", CLOSED)
    problem = Problem(
        cols.model(more.pop("pairs", True)),
        cols.temp_c,
        cols.totals,
        balance(cols),
        closure,
        activity=activity,
        **more,
    )
    return _marked(cols, solve(problem))


def settle(cols: Columns, solution: Solution) -> State | None:
    """Make sure alkalinity and dissolved carbon are known, and give the state found on the way if it is theirs.

    What a water settles to is found once and kept with it, as nothing about a Solution can change.
    """
    if cols.ph is None:
        return None
    own, state = _settled(solution, cols.data)
    same = cols.shape == own.shape
    for name in ("alkalinity", "dic", "why"):
        known = getattr(own, name)
        setattr(cols, name, known.copy() if same else flat(known.reshape(own.shape), cols.shape).astype(known.dtype))
    return state if same else None


def _settled(solution: Solution, data: str) -> tuple[Columns, State]:
    kept = solution.__dict__.setdefault("_settled", {})
    if data not in kept:
        cols = columns(solution, data)
        kept[data] = cols, _at_known_ph(cols)
    return kept[data]


def _at_known_ph(cols: Columns) -> State:
    """Equilibrium of waters whose pH is known with alkalinity or carbon; fills in whichever of the two is not."""
    if cols.alkalinity is not None:
        state = _solved_at_ph(cols, 0.5 * cols.alkalinity, KNOWN_PH_ALK)
        _admit_without_carbon(cols, state, cols.alkalinity)
    elif cols.dic is not None:
        state = _solved_at_ph(cols, np.maximum(cols.dic, NOTHING), KNOWN_PH_DIC)
    else:
        raise InputError("ph, alkalinity, dic", ["ph"], "A pH alone does not make a water; give alkalinity or dic too.")
    answered = cols.why == OK
    cols.dic = np.where(answered, state.sums[C], 0.0)
    cols.alkalinity = np.where(answered, _alkalinity(state), 0.0)
    return state


def _alkalinity(state: State) -> Floats:
    return 2.0 * state.sums[C] - state.sums[H]


def _solved_at_ph(cols: Columns, known: Floats, closure: Closure) -> State:
    ln_h = None if cols.ph is None else -LN10 * cols.ph
    given = np.array([np.zeros_like(known), known, np.maximum(cols.sulfur, NOTHING)])
    problem = Problem(cols.model(), cols.temp_c, cols.totals, given, closure, ln_h=ln_h)
    return _marked(cols, solve(problem))


def _admit_without_carbon(cols: Columns, state: State, told: Floats) -> None:
    """Waters with no carbonate at all, where pH and alkalinity agree as closely as they can be read: pH is kept."""
    rows = np.flatnonzero(cols.why == NO_CARBON)
    if not rows.size:
        return
    part = cols.part(rows)
    part.alkalinity = None
    part.why[:] = OK
    found = _solved_at_ph(part, np.full(rows.size, NOTHING), KNOWN_PH_DIC)
    gap = np.abs(_alkalinity(found) - told[rows])
    admitted = (gap <= READ_TO + READ_TO_SHARE * np.abs(told[rows])) & (part.why == OK)
    if admitted.any():
        state.put(rows[admitted], found, admitted)
        cols.why[rows[admitted]] = OK


def _marked(cols: Columns, state: State) -> State:
    """Write down which waters were not solved and why."""
    lost = ~state.converged & (cols.why == OK)
    no_carbon = lost & (state.x[C] < -40.0) & (cols.alkalinity is not None)
    cols.why[lost] = LOST
    cols.why[no_carbon] = NO_CARBON
    with np.errstate(invalid="ignore"):
        cols.why[(cols.why == OK) & (state.sums[C] > MOST_CARBON)] = CARBON
    return state


def ln_gas(cols: Columns, p_co2: Value) -> Floats:
    """ln of {CO3-2}{H+}²/a_w in water open to CO2 at a partial pressure in atm."""
    model = cols.model()
    ln_k_gas = LN10 * evaluate(GAS_CONSTANTS[cols.data], cols.temp_c)
    ln_k_co2 = LN10 * evaluate(model.species[model.index("CO2")].log_k, cols.temp_c)
    return ln_k_gas + np.log(flat(p_co2, cols.shape)) - ln_k_co2


def find_open(cols: Columns, p_co2: Value) -> State:
    """Equilibrium of waters open to CO2 gas; their dissolved carbon follows the gas, alkalinity stays."""
    state = find(cols, closure=OPEN, ln_gas=ln_gas(cols, p_co2))
    cols.dic = state.sums[C].copy()
    return state


def conserved(solution: Solution, data: str) -> tuple[Value, Value, str | NDArray[np.object_]]:
    """Alkalinity [meq/kg] and dissolved carbon [mmol/kg] of a water, whichever two it was told by; why they are not."""
    if solution.alkalinity is not None and solution.dic is not None:
        return solution.alkalinity, solution.dic, solution.why
    cols = columns(solution, data)
    settle(cols, solution)
    alkalinity, dic = (with_nan(cols, part / MILLI) for part in (cols.alkalinity, cols.dic) if part is not None)
    return cols.out(alkalinity), cols.out(dic), cols.reasons()


def resolved(solution: Solution) -> Solution:
    """The same water holding pH as well, found closed to gas."""
    cols = columns(solution)
    return as_solution(cols, find(cols), solution)


def carbon(state: State) -> Floats:
    """All dissolved carbonate and CO2; a plain zero where there is none. [mol/kg]"""
    return np.where(state.sums[C] < 1e5 * NOTHING, 0.0, state.sums[C])


def with_nan(cols: Columns, flat_values: Floats) -> Floats:
    """Results with NaN where a water has no answer."""
    if not cols.why.any():
        return flat_values
    return np.where(cols.why == OK, flat_values, np.nan)


def as_solution(
    cols: Columns, state: State, given: Solution, *, temp_c: Value | None = None, **changed: Floats
) -> Solution:
    """The water found, holding pH, alkalinity and dissolved carbon; `changed` totals are flat columns in mol/kg."""
    values: dict[str, Any] = {"data": cols.data, "why": cols.reasons()}
    for name in TOTALS:
        value = getattr(given, name)
        if name in changed:
            values[name] = cols.out(with_nan(cols, changed[name] / MILLI))
        else:
            values[name] = value
    values["temp_c"] = given.temp_c if temp_c is None else temp_c
    values["ph"] = cols.out(with_nan(cols, -state.x[H] / LN10))
    values["alkalinity"] = cols.out(with_nan(cols, _alkalinity(state) / MILLI))
    values["dic"] = cols.out(with_nan(cols, carbon(state) / MILLI))
    return solved(**values)
