"""What the values of each stability index are taken to mean: bands as data, with their sources."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from types import MappingProxyType

from core.errors import InputError

INF = math.inf


@dataclass(frozen=True, slots=True)
class Band:
    """A stretch of an index, from `low` (included) to `high` (excluded), and what it is taken to mean."""

    low: float
    high: float
    words: str


@dataclass(frozen=True, slots=True)
class Scale:
    """The bands of one index, from low to high, where they come from, and what they were made for."""

    index: str
    bands: tuple[Band, ...]
    source: str
    made_for: str

    def band(self, value: float) -> Band | None:
        """The band a value falls in; None where the value is not known."""
        return next((b for b in self.bands if b.low <= value < b.high), None)


def _scale(index: str, source: str, made_for: str, *steps: float | str) -> tuple[str, Scale]:
    edges = [-INF, *(s for s in steps if not isinstance(s, str)), INF]
    words = [s for s in steps if isinstance(s, str)]
    bands = tuple(Band(low, high, said) for low, high, said in zip(edges[:-1], edges[1:], words, strict=True))
    return index, Scale(index, bands, source, made_for)


SCALES: Mapping[str, Scale] = MappingProxyType(
    dict(
        (
            _scale(
                "langelier", "common practice, no source", "any water; direction only",
                "tends to dissolve scale", -0.5, "near balance", 0.5, "tends to scale",
            ),
            _scale(
                "saturation index", "common practice, no source", "any water",
                "scale dissolves", 0.0, "scale possible, seldom forms in cold water", 0.5, "scale forms",
            ),
            _scale(
                "ryznar", "CARRIER", "steel in cooling and mains water",
                "heavy scale", 5.0, "light scale", 6.0, "little scale or corrosion", 7.0, "corrosion notable", 7.5,
                "heavy corrosion", 9.0, "very heavy corrosion",
            ),
            _scale(
                "puckorius", "PUCKORIUS91", "cooling towers",
                "scaling", 6.0, "neutral", 7.0, "dissolving",
            ),
            _scale(
                "precipitation potential", "SM2330", "distribution of drinking water",
                "dissolves cement and scale", -10.0, "mildly dissolving", -5.0, "passive", 0.0, "slightly scaling", 4.0,
                "protective film", 10.0, "scaling",
            ),
            _scale(
                "aggressiveness", "AWWA-C400", "asbestos-cement pipe only",
                "highly aggressive", 10.0, "moderately aggressive", 12.0, "not aggressive",
            ),
            _scale(
                "larson", "LARSON58", "unlined iron and steel; stricter authors want less than 0.2 to 0.3",
                "low", 0.8, "notable", 1.2, "high",
            ),
            _scale(
                "galvanised", "EN12502-3", "hot-dip galvanised pipe, pitting",
                "low risk", 0.5, "some risk", 3.0, "high risk",
            ),
            _scale(
                "copper", "EN12502-2", "copper pipe in hot water, pitting",
                "pitting more likely", 1.5, "pitting less likely",
            ),
        )
    )
)  # fmt: skip


def band(index: str, value: float) -> Band | None:
    """The band of an index that a value falls in; None where the value is not known."""
    if index not in SCALES:
        raise InputError("index", index, f"{index!r} has no bands here; known are {', '.join(SCALES)}.")
    return SCALES[index].band(value)
