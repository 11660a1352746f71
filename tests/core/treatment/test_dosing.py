"""A dose in the operator's hands: products, solutions that can be, the pump, batches and bags."""

import numpy as np
import pytest

from core.data import read_table
from core.errors import InputError
from core.treatment import dosing
from core.treatment.dosing import check_strength, doses_of, feed_plan, products
from core.treatment.precipitation import Dose


def test_soda_ash_by_hand():
    """100 mg/L at 20 L/min from a 10 % solution of 1.1029 kg/L: 2000 mg/min over 110.29 mg/mL is 18.13 mL/min."""
    made = feed_plan("soda-ash", 100.0, 20.0, 10_000.0, strength=0.10, purity=0.992, pump_capacity=60.0, stroke=0.5)

    assert made.feed == pytest.approx(18.134, rel=1e-4)
    assert made.strokes == pytest.approx(36.27, rel=1e-3)
    assert made.setting == pytest.approx(0.3022, rel=1e-3)
    assert made.in_range
    assert made.product_dose == pytest.approx(100.806, rel=1e-5)
    assert made.daily == pytest.approx(1.00806, rel=1e-5)
    assert made.days_per_bag == pytest.approx(24.80, rel=1e-3)


def test_a_batch_closes():
    """What is weighed in and the water make the batch, and hold the chemical that its days need."""
    made = feed_plan("soda-ash", 100.0, 20.0, 10_000.0, strength=0.08, batch=200.0)

    assert made.batch_product + made.batch_water == pytest.approx(200.0 * made.density, rel=1e-12)
    pure = made.batch_product * made.product.purity
    assert pure / (10_000.0 * 100.0 / 1e6) == pytest.approx(made.batch_days, rel=1e-9)
    assert made.per_m3 * 10.0 * made.batch_days / 1000.0 == pytest.approx(200.0, rel=1e-9)


def test_quicklime_is_slaked_before_it_is_fed():
    """56 g of quicklime make 74 g of hydrated lime: feed and bags agree with hydrated lime of the same moles."""
    moles = 2.4
    doses = doses_of(Dose(lime=moles)) | doses_of(Dose(lime=moles), lime="quicklime")
    slaked = feed_plan("quicklime", doses["quicklime"], 20.0, 10_000.0, purity=1.0, batch=100.0)
    hydrated = feed_plan("hydrated-lime", doses["hydrated-lime"], 20.0, 10_000.0, purity=1.0, batch=100.0)

    assert slaked.feed == pytest.approx(hydrated.feed, rel=1e-9)
    assert slaked.batch_days == pytest.approx(hydrated.batch_days, rel=1e-9)
    assert slaked.daily / hydrated.daily == pytest.approx(56.077 / 74.092, rel=1e-4)


def test_liquids_are_fed_as_they_come_or_diluted():
    """Diluting caustic to a fifth of its strength takes five times the feed by weight of solution."""
    neat = feed_plan("caustic-50", 50.0, 10.0, 5_000.0)
    thin = feed_plan("caustic-50", 50.0, 10.0, 5_000.0, strength=0.10, batch=50.0)

    assert neat.strength == 0.5
    assert neat.density == 1.525
    assert thin.feed * thin.density == pytest.approx(5.0 * neat.feed * neat.density, rel=1e-9)
    assert thin.batch_product == pytest.approx(50.0 * thin.density * 0.10 / 0.50, rel=1e-12)


def test_gas_has_no_pump():
    """Carbon dioxide is weighed, not pumped."""
    made = feed_plan("carbon-dioxide", 30.0, 20.0, 10_000.0)

    assert np.isnan(made.feed)
    assert made.daily == pytest.approx(0.3 / 0.995, rel=1e-9)


def test_no_twenty_percent_soda_in_the_cold():
    """At 5 °C less than 9 % of soda ash dissolves; 20 % is refused and said so; at 35 °C it is fine."""
    soda = products()["soda-ash"]
    with pytest.raises(InputError, match=r"At 5 °C no more than 8\.9 %") as refusal:
        check_strength(soda, 0.20, 5.0)

    assert refusal.value.field == "strength"
    check_strength(soda, 0.20, 35.0)
    check_strength(soda, 0.085, 5.0)
    assert feed_plan("soda-ash", 50.0, 10.0, 1000.0, temperature=5.0).strength == pytest.approx(0.0711, abs=5e-4)


@pytest.mark.parametrize(
    ("product", "strength", "temperature", "field", "word"),
    [
        ("caustic-50", 0.5, 10.0, "temperature", "freezes at about 12"),
        ("caustic-50", 0.6, 20.0, "strength", "holds 50 %"),
        ("hydrated-lime", 0.2, 20.0, "strength", "settles in hoses"),
        ("soda-ash", 0.1, 70.0, "temperature", "0 to 60"),
        ("soda-ash", 0.0, 20.0, "strength", "between 0 and 100"),
    ],
)
def test_solutions_that_cannot_be_are_refused(product, strength, temperature, field, word):
    """What freezes, clogs or does not dissolve is refused in a sentence, with its field."""
    with pytest.raises(InputError, match=word) as refusal:
        feed_plan(product, 50.0, 10.0, 1000.0, strength=strength, temperature=temperature)
    assert refusal.value.field == field


def test_unknown_products_and_purities_are_refused():
    """A product nobody knows, or one that is purer than pure, is refused."""
    with pytest.raises(InputError, match="No product"):
        feed_plan("salt", 50.0, 10.0, 1000.0)
    with pytest.raises(InputError, match="purity"):
        feed_plan("soda-ash", 50.0, 10.0, 1000.0, purity=1.2)
    with pytest.raises(InputError, match="No solubility"):
        dosing.solubility("sugar", 20.0)
    with pytest.raises(InputError, match="No density"):
        dosing.solution_density("sugar", 0.1)


def test_pump_out_of_its_range_is_said():
    """A pump that would run at a twentieth of its capacity, or beyond it, is not in its range."""
    small, large = (feed_plan("soda-ash", 100.0, 20.0, 1e4, pump_capacity=c) for c in (5.0, 1000.0))

    assert small.setting > 1.0
    assert not small.in_range
    assert not large.in_range


def test_density_tables_rise_and_meet_water():
    """Denser the stronger, and water where there is nothing in it (0.9982 kg/L at 20 °C)."""
    for pure in ("soda_ash", "caustic"):
        rows = [row for row in read_table("chemicals_density").rows if row["pure"] == pure]
        densities = [float(row["density"]) for row in rows]
        assert densities == sorted(densities)
        assert dosing.solution_density(pure, 0.0) == 0.9982
    assert dosing.slurry_density(0.0) == 1.0
    assert dosing.slurry_density(1.0) == pytest.approx(2.24)


def test_every_product_is_sound():
    """Purity within its range, a certificate, a source, a molar mass by its formula."""
    for product in products().values():
        assert product.purity_range[0] <= product.purity <= product.purity_range[1] <= 1.0
        assert product.certificate.startswith("NSF/ANSI 60")
        assert product.source
        assert product.molar_mass > 39.0


def test_solubility_outside_its_table_is_unknown():
    """No figure, no guess: NaN outside the table, in its place among many."""
    values = dosing.solubility("soda_ash", [-1.0, 20.0, 70.0])

    assert np.isnan(values).tolist() == [True, False, True]
    assert dosing.largest_strength(21.5) == pytest.approx(0.17695, rel=1e-4)
