"""Lime, soda ash and caustic: by the books, at equilibrium against a general library, and what cannot be."""

from dataclasses import replace

import numpy as np
import pytest

from core.chemistry import add, speciate, to_saturation
from core.chemistry.reagents import REAGENTS
from core.constants import ATOMIC_WEIGHTS, MOLAR_MASS_CACO3
from core.errors import InputError
from core.treatment import dosing, precipitation
from core.treatment.precipitation import PROCESSES, Dose, Goal, RawWater, book_dose
from core.treatment.precipitation_plan import plan
from core.treatment.precipitation_water import equilibrium_dose, lime_when_heated, recarbonate, settle, to_least_calcium
from tests.core.chemistry.reference_library import library
from tests.core.treatment.lime_waters import raw, solution
from tests.published import rows

AS_CACO3 = MOLAR_MASS_CACO3
MOLAR = {name: REAGENTS[name].molar_mass for name in ("soda_ash", "lime", "quicklime", "caustic")}


def _book(water, process):
    dose = book_dose(process, raw(water)).dose
    return {
        "hydrated": precipitation.mass(dose.lime, MOLAR["lime"]),
        "quicklime": precipitation.mass(dose.lime, MOLAR["quicklime"]),
        "soda_ash": precipitation.mass(dose.soda_ash, MOLAR["soda_ash"]),
        "caustic": precipitation.mass(dose.caustic, MOLAR["caustic"]),
    }


def _residual(water, process):
    book = book_dose(process, raw(water))
    return {"calcium": book.calcium * AS_CACO3, "magnesium": book.magnesium * AS_CACO3}


def _sludge(water, lime, calcium_left, magnesium_left):
    of = raw(water)
    return {
        "carbonate": precipitation.lime_sludge(of.calcium, lime, calcium_left / AS_CACO3),
        "hydroxide": precipitation.magnesium_sludge(of.magnesium, magnesium_left / AS_CACO3),
    }


def _co2(excess, calcium_left, magnesium_left):
    left = magnesium_left / AS_CACO3
    return {
        "first": precipitation.co2_first(excess, left),
        "second": precipitation.co2_second(calcium_left / AS_CACO3, left),
    }


def _equilibrium(water, temp_c, **dose):
    settled = settle(solution(water, temp_c), Dose(**dose))
    return {
        "ph": settled.water.ph,
        "calcium": settled.water.ca * AS_CACO3,
        "magnesium": settled.water.mg * AS_CACO3,
        "alkalinity": settled.water.alkalinity * AS_CACO3 / 2,
        "sodium": settled.water.na * ATOMIC_WEIGHTS["Na"],
        "brucite": speciate(settled.water).si_brucite,
    }


def _sodium(soda_ash, caustic):
    added = precipitation.sodium_from(soda_ash, caustic)
    return {"per_mg": added / (soda_ash * MOLAR["soda_ash"] + caustic * MOLAR["caustic"])}


def _sludge_per_hardness(lime, magnesium):
    """Of 1 mmol removed; with magnesium the calcium of the lime, or of the soda's share, falls out besides."""
    carbonate = precipitation.lime_sludge(0.0 if magnesium else 1.0, lime, 0.0)
    hydroxide = precipitation.magnesium_sludge(1.0, 0.0) if magnesium else 0.0
    return {"per_mg": (carbonate + hydroxide) / AS_CACO3}


COMPUTED = {
    "book dose": _book,
    "book residual": _residual,
    "sludge": _sludge,
    "carbon dioxide": _co2,
    "equilibrium": _equilibrium,
    "product": lambda pure, purity: {"product": dosing.product_dose(pure, purity)},
    "solution": lambda dose, strength, density: {"ml_m3": dosing.solution_per_m3(dose, strength, density)},
    "sodium": _sodium,
    "sludge per hardness": _sludge_per_hardness,
    "strongest": lambda chemical, temp_c: {"per_100g": dosing.solubility(chemical, temp_c)},
}


@pytest.mark.parametrize("row", rows("dose"), ids=lambda row: row.id)
def test_check_value(row):
    """What we compute is what the source has, within the tolerance of the row."""
    row.check(**COMPUTED[row.what](**row.inputs))


SALTS = {"lime": "Ca(OH)2", "soda_ash": "Na2CO3", "caustic": "NaOH"}


def by_library(water, dose):
    """The same dose by PHREEQC: what falls out as calcite and brucite falls out, nothing else."""
    amounts = {SALTS[name]: getattr(dose, name) for name in SALTS if getattr(dose, name)}
    fed = "\n".join(f"{salt} {amount:.15g}" for salt, amount in amounts.items())
    reaction = f"REACTION 1\n{fed}\n1 millimoles in 1 steps\nEQUILIBRIUM_PHASES 1\nCalcite 0 0\nBrucite 0 0"
    known = {name: float(value) for name, value in water.items()}
    given = {**known, "temp_c": water.temp_c, "ph": water.ph, "alkalinity": water.alkalinity}
    return library("pb1982").reacted(given, reaction)


@pytest.mark.parametrize("name", ["L1", "L2"])
@pytest.mark.parametrize("process", list(PROCESSES))
@pytest.mark.parametrize("temp_c", [5.0, 20.0])
def test_book_dose_at_equilibrium_as_a_general_library_has_it(name, process, temp_c):
    """pH, calcium and magnesium after each process' dose agree with PHREEQC: pH 0.01, residuals 1 %."""
    water = solution(name, temp_c)
    dose = book_dose(process, raw(name)).dose
    ours, theirs = settle(water, dose).water, by_library(water, dose)

    assert ours.ph == pytest.approx(theirs["ph"], abs=0.01)
    assert ours.ca == pytest.approx(theirs["Ca"], rel=0.01)
    assert ours.mg == pytest.approx(theirs["Mg"], rel=0.01)
    assert ours.dic == pytest.approx(theirs["C"], rel=0.01)


@pytest.mark.parametrize(
    ("process", "goal"),
    [
        ("soda", Goal(calcium=0.8)),
        ("lime", Goal(calcium=0.8)),
        ("lime-soda", Goal(calcium=0.4)),
        ("lime-soda", Goal(hardness=1.7)),
        ("caustic", Goal(calcium=0.5)),
        ("caustic", Goal(calcium=0.5, magnesium=0.2)),
        ("excess-lime-soda", Goal(calcium=0.6, magnesium=0.2)),
        ("caustic-soda", Goal(calcium=0.3)),
    ],
)
def test_equilibrium_dose_leaves_the_goal_by_a_general_library_too(process, goal):
    """Fed with the dose found, PHREEQC leaves the calcium and the magnesium wanted, to 1 %."""
    water = solution("L2")
    found = equilibrium_dose(process, water, goal)
    theirs = by_library(water, found.dose)
    calcium, magnesium = precipitation.targets(process, raw("L2"), goal)

    assert found.reached
    if goal.magnesium is not None:
        assert theirs["Mg"] == pytest.approx(magnesium, rel=0.01)
        assert theirs["Ca"] <= calcium * 1.01
    else:
        assert theirs["Ca"] == pytest.approx(calcium, rel=0.01)


def test_lime_alone_has_a_floor_and_says_so():
    """Lime cannot take non-carbonate calcium: the goal is out of reach, and the dose that leaves least is given."""
    water = solution("L1")
    found = equilibrium_dose("lime", water, Goal(calcium=0.3))
    doses = np.linspace(0.0, 6.0, 601)
    least = settle(water, Dose(lime=doses)).water.ca.min()

    assert not found.reached
    assert found.settled.water.ca == pytest.approx(least, abs=0.012)
    assert not book_dose("lime", raw("L1"), Goal(calcium=0.3)).reached


def test_goals_close_to_the_floor_are_found():
    """A goal that only a narrow span of doses reaches is not overlooked."""
    water = solution("L1")
    least = settle(water, Dose(lime=np.linspace(2.0, 3.0, 1001))).water.ca.min()
    found = equilibrium_dose("lime", water, Goal(calcium=least * 1.01))

    assert found.reached
    assert found.settled.water.ca == pytest.approx(least * 1.01, rel=2e-3)


@pytest.mark.parametrize("process", list(PROCESSES))
def test_dose_conserves_mass(process):
    """Calcium, magnesium, sodium and carbon that went in are in the water or in the sludge."""
    water = speciate(solution("L2")).solution
    dose = book_dose(process, raw("L2")).dose
    settled = settle(water, dose)

    assert settled.water.ca + settled.calcite == pytest.approx(water.ca + dose.lime, rel=1e-9)
    assert settled.water.mg + settled.brucite == pytest.approx(water.mg, rel=1e-9)
    assert settled.water.dic + settled.calcite == pytest.approx(water.dic + dose.soda_ash, rel=1e-9)
    sodium = (settled.water.na - water.na) * ATOMIC_WEIGHTS["Na"]
    assert settled.sodium_added == pytest.approx(sodium, rel=1e-9)
    weight = settled.calcite * MOLAR_MASS_CACO3 + settled.brucite * precipitation.MOLAR_MASS_BRUCITE
    assert settled.dry_sludge == pytest.approx(weight, rel=1e-12)


def test_book_residuals_follow_the_goal():
    """By equivalents a reachable goal is what is left, in every process that can leave it."""
    for process in PROCESSES:
        book = book_dose(process, raw("L2"), Goal(calcium=1.0))
        assert book.calcium == pytest.approx(1.0, rel=1e-9)
        assert book.reached
        assert book.practice_calcium[0] == pytest.approx(1.0 + 30 / AS_CACO3)


def test_book_forms_of_lime_for_magnesium_agree():
    """CO2 + carbonate calcium + 2 carbonate magnesium + the other magnesium + excess is what the shorter form says."""
    for water in (raw("L1"), raw("L2"), RawWater(1.0, 2.0, 4.0, 0.3)):
        ca = precipitation.carbonate_calcium(water.calcium, water.alkalinity)
        mg = precipitation.carbonate_magnesium(water.calcium, water.magnesium, water.alkalinity)
        long_form = water.co2 + ca + 2 * mg + (water.magnesium - mg) + precipitation.EXCESS_LIME
        assert precipitation.lime_for_magnesium(water.co2, water.alkalinity, water.magnesium) == pytest.approx(
            long_form
        )


def test_bicarbonate_of_sodium_has_to_be_limed_too():
    """With more alkalinity than hardness, lime for the hardness alone would leave the magnesium; ours takes it."""
    water = RawWater(1.0, 1.0, 6.0, 0.2)
    book = book_dose("excess-lime-soda", water)

    assert book.dose.lime == pytest.approx(0.2 + 3.0 + 1.0 + precipitation.EXCESS_LIME)
    assert book.dose.soda_ash == 0.0


def test_nothing_to_do_takes_no_chemical():
    """A goal above the raw water asks for nothing, by the books and at equilibrium."""
    for process in ("soda", "lime", "lime-soda", "caustic", "caustic-soda"):
        assert book_dose(process, raw("L1"), Goal(calcium=9.0)).dose == Dose()
        assert equilibrium_dose(process, solution("L1"), Goal(calcium=9.0)).dose == Dose()


def test_recarbonation_brings_the_ph_and_no_lower():
    """CO2 brings the water to the pH asked for; a little less leaves it above."""
    water = settle(solution("L2"), Dose(lime=4.857, soda_ash=1.4311)).water
    done = recarbonate(water, ph=8.5)
    assert done.reached
    assert done.water.ph == pytest.approx(8.5, abs=1e-3)
    assert speciate(add(water, co2=done.co2 * 0.98)).ph > 8.5
    assert done.mg_l == pytest.approx(done.co2 * 44.009, rel=1e-6)


def test_recarbonation_to_a_saturation_index():
    """CO2 brings the index down to what is asked for, past the rise that comes first."""
    water = settle(solution("L2"), Dose(lime=4.857, soda_ash=1.4311)).water
    done = recarbonate(water, saturation=0.2)

    assert done.saturation == pytest.approx(0.2, abs=1e-3)
    assert done.water.ph < 9.5
    with pytest.raises(InputError, match="pH or the saturation"):
        recarbonate(water, ph=None)


def test_least_calcium_is_the_least():
    """No other CO2 leaves less calcium once it has settled."""
    water = settle(solution("L2"), Dose(lime=4.857, soda_ash=1.4311)).water
    found = to_least_calcium(water)
    others = to_saturation(add(water, co2=np.linspace(0.0, 1.5, 301)), may_dissolve=False).solution.ca

    assert found.water.ca <= others.min() + 1e-4
    assert found.calcite > 0.5


def test_stages_of_a_plan_come_near_the_books():
    """Two stages on the worked water: CO2 within a tenth of what equivalents say; the final water is at its pH."""
    made = plan("excess-lime-soda", solution("L2"), stages=2)

    assert made.co2_book == pytest.approx((31.9, 19.8), abs=0.1)
    assert [stage.mg_l for stage in made.recarbonation] == pytest.approx(list(made.co2_book), rel=0.1)
    assert made.final.ph == pytest.approx(8.5, abs=1e-3)
    assert made.final.ca == pytest.approx(sum(made.book.practice_calcium) / 2, rel=1e-6)
    assert made.lime_heated == lime_when_heated(made.final, 60.0)


def test_one_stage_takes_more_carbon_dioxide_and_leaves_more_calcium():
    """Skipping the settling between the stages leaves the excess lime in the water as bicarbonate."""
    once, twice = (plan("excess-lime-soda", solution("L2"), stages=n) for n in (1, 2))

    assert sum(stage.mg_l for stage in once.recarbonation) > sum(stage.mg_l for stage in twice.recarbonation)
    assert once.final.ca > twice.final.ca + 0.5 * precipitation.EXCESS_LIME
    assert once.recarbonation[0].mg_l == pytest.approx(once.co2_book[0], rel=0.1)


def test_plan_shows_three_residuals_apart():
    """A soda ash dose: none by equivalents, some at equilibrium, 30 to 40 mg/L more in practice."""
    made = plan("soda", solution("L1"))

    assert made.book.calcium == 0.0
    assert 0.02 < made.settled.water.ca < made.book.practice_calcium[0]
    assert made.practice.ca == pytest.approx(sum(made.book.practice_calcium) / 2, rel=1e-6)
    assert made.sodium == pytest.approx((0.7 + 2 * made.book.dose.soda_ash) * ATOMIC_WEIGHTS["Na"], rel=1e-9)
    assert made.sludge[0] < made.sludge[1]
    assert not made.magnesium_for_heaters
    assert plan("soda", solution("L2")).magnesium_for_heaters


@pytest.mark.parametrize(
    ("process", "goal", "word"),
    [
        ("magic", Goal(), "No process"),
        ("soda", Goal(magnesium=0.1), "Magnesium stays"),
        ("lime", Goal(hardness=0.1), "harder than the hardness wanted"),
        ("lime", Goal(calcium=-1.0), "below zero"),
        ("lime", Goal(hardness=float("nan")), "below zero"),
    ],
)
def test_impossible_goals_are_refused(process, goal, word):
    """What a process cannot do is refused in a sentence."""
    with pytest.raises(InputError, match=word):
        book_dose(process, raw("L2"), goal)
    with pytest.raises(InputError, match=word):
        equilibrium_dose(process, solution("L2"), goal)
    with pytest.raises(InputError, match="two stages"):
        plan("lime", solution("L2"), stages=3)


def test_unknown_water_has_no_answer():
    """A water that was not measured gives NaN, not a dose."""
    blind = replace(solution("L1"), ph=float("nan"))

    assert np.isnan(settle(blind, Dose(lime=1.0)).water.ca)
