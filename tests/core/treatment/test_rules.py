"""Rules by region: what is known, what is borrowed, and that each says where it comes from."""

import pytest

from core.data import read_table
from core.errors import InputError
from core.references import REFERENCES
from core.treatment import rules
from core.treatment.limits import efficiency_rules

WITHOUT_KEY = "common practice, no source"


def test_unknown_region_gets_the_stricter_reading_and_a_sentence():
    """Not knowing where we are, the shortest interval limit, the highest efficiency and the larger air gap hold."""
    unknown = rules.rules_for(None)
    for region in ("US", "US-CA", "DE", "UK", "EU"):
        known = rules.rules_for(region)
        assert unknown["interval-longest"].value <= known["interval-longest"].value
        assert unknown["air-gap"].value >= known["air-gap"].value
        if "efficiency" in known:
            assert unknown["efficiency"].value >= known["efficiency"].value
    assert "stricter rule, from: Germany" in unknown["interval-longest"].sentence


def test_a_part_of_a_region_overrides_it_and_inherits_the_rest():
    """California has its own word on outside taps and takes the interval limit of the United States."""
    california = rules.rules_for("US-CA")
    assert california["outside-taps"].region == "US-CA"
    assert california["interval-longest"].value == 14.0
    assert not california["interval-longest"].borrowed
    assert california["interval-longest"].sentence == california["interval-longest"].words


def test_known_region_is_not_bound_by_anothers_law():
    """A Californian efficiency law does not bind elsewhere, but hygiene is borrowed where a region is silent."""
    assert "efficiency" not in rules.rules_for("UK")
    assert rules.rules_for("UK")["interval-longest"].borrowed
    assert "iron" not in rules.rules_for(None)


def test_region_that_is_not_there_is_refused():
    """A region outside the list is refused with the list."""
    with pytest.raises(InputError, match="US-CA"):
        rules.rules_for("ATLANTIS")


@pytest.mark.parametrize(
    "table", ["rules", "efficiency_ratings", "starting_points", "service_limits", "vessel_sizes", "iron_rules"]
)
def test_every_row_carries_source_and_status(table):
    """A figure without its source and how well that was read is not shown."""
    for row in read_table(table).rows:
        assert row["source"] in REFERENCES or row["source"] == WITHOUT_KEY
        assert row["status"] in {"checked", "secondary", "from memory", WITHOUT_KEY}


def test_the_two_tables_of_californias_rule_agree():
    """The rating here and the rule for units sold new are one figure."""
    rating = next(rating for rating in rules.efficiency_ratings() if rating.key == "california")
    assert rating.salt == pytest.approx(efficiency_rules()["US-CA"].least, rel=1e-12)


def test_water_not_known_does_not_meet_a_water_rating():
    """A rating that limits the water is not given away on salt alone."""
    assert rules.ratings_met(6.0) == ("california", "din19636")


def test_starting_points_are_within_their_own_range():
    """Each first figure lies between the low and the high one beside it."""
    points = rules.starting_points()
    assert {"small-hotel", "laundry", "boiler-feed"} <= set(points)
    assert all(point.low <= point.litres <= point.high for point in points.values())
