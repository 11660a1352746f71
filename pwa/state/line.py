"""The line under an answer, on the screen and on the sheet: where its values have their places."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Scale:
    """Where a value falls on a line from left (-1) to right (1)."""

    lowest: float
    highest: float

    @classmethod
    def of(cls, values: list[float]) -> Scale:
        """A scale on which all values have their place, with some room at both ends."""
        low, high = min(values), max(values)
        apart = high - low if high - low > 1e-6 * abs(high) else 0.0  # a blend at its limit misses it by a hair
        room = apart * 0.12 or abs(high) * 0.5 or 1.0
        return cls(max(0.0, low - room) if low >= 0.0 else low - room, high + room)

    def x(self, value: float) -> float:
        """The place of a value, -1 to 1."""
        return 2.0 * (value - self.lowest) / (self.highest - self.lowest) - 1.0
