"""The same column in PHREEQC, a general geochemistry code: EXCHANGE cells moved by ADVECTION. For tests
only.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import phreeqpython

from core.constants import ATOMIC_WEIGHTS, MOLAR_MASS_NACL, molar_mass
from core.treatment.exchange import exchange_constants

PORE_PER_BED = 0.38  # kg water per litre of bed
CAPACITY = 2.0  # mol exchanger per litre of bed
BRINE = 0.10 / 0.90 / MOLAR_MASS_NACL * 1000.0  # mol/kg water


@dataclass(frozen=True)
class Water:
    """An analysis: temperature, pH, then mg/L of Ca, Mg, Na, K, alkalinity as CaCO3, SO4, NO3."""

    temp_c: float
    ph: float
    ca_mg: float
    mg_mg: float
    na_mg: float
    k_mg: float
    alkalinity_mg: float
    so4_mg: float
    no3_mg: float

    @property
    def ca(self) -> float:
        """Calcium. [mmol/L]"""
        return self.ca_mg / ATOMIC_WEIGHTS["Ca"]

    @property
    def mg(self) -> float:
        """Magnesium. [mmol/L]"""
        return self.mg_mg / ATOMIC_WEIGHTS["Mg"]

    def solution(self) -> dict[str, float]:
        """Fields of a Solution, chloride by balance."""
        fields = {
            "temp_c": self.temp_c,
            "ph": self.ph,
            "ca": self.ca,
            "mg": self.mg,
            "na": self.na_mg / ATOMIC_WEIGHTS["Na"],
            "k": self.k_mg / ATOMIC_WEIGHTS["K"],
            "alkalinity": self.alkalinity_mg / 50.043,
            "so4": self.so4_mg / molar_mass(S=1, O=4),
            "no3": self.no3_mg / molar_mass(N=1, O=3),
        }
        cations = 2 * fields["ca"] + 2 * fields["mg"] + fields["na"] + fields["k"]
        return {**fields, "cl": cations - fields["alkalinity"] - 2 * fields["so4"] - fields["no3"]}

    def block(self, cells: str, kilograms: float) -> str:
        """SOLUTION block for these cells."""
        f = self.solution()
        return (
            f"SOLUTION {cells}\n temp {f['temp_c']}\n pH {f['ph']}\n units mmol/kgw\n Ca {f['ca']}\n Mg {f['mg']}\n"
            f" Na {f['na']}\n K {f['k']}\n Alkalinity {f['alkalinity']} meq/kgw\n S(6) {f['so4']}\n N(5) {f['no3']}\n"
            f" Cl {f['cl']} charge\n -water {kilograms}\n"
        )


@dataclass(frozen=True)
class Outside:
    """What the other code says: resin after the rinse (cell, ion), then hardness against bed volumes."""

    resin: np.ndarray
    volume: np.ndarray  # BV
    hardness: np.ndarray  # mmol/kg

    def breakthrough(self, fraction: float, feed: float) -> float:
        """Bed volumes at which this fraction of the feed's hardness is reached, after the lowest leakage."""
        start = int(self.hardness.argmin())
        after = start + int(np.argmax(self.hardness[start:] > fraction * feed))
        pair = slice(after - 1, after + 1)
        return float(np.interp(fraction * feed, self.hardness[pair], self.volume[pair]))


_PUNCH = """SELECTED_OUTPUT
 -reset false
USER_PUNCH
 -headings step hardness ca mg na k
10 w = TOT("water")
20 PUNCH STEP_NO, TOT("Ca") + TOT("Mg"), 2*MOL("CaX2")*w, 2*MOL("MgX2")*w, MOL("NaX")*w, MOL("KX")*w
"""


def advection(water: Water, *, cells: int, brine: int, rinse: int, service: int = 1) -> Outside:
    """Regenerate an exhausted column with so many shifts of 10 % brine, rinse it with the water, then
    serve.
    """
    pore, shift = PORE_PER_BED / cells, PORE_PER_BED / cells
    constants = np.log10(exchange_constants(CAPACITY))
    species = "".join(
        f" {reaction}\n log_k {k}\n -gamma {gamma}\n"
        for reaction, k, gamma in (
            ("Ca+2 + 2X- = CaX2", constants[0], "5.0 0.165"),
            ("Mg+2 + 2X- = MgX2", constants[1], "5.5 0.20"),
            ("K+ + X- = KX", constants[3], "3.5 0.015"),
        )
    )
    salt = f"SOLUTION 0\n temp {water.temp_c}\n units mmol/kgw\n Na {BRINE * 1000}\n Cl {BRINE * 1000} charge\n"
    every = max(service // 400, 1)
    script = (
        f"EXCHANGE_SPECIES\n{species}{water.block(f'0-{cells}', pore)}"
        f"EXCHANGE 1-{cells}\n X {CAPACITY / cells}\n -equilibrate 1\nEND\n"
        f"{salt} -water {pore}\nEND\n"
        f"ADVECTION\n -cells {cells}\n -shifts {brine}\n -punch_frequency {brine}\nEND\n"
        f"{water.block('0', pore)}END\n{_PUNCH}"
        f"ADVECTION\n -cells {cells}\n -shifts {rinse}\n -punch_cells 1-{cells}\n -punch_frequency {rinse}\nEND\n"
        f"ADVECTION\n -cells {cells}\n -shifts {service}\n -punch_cells {cells}\n -punch_frequency {every}\nEND\n"
    )
    engine = phreeqpython.PhreeqPython(database="phreeqc.dat")
    engine.ip.run_string(script)
    table = np.array([list(row) for row in engine.ip.get_selected_output_array()[1:]], dtype=float)
    resin = table[:cells, 2:]
    run = table[cells:]
    return Outside(resin / resin.sum(1, keepdims=True), run[:, 0] * shift, 1000.0 * run[:, 1])
