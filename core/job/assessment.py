"""What is said about a job: one assessment, a part for each section, each made when it is first looked at."""

from __future__ import annotations

from functools import cached_property

from core.job.answers import Part
from core.job.blend import assess_blend
from core.job.blend_water import assess_blend_water
from core.job.column import assess_column
from core.job.demand import Demand, assess_demand
from core.job.dose import Dosing, assess_dose
from core.job.dose_jars import assess_jars
from core.job.dose_water import assess_dose_water
from core.job.options import assess_options
from core.job.record import Job
from core.job.run_out import assess_run_out
from core.job.scale import assess_scale
from core.job.softener import Softener, assess_softener
from core.job.sources import Mixing, assess_sources
from core.job.sources_turns import assess_turns
from core.job.water import assess_water


class Assessment:
    """The answers about one job. Parts are made when asked for, so that a key press pays for one section only."""

    def __init__(self, job: Job) -> None:
        self.job = job

    @cached_property
    def water(self) -> Part:
        """What the reading means."""
        return assess_water(self.job)

    @cached_property
    def demand(self) -> Part:
        """How much water, how fast."""
        return self._demand.part

    @cached_property
    def scale(self) -> Part:
        """Lime in the heater, balance at the tap, attack on pipes."""
        return assess_scale(self.job, self._demand)

    @cached_property
    def softener(self) -> Part:
        """Size, salt setting, running."""
        return self._softener.part

    @cached_property
    def options(self) -> Part:
        """Other ways to do the softener's task."""
        return assess_options(self._softener)

    @cached_property
    def run_out(self) -> Part:
        """How often hard water reaches the tap."""
        return assess_run_out(self._softener)

    @cached_property
    def column(self) -> Part:
        """Capacity, leakage and waste by the column model."""
        return assess_column(self.job, self._softener)

    @cached_property
    def blend(self) -> Part:
        """Raw water back into softened."""
        return assess_blend(self.job)

    @cached_property
    def blend_water(self) -> Part:
        """The blend as a water, and what a fixed bypass does when demand swings."""
        return assess_blend_water(self.job, self._softener)

    @cached_property
    def dose(self) -> Part:
        """Soda ash, lime or caustic."""
        return self._dosing.part

    @cached_property
    def dose_water(self) -> Part:
        """What the dose does to the water."""
        return assess_dose_water(self._dosing)

    @cached_property
    def jars(self) -> Part:
        """Six jars around the dose."""
        return assess_jars(self._dosing)

    @cached_property
    def sources(self) -> Part:
        """Several wells or streams to one demand."""
        return self._mixing.part

    @cached_property
    def turns(self) -> Part:
        """The settings as now, and with each source off."""
        return assess_turns(self._mixing)

    @cached_property
    def _mixing(self) -> Mixing:
        return assess_sources(self.job)

    @cached_property
    def _dosing(self) -> Dosing:
        return assess_dose(self.job)

    @cached_property
    def _softener(self) -> Softener:
        return assess_softener(self.job, self._demand)

    @cached_property
    def _demand(self) -> Demand:
        return assess_demand(self.job)


def assess(job: Job) -> Assessment:
    """The assessment of a job: pure, the same job gives the same answers."""
    return Assessment(job)
