"""One dose seen three ways: by the books, at equilibrium, in practice; with what it does to the water.

    plan(process, water, goal=None, excess=..., stages=0, ph=8.5, heated=60) -> Plan

A Plan holds the book dose and what that dose leaves by equivalents, at equilibrium and in practice; the dose that
equilibrium would need for the same goal; sludge, sodium, CO2; and lime that heating can still throw out.
"""

from __future__ import annotations

from dataclasses import dataclass

from core.chemistry import Solution, speciate
from core.constants import ATOMIC_WEIGHTS
from core.errors import InputError
from core.treatment.precipitation import (
    EXCESS_LIME,
    HEATER_MAGNESIUM,
    BookDose,
    Goal,
    book_dose,
    co2_first,
    co2_second,
    lime_sludge,
    magnesium_sludge,
)
from core.treatment.precipitation_water import (
    EquilibriumDose,
    Recarbonated,
    Settled,
    equilibrium_dose,
    left_in_practice,
    lime_when_heated,
    raw_water,
    recarbonate,
    settle,
    to_least_calcium,
)


@dataclass(frozen=True, slots=True)
class Plan:
    """A dose three ways. Amounts in mmol/L, weights in mg/L, of pure chemicals."""

    process: str
    book: BookDose  # the dose by equivalents, with the residual in practice
    settled: Settled  # what that dose leaves at equilibrium
    equilibrium: EquilibriumDose  # the dose equilibrium needs for the same goal
    practice: Solution  # the water of a plant with the book dose, before CO2
    co2_book: tuple[float, ...]  # mg/L, a stage each
    recarbonation: tuple[Recarbonated, ...]  # of the practice water, a stage each
    final: Solution  # the practice water after CO2
    saturation: float  # index of calcite of the final water
    sodium: float  # mg/L in the final water
    sludge: tuple[float, float]  # dry mg/L: in practice, at equilibrium; without what CO2 settles
    lime_heated: float  # mg/L CaCO3 that the final water can still throw out when heated
    magnesium_for_heaters: bool  # whether so much magnesium is left that it deposits in heaters


def plan(
    process: str,
    water: Solution,
    goal: Goal | None = None,
    *,
    excess: float = EXCESS_LIME,
    stages: int = 0,
    ph: float = 8.5,
    heated: float = 60.0,
) -> Plan:
    """The dose of one process for a goal, three ways; see `precipitation.book_dose` for goals.

    stages: of recarbonation, 0 to 2; ph: to which CO2 brings the water. heated: temperature of the heater, °C. The
    water must be one water, not an array.
    """
    if stages not in (0, 1, 2):
        raise InputError("stages", stages, "CO₂ is fed in no, one or two stages.")
    raw = raw_water(water)
    book = book_dose(process, raw, goal, excess)
    settled = settle(water, book.dose)
    calcium = sum(book.practice_calcium) / 2.0  # the middle of what the books name
    beyond = book.excess if book.dose.lime else 0.0  # calcium of the excess lime, in solution until CO2 takes it
    practice = left_in_practice(settled.water, calcium + beyond, book.practice_magnesium)
    recarbonation = _recarbonated(practice, calcium, stages, ph)
    final = recarbonation[-1].water if recarbonation else practice
    sludge = lime_sludge(raw.calcium, max(book.dose.lime - beyond, 0.0), calcium) + magnesium_sludge(
        raw.magnesium, book.practice_magnesium
    )
    return Plan(
        process,
        book,
        settled,
        equilibrium_dose(process, water, goal, excess),
        practice,
        _co2_book(book, stages, calcium - book.calcium),
        recarbonation,
        final,
        speciate(final).si_calcite,  # type: ignore[arg-type]
        final.na * ATOMIC_WEIGHTS["Na"],  # type: ignore[operator, arg-type]
        (sludge, settled.dry_sludge),  # type: ignore[arg-type]
        lime_when_heated(final, heated),  # type: ignore[arg-type]
        book.practice_magnesium > HEATER_MAGNESIUM,
    )


def _recarbonated(practice: Solution, calcium: float, stages: int, ph: float) -> tuple[Recarbonated, ...]:
    """CO2 as a plant feeds it: straight to the pH, or first to least calcium, of which practice leaves some more."""
    if stages == 0:
        return ()
    if stages == 1:
        return (recarbonate(practice, ph=ph),)
    first = to_least_calcium(practice)
    return first, recarbonate(left_in_practice(first.water, calcium, first.water.mg), ph=ph)  # type: ignore[arg-type]


def _co2_book(book: BookDose, stages: int, carbonate: float) -> tuple[float, ...]:
    """CO2 by equivalents [mg/L]; in one stage the excess lime stays in solution and takes bicarbonate too.

    carbonate: calcium left as carbonate, mmol/L; what was not dosed for takes no CO2, neither calcium nor magnesium.
    """
    magnesium = book.practice_magnesium - book.magnesium if book.excess else 0.0
    first = co2_first(book.excess, magnesium)
    if stages == 0:
        return ()
    if stages == 2:
        return first, co2_second(carbonate, magnesium)
    return (first + co2_second(carbonate + book.excess, magnesium),)
