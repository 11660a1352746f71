"""How long a blend of many sources takes; `python -m tests.bench.blending` prints the figures.

Twelve sources and fifteen limits are asked to take less than 50 ms here, so that a browser, about five times slower,
stays under 300 ms. With limits on saturation the chemistry is searched, which takes longer.
"""

from __future__ import annotations

import time
import timeit

import numpy as np

from core.treatment.limits import PARAMETERS, Limit, typed_limit
from core.treatment.sources import Blend, Source, Target, blend_sources

LIMITED = (
    "hardness", "calcium", "magnesium", "alkalinity", "sodium", "potassium", "chloride", "sulfate", "nitrate", "iron",
    "manganese", "fluoride", "arsenic", "tds", "conductivity",
)  # fmt: skip


def sources(count: int = 12, seed: int = 7) -> list[Source]:
    """Sources with a full analysis, drawn from a seed."""
    draw = np.random.default_rng(seed)
    made = []
    for i in range(count):
        analysis = {name: float(draw.uniform(0.1, 1.0)) for name in PARAMETERS if PARAMETERS[name].mixes}
        analysis["calcium"], analysis["magnesium"] = float(draw.uniform(0.2, 4.0)), float(draw.uniform(0.1, 1.0))
        analysis["hardness"] = analysis["calcium"] + analysis["magnesium"]
        analysis["alkalinity"] = float(draw.uniform(1.0, 6.0))
        analysis["ph"], analysis["temperature"] = float(draw.uniform(6.9, 7.8)), 12.0
        made.append(Source(f"source {i + 1}", analysis, most=400.0, cost=float(draw.uniform(0.05, 0.5))))
    return made


def limits(tight: float = 1.02) -> list[Limit]:
    """Fifteen limits, each a little above what an even blend has; smaller `tight` is tighter."""
    wells = sources()
    return [typed_limit(name, high=tight * float(np.mean([well.value(name) for well in wells]))) for name in LIMITED]


def cheapest(tight: float = 1.02) -> Blend:
    """Twelve sources within fifteen limits at least cost."""
    return blend_sources(sources(), 1000.0, limits(tight))


CASES = {
    "least cost": lambda: cheapest(),
    "nearest to a target": lambda: blend_sources(sources(), 1000.0, limits(), [Target("hardness", 2.0)], aim="target"),
    "most margin": lambda: blend_sources(sources(), 1000.0, limits(), aim="margin"),
    "nothing fits": lambda: cheapest(0.9),
    "with saturation": lambda: blend_sources(
        sources(), 1000.0, [*limits(), typed_limit("saturation", low=0.0, high=0.3)]
    ),
}


def milliseconds(case: str, rounds: int = 5) -> float:
    """Least processor time of one case. [ms]"""
    CASES[case]()
    return 1000.0 * min(timeit.repeat(CASES[case], timer=time.process_time, number=1, repeat=rounds))


def main() -> None:
    """Print the time and the verdict of each case."""
    for case, make in CASES.items():
        print(f"{case:22s} {milliseconds(case):7.1f} ms  {make().verdict}")


if __name__ == "__main__":
    main()
