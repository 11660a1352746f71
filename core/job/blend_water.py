"""The blend of a job as a water: its pH, lime cold and hot, ratios; and what a fixed bypass does at other flows."""

from __future__ import annotations

from math import isnan, nan

from core.chemistry import Solution, mix, speciate
from core.chemistry.index_bands import SCALES
from core.chemistry.indices import larson_ratio
from core.errors import InputError
from core.job import scale_water
from core.job.answers import Amount, Answer, Assumption, Mark, Part, say
from core.job.ledger import Ledger
from core.job.record import Job
from core.job.scale import DEAD_BAND, water_of
from core.job.softener import Softener
from core.treatment import blending, bypass
from core.treatment.vessel import bed_area
from core.working import formula

LOW, USUAL = 0.1, 0.5  # of the peak flow: a tap that runs a little; where a valve is commonly set. Our choice
SWING = 0.15  # of the hardness wanted: less is not felt; our choice


@formula(
    "Softened water",
    "calcium and magnesium fall alike, sodium or potassium takes their place; carbonate stays",
    unit="",
    takes={"water": "", "softened": "mmol/L", "salt": ""},
    source="definition",
    validity="An exchanger changes neither alkalinity nor CO₂.",
)
def softened_water(water: Solution, softened: float, salt: str) -> Solution:
    """The water after an exchanger that leaves so much hardness. [mmol/L]"""
    hardness = float(water.ca) + float(water.mg)  # type: ignore[arg-type]
    left = min(softened / hardness, 1.0) if hardness else 1.0
    given = 2.0 * hardness * (1.0 - left)
    ion = "k" if salt == "kcl" else "na"
    solved = speciate(water).solution
    return solved.change(
        ca=solved.ca * left,
        mg=solved.mg * left,
        **{ion: getattr(solved, ion) + given},
        alkalinity=solved.alkalinity,
        dic=solved.dic,
    )


@formula(
    "Raw and softened water mixed",
    "ions, alkalinity and carbon by share; pH is solved anew",
    unit="",
    takes={"raw": "", "softened": "", "share": ""},
    source="PB82",
)
def mixed(raw: Solution, softened: Solution, share: float) -> Solution:
    """The blend with this share of raw water."""
    return mix([raw, softened], [share, 1.0 - share])


@formula("pH of the blend", "solved from alkalinity and carbon", unit="", takes={"blend": ""}, source="PB82")
def ph_of(blend: Solution) -> float:
    """pH of a water."""
    return float(speciate(blend).ph)  # type: ignore[arg-type]


@formula(
    "Chloride to alkalinity",
    "chloride ÷ alkalinity, equivalents",
    unit="",
    takes={"chloride": "mmol/L", "alkalinity": "meq/L"},
    source="definition",
    validity="Softening and blending change neither.",
)
def chloride_ratio(chloride: float, alkalinity: float) -> float:
    """Chloride over alkalinity; NaN without alkalinity. [-]"""
    return chloride / alkalinity if alkalinity > 0.0 else nan


@formula(
    "Larson ratio",
    "(Cl + 2 × SO₄) ÷ alkalinity, moles and equivalents",
    unit="",
    takes={"chloride": "mmol/L", "sulfate": "mmol/L", "alkalinity": "meq/L"},
    source="LARSON58",
    validity="Unlined steel and iron; found on waters of the Great Lakes. Softening and blending change none of it.",
)
def larson_of(chloride: float, sulfate: float, alkalinity: float) -> float:
    """Larson ratio; NaN without alkalinity. [-]"""
    return float(larson_ratio(chloride, 2.0 * sulfate, alkalinity))


_BED = {"resin_volume": "L", "area": "m²", "temperature": "°C"}


@formula(
    "Loss of the bed, linear", "of a bed alone, by its two terms", unit="kPa/(L/min)", takes=_BED, source="ERGUN52"
)
def linear_loss(resin_volume: float, area: float, temperature: float) -> float:
    """Pressure lost in the bed for each L/min, the part that goes with the flow."""
    return float(bypass.softened_path(resin_volume, area, temperature).linear)


@formula(
    "Loss of the bed, square", "of a bed alone, by its two terms", unit="kPa/(L/min)²", takes=_BED, source="ERGUN52"
)
def square_loss(resin_volume: float, area: float, temperature: float) -> float:
    """Pressure lost in the bed, the part that goes with the square of the flow."""
    return float(bypass.softened_path(resin_volume, area, temperature).square)


@formula("Part of the peak flow", "peak × part", unit="L/min", takes={"peak": "L/min", "part": ""}, source="definition")
def part_of_peak(peak: float, part: float) -> float:
    """A flow as a part of the peak. [L/min]"""
    return peak * part


def assess_blend_water(job: Job, softener: Softener) -> Part:
    """What the blend is, where the water is known well enough; what it becomes when demand swings."""
    ledger = Ledger(job)
    raw, softened, target = (ledger.read(key) for key in ("water.hardness", "blend.softened", "blend.target"))
    if raw is None or softened is None or target is None:
        return Part("blend_water")
    try:
        blending.check_blend(raw, softened, target)
    except InputError:
        return Part("blend_water")  # said by the Blend section itself
    share = ledger.working.step(blending.raw_share, raw=raw, softened=softened, target=target)
    answers = [
        *_as_water(ledger, softened, share),
        *_ratios(ledger),
        *_at_other_flows(ledger, softener, (raw, softened, target), share),
    ]
    return ledger.part("blend_water", [answer for answer in answers if not isnan(answer.amount.value)])


def _as_water(ledger: Ledger, softened: float, share: float) -> list[Answer]:
    chemistry = Ledger(ledger.job)  # what it lacks is said by the Scale section, and is not asked for again here
    water = water_of(chemistry)
    heater = chemistry.read("scale.heater_temperature")
    if water is None or heater is None:
        return []
    ledger.take(chemistry, water)
    step = ledger.working.step
    after = step(softened_water, water=water, softened=softened, salt=ledger.choice("softener.salt"))
    blend = step(mixed, raw=water, softened=after, share=share)
    ph = step(ph_of, blend=blend)
    hot = step(scale_water.heated, solution=blend, temp_c=heater)
    cold_index, hot_index = (step(scale_water.calcite_index, solution=solution) for solution in (blend, hot))
    answers = [
        Answer(
            "ph", "pH of the blend", Amount(ph, ""), say("An exchanger hardly moves it."), ledger.working.leading_to(ph)
        ),
        _index(ledger, "cold", "Saturation index at the tap", cold_index),
        _index(ledger, "hot", f"Saturation index at {heater:.0f} °C", hot_index),
    ]
    return answers


def _index(ledger: Ledger, key: str, label: str, value: float) -> Answer:
    if value > DEAD_BAND:
        words, tone = "Still lays down lime.", "watch"
    elif value < -DEAD_BAND:
        words, tone = (
            "Dissolves lime: no protecting layer; leave it a little harder where pipes are of iron or lead.",
            "watch",
        )
    else:
        words, tone = "Near balance.", "good"
    marks = (Mark("balance", Amount(0.0, "")),)
    steps = ledger.working.leading_to(value)
    return Answer(key, label, Amount(round(value, 2) + 0.0, ""), say(words), steps, marks, tone=tone)


def _ratios(ledger: Ledger) -> list[Answer]:
    """Ratios of corrosion, where the ions they are made of were measured; what was filled in does not count."""
    known = {}
    for name in ("chloride", "sulfate", "alkalinity"):
        found = ledger.read(f"water.{name}")
        if found is not None:
            known[name] = found
    step, answers = ledger.working.step, []
    if {"chloride", "alkalinity"} <= set(known):
        ratio = step(chloride_ratio, chloride=known["chloride"], alkalinity=known["alkalinity"])
        words = say("Softening leaves it as it was; the higher, the less the water protects copper, brass and iron.")
        steps = ledger.working.leading_to(ratio)
        answers.append(Answer("chloride_ratio", "Chloride to alkalinity", Amount(ratio, ""), words, steps))
    if len(known) == 3:
        larson = step(larson_of, **known)
        scale = SCALES["larson"]
        band = scale.band(larson)
        words = say(f"{band.words.capitalize()}. Made for {scale.made_for}." if band else "")
        answers.append(Answer("larson", "Larson ratio", Amount(larson, ""), words, ledger.working.leading_to(larson)))
    return answers


def _at_other_flows(
    ledger: Ledger, softener: Softener, waters: tuple[float, float, float], share: float
) -> list[Answer]:
    """The hardness that a fixed bypass gives when little and when much is drawn."""
    bed, task = softener.bed, softener.task
    if bed is None or task is None or softener.ledger is None or not 0.0 < share < 1.0:
        return []
    raw, softened, target = waters
    step = ledger.working.step
    area = step(bed_area, diameter=bed.diameter)
    one = {"resin_volume": bed.resin_volume, "area": area, "temperature": task.temperature}
    path = {"linear": step(linear_loss, **one), "square": step(square_loss, **one)}
    set_at = ledger.read("blend.set_flow")
    if set_at is None:
        set_at = step(part_of_peak, peak=task.peak_flow, part=USUAL)
        why = "Taken as half the peak flow. Enter the flow that ran when the valve was set."
        amount = Amount(set_at, "L/min", "flow")
        ledger.assumptions["blend.set_flow"] = Assumption("blend.set_flow", amount, why, "common practice, no source")
    opening = step(bypass.bypass_opening, flow=set_at, share=share, **path)
    answers = []
    for key, label, flow in (
        ("low_flow", "Hardness when little is drawn", step(part_of_peak, peak=task.peak_flow, part=LOW)),
        ("peak_flow", "Hardness at the peak flow", step(part_of_peak, peak=task.peak_flow, part=1.0)),
    ):
        passed = step(bypass.bypass_share, flow=flow, opening=opening, **path)
        hardness = step(blending.blend, raw=raw, softened=softened, share=passed)
        far = abs(hardness - target) > SWING * target
        text = "A fixed bypass set at {set}, the bed alone counted: {share} raw water at {flow}."
        if far:
            text += " A valve that mixes by pressure, or one on each riser, holds it steadier."
        shown = {"share": Amount(passed, "1", "share"), "set": Amount(set_at, "L/min", "flow")}
        words = say(text, flow=Amount(flow, "L/min", "flow"), **shown)
        amount = Amount(hardness, "mmol/L", "hardness")
        marks = (Mark("wanted", Amount(target, "mmol/L", "hardness")),)
        steps = ledger.working.leading_to(hardness)
        answers.append(Answer(key, label, amount, words, steps, marks, tone="watch" if far else "plain"))
    return answers
