"""The sign-off: what was promised against what was read, each met, not met, or not to be told.

    promised = Promised(raw=Measured(3.92, 0.1), softened=0.1, blend=1.43, capacity=Measured(4.1, 0.4), meter=900.0)
    readings = Readings(raw=Measured(3.9, 0.1), softened_fresh=Measured(0.6, 0.05), softened_late=Measured(0.62, 0.05))
    result = sign_off(promised, readings)
    result.checks             a verdict for each promise, and which reading would tell where there is none
    result.explanation        what may be behind a miss, likeliest first; None without a miss
    signoff_part(result)      the same as a part of the assessment

The rule: the band that holds 8 cases of 10 of what the reading may mean (reading ± 1.28 standard deviations, the doubt
of the promise counted in) lies wholly on the promised side: met. Wholly on the other side: not met. Otherwise the
reading cannot tell. Units are those of the core: mmol/L, L, L/min, kPa, kg, mol.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from math import ceil, hypot, inf, isfinite, nan

from core.job.answers import Amount, Answer, Mark, Missing, Part, Phrase, say
from core.job.cautions import LOCAL_CODE
from core.job.signoff_causes import Explanation, explain
from core.job.signoff_formulas import BAND, doubt_that_tells
from core.job.signoff_readings import Measured, Promised, Readings
from core.working import Step, Working

MET, NOT_MET, CANNOT_TELL, NOT_READ = "met", "not met", "cannot tell", "not read"
TONES = {MET: "good", NOT_MET: "bad", CANNOT_TELL: "watch", NOT_READ: "plain"}
ON_THE_LIMIT = 0.01  # of the limit: nearer than that no kit settles it; a choice
MOST_REPEATS = 9  # readings somebody would take of the same thing
SAME_FLOW = 0.1  # part by which the flow of a pressure reading may differ from the one promised
ENOUGH_SALT = 0.15  # part by which the salt of one regeneration may differ; a choice
RIGHT_SETTING = 0.02  # part by which a setting may differ: heads take round numbers; a choice
HONEST_METER = 0.10  # part by which a meter may differ from a bucket or the house meter; a choice


@dataclass(frozen=True, slots=True)
class Check:
    """One promise held against its reading."""

    key: str
    label: str
    verdict: str  # met | not met | cannot tell | not read
    words: Phrase
    limits: tuple[float, float]  # promised: from, to; one of them may be infinite
    unit: str
    quantity: str
    reading: Measured | None = None
    band: tuple[float, float] | None = None
    would_tell: Phrase | None = None  # which reading would settle it
    steps: tuple[Step, ...] = ()


@dataclass(frozen=True, slots=True)
class SignOff:
    """All checks, and what may be behind a miss."""

    checks: tuple[Check, ...]
    explanation: Explanation | None

    @property
    def missed(self) -> tuple[Check, ...]:
        """What was promised and is not met."""
        return tuple(check for check in self.checks if check.verdict == NOT_MET)

    @property
    def open(self) -> tuple[Check, ...]:
        """What cannot be told, or was not read."""
        return tuple(check for check in self.checks if check.verdict in (CANNOT_TELL, NOT_READ))


@dataclass(frozen=True, slots=True)
class _Promise:
    """A promise as it is checked: its limits, and what to read for it."""

    key: str
    label: str
    low: float
    high: float
    unit: str
    quantity: str
    ask: str  # which reading is needed
    doubt: float = 0.0  # of the promise itself


def sign_off(promised: Promised, readings: Readings) -> SignOff:
    """Every promise against its reading; InputError where a number cannot be."""
    promised.check()
    readings.check()
    pairs = [*_hardness(promised, readings), *_settings(promised, readings), *_flows(promised, readings)]
    checks = tuple(_checked(promise, reading) for promise, reading in pairs)
    pressure = _pressure(promised, readings)
    checks += (pressure,) if pressure else ()
    missed = {check.key for check in checks if check.verdict == NOT_MET}
    return SignOff(checks, explain(promised, readings, missed))


def _hardness(promised: Promised, readings: Readings) -> list[tuple[_Promise, Measured | None]]:
    found: list[tuple[_Promise, Measured | None]] = []
    unit = ("mmol/L", "hardness")
    if promised.raw is not None:
        width = promised.raw_within * promised.raw.value
        low, high = promised.raw.value - width, promised.raw.value + width
        ask = "Read the hardness of the raw water again."
        promise = _Promise("raw", "Raw water", low, high, *unit, ask, promised.raw.doubt)
        found.append((promise, readings.raw))
    if promised.softened is not None:
        fresh = "Read the softened water right after a regeneration, with the blending valve closed."
        late = "Read the softened water just before the next regeneration, with the blending valve closed."
        limit = promised.softened
        found += [
            (_Promise("fresh", "Softened water, fresh", -inf, limit, *unit, fresh), readings.softened_fresh),
            (_Promise("late", "Softened water, end of the run", -inf, limit, *unit, late), readings.softened_late),
        ]
        if readings.closed is not None:
            ask = "Read the hardness at a tap with the blending valve closed."
            promise = _Promise("closed", "Tap, blending valve closed", -inf, limit, *unit, ask)
            found.append((promise, readings.closed))
    if promised.blend is not None:
        low, high = promised.blend - promised.blend_within, promised.blend + promised.blend_within
        ask = "Read the hardness at a tap with the blending valve as it is set."
        found.append((_Promise("blend", "Blended water", max(low, 0.0), high, *unit, ask), readings.blend))
    return found


def _settings(promised: Promised, readings: Readings) -> list[tuple[_Promise, Measured | None]]:
    found: list[tuple[_Promise, Measured | None]] = []
    rows = (
        ("hardness_set", "Hardness set at the valve head", promised.hardness_set, readings.hardness_set, RIGHT_SETTING),
        ("meter", "Meter setting", promised.meter, readings.meter_set, RIGHT_SETTING),
        ("salt", "Salt of one regeneration", promised.salt, readings.salt_used, ENOUGH_SALT),
    )
    units = {"hardness_set": ("mmol/L", "hardness"), "meter": ("L", "volume"), "salt": ("kg", "mass")}
    asks = {
        "hardness_set": "Read the hardness that is set at the valve head.",
        "meter": "Read the meter setting of the valve head.",
        "salt": "Weigh the salt that one regeneration takes, or measure how far the brine falls.",
    }
    for key, label, wanted, reading, within in rows:
        if wanted is not None:
            promise = _Promise(key, label, wanted * (1 - within), wanted * (1 + within), *units[key], asks[key])
            found.append((promise, reading))
    if readings.drawn is not None:
        drawn = readings.drawn
        low, high = drawn.value * (1 - HONEST_METER), drawn.value * (1 + HONEST_METER)
        ask = "Read what the softener's meter counts while a known amount is drawn."
        promise = _Promise("counted", "Water counted by the meter", low, high, "L", "volume", ask, drawn.doubt)
        found.append((promise, readings.counted))
    return found


def _flows(promised: Promised, readings: Readings) -> list[tuple[_Promise, Measured | None]]:
    if promised.peak is None:
        return []
    ask = "Open the taps that run together, and read the flow."
    promise = _Promise("flow", "Flow at the taps", promised.peak, inf, "L/min", "flow", ask)
    return [(promise, readings.peak_flow)]


def _checked(promise: _Promise, reading: Measured | None) -> Check:
    limits, unit, quantity = (promise.low, promise.high), promise.unit, promise.quantity
    if reading is None:
        ask = say(promise.ask)
        return Check(promise.key, promise.label, NOT_READ, say("Not read."), limits, unit, quantity, would_tell=ask)
    low, high = band(reading, promise.doubt)
    if promise.low <= low and high <= promise.high:
        verdict = MET
    elif high < promise.low or low > promise.high:
        verdict = NOT_MET
    else:
        verdict = CANNOT_TELL
    work = Working()
    would_tell = _would_tell(promise, reading, work) if verdict == CANNOT_TELL else None
    return Check(
        promise.key,
        promise.label,
        verdict,
        _words(promise, verdict),
        limits,
        unit,
        quantity,
        reading,
        (low, high),
        would_tell,
        tuple(work.steps),
    )


def band(reading: Measured, doubt: float = 0.0) -> tuple[float, float]:
    """The band that holds 8 cases of 10 of what a reading may mean; `doubt` is that of what it is compared with."""
    width = BAND * hypot(reading.doubt, doubt)
    return reading.value - width, reading.value + width


def _words(promise: _Promise, verdict: str) -> Phrase:
    low, high = (Amount(end, promise.unit, promise.quantity) for end in (promise.low, promise.high))
    if not isfinite(promise.low):
        text, amounts = "at most {high}", {"high": high}
    elif not isfinite(promise.high):
        text, amounts = "at least {low}", {"low": low}
    else:
        text, amounts = "{low} to {high}", {"low": low, "high": high}
    both = "; the truth may lie on either side" if verdict == CANNOT_TELL else ""
    return say(f"Promised: {text}{both}.", **amounts)


def _would_tell(promise: _Promise, reading: Measured, work: Working) -> Phrase:
    """How good a reading would settle it, or how many of the same kind."""
    limit = min((promise.low, promise.high), key=lambda end: abs(reading.value - end))
    needed = work.step(doubt_that_tells, value=reading.value, limit=limit)
    if needed <= promise.doubt:
        return say("What was promised rests on a reading less sure than this asks for: no kit will tell now.")
    if needed * BAND < ON_THE_LIMIT * abs(limit):
        return say("The reading lies on the limit: no kit will tell. Agree on it with the customer.")
    width = Amount(BAND * needed, promise.unit, promise.quantity)
    text = "A kit that is sure to ± {width} would tell"
    repeats = ceil(reading.doubt**2 / (needed**2 - promise.doubt**2))
    if repeats <= MOST_REPEATS:
        return say(f"{text}; so would the mean of {repeats} readings, if they scatter by chance.", width=width)
    return say(f"{text}.", width=width)


def _pressure(promised: Promised, readings: Readings) -> Check | None:
    """The pressure loss; a reading at another flow counts where it settles the matter all the same."""
    if promised.pressure_loss is None:
        return None
    ask = "Read the pressure before and after the softener at the flow it was promised for."
    promise = _Promise("pressure", "Pressure loss", -inf, promised.pressure_loss, "kPa", "pressure", ask)
    check = _checked(promise, readings.pressure_loss)
    flow, wanted = readings.pressure_flow, promised.pressure_flow
    if wanted is None or check.verdict not in (MET, NOT_MET):
        return check
    if flow is not None:
        settles = flow.value >= wanted if check.verdict == MET else flow.value <= wanted
        if settles or abs(flow.value - wanted) <= SAME_FLOW * wanted:
            return check
    words = say("Promised at {flow}; the reading was taken at another flow.", flow=Amount(wanted, "L/min", "flow"))
    return replace(check, verdict=CANNOT_TELL, words=words, would_tell=say(ask))


def signoff_part(result: SignOff) -> Part:
    """The sign-off as a part of the assessment: an answer for each reading, the worst first."""
    order = {NOT_MET: 0, CANNOT_TELL: 1, MET: 2}
    read = sorted((check for check in result.checks if check.reading), key=lambda check: order[check.verdict])
    missing = tuple(
        Missing(f"signoff.{check.key}", check.would_tell.text)
        for check in result.checks
        if check.verdict == NOT_READ and check.would_tell
    )
    cautions = (LOCAL_CODE,) if result.missed else ()
    return Part("signoff", {check.key: _answer(check) for check in read}, missing, cautions=cautions)


def _answer(check: Check) -> Answer:
    tells = check.would_tell or say("")
    text = f"{check.verdict.capitalize()}. {check.words.text} {tells.text}".rstrip()
    words = say(text, **check.words.amounts, **tells.amounts)
    names = ("at least", "at most")
    marks = tuple(
        Mark(name, Amount(end, check.unit, check.quantity))
        for name, end in zip(names, check.limits, strict=True)
        if isfinite(end)
    )
    amount = Amount(check.reading.value if check.reading else nan, check.unit, check.quantity)
    return Answer(check.key, check.label, amount, words, check.steps, marks, check.band, TONES[check.verdict])
