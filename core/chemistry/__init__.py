"""The chemistry of a water."""

from core.chemistry.saturation import Saturated, to_saturation
from core.chemistry.solution import Solution
from core.chemistry.speciation import Speciation, at_temperature, speciate

__all__ = ["Saturated", "Solution", "Speciation", "at_temperature", "speciate", "to_saturation"]
