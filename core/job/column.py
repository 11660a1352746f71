"""The second road to the capacity: a column of mixing cells with this job's own water, beside the trade's table."""

from __future__ import annotations

from core.chemistry import Solution
from core.job.answers import Amount, Answer, Mark, Missing, Part, say
from core.job.ledger import Ledger
from core.job.record import Job
from core.job.scale import water_of
from core.job.softener import Softener
from core.treatment.column import feed_water
from core.treatment.column_run import END_POINT, ColumnRun, run_column
from core.treatment.resin import practice_capacity
from core.units import convert
from core.working import formula


@formula(
    "Run of the column",
    "20 cells at local equilibrium: regenerated, rinsed, then served with this water to 1 gpg",
    unit="",
    takes={"solution": "", "salt_dose": "g/L", "counter_current": ""},
    source="BONNER-SMITH57",
    validity="An equilibrium ceiling: kinetics, channelling and wear are not in it. No effect of temperature on the "
    "resin's selectivity.",
)
def column_run(solution: Solution, salt_dose: float, counter_current: bool) -> ColumnRun:
    """One regeneration and the service run after it, for this water."""
    return run_column(feed_water(solution), salt_dose, counter_current=counter_current)


@formula("Capacity at equilibrium", "as the column took up", unit="eq/L", takes={"run": ""}, source="definition")
def run_capacity(run: ColumnRun) -> float:
    """Capacity of the run to its end point. [eq/L]"""
    return run.capacity


@formula("Leakage", "mean over the service run", unit="mmol/L", takes={"run": ""}, source="definition")
def run_leakage(run: ColumnRun) -> float:
    """Hardness that comes through while the bed serves. [mmol/L]"""
    return run.leakage


@formula("Hardness in the waste", "mean of brine and rinse", unit="mmol/L", takes={"run": ""}, source="definition")
def run_waste_hardness(run: ColumnRun) -> float:
    """Hardness of what goes to the drain. [mmol/L]"""
    return run.waste_hardness


@formula("Chloride in the waste", "mean of brine and rinse", unit="mg/L", takes={"run": ""}, source="definition")
def run_waste_chloride(run: ColumnRun) -> float:
    """Chloride of what goes to the drain. [mg/L]"""
    return run.waste_chloride


def assess_column(job: Job, softener: Softener) -> Part:
    """Capacity, leakage and waste by the column, with the trade's figure beside them."""
    ledger = Ledger(job)
    water = water_of(ledger)
    if softener.task is None:
        return Part("column", missing=(Missing("", "Complete the softener first."),))
    if water is None:
        return ledger.part("column", [])
    w = ledger.working
    counter = softener.task.kind == "counter-current"
    run = w.step(column_run, solution=water, salt_dose=softener.salt_dose, counter_current=counter)
    ceiling = w.step(run_capacity, run=run)
    practice = w.step(practice_capacity, ceiling=ceiling)
    return ledger.part("column", [*_capacities(ledger, softener, ceiling, practice), *_qualities(ledger, run)])


def _capacities(ledger: Ledger, softener: Softener, ceiling: float, practice: float) -> list[Answer]:
    trade = softener.part.answers["capacity"].amount.value * 2.0 / softener.bed.resin_volume
    marks = (Mark("trade's table", Amount(trade, "eq/L", "resin capacity")),)
    differs = abs(practice / trade - 1.0) if trade else 0.0
    words = (
        "More than 1 gpg comes through from the first litre at this salt setting: use more salt."
        if ceiling == 0.0
        else "The trade's table and the column agree within the 15 % that such figures hold to."
        if differs <= 0.15
        else "The trade's table says something else for this water: go by the lower one until the meter has shown."
    )
    leading = ledger.working.leading_to
    return [
        Answer(
            "practice",
            "Capacity by the column, in practice",
            Amount(practice, "eq/L", "resin capacity"),
            say(words),
            leading(practice),
            marks,
            tone="good" if differs <= 0.15 else "watch",
        ),
        Answer(
            "ceiling",
            "Capacity at equilibrium",
            Amount(ceiling, "eq/L", "resin capacity"),
            say("A ceiling that no bed reaches; practice is taken as three quarters of it."),
            leading(ceiling),
        ),
    ]


def _qualities(ledger: Ledger, run: ColumnRun) -> list[Answer]:
    w = ledger.working
    leakage = w.step(run_leakage, run=run)
    hardness, chloride = w.step(run_waste_hardness, run=run), w.step(run_waste_chloride, run=run)
    grain = convert(1.0, "gpg", "mmol/L", quantity="hardness")
    tone = "good" if leakage <= grain else "watch"
    return [
        Answer(
            "leakage",
            "Hardness that leaks through",
            Amount(leakage, "mmol/L", "hardness"),
            say("Mean of a run, by the column; indicative only."),
            w.leading_to(leakage),
            (Mark("end of a run", Amount(END_POINT, "mmol/L", "hardness")),),
            tone=tone,
        ),
        Answer(
            "waste_hardness",
            "Hardness of the waste",
            Amount(hardness, "mmol/L", "hardness"),
            say("Mean of brine and rinse."),
            w.leading_to(hardness),
        ),
        Answer(
            "waste_chloride",
            "Chloride of the waste",
            Amount(chloride, "mg/L Cl", "chloride"),
            say("Mean of brine and rinse: ask whether the sewer or the soakaway may take it."),
            w.leading_to(chloride),
        ),
    ]
