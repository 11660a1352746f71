"""The form in which users describe a kit of their own."""

from __future__ import annotations

from dataclasses import dataclass, fields

import flet as ft

from core.errors import InputError
from core.job.fields import FIELDS
from core.job.kits import Kit, check_kit
from pwa.text import format_number, parse_number

SOURCE = "entered by the user"
WAYS = {
    "drops": "drops, each worth the same",
    "strip": "a strip with steps",
    "meter": "a reading, give or take",
}
MEASURES = {  # what a kit measures -> the entry whose name and units go with it
    "hardness": "water.hardness",
    "alkalinity": "water.alkalinity",
    "iron": "water.iron",
    "manganese": "water.manganese",
    "water.ph": "water.ph",
    "conductivity": "water.conductivity",
    "nitrate": "water.nitrate",
    "chloride": "water.chloride",
    "sulfate": "water.sulfate",
}
_SHAPES = {"drops": "triangular", "strip": "step", "meter": "triangular"}


@ft.observable
@dataclass
class KitForm:
    """What stands in the form, as typed."""

    editing: str = ""  # name of the kit that is being changed; "" for a new one
    name: str = ""
    measures: str = "hardness"
    way: str = "drops"
    unit: str = "gpg"
    drop: str = ""
    steps: str = ""
    plus_minus: str = ""
    percent: str = ""

    def begin(self, kit: Kit | None, decimal: str) -> None:
        """Start with a kit, or with an empty form."""
        start = KitForm() if kit is None else _form_of(kit, decimal)
        for part in fields(KitForm):
            setattr(self, part.name, getattr(start, part.name))

    def units(self) -> tuple[str, ...]:
        """The units that go with what is measured."""
        return FIELDS[MEASURES[self.measures]].units

    def measure(self, what: str) -> None:
        """Say what it measures; a unit that does not go with it gives way."""
        self.measures = what
        if self.unit not in self.units():
            self.unit = next(iter(self.units()), "")

    def kit(self, own: tuple[Kit, ...]) -> Kit:
        """The kit as described; InputError says what is missing. `own` are those there are already."""
        name = self.name.strip()
        if not name:
            raise InputError("words", name, "Give the kit a name.")
        taken = [kit.words.casefold() for kit in own if kit.words != self.editing]
        if name.casefold() in taken:
            raise InputError("words", name, f"There is a kit called “{name}” already.")
        drop = _number(self.drop, "the value of a drop") if self.way == "drops" else 0.0
        if self.way == "drops" and not drop:
            raise InputError("resolution", self.drop, "Enter what a drop is worth: it stands on the kit.")
        sides = _number(self.plus_minus, "the ±")
        share = _number(self.percent, "the %") / 100.0
        if self.way == "meter" and not (sides or share):
            raise InputError("absolute", self.plus_minus, "Enter how far it can be off, in the unit or in %.")
        return check_kit(
            Kit(
                key=f"own: {name}",
                words=name,
                measures=(self.measures,),
                unit=self.unit if self.units() else "",
                kind=self.way,
                shape=_SHAPES[self.way],
                resolution=drop,
                relative=share,
                absolute=sides if self.way != "drops" else 0.0,
                lowest=drop,
                steps=tuple(_number(step, "a step") for step in _split(self.steps)) if self.way == "strip" else (),
                source=SOURCE,
                status=SOURCE,
            )
        )


def _form_of(kit: Kit, decimal: str) -> KitForm:
    def typed(value: float) -> str:
        return format_number(value, 6, decimal) if value else ""

    return KitForm(
        editing=kit.words,
        name=kit.words,
        measures=kit.measures[0] if kit.measures and kit.measures[0] in MEASURES else "hardness",
        way=kit.kind if kit.kind in WAYS else "meter",
        unit=kit.unit,
        drop=typed(kit.resolution),
        steps="  ".join(format_number(step, 6, decimal) for step in kit.steps),
        plus_minus=typed(kit.absolute),
        percent=typed(kit.relative * 100.0),
    )


def _split(steps: str) -> list[str]:
    """Numbers with blanks or semicolons between; commas may be decimal signs."""
    return steps.replace(";", " ").split()


def _number(typed: str, what: str) -> float:
    if not typed.strip():
        return 0.0
    parsed = parse_number(typed)
    if parsed.value is None:
        raise InputError("number", typed, f"{what[:1].upper()}{what[1:]}: {parsed.refusal}")
    return parsed.value
