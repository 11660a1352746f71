"""The water of a job: what the reading means."""

from __future__ import annotations

from core.chemistry.classes import class_of, schemes
from core.chemistry.hardness import carbonate_hardness, non_carbonate_hardness
from core.job.answers import Amount, Answer, Mark, Part, say
from core.job.ledger import Ledger
from core.job.record import Job
from core.units import convert

SCHEME_OF = {"gpg": "US-TRADE", "°dH": "WRMG", "mmol/L": "WRMG", "°fH": "CH", "°e": "UK-SW"}  # by the unit as read
SCALE_LIKELY, CORROSION_LIKELY = 200.0, 100.0  # mg/L CaCO3 [WHO-HARDNESS]


def assess_water(job: Job) -> Part:
    """Hardness in words, and how much of it carbonate holds."""
    ledger = Ledger(job)
    hardness = ledger.need("water.hardness", "Enter the hardness of the water, in whatever unit the kit prints.")
    if hardness is None:
        return ledger.part("water", [])
    answers = [_hardness(ledger, hardness, job.entries["water.hardness"].unit)]
    alkalinity = ledger.read("water.alkalinity")
    if alkalinity is not None:
        answers += _split(ledger, hardness, alkalinity)
    return ledger.part("water", answers)


def _hardness(ledger: Ledger, hardness: float, unit: str) -> Answer:
    scheme = schemes()[SCHEME_OF.get(unit, "USGS")]
    name = class_of(hardness, scheme.key, "mmol/L")
    grains = convert(hardness, "mmol/L", "mg/L CaCO3", quantity="hardness")
    if grains > SCALE_LIKELY:
        effect, tone = "Lime is likely to build up where it is heated: softening or blending pays.", "watch"
    elif grains < CORROSION_LIKELY:
        effect, tone = "Look at what it does to pipes before softening any further.", "plain"
    else:
        effect, tone = "Treatment is a matter of taste and of the heater.", "plain"
    marks = tuple(
        Mark(
            words,
            Amount(convert(at, "mg/L CaCO3", "mmol/L", quantity="hardness"), "mmol/L", "hardness"),
            "WHO-HARDNESS",
        )
        for words, at in (("corrosion below", CORROSION_LIKELY), ("lime above", SCALE_LIKELY))
    )
    classed = f"{name.capitalize()} ({scheme.title}). " if name else ""
    return Answer(
        "hardness",
        "Total hardness",
        Amount(hardness, "mmol/L", "hardness"),
        say(classed + effect),
        ledger.working.leading_to(hardness),
        marks,
        tone=tone,
    )


def _split(ledger: Ledger, hardness: float, alkalinity: float) -> list[Answer]:
    w = ledger.working
    pair = {
        "hardness": ledger.turn(hardness, "hardness", "mmol/L", "mg/L CaCO3"),
        "alkalinity": ledger.turn(alkalinity, "alkalinity", "meq/L", "mg/L CaCO3"),
    }
    carbonate = w.step(carbonate_hardness, **pair)
    other = w.step(non_carbonate_hardness, **pair)
    return [
        Answer(
            "carbonate",
            "Carbonate hardness",
            Amount(carbonate, "mg/L CaCO3", "hardness"),
            say("The part that heating or lime can bring down."),
            w.leading_to(carbonate),
        ),
        Answer(
            "non_carbonate",
            "Other hardness",
            Amount(other, "mg/L CaCO3", "hardness"),
            say("Held by sulfate, chloride and nitrate: it stays in hot water."),
            w.leading_to(other),
        ),
    ]
