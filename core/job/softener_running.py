"""How the chosen bed runs: flows, pressure, the steps of a regeneration, salt and water a year."""

from __future__ import annotations

from core.job.answers import Amount, Answer, Mark, say
from core.job.ledger import Ledger
from core.job.softener_choice import Task
from core.treatment import hydraulics, regeneration, softener, vessel
from core.treatment.search import PRESSURE_LOSS
from core.treatment.vessel import Bed


def running_answers(ledger: Ledger, task: Task, bed: Bed, salt: float, interval: float) -> list[Answer]:
    """Flows, vessel, regeneration and yearly figures, with their working."""
    area = ledger.working.step(vessel.bed_area, diameter=bed.diameter)
    velocity = ledger.working.step(hydraulics.backwash_velocity, temperature=task.temperature)
    return [
        *_flows(ledger, task, bed, area),
        *_regeneration(ledger, area, velocity, task, salt),
        *_yearly(ledger, task, bed, area, velocity, salt, interval),
    ]


def _flows(ledger: Ledger, task: Task, bed: Bed, area: float) -> list[Answer]:
    w, peak = ledger.working, Amount(task.peak_flow, "L/min", "flow")
    allowed = w.step(vessel.largest_peak_flow, resin_volume=bed.resin_volume, area=area)
    depth = w.step(vessel.bed_depth, resin_volume=bed.resin_volume, area=area)
    loading = w.step(vessel.surface_loading, flow=task.peak_flow, area=area)
    loss = w.step(hydraulics.bed_pressure_loss, velocity=loading, depth=depth, temperature=task.temperature)
    fits = allowed >= task.peak_flow
    words = "Carries the peak of {peak}." if fits else "The peak of {peak} is more: hardness slips through."
    return [
        Answer(
            "flow",
            "Largest short flow",
            Amount(allowed, "L/min", "flow"),
            say(words, peak=peak),
            w.leading_to(allowed, task.peak_flow),
            (Mark("peak", peak),),
            tone="good" if fits else "bad",
        ),
        Answer(
            "vessel",
            "Vessel diameter",
            Amount(bed.diameter, "mm", "length"),
            say(
                "A usual size; the bed is {depth} deep, {loading} at the peak.",
                depth=Amount(depth, "m", "length", "depth"),
                loading=Amount(loading, "m/h", "surface loading"),
            ),
            w.leading_to(area, depth, loading),
        ),
        Answer(
            "pressure",
            "Pressure lost in the bed",
            Amount(loss, "kPa", "pressure"),
            say("At the peak, in water as cold as entered; valve and distributor come on top, often more."),
            w.leading_to(loss),
            (Mark("most in a rating", Amount(PRESSURE_LOSS, "kPa", "pressure"), "NSF44"),),
        ),
    ]


def _regeneration(ledger: Ledger, area: float, velocity: float, task: Task, salt: float) -> list[Answer]:
    w = ledger.working
    backwash = w.step(regeneration.backwash_flow, area=area, velocity=velocity)
    refill = w.step(regeneration.refill_water, salt=salt, temperature=task.temperature)
    return [
        Answer(
            "backwash",
            "Backwash flow",
            Amount(backwash, "L/min", "flow"),
            say("Lifts the bed by half in water this cold; the drain must take it."),
            w.leading_to(backwash),
        ),
        Answer(
            "refill",
            "Water into the brine tank",
            Amount(refill, "L", "volume"),
            say("Dissolves the salt of one regeneration; give it some hours, longer when cold."),
            w.leading_to(refill),
        ),
    ]


def _yearly(
    ledger: Ledger, task: Task, bed: Bed, area: float, velocity: float, salt: float, interval: float
) -> list[Answer]:
    w = ledger.working
    water = w.step(
        regeneration.water_per_regeneration,
        resin_volume=bed.resin_volume,
        area=area,
        salt=salt,
        temperature=task.temperature,
        backwash_velocity=velocity,
    )
    salt_year = w.step(softener.salt_per_year, salt=salt, interval=interval)
    water_year = w.step(softener.water_per_year, water=water, interval=interval)
    efficiency = w.step(softener.effective_efficiency, interval=interval, load=task.load, salt=salt)
    return [
        Answer(
            "salt_year",
            "Salt a year",
            Amount(salt_year, "kg", "mass"),
            say("On average days, the reserve thrown away each time counted in."),
            w.leading_to(salt_year),
        ),
        Answer(
            "water_year",
            "Regeneration water a year",
            Amount(water_year, "L", "volume", "large volume"),
            say("{water} to the drain each time.", water=Amount(water, "L", "volume")),
            w.leading_to(water_year),
        ),
        Answer(
            "efficiency",
            "Hardness removed per salt",
            Amount(efficiency, "mol/kg", "salt efficiency"),
            say("Really used, with the reserve thrown away."),
            w.leading_to(efficiency),
        ),
    ]
