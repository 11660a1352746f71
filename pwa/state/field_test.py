"""A test in the making: what was counted or read so far, and the entry it would make."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field, replace

import flet as ft

from core.errors import InputError, TapwrightError
from core.job.field import Field
from core.job.field_tests import MOST_READINGS, Repeat, by_drops, by_titration, repeat
from core.job.kits import HowRead, Kit, kits_for
from core.job.record import Entry
from pwa.text import parse_number

COUNTED = ("hardness", "alkalinity", "iron", "manganese")  # quantities that people count, titrate or read repeatedly
DIGITS = 4  # that count, of an entry made from readings
KINDS = ("drops", "titration", "titrator", "colour", "meter", "own")  # of kits that can be read again
STRENGTH, SAMPLE = "0.01", {"hardness": "50", "alkalinity": "100"}  # of EDTA in mol/L and in mL: common practice


@dataclass(frozen=True, slots=True)
class Outcome:
    """What the readings come to, or a sentence that says what is wanted."""

    entry: Entry | None = None
    repeat: Repeat | None = None
    read_in: str = ""  # the unit of `repeat`
    wanted: str = ""
    refused: bool = False  # whether `wanted` is about something that was typed


@ft.observable
@dataclass
class FieldTest:
    """What stands on the sheet of a test, as typed."""

    kit: str = ""  # key or words of the kit
    readings: list[str] = field(default_factory=lambda: [""])
    dilution: str = ""
    strength: str = STRENGTH
    sample: str = ""

    def kit_in_use(self, kits: Sequence[Kit], unit: str, named: str = "") -> Kit:
        """The kit chosen; until then the one the entry names, or one that reads in its unit, or the first."""
        wanted = self.kit or HowRead.of(named).kit
        by_name = (kit for kit in kits if kit.words == wanted)
        by_unit = (kit for kit in kits if kit.unit == unit)
        return next(by_name, None) or next(by_unit, kits[0])

    def begin(self, kit: Kit, entry: Field) -> None:
        """Start anew with a kit."""
        self.kit, self.readings, self.dilution = kit.words, [""], ""
        self.strength, self.sample = STRENGTH, SAMPLE.get(entry.quantity, "")

    def read(self, index: int, typed: str) -> None:
        """Take in what was typed for one reading."""
        self.readings = [typed if at == index else held for at, held in enumerate(self.readings)]

    def again(self) -> None:
        """Make room for one more reading."""
        if len(self.readings) < MOST_READINGS:
            self.readings = [*self.readings, ""]

    def leave_out(self, index: int) -> None:
        """Take one of the readings that hold something away."""
        held = [typed for typed in self.readings if typed.strip()]
        self.readings = [typed for at, typed in enumerate(held) if at != index] or [""]

    def outcome(self, kit: Kit, entry: Field, unit: str) -> Outcome:
        """What the readings come to in the unit of the kit, or in `unit` where the kit has none of the entry's."""
        try:
            return self._made(kit, entry, unit_read_in(kit, entry, unit))
        except TapwrightError as error:
            return Outcome(wanted=str(error), refused=True)

    def _made(self, kit: Kit, entry: Field, unit: str) -> Outcome:
        readings = [_number(typed) for typed in self.readings if typed.strip()]
        if not readings:
            return Outcome(wanted=f"Enter {what_is_read(kit)}.")
        dilution = _number(self.dilution) if self.dilution.strip() else 1.0
        if kit.kind == "drops":
            made = by_drops(kit, readings, entry, unit, dilution)
            return Outcome(_shown(made.entry), made.repeat, kit.unit)
        if kit.kind == "titration":
            if not (self.strength.strip() and self.sample.strip()):
                return Outcome(wanted="Enter the strength of the titrant and the volume of the sample.")
            made = by_titration(kit, readings, _number(self.strength), _number(self.sample), entry, unit, dilution)
            return Outcome(_shown(made.entry), made.repeat, "mmol/L")
        return _repeated(kit, readings, unit, dilution)


def kits_to_test(entry: Field, own: Sequence[Kit] = ()) -> tuple[Kit, ...]:
    """The kits of an entry whose readings can be counted or repeated."""
    if entry.quantity not in COUNTED:
        return ()
    return tuple(kit for kit in kits_for(entry, own) if kit.kind in KINDS)


def what_is_read(kit: Kit) -> str:
    """What is read off a kit."""
    return {"drops": "the drops counted", "titration": "the mL of titrant used"}.get(kit.kind, "what it reads")


def unit_read_in(kit: Kit, entry: Field, unit: str) -> str:
    """The unit in which a kit fills an entry: its own where the entry has it, else the one chosen."""
    return kit.unit if kit.kind != "titration" and kit.unit in entry.units else unit


def _repeated(kit: Kit, readings: Sequence[float], unit: str, dilution: float) -> Outcome:
    """Readings of a kit that shows the value itself."""
    if not 1.0 <= dilution <= 1000.0:
        return Outcome(wanted="The dilution is 1 for none, 2 for half and half; at most 1000.", refused=True)
    found = repeat([reading * dilution for reading in readings], kit.resolution * dilution)
    error = found.standard_error if len(readings) > 1 else 0.0
    how = HowRead(kit.words, dilution, len(readings), error)
    return Outcome(_shown(Entry(found.mean, unit, "measured", how.text)), found, unit)


def _shown(entry: Entry) -> Entry:
    """The entry with its value as it will stand in its box: what is seen is what is reckoned with."""
    return replace(entry, value=float(f"{entry.value:.{DIGITS}g}"))


def _number(typed: str) -> float:
    parsed = parse_number(typed)
    if parsed.value is None:
        raise InputError("reading", typed, parsed.refusal or "A number is missing.")
    return parsed.value
