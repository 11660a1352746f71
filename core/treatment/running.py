"""How often hard water reaches the tap: a simulation of days, and the reserve that keeps it rare.

    Habits(day_to_day=0.3, weekend=1.2, guest_days=14, guest_factor=1.5, away_days=21, unknown=0.15)
    draw_use(load [mol/day], habits, households=2000, days=365, seed=1) -> mol/day, axes (day, household)
    run_out(use, capacity [mol], reserve [mol], longest=inf [day], twin=False) -> RunOut
    reserve_for(use, capacity, allowed=1.0 [day/year], longest=inf) -> mol
    compare_reserves(use, capacity, load, allowed, longest) -> dict[str, RunOut]     computed, one day, a quarter

One tank with a meter regenerates in the night after the meter has reached its setting; what is drawn on the day beyond
the capacity is hard. All figures of habit are assumptions (common practice, no source) and named, so that the user can
replace them.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import inf, log, sqrt

import numpy as np
from numpy.typing import ArrayLike, NDArray

from core.treatment.softener import reserve_of_days, reserve_of_share

Floats = NDArray[np.float64]

HOUSEHOLDS, DAYS = 2000, 365
_VISIT, _HOLIDAY = 3, 7  # days a visit or a holiday lasts
_TRIED = 9  # reserves tried at once when one is looked for; twice, so the answer is within 1/64 of the capacity


@dataclass(frozen=True, slots=True)
class Habits:
    """How the use of a household varies; common practice, no source."""

    day_to_day: float = 0.30  # standard deviation of a day over its mean
    weekend: float = 1.20  # a Saturday or Sunday over a working day
    guest_days: float = 14.0  # days a year with guests
    guest_factor: float = 1.5  # use on such a day over an ordinary one
    away_days: float = 21.0  # days a year with nobody at home
    unknown: float = 0.15  # how far this household's mean may lie from the one entered, as a share


@dataclass(frozen=True, slots=True)
class RunOut:
    """What a year brings, averaged over the households; arrays have the shape of the reserves asked for."""

    reserve: float | Floats  # mol
    hard_days: float | Floats  # day/year on which hard water reaches the tap
    hard_days_bad: float | Floats  # day/year, exceeded by one household in ten
    households_spared: float | Floats  # share with no such day at all
    hard_share: float | Floats  # share of the water
    regenerations: float | Floats  # 1/year
    unused: float | Floats  # share of the capacity that a regeneration throws away


def draw_use(
    load: float,
    habits: Habits | None = None,
    *,
    households: int = HOUSEHOLDS,
    days: int = DAYS,
    seed: int | np.random.Generator = 1,
) -> Floats:
    """Hardness to be taken up on each day by each household. [mol/day], axes (day, household)

    load is the average of an ordinary day [mol/day]; guests add to it and leave takes from it. Days are log-normal,
    the same seed gives the same days.
    """
    habits = habits or Habits()
    rng = np.random.default_rng(seed)
    weekday = np.where(np.arange(days) % 7 < 5, 1.0, habits.weekend) * 7.0 / (5.0 + 2.0 * habits.weekend)
    shape = (days, households)
    use = _spread(rng, habits.day_to_day, shape)
    use *= weekday[:, None] * (load * _spread(rng, habits.unknown, (1, households)))
    use *= np.where(_blocks(rng, habits.guest_days, _VISIT, shape), habits.guest_factor, 1.0)
    use[_blocks(rng, habits.away_days, _HOLIDAY, shape)] = 0.0
    return use


def _spread(rng: np.random.Generator, deviation: float, shape: tuple[int, int]) -> Floats:
    """Log-normal factors of mean one with this standard deviation."""
    width = sqrt(log(1.0 + deviation * deviation))
    return np.exp(rng.standard_normal(shape) * width - 0.5 * width * width)


def _blocks(rng: np.random.Generator, days_a_year: float, length: int, shape: tuple[int, int]) -> NDArray[np.bool_]:
    """Days that belong to a block of this length, so many days a year on average."""
    share = min(days_a_year / 365.0, 1.0)
    starts = rng.random((shape[0] + length - 1, shape[1])) < 1.0 - (1.0 - share) ** (1.0 / length)
    total = np.cumsum(starts, axis=0, dtype=np.int32)
    inside = total[length - 1 :].copy()
    inside[1:] -= total[: shape[0] - 1]
    return inside > 0


def run_out(use: Floats, capacity: float, reserve: ArrayLike, *, longest: float = inf, twin: bool = False) -> RunOut:
    """Follow every household through its days: when does it regenerate, when is its water hard.

    use [mol/day] as from `draw_use`; capacity and reserve in mol, the latter any shape; longest is the calendar's limit
    [day]. With twin the second tank takes over at once, and only a day above both tanks is hard.
    """
    reserves = np.asarray(reserve, dtype=float)
    setting = capacity - reserves.reshape(-1, 1)
    days, households = use.shape
    shape = (setting.size, households)
    spent, age, hard_days, hard, number, unused = (np.zeros(shape) for _ in range(6))
    for today in use:
        spent += today
        age += 1.0
        over = np.minimum(spent - (2.0 * capacity if twin else capacity), today)
        late = over > 0.0
        hard_days += late
        hard += np.maximum(over, 0.0, out=over)
        night = (spent >= setting) | (age >= longest)
        unused += np.where(night, np.maximum(capacity - spent, 0.0), 0.0)
        number += night
        # A twin changes over in the middle of the day: what came after it is already on the other tank.
        spent = np.where(night, np.clip(spent - setting, 0.0, capacity) if twin else 0.0, spent)
        age[night] = 0.0
    years = days / 365.0
    with np.errstate(invalid="ignore", divide="ignore"):
        figures = (
            reserves.reshape(-1),
            hard_days.mean(1) / years,
            np.quantile(hard_days, 0.9, axis=1) / years,
            (hard_days == 0.0).mean(1),
            hard.sum(1) / use.sum(),
            number.mean(1) / years,
            unused.sum(1) / number.sum(1) / capacity,
        )
    return RunOut(*(float(f[0]) if reserves.ndim == 0 else f.reshape(reserves.shape) for f in figures))


def reserve_for(use: Floats, capacity: float, *, allowed: float = 1.0, longest: float = inf) -> float:
    """Smallest reserve that keeps hard water at the tap to the days allowed a year; NaN where none does. [mol]"""
    low, high = 0.0, capacity
    for _ in range(2):
        tried = np.linspace(low, high, _TRIED)
        rare = _hard_days(use, capacity, tried, longest) <= allowed
        if not rare.any():
            return float("nan")
        first = int(rare.argmax())
        if first == 0:
            return float(tried[0])
        low, high = tried[first - 1], tried[first]
    return float(high)


def _hard_days(use: Floats, capacity: float, reserves: Floats, longest: float) -> Floats:
    """Days a year with hard water for each reserve, one tank: `run_out` without the rest of its figures."""
    setting = (capacity - reserves)[:, None]
    spent = np.zeros((len(reserves), use.shape[1]))
    age, hard = np.zeros(spent.shape, dtype=np.int16), np.zeros(spent.shape, dtype=np.int16)
    for today in use:
        spent += today
        hard += spent > capacity
        night = spent >= setting
        if longest < inf:
            age += 1
            night |= age >= longest
            age[night] = 0
        spent[night] = 0.0
    return hard.mean(1) * 365.0 / len(use)


def compare_reserves(
    use: Floats, capacity: float, load: float, *, allowed: float = 1.0, longest: float = inf
) -> dict[str, RunOut]:
    """The computed reserve beside the trade's rules of thumb: one average day, and a quarter of the capacity."""
    reserves = {
        "computed": reserve_for(use, capacity, allowed=allowed, longest=longest),
        "one day": reserve_of_days(load),
        "a quarter": reserve_of_share(capacity),
    }
    run = run_out(use, capacity, np.array(list(reserves.values())), longest=longest)
    fields = RunOut.__dataclass_fields__
    return {key: RunOut(*(float(getattr(run, f)[i]) for f in fields)) for i, key in enumerate(reserves)}
