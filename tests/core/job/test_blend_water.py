"""The blend as a water: its balance and ratios; and what a fixed bypass does when more or less is drawn."""

from pathlib import Path

import pytest

from core.job import Entry, Job, assess

FLAT = Path(__file__).resolve().parents[3] / "sample_tests" / "flat-with-a-blending-valve.json"
IONS = {"chloride": 40.0, "sulfate": 60.0}


def flat(**changes):
    """The sample flat with chloride and sulfate measured, and entries changed (None takes one out)."""
    job = Job.load(FLAT)
    for name, value in IONS.items():
        job = job.with_entry(
            f"water.{name}", Entry(value, {"chloride": "mg/L Cl", "sulfate": "mg/L SO4"}[name], "report")
        )
    for name, entry in changes.items():
        job = job.with_entry(name.replace("__", "."), entry)
    return job


def value(part, key):
    """The number of an answer."""
    return part.answers[key].amount.value


def test_blending_softer_takes_the_water_towards_dissolving():
    """Less calcium at the same alkalinity and pH: a lower index, cold and hot; hot stays above cold."""
    hard = assess(flat(blend__target=Entry(16.0, "°dH", "told"))).blend_water
    soft = assess(flat(blend__target=Entry(4.0, "°dH", "told"))).blend_water

    assert value(soft, "cold") < value(hard, "cold")
    assert value(soft, "hot") < value(hard, "hot")
    assert value(hard, "hot") > value(hard, "cold")
    assert value(hard, "ph") == pytest.approx(7.15, abs=0.05)  # as read: an exchanger leaves carbonate alone


def test_ratios_by_hand_and_only_where_measured():
    """Chloride 40 and sulfate 60 mg/L on 6.6 meq/L: 1.128 / 6.6 and (1.128 + 1.249) / 6.6; nothing filled in counts."""
    part = assess(flat()).blend_water
    assert value(part, "chloride_ratio") == pytest.approx(40.0 / 35.453 / 6.6, rel=1e-3)
    assert value(part, "larson") == pytest.approx((40.0 / 35.453 + 2.0 * 60.0 / 96.06) / 6.6, rel=1e-3)

    assert not {"larson", "chloride_ratio"} & set(assess(Job.load(FLAT)).blend_water.answers)


def test_a_fixed_bypass_gives_harder_water_at_low_flow():
    """At the flow it was set at it gives what is wanted; harder below, softer above."""
    part = assess(flat()).blend_water
    target = 8.0 * 0.178326

    assert value(part, "low_flow") > target > value(part, "peak_flow")
    peak = part.answers["peak_flow"].words.amounts["flow"].value
    set_there = assess(flat(blend__set_flow=Entry(peak, "L/min", "told"))).blend_water
    assert value(set_there, "peak_flow") == pytest.approx(target, rel=1e-4)


def test_every_step_can_be_recomputed():
    """What the working shows is what was computed."""
    for answer in assess(flat()).blend_water.answers.values():
        assert answer.steps, answer.key
        for step in answer.steps:
            assert step.function(**step.inputs) == step.result, step.card.quantity


def test_without_a_target_nothing_is_said():
    """No blend, no water of a blend."""
    assert not assess(flat(blend__target=None)).blend_water.answers
