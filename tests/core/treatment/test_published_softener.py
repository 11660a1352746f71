"""Softener, demand and blend against figures from outside; every row of the three tables is mapped here."""

import pytest

from core.constants import CUBIC_FOOT, GRAIN, INCH, MOLAR_MASS_CACO3, MOLAR_MASS_CAO, POUND, US_GALLON
from core.errors import InputError
from core.treatment import blending, demand, hydraulics, peak_flow, regeneration, resin, rules, softener, vessel
from tests.published import rows

FOOT = 12 * INCH / 1000  # m
LB_FT3 = POUND / CUBIC_FOOT  # g/L
GRAIN_MOL = GRAIN / 1000 / MOLAR_MASS_CACO3  # mol hardness in one grain as CaCO3
KGR_FT3 = 2 * 1000 * GRAIN_MOL / CUBIC_FOOT  # eq/L
HARDNESS = {
    "gpg": 1000 * GRAIN_MOL / US_GALLON,
    "°dH": 10 / MOLAR_MASS_CAO,
    "mg/L CaCO3": 1 / MOLAR_MASS_CACO3,
}  # mmol/L


def _salt_limit(salt):
    limit = resin.STOICHIOMETRIC_EFFICIENCY[salt]
    return {"grains_per_lb": limit * POUND / 1000 / GRAIN_MOL, "mol_per_kg": limit}


def _efficiency_of_grains(grains_per_lb):
    dose = LB_FT3
    efficiency = resin.salt_efficiency(grains_per_lb / 1000 * KGR_FT3, dose)
    return {"mol_per_kg": efficiency, "percent": 100 * resin.share_of_stoichiometric(efficiency)}


def _grams_per_kilogram(grains_per_lb):
    efficiency = resin.salt_efficiency(grains_per_lb / 1000 * KGR_FT3, LB_FT3)
    return {"g_per_kg": efficiency * MOLAR_MASS_CACO3}


def _load_us(persons, gal, gpg, iron, rule):
    hardness = softener.compensated_hardness(gpg * HARDNESS["gpg"], iron, rule=rule)
    load = softener.daily_load(demand.daily_volume(persons, gal * US_GALLON), hardness)
    return {"gpg": hardness / HARDNESS["gpg"], "grains": load / GRAIN_MOL}


def _us(persons, gal, gpg, ft3, lb_ft3):
    load = softener.daily_load(demand.daily_volume(persons, gal * US_GALLON), gpg * HARDNESS["gpg"])
    capacity = softener.bed_capacity(ft3 * CUBIC_FOOT, resin.trade_capacity(lb_ft3 * LB_FT3))
    usable = softener.usable_capacity(capacity, softener.reserve_of_days(load))
    salt = softener.salt_per_regeneration(ft3 * CUBIC_FOOT, lb_ft3 * LB_FT3)
    return load, capacity, usable, salt


def _interval_us(gpg, **inputs):
    load, _, usable, salt = _us(gpg=gpg, **inputs)
    days = softener.days_between(usable, load)
    return {
        "days": days,
        "gallons": softener.meter_setting(usable, gpg * HARDNESS["gpg"]) / US_GALLON,
        "lb_year": softener.salt_per_year(salt, days) * 1000 / POUND,
    }


def _efficiency_us(**inputs):
    load, capacity, usable, salt = _us(**inputs)
    per_lb = POUND / 1000 / GRAIN_MOL
    return {
        "grains_per_lb": per_lb * softener.effective_efficiency(softener.days_between(usable, load), load, salt),
        "full_grains_per_lb": per_lb * softener.effective_efficiency(softener.days_between(capacity, load), load, salt),
    }


def _peak_us(gpm, ft3, inch):
    flow = gpm * US_GALLON
    return {
        "gpm_ft3": vessel.specific_flow(flow, ft3 * CUBIC_FOOT) * CUBIC_FOOT / US_GALLON / 60,
        "gpm_ft2": vessel.surface_loading(flow, vessel.bed_area(inch * INCH)) * FOOT**2 * 1000 / 60 / US_GALLON,
    }


def _water_us(ft2_gpm, inch, backwash_min, slow_gpm, slow_min, lb, grains):
    wash = regeneration.backwash_flow(vessel.bed_area(inch * INCH), ft2_gpm * US_GALLON / FOOT**2 * 60 / 1000)
    water = (
        regeneration.step_water(wash, backwash_min) * 2
        + regeneration.step_water(slow_gpm * US_GALLON, slow_min)
        + regeneration.refill_water(lb * POUND / 1000)
    )
    per_mol = softener.regeneration_water_per_mol(water, 1.0, grains * GRAIN_MOL)
    return {"gal_per_kgr": per_mol * 1000 * GRAIN_MOL / US_GALLON}


def _load_de(persons, litres, raw, blend, mol_per_kg, resin, salt):
    load = softener.daily_load(demand.daily_volume(persons, litres), raw * HARDNESS["°dH"], blend * HARDNESS["°dH"])
    days = softener.days_between(salt * mol_per_kg, load)
    return {
        "mol_day": load,
        "kg_day": load / mol_per_kg,
        "days": days,
        "kg_year": softener.salt_per_year(salt, days),
    }


def _share_de(litres, raw, blend):
    share = 1 - blending.raw_share(raw, 0.0, blend)
    return {"share": share, "litres": blending.stream_flow(litres, share)}


def _tank(inch, ft3):
    area = vessel.bed_area(inch * INCH)
    return {"ft2": area / FOOT**2, "depth_in": vessel.bed_depth(ft3 * CUBIC_FOOT, area) * 1000 / INCH}


SOFTENER = {
    "salt limit": _salt_limit,
    "efficiency of grains per pound": _efficiency_of_grains,
    "grams of hardness per kilogram": _grams_per_kilogram,
    "capacity unit": lambda kgr_ft3: {"eq_l": kgr_ft3 * resin.KILOGRAIN_PER_CUBIC_FOOT},
    "dose unit": lambda lb_ft3: {"g_l": lb_ft3 * resin.POUND_PER_CUBIC_FOOT},
    "trade capacity": lambda lb_ft3: {"kgr_ft3": resin.trade_capacity(lb_ft3 * LB_FT3) / KGR_FT3},
    "iron equivalent": lambda iron: {
        "mg_caco3": softener.true_hardness(0.0, iron) / HARDNESS["mg/L CaCO3"],
        "gpg": softener.true_hardness(0.0, iron) / HARDNESS["gpg"],
    },
    "manganese equivalent": lambda manganese: {
        "mg_caco3": softener.true_hardness(0.0, 0.0, manganese) / HARDNESS["mg/L CaCO3"]
    },
    "load, US": _load_us,
    "interval, US": _interval_us,
    "efficiency in use, US": _efficiency_us,
    "peak flow, US": _peak_us,
    "regeneration water, US": _water_us,
    "load and interval, DE": _load_de,
    "softened share, DE": _share_de,
    "mol in m3·°dH": lambda mol: {"m3_dh": mol / HARDNESS["°dH"]},
    "tank": _tank,
    "refill water": lambda lb, temperature: {
        "gallons": regeneration.refill_water(lb * POUND / 1000, temperature) / US_GALLON
    },
    "saturated brine": lambda temperature: {"percent": 100 * regeneration.salt_solubility(temperature)},
}

GPM_FT2 = US_GALLON / FOOT**2 * 60 / 1000  # m/h


def _between(temperature, gpm_ft2):
    light, heavy = (hydraulics.backwash_velocity(temperature, 0.5, *bead) for bead in ((0.5, 1250), (0.6, 1290)))
    return {"between": light < gpm_ft2 * GPM_FT2 < heavy}


def _ratings(grains_per_lb, gal_kgr):
    met = rules.ratings_met(grains_per_lb * GRAIN_MOL / POUND * 1000, gal_kgr * US_GALLON / (1000 * GRAIN_MOL))
    return {rating.key: rating.key in met for rating in rules.efficiency_ratings()}


SOFTENER |= {
    "viscosity": lambda temperature: {"mpas": hydraulics.viscosity(temperature)},
    "bed pressure loss": lambda velocity, **bed: {"kpa_m": hydraulics.bed_pressure_loss(velocity, 1.0, **bed)},
    "backwash velocity": lambda **bed: {"gpm_ft2": hydraulics.backwash_velocity(**bed) / GPM_FT2},
    "backwash between": _between,
    "air gap": lambda inch, region: {
        "gap_inch": rules.air_gap(inch * INCH, rules.rules_for(region)["air-gap"].value) / INCH
    },
    "public capacity": lambda kgr_ft3, lb_kgr: {
        "allowed": rules.public_capacity_allowed(kgr_ft3 * KGR_FT3, kgr_ft3 * lb_kgr * LB_FT3)
    },
    "ratings": _ratings,
}

DEMAND = {
    "din peak flow": lambda building, sum_l_s: {"l_s": peak_flow.peak_flow_din(60 * sum_l_s, building) / 60},
    "fixture peak flow": lambda code, flushing, wsfu: {
        "gpm": peak_flow.peak_flow_fixture_units(wsfu, code, flushing) / US_GALLON
    },
    "fixture units": lambda **counts: {"wsfu": peak_flow.fixture_units(counts)},
    "yearly use": lambda use, persons: {
        "m3": demand.yearly_volume(demand.daily_volume(persons, demand.use_figure(use).per_person))
    },
}


def _refused(raw, softened, target, unit):
    with pytest.raises(InputError) as refusal:
        blending.check_blend(*(value * HARDNESS[unit] for value in (raw, softened, target)))
    return {"field": refusal.value.field}


def _exceeded(sodium, removed, unit):
    after = blending.sodium_after(sodium, removed * HARDNESS[unit])
    over = {limit.key for limit in blending.sodium_limits_exceeded(after)}
    return {key: key in over for key in ("eu", "who", "epa-diet")}


def _parts_to_blend(raw, softened, target, raw_na, softened_na):
    share = blending.raw_share(raw, softened, target)
    return {"share": share, "na": blending.blend(raw_na, softened_na, share)}


BLEND = {
    "raw share": lambda raw, softened, target, unit: {
        "share": blending.raw_share(*(value * HARDNESS[unit] for value in (raw, softened, target)))
    },
    "refused": lambda **inputs: _refused(**inputs, unit="°dH"),
    "sodium added": lambda removed, unit: {"na": blending.sodium_added(removed * HARDNESS[unit])},
    "sodium a day": lambda removed, unit, litres: {
        "mg": blending.daily_sodium(blending.sodium_added(removed * HARDNESS[unit]), litres)
    },
    "final sodium": lambda sodium, removed, unit: {"na": blending.sodium_after(sodium, removed * HARDNESS[unit])},
    "limits exceeded": _exceeded,
    "largest removal": lambda sodium, limit, unit: {
        "removed": blending.largest_removal(sodium, limit) / HARDNESS[unit]
    },
    "potassium added": lambda removed, unit: {"k": blending.potassium_added(removed * HARDNESS[unit])},
    "blend of raw and softened": _parts_to_blend,
}


@pytest.mark.parametrize(
    ("row", "computed"),
    [
        pytest.param(row, computed, id=row.id)
        for table, computed in (("softener", SOFTENER), ("demand", DEMAND), ("blend", BLEND))
        for row in rows(table)
    ],
)
def test_check_value(row, computed):
    """What we compute is what the source has, within the tolerance of the row."""
    row.check(**computed[row.what](**row.inputs))
