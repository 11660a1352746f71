"""Units: what a kit prints or a report says, turned into any other unit of the same quantity.

    >>> round(convert(300, "mg/L CaCO3", "gpg"), 5)
    17.52535
    >>> round(convert(92, "mg/L", "mmol/L", quantity="calcium"), 5)
    2.29552
    >>> find_unit("grains per gallon", "hardness").symbol
    'gpg'

Factors are kept at full precision; rounding is a matter of showing. A plain number needs no numpy.
"""

from __future__ import annotations

from core.units.conversion import convert
from core.units.lookup import QUANTITIES, find_unit, possible_units, quantity_named, units_of
from core.units.unit import Unit
from core.units.water import HARDNESS_UNITS

__all__ = [
    "HARDNESS_UNITS",
    "QUANTITIES",
    "Unit",
    "convert",
    "find_unit",
    "possible_units",
    "quantity_named",
    "units_of",
]
