"""The waters of the worked examples in tests/published/dose.tsv, as its remarks print them."""

from scipy.optimize import brentq

from core.chemistry import Solution, speciate
from core.constants import ATOMIC_WEIGHTS, MOLAR_MASS_CACO3, molar_mass
from core.treatment.precipitation import RawWater

# Ca, Mg, CO2 in mg/L, alkalinity in mg/L CaCO3; Na, SO4 in mmol/L
PRINTED = {"L1": (105.0, 9.7, 13.2, 210.0, 0.7, 0.5), "L2": (112.0, 30.0, 17.6, 260.0, 0.9, 0.8)}


def raw(name):
    """What the books ask of the water."""
    ca, mg, co2, alkalinity, _, _ = PRINTED[name]
    return RawWater(
        ca / ATOMIC_WEIGHTS["Ca"],
        mg / ATOMIC_WEIGHTS["Mg"],
        2.0 * alkalinity / MOLAR_MASS_CACO3,
        co2 / molar_mass(C=1, O=2),
    )


def solution(name, temp_c=10.0):
    """The same water with the pH at which it holds just so much CO2."""
    book = raw(name)
    _, _, _, _, na, so4 = PRINTED[name]
    chloride = 2 * (book.calcium + book.magnesium) + na + 0.05 - 2 * so4 - book.alkalinity

    def at(ph):
        return Solution(
            temp_c=temp_c, ph=ph, alkalinity=book.alkalinity, ca=book.calcium, mg=book.magnesium,
            na=na, k=0.05, so4=so4, cl=chloride,
        )  # fmt: skip

    return at(brentq(lambda ph: speciate(at(ph)).co2 - book.co2, 6.0, 9.0, xtol=1e-10))
