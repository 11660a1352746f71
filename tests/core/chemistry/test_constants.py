"""The tables of constants: complete, sourced, and the same by two roads."""

from __future__ import annotations

import re

import numpy as np
import pytest
from numpy.testing import assert_allclose

from core.chemistry import __all__ as public
from core.chemistry.reactions import DATA_SETS, SOLIDS, SPECIES
from core.chemistry.thermodynamics import log_k
from core.chemistry.water import debye_huckel_slopes, debye_huckel_slopes_simple, dielectric_constant, water_density
from core.errors import InputError
from core.references import REFERENCES

EVERY = [(data, species) for data in DATA_SETS for species in SPECIES[data]]
CHARGES = {
    "Ca": 2, "Mg": 2, "Na": 1, "K": 1, "NH4": 1, "Fe": 2, "Mn": 2, "Sr": 2, "Ba": 2, "Si": 0, "Cl": -1, "NO3": -1,
    "F": -1, "": 0,
}  # fmt: skip

# log10 K by temperature, worked out elsewhere from the coefficients of the USGS files; 0 25 60 90 °C
BY_TEMPERATURE = [
    ("calcite", "pb1982", (-8.3814, -8.4798, -8.7588, -9.1217)),
    ("calcite", "usgs2024", (-8.3900, -8.4800, -8.8766, -9.4055)),
    ("aragonite", "pb1982", (-8.2180, -8.3361, -8.6376, -9.0163)),
    ("vaterite", "pb1982", (-7.7427, -7.9134, -8.2753, -8.6966)),
    ("CaCO3", "pb1982", (3.1354, 3.2253, 3.6503, 4.0531)),
    ("MgCO3", "pb1982", (2.8129, 2.9797, 3.2131, 3.4132)),
    ("CaSO4", "pb1982", (2.1611, 2.2500, 2.3520, 2.4238)),
    ("MgSO4", "pb1982", (2.0647, 2.3700, 2.7204, 2.9670)),
    ("MgSO4", "usgs2024", (2.1353, 2.4180, 2.8033, 3.1263)),
    ("MgOH+", "pb1982", (-12.5102, -11.4400, -10.2116, -9.3471)),
    ("NaCO3-", "pb1982", (0.6722, 1.2700, 1.9561, 2.4390)),
    ("NaSO4-", "pb1982", (0.6249, 0.7000, 0.7862, 0.8469)),
    ("gypsum", "usgs2024", (-4.6281, -4.5824, -4.6514, -4.7911)),
    ("brucite", "pb1982", (18.6581, 16.8400, 14.7531, 13.2845)),
    ("OH-", "pb1982", (-14.9385, -13.9948, -13.0153, -12.4048)),
]
# The same, formed from bicarbonate instead of carbonate and H+
FROM_BICARBONATE = [
    ("CaHCO3+", "pb1982", (0.8199, 1.1057, 1.2289, 1.3091)),
    ("CaHCO3+", "usgs2024", (0.0698, 0.5863, 1.2330, 1.7481)),
    ("MgHCO3+", "pb1982", (1.0514, 1.0682, 1.1827, 1.3370)),
    ("NaHCO3", "pb1982", (-0.1829, -0.2500, -0.3270, -0.3812)),
    ("NaHCO3", "usgs2024", (-0.3967, -0.0600, 0.3265, 0.5985)),
]
TEMPERATURES = np.array([0.0, 25.0, 60.0, 90.0])


@pytest.mark.parametrize(("name", "data", "values"), BY_TEMPERATURE)
def test_constants_by_temperature(name, data, values):
    """Each fit gives what its coefficients were found to give elsewhere, to the last digit printed."""
    assert_allclose(log_k(name, TEMPERATURES, data=data), values, rtol=0, atol=1.1e-4)


@pytest.mark.parametrize(("name", "data", "values"), FROM_BICARBONATE)
def test_constants_from_bicarbonate(name, data, values):
    """Pairs with bicarbonate agree once the formation of bicarbonate is taken off."""
    ours = log_k(name, TEMPERATURES, data=data) - log_k("HCO3-", TEMPERATURES, data=data)

    assert_allclose(ours, values, rtol=0, atol=5e-4)  # A1 of the difference was printed to three decimals


@pytest.mark.parametrize(("data", "species"), EVERY, ids=lambda item: getattr(item, "name", item))
def test_species_balance(data, species):
    """The charge of a species follows from what it is made of, and its name says the charge."""
    h, c, s, _ = species.made
    charge = CHARGES[species.of] + CHARGES[species.partner] + h - 2 * c - 2 * s
    written = re.search(r"([+-])(\d?)$", species.name)
    named = 0 if written is None else int(written[1] + (written[2] or "1"))

    assert charge == species.charge == named


@pytest.mark.parametrize(("data", "species"), EVERY, ids=lambda item: getattr(item, "name", item))
def test_species_have_sources(data, species):
    """Each constant names where it stands, and an ion size is given or the ion is left to Davies."""
    assert set(species.source.split()) <= set(REFERENCES)
    assert species.size is None or species.size > 0.0


@pytest.mark.parametrize("data", DATA_SETS)
def test_solids_have_sources(data):
    """Each solid names its source."""
    assert all(set(solid.source.split()) <= set(REFERENCES) for solid in SOLIDS[data].values())


def test_two_roads_to_the_slopes():
    """Debye-Hückel slopes by density and permittivity, and by the older expressions, agree to 0.2 %."""
    temps = np.linspace(0.0, 90.0, 19)

    for full, simple in zip(debye_huckel_slopes(temps), debye_huckel_slopes_simple(temps), strict=True):
        assert_allclose(full, simple, rtol=2e-3)


# Dielectric constant and density of water, PHREEQC 3.8.6 (from its source's equations), 0 25 60 80 °C
def test_water_properties():
    """Permittivity and density are those of the equations cited, to the digits printed."""
    temps = np.array([0.0, 25.0, 60.0, 80.0])

    assert_allclose(dielectric_constant(temps), [87.856, 78.384, 66.729, 60.843], rtol=0, atol=1e-3)
    assert_allclose(water_density(temps), [0.99984, 0.99704, 0.98319, 0.97179], rtol=0, atol=6e-5)


@pytest.mark.parametrize(("name", "data"), [("rust", "pb1982"), ("NaCO3-", "usgs2024"), ("calcite", "x")])
def test_unknown_constants(name, data):
    """A constant that is not in the set is refused by name."""
    with pytest.raises(InputError):
        log_k(name, 25.0, data=data)


def test_public_names():
    """The public names are sorted as the linter sorts them, and each of them loads."""
    import core.chemistry

    assert all(getattr(core.chemistry, name) is not None for name in public)
    assert dir(core.chemistry) == sorted(public)
    with pytest.raises(AttributeError, match="no attribute"):
        core.chemistry.alchemy  # noqa: B018
