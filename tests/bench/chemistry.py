"""How fast the chemistry is, against a general geochemistry library on the same waters in the same run.

    python -m tests.bench.chemistry

prints time per water for both, their ratio, one water alone, and what importing costs.
"""

from __future__ import annotations

import subprocess
import sys
from collections.abc import Callable
from time import perf_counter

import numpy as np
import phreeqpython

from core.chemistry import Solution, speciate, to_saturation
from tests.core.chemistry.random_waters import each, random_waters

MANY = 10_000
FEW = 200  # for the library, which takes its waters one by one
ONE = {
    "temp_c": 12, "ph": 7.3, "ca": 2.4, "mg": 0.8, "na": 0.9, "k": 0.05, "cl": 1.1, "so4": 0.6, "no3": 0.2,
    "alkalinity": 5.0,
}  # fmt: skip
SYMBOLS = {
    "ca": "Ca", "mg": "Mg", "na": "Na", "k": "K", "cl": "Cl", "so4": "S(6)", "no3": "N(5)", "alkalinity": "Alkalinity",
}  # fmt: skip
IMPORT = "import numpy, time; t = time.thread_time(); {}; print(time.thread_time() - t)"  # numpy's own threads left out
IMPORTS = ("import core", "from core.chemistry import Solution, speciate, to_saturation")


def best_time(call: Callable[[], object], repeats: int = 3) -> float:
    """Shortest of a few runs: the one least disturbed by whatever else the machine does. [s]"""
    times = []
    for _ in range(repeats):
        start = perf_counter()
        call()
        times.append(perf_counter() - start)
    return min(times)


def ours(columns: dict[str, np.ndarray]) -> None:
    """Speciate many waters, from their readings, and bring them to saturation with calcite."""
    water = Solution(**columns)
    assert np.all(np.isfinite(speciate(water).si_calcite))
    assert np.all(np.isfinite(to_saturation(water, "calcite").precipitated))


def theirs(engine: phreeqpython.PhreeqPython, waters: list[dict[str, float]]) -> None:
    """The same with the library."""
    for water in waters:
        given = {symbol: water[name] for name, symbol in SYMBOLS.items()}
        solution = engine.add_solution({"units": "mmol/kgw", "temp": water["temp_c"], "pH": water["ph"], **given})
        assert np.isfinite(solution.si("Calcite"))
        solution.saturate("Calcite")
        assert np.isfinite(solution.pH)
        solution.forget()


def per_water() -> tuple[float, float]:
    """Time per water of ours, at 10,000 at once, and of the library. [s]"""
    base = random_waters()
    repeats = -(-MANY // len(base["ph"]))
    many = {name: np.tile(values, repeats)[:MANY] for name, values in base.items()}
    few = each(base)[:FEW]
    engine = phreeqpython.PhreeqPython(database="phreeqc.dat")
    library, own = [], []
    for _ in range(5):  # turn about, so that a disturbance meets both
        library.append(best_time(lambda: theirs(engine, few), 1) / len(few))
        own.append(best_time(lambda: ours(many), 1) / MANY)
    return min(own), min(library)


def one_water() -> tuple[float, float]:
    """Time to speciate one water, and to bring one to saturation, each from its reading. [s]"""
    speciation = best_time(lambda: speciate(Solution(**ONE)).si_calcite, 30)
    return speciation, best_time(lambda: to_saturation(Solution(**ONE), "calcite"), 30)


def import_time(statement: str) -> float:
    """Processor time of an import beyond numpy's, in a fresh interpreter; best of nine. [s]"""
    command = [sys.executable, "-c", IMPORT.format(statement)]
    return min(float(subprocess.run(command, capture_output=True, text=True, check=True).stdout) for _ in range(9))


def main() -> None:
    """Print all of it."""
    own, library = per_water()
    print(f"{MANY} waters at once: {1e6 * own:.1f} µs each; library {1e6 * library:.0f} µs each")
    print(f"ratio: {library / own:.0f}")
    speciation, saturation = one_water()
    print(f"one water: speciate {1e3 * speciation:.2f} ms, to saturation {1e3 * saturation:.2f} ms")
    for statement in IMPORTS:
        print(f"{statement}: {1e3 * import_time(statement):.0f} ms beyond numpy")


if __name__ == "__main__":
    main()
