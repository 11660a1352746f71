"""The user's settings, kept on the device as one small text."""

from __future__ import annotations

import json
from dataclasses import asdict, dataclass, fields


@dataclass(frozen=True, slots=True)
class Settings:
    """How the app looks and speaks to this user."""

    unit_set: str = "auto"  # a key of unit_sets.UNIT_SETS, or "auto": by the unit the hardness was read in
    own_units: str = ""  # what is shown otherwise than in the set; see unit_sets.own_units
    decimal: str = "."
    region: str = ""  # whose rules a new job begins with; "" leaves it open
    ground: str = "system"  # system | light | dark
    contrast: bool = False
    text: str = "normal"  # a key of theme.SCALES

    def to_text(self) -> str:
        """The settings as JSON."""
        return json.dumps(asdict(self))

    @classmethod
    def from_text(cls, text: str | None) -> Settings:
        """Settings from JSON; what is missing or of the wrong kind takes its default."""
        try:
            held = json.loads(text or "{}")
        except json.JSONDecodeError:
            held = {}
        if not isinstance(held, dict):
            held = {}
        kinds = {field.name: type(field.default) for field in fields(cls)}
        return cls(**{name: value for name, value in held.items() if type(value) is kinds.get(name)})
