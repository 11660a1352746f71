"""The outside check: two engines of a general geochemistry library, each with its own file of constants.

"pb1982" is checked with phreeqpython and the classic file it ships, "usgs2024" with the present engine and its file
of May 2024. Brucite, which neither file holds, is given to both with the constant of the USGS file wateq4f.dat, and
vaterite with the fit of Plummer and Busenberg (1982).
"""

from __future__ import annotations

from collections.abc import Mapping
from functools import lru_cache
from typing import Protocol

import phreeqc
import phreeqpython

MORE_SOLIDS = """
PHASES
Brucite
    Mg(OH)2 + 2 H+ = Mg+2 + 2 H2O
    -log_k 16.84
    -delta_h -27.1 kcal
Vaterite
    CaCO3 = CO3-2 + Ca+2
    -analytic -172.1295 -0.077993 3074.688 71.595
END
"""

ELEMENTS = {
    "ca": "Ca", "mg": "Mg", "na": "Na", "k": "K", "nh4": "N(-3)", "fe": "Fe(2)", "mn": "Mn(2)", "sr": "Sr", "ba": "Ba",
    "cl": "Cl", "so4": "S(6)", "no3": "N(5)", "f": "F", "si": "Si", "alkalinity": "Alkalinity", "dic": "C(4)",
}  # fmt: skip
SOLIDS = ("Calcite", "Aragonite", "Vaterite", "Brucite", "Gypsum", "Siderite", "Rhodochrosite")
TOTALS = ("Ca", "Mg", "C", "S")


def solution_block(number: int, water: Mapping[str, float]) -> str:
    """A water as the library reads it; without a pH, the pH that balances the charge."""
    lines = [f"SOLUTION {number}", "units mmol/kgw", f"temp {water['temp_c']:.15g}"]
    lines.append(f"pH {water['ph']:.15g}" if "ph" in water else "pH 7 charge")
    lines += [f"{symbol} {water[name]:.15g}" for name, symbol in ELEMENTS.items() if water.get(name, 0.0)]
    return "\n".join(lines) + f"\nSAVE SOLUTION {number}\nEND\n"


class Library(Protocol):
    """What the tests ask of either engine: run a text, then read a solution by its number."""

    def run(self, text: str) -> None:
        """Run input of the library."""

    def read(self) -> dict[str, float]:
        """pH, ionic strength [mol/kg], totals [mmol/kg], SI_ of each solid, of the solution last reacted."""

    def speciated(self, water: Mapping[str, float]) -> dict[str, float]:
        """A water as it is."""

    def reacted(self, water: Mapping[str, float], reaction: str) -> dict[str, float]:
        """A water after a reaction block."""


class _Common:
    def speciated(self, water: Mapping[str, float]) -> dict[str, float]:
        """A water as it is."""
        self.run(solution_block(1, water))
        return self.read(1)

    def reacted(self, water: Mapping[str, float], reaction: str) -> dict[str, float]:
        """A water after a reaction block."""
        self.run(solution_block(1, water))
        self.run(f"USE SOLUTION 1\n{reaction}\nSAVE SOLUTION 2\nEND\n")
        return self.read(2)


class Classic(_Common):
    """phreeqpython's own engine and classic file."""

    def __init__(self) -> None:
        self.engine = phreeqpython.PhreeqPython(database="phreeqc.dat").ip
        self.engine.run_string(MORE_SOLIDS)

    def run(self, text: str) -> None:
        """Run input of the library."""
        self.engine.run_string(text)

    def read(self, number: int) -> dict[str, float]:
        """pH, ionic strength, totals and saturation indices of a solution."""
        ip = self.engine
        found = {"ph": ip.get_ph(number), "strength": ip.get_mu(number), "temp": ip.get_temperature(number)}
        found |= {total: 1000.0 * ip.get_total_element(number, total) for total in TOTALS}
        return found | {f"SI_{solid}": ip.get_si(number, solid) for solid in SOLIDS}


class Present(_Common):
    """The present engine and the file of 2024."""

    def __init__(self) -> None:
        self.engine = phreeqc.Phreeqc()
        self.engine.LoadBuiltInDatabase("phreeqc.dat")
        totals = ", ".join(f'TOT("{total}")*1000' for total in TOTALS)
        indices = ", ".join(f'SI("{solid}")' for solid in SOLIDS)
        heads = " ".join(("ph", "strength", "temp", *TOTALS, *(f"SI_{solid}" for solid in SOLIDS)))
        punch = f'USER_PUNCH\n-headings {heads}\n10 PUNCH -LA("H+"), MU, TC, {totals}, {indices}\n'
        self.run(MORE_SOLIDS + "SELECTED_OUTPUT\n-reset false\n-high_precision true\n" + punch + "END\n")

    def run(self, text: str) -> None:
        """Run input of the library."""
        if self.engine.RunString(text):
            raise RuntimeError(self.engine.GetErrorString())

    def read(self, number: int) -> dict[str, float]:
        """pH, ionic strength, totals and saturation indices of the solution last computed."""
        return {name: values[-1] for name, values in self.engine.GetSelectedOutput().items()}


@lru_cache(maxsize=2)
def library(data: str) -> Library:
    """The engine that checks a data set."""
    return {"pb1982": Classic, "usgs2024": Present}[data]()
