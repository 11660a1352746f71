"""The computing of Tapwright: numbers only, no interface, no storage, no clock, no network.

Three storeys, arrows pointing down only: `core.job` on `core.treatment` on `core.chemistry` on units and
constants. Nothing is imported here, so that a unit can be converted before numpy is there.
"""
