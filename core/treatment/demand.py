"""Water that is used in a day, and how much of it is hot or needs to be soft.

    use_figures(region=None) -> tuple[UseFigure, ...]        published figures, .per_person in L/day
    use_figure(key) -> UseFigure
    use_per_person(figure) -> L/day                          the figure of that key
    daily_volume(persons, per_person, softened_share=1) -> L/day
    softened_volume(volume [L/day], softened_share=1) -> L/day
    daily_volume_from_meter(volume [L], days) -> L/day       the house's own meter, better than any figure
    average_persons(persons, guests, guest_days, away_days) -> persons
    softened_share(outdoor_share=0, toilet_share=0) -> share
    hot_water_volume(volume [L/day], hot_share=0.35) -> L/day
    yearly_volume(volume [L/day]) -> m³/year

Peak flow is in `peak_flow`.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache

from core.constants import US_GALLON
from core.data import number, read_table
from core.errors import InputError
from core.treatment.broadcast import Number, broadcasts, ratio
from core.working import formula

DAYS_PER_YEAR = 365.0
_LITRES = {"L/person/day": 1.0, "gal/person/day": US_GALLON}


@dataclass(frozen=True, slots=True)
class UseFigure:
    """A published figure of water use: what it counts, its year, its source and how well that was read."""

    key: str
    region: str
    words: str
    per_person: float  # L/day
    year: str
    source: str
    status: str


@cache
def use_figures(region: str | None = None) -> tuple[UseFigure, ...]:
    """Published use per person [L/day], for one region ("US", "DE", "UK") or all.

    Sources as each row says: [USGS1441], [REU2016], [US-DISTRICT], [DE-WATER-USE], [UK-EFRA2018], [TRADE-
    PRESS].
    """
    return tuple(
        UseFigure(
            row["key"],
            row["region"],
            row["words"],
            number(row, "value") * _LITRES[row["unit"]],
            row["year"],
            row["source"],
            row["status"],
        )
        for row in read_table("water_use").rows
        if region is None or row["region"] == region
    )


def use_figure(key: str) -> UseFigure:
    """Published figure of that key; raises InputError where there is none."""
    for figure in use_figures():
        if figure.key == key:
            return figure
    known = ", ".join(figure.key for figure in use_figures())
    raise InputError("use", key, f"No figure of water use is called {key}. Known are: {known}.")


@formula(
    "Daily volume",
    "volume = persons × use per person × share softened",
    unit="L/day",
    takes={"persons": "persons", "per_person": "L/day", "softened_share": ""},
    source="definition",
    validity="An average day. Days differ, most of all with guests and in a dry summer.",
)
@broadcasts
def daily_volume(persons: Number, per_person: Number, softened_share: Number = 1.0) -> Number:
    """Water that passes the softener on an average day. [L/day]"""
    return persons * per_person * softened_share


@formula(
    "Use per person",
    "a published figure, see the note",
    unit="L/day",
    takes={"figure": ""},
    source="definition",
    validity="A starting point where no meter was read.",
)
def use_per_person(figure: str) -> float:
    """Published use per person of that key of `use_figures`. [L/day]"""
    return use_figure(figure).per_person


@formula(
    "Softened volume",
    "volume = use × share softened",
    unit="L/day",
    takes={"volume": "L/day", "softened_share": ""},
    source="definition",
)
@broadcasts
def softened_volume(volume: Number, softened_share: Number = 1.0) -> Number:
    """Part of the use that passes the softener. [L/day]"""
    return volume * softened_share


@formula(
    "Daily volume from the meter",
    "volume = metered volume ÷ days",
    unit="L/day",
    takes={"volume": "L", "days": "day"},
    source="definition",
    validity="A reading over some weeks; one with garden watering in it overstates the softened water.",
)
@broadcasts
def daily_volume_from_meter(volume: Number, days: Number) -> Number:
    """Water used on an average day by the house's own meter [L/day]; NaN where no day has passed."""
    return ratio(volume, days)


@formula(
    "Persons on average",
    "persons = (living here × (365 − days away) + guests × days with guests) ÷ 365",
    unit="persons",
    takes={"persons": "persons", "guests": "persons", "guest_days": "day/year", "away_days": "day/year"},
    source="definition",
)
@broadcasts
def average_persons(persons: Number, guests: Number = 0.0, guest_days: Number = 0.0, away_days: Number = 0.0) -> Number:
    """Persons in the house on average over a year, guests and leave counted."""
    return (persons * (DAYS_PER_YEAR - away_days) + guests * guest_days) / DAYS_PER_YEAR


@formula(
    "Share that is softened",
    "share = 1 − outside taps − toilets",
    unit="",
    takes={"outdoor_share": "", "toilet_share": ""},
    source="definition",
    validity="Shares of the whole use. Toilets take about a quarter of the indoor use in US homes (secondary source).",
)
@broadcasts
def softened_share(outdoor_share: Number = 0.0, toilet_share: Number = 0.0) -> Number:
    """Share of the water used that passes the softener, where outside taps or toilets stay hard."""
    return 1.0 - outdoor_share - toilet_share


@formula(
    "Hot water",
    "hot = volume × share",
    unit="L/day",
    takes={"volume": "L/day", "hot_share": ""},
    source="common practice, no source",
    validity="30 to 40 % of the indoor use in homes (from memory).",
)
@broadcasts
def hot_water_volume(volume: Number, hot_share: Number = 0.35) -> Number:
    """Hot water used on an average day. [L/day]"""
    return volume * hot_share


@formula(
    "Yearly volume",
    "year = volume × 365 ÷ 1000",
    unit="m³/year",
    takes={"volume": "L/day"},
    source="definition",
)
@broadcasts
def yearly_volume(volume: Number) -> Number:
    """Water used in a year. [m³/year]"""
    return volume * (DAYS_PER_YEAR / 1000.0)
