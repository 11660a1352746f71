"""The speed the chemistry promises; `python -m tests.bench.chemistry` prints the figures."""

from tests.bench import chemistry as bench


def test_many_waters_beside_the_library():
    """10,000 waters speciated and settled take less than a fiftieth of the library's time per water."""
    own, library = bench.per_water()

    assert library / own >= 50.0


def test_one_water():
    """One water is speciated, or settled, in less than 3 ms: a phone takes a few times longer."""
    assert max(bench.one_water()) < 3e-3


def test_import():
    """Loading what speciation and saturation need takes less than 50 ms beyond numpy."""
    assert max(bench.import_time(statement) for statement in bench.IMPORTS) < 50e-3
