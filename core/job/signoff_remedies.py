"""What a cause amounts to on this site, in numbers, and what to check first."""

from __future__ import annotations

from collections.abc import Callable
from math import isnan

from core.job.answers import Amount, Phrase, say
from core.job.signoff_formulas import hardness_met, leak_share, part_of, water_until_spent
from core.job.signoff_readings import Promised, Readings
from core.treatment.blending import raw_share
from core.working import Step, Working

Told = tuple[Phrase, Phrase]


def remedy(key: str, promised: Promised, readings: Readings) -> tuple[Phrase, Phrase, tuple[Step, ...]]:
    """Words and first check for a cause, and the working of its numbers."""
    work = Working()
    words, first = _REMEDIES[key](promised, readings, work)
    return words, first, tuple(work.steps)


def _hardness(value: float) -> Amount:
    return Amount(value, "mmol/L", "hardness")


def _share(value: float) -> Amount:
    return Amount(value, "1", "share")


def _volume(value: float) -> Amount:
    return Amount(value, "L", "volume")


def _mol(value: float) -> Amount:
    return Amount(value, "mol", "exchanged amount")


def _raw(promised: Promised, readings: Readings) -> float | None:
    found = readings.raw or promised.raw
    return found.value if found else None


def _bypass(promised: Promised, readings: Readings, work: Working) -> Told:
    outlet, raw = readings.softened_fresh or readings.closed or readings.softened_late, _raw(promised, readings)
    words = say("Raw water gets past the resin.")
    if outlet is not None and raw:
        share = work.step(leak_share, softened=outlet.value, raw=raw)
        words = say("{share} of the water gets past the resin.", share=_share(share))
    first = say(
        "See that the bypass is fully closed and the valve in service, close the blending valve, let the tap run for "
        "five minutes and read again. If it stays hard, a seal of the valve or of the riser tube leaks."
    )
    return words, first


def _leak_after(promised: Promised, readings: Readings, work: Working) -> Told:
    tap, raw, softened = readings.closed, _raw(promised, readings), readings.softened_fresh or readings.softened_late
    words = say("Raw water joins behind the softener.")
    if tap is not None and raw:
        share = work.step(leak_share, softened=tap.value, raw=raw, base=softened.value if softened else 0.0)
        words = say("With the blending valve closed {share} of raw water still joins behind it.", share=_share(share))
    return words, say(
        "Close the blending valve to its stop and look for a second way round: an open bypass, a check valve that does "
        "not hold, a mixer between hot and cold water."
    )


def _valve(promised: Promised, readings: Readings, work: Working) -> Told:
    raw, blend = _raw(promised, readings), readings.blend
    softened = readings.softened_fresh or readings.softened_late
    base = softened.value if softened else 0.0
    words = say("The blend is not what was wanted.")
    turn = "Turn the blending valve"
    if raw and blend is not None and promised.blend is not None:
        found = work.step(raw_share, raw=raw, softened=base, target=blend.value)
        wanted = work.step(raw_share, raw=raw, softened=base, target=promised.blend)
        words = say(
            "The valve lets {found} of raw water through; {wanted} was wanted.",
            found=_share(found),
            wanted=_share(wanted),
        )
        if isnan(found) or isnan(wanted):
            words = say("No setting of the valve explains the blend: it does not lie between its two parts.")
        turn = (
            "Close the blending valve a little" if blend.value > promised.blend else "Open the blending valve a little"
        )
    target = {} if promised.blend is None else {"target": _hardness(promised.blend)}
    until = ", until {target} comes out" if target else ""
    return words, say(f"{turn}{until}. Read after five minutes of flow.", **target)


def _raw_water(promised: Promised, readings: Readings, work: Working) -> Told:
    first = say("Read the raw water twice, at two times of the day. Then set the blend and the valve head for it.")
    if readings.raw is None or promised.raw is None:
        return say("The raw water may have another hardness than entered."), first
    share = work.step(part_of, found=readings.raw.value, expected=promised.raw.value)
    return (
        say(
            "The raw water is {raw}, {share} of the {entered} entered.",
            raw=_hardness(readings.raw.value),
            entered=_hardness(promised.raw.value),
            share=_share(share),
        ),
        first,
    )


def _spent(promised: Promised, readings: Readings, work: Working) -> Phrase | None:
    """How much hardness has come against what the bed holds."""
    raw, water = _raw(promised, readings), readings.water_since
    if raw is None or water is None or promised.capacity is None:
        return None
    met = work.step(hardness_met, water=water.value, raw=raw)
    share = work.step(part_of, found=met, expected=promised.capacity.value)
    return say(
        "{water} since the regeneration brought {met}: {share} of the {capacity} the bed holds.",
        water=_volume(water.value),
        met=_mol(met),
        share=_share(share),
        capacity=_mol(promised.capacity.value),
    )


def _overdue(promised: Promised, readings: Readings, work: Working) -> Told:
    words = _spent(promised, readings, work) or say("The bed ran past its end.")
    return words, say(
        "Start a regeneration by hand. Then see why it did not start by itself: power, clock, meter cable, holiday "
        "setting, meter setting."
    )


def _entered(promised: Promised, readings: Readings, work: Working) -> Told:
    raw = _raw(promised, readings)
    entered = readings.hardness_set.value if readings.hardness_set else promised.hardness_set
    meter = readings.meter_set.value if readings.meter_set else promised.meter
    words = say("The valve head is set for softer water.")
    if raw and entered:
        share = work.step(part_of, found=raw, expected=entered)
        words = say(
            "The raw water is {raw}, {share} of the {entered} set.",
            raw=_hardness(raw),
            share=_share(share),
            entered=_hardness(entered),
        )
    if raw and meter is not None and promised.capacity is not None:
        lasts = work.step(water_until_spent, capacity=promised.capacity.value, raw=raw)
        words = say(
            f"{words.text} The bed lasts {{lasts}}, the meter is set to {{meter}}.",
            **words.amounts,
            lasts=_volume(lasts),
            meter=_volume(meter),
        )
    return words, say("Set the valve head to the raw water as read, iron counted in, and regenerate once by hand.")


def _miscount(promised: Promised, readings: Readings, work: Working) -> Told:
    words = say("The meter may count less than runs through.")
    if readings.counted is not None and readings.drawn is not None:
        share = work.step(part_of, found=readings.counted.value, expected=readings.drawn.value)
        words = say("The meter counts {share} of the water drawn.", share=_share(share))
    return words, say("Clean the turbine of the meter, see that its cable sits, and draw a known amount again.")


def _weak(promised: Promised, readings: Readings, work: Working) -> Told:
    words = _spent(promised, readings, work) or say("The bed gave out before it should.")
    return words, say(
        "Check the salt setting and the brine that is drawn, measure the depth of the resin, and test for iron: lost "
        "or fouled resin holds less."
    )


def _no_brine(promised: Promised, readings: Readings, work: Working) -> Told:
    words = say("The last regeneration did not restore the bed.")
    if readings.salt_used is not None and promised.salt:
        share = work.step(part_of, found=readings.salt_used.value, expected=promised.salt)
        words = say(
            "The last regeneration took {used} of salt, {share} of the {salt} set.",
            used=Amount(readings.salt_used.value, "kg", "mass"),
            share=_share(share),
            salt=Amount(promised.salt, "kg", "mass"),
        )
    return words, say(
        "Look into the salt tank: break a crust that bridges it, see that there is brine, and that the draw empties "
        "it. Clean the injector and its screen. Then regenerate by hand."
    )


def _fast(promised: Promised, readings: Readings, work: Working) -> Told:
    words = say("At high flow hardness slips through the bed.")
    if readings.fast_flow is not None and promised.largest_flow:
        share = work.step(part_of, found=readings.fast_flow.value, expected=promised.largest_flow)
        words = say(
            "{flow} ran, {share} of the {largest} the bed carries.",
            flow=Amount(readings.fast_flow.value, "L/min", "flow"),
            share=_share(share),
            largest=Amount(promised.largest_flow, "L/min", "flow"),
        )
    return words, say(
        "Read again at the peak that was promised. If it is hard there, a larger bed or a flow limiter is needed."
    )


def _slow(promised: Promised, readings: Readings, work: Working) -> Told:
    words = say("At a trickle water finds channels through the bed.")
    if readings.slow_flow is not None and promised.least_flow:
        share = work.step(part_of, found=readings.slow_flow.value, expected=promised.least_flow)
        words = say(
            "{flow} ran, {share} of the {least} that spreads over the bed.",
            flow=Amount(readings.slow_flow.value, "L/min", "flow"),
            share=_share(share),
            least=Amount(promised.least_flow, "L/min", "flow"),
        )
    return words, say(
        "Backwash the bed by hand and look at its surface. Where little flows for long, a smaller bed suits."
    )


_REMEDIES: dict[str, Callable[[Promised, Readings, Working], Told]] = {
    "bypass": _bypass,
    "leak_after": _leak_after,
    "valve": _valve,
    "raw": _raw_water,
    "overdue": _overdue,
    "entered": _entered,
    "miscount": _miscount,
    "weak": _weak,
    "no_brine": _no_brine,
    "fast": _fast,
    "slow": _slow,
}
