"""What is entered in a job, in the units of the core, with its doubt: the ground that the checks stand on.

known = Known(job)
known["water.hardness"]        4.2 [mmol/L], or None where it was not entered or nothing is computed from it
known.side("water.hardness")   how far the truth may lie from it, either way
known.shown("water.hardness")  "22 gpg"
known.as_unit("water.hardness", "°dH")     the same figure, read in another unit
"""

from __future__ import annotations

from core.errors import TapwrightError
from core.job.doubts import doubt
from core.job.fields import FIELDS, Field
from core.job.kits import Kit
from core.job.record import Entry, Job
from core.units import convert


class Known:
    """The entries of a job that can be reckoned with; what was assumed for want of an entry is not among them."""

    def __init__(self, job: Job, own: tuple[Kit, ...] = ()) -> None:
        """`own` are the user's own kits."""
        self.job = job
        self._own = own
        self._values = {key: _in_core(FIELDS[key], entry) for key, entry in job.entries.items() if key in FIELDS}

    def __getitem__(self, key: str) -> float | None:
        """The value in the unit of the core, or None."""
        return self._values.get(key)

    def all(self, *keys: str) -> tuple[float, ...] | None:
        """The values of all these, or None where one is not known."""
        values = [self._values.get(key) for key in keys]
        return None if None in values else tuple(values)  # type: ignore[arg-type]

    def side(self, key: str) -> float:
        """How far the truth may lie from an entry, either way; 0 where it is not known. [unit of the core]"""
        entry = self.job.entries.get(key)
        if entry is None or self[key] is None:
            return 0.0
        found, field = doubt(entry, FIELDS[key], self._own), FIELDS[key]
        widest = max(found.below, found.above)
        if not field.quantity:
            return widest
        ends = (convert(end, entry.unit, field.core_unit, quantity=field.quantity) for end in (widest, 0.0))
        one, zero = ends
        return one - zero

    def unit(self, key: str) -> str:
        """The unit of an entry."""
        return self.job.entries[key].unit

    def shown(self, key: str) -> str:
        """An entry as it stands: "22 gpg"."""
        entry = self.job.entries[key]
        return amount(entry.value or 0.0, entry.unit)

    def as_unit(self, key: str, unit: str) -> float:
        """The figure of an entry read in another unit, in the unit of the core."""
        return _turned(FIELDS[key], self.job.entries[key].value or 0.0, unit)

    def in_unit_of(self, key: str, value: float) -> str:
        """A value in the unit of the core, shown in the unit of an entry."""
        field, unit = FIELDS[key], self.unit(key)
        return amount(convert(value, field.core_unit, unit, quantity=field.quantity) if field.quantity else value, unit)


def amount(value: float, unit: str = "") -> str:
    """A number with its unit, to three digits that count."""
    number = f"{value:.3g}" if abs(value) < 1000.0 else f"{value:,.0f}".replace(",", "\u00a0")
    return f"{number} {unit}".strip()


def _in_core(field: Field, entry: Entry) -> float | None:
    if entry.value is None:
        return None
    try:
        value = _turned(field, entry.value, entry.unit)
    except TapwrightError:
        return None
    return value if field.lowest <= value <= field.highest else None


def _turned(field: Field, value: float, unit: str) -> float:
    return convert(value, unit, field.core_unit, quantity=field.quantity) if field.quantity else value
