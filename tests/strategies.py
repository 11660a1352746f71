"""Random inputs for laws that must hold everywhere: the one home of them."""

from __future__ import annotations

from hypothesis import strategies as st

from core.units import QUANTITIES, Unit
from core.units.lookup import REGISTRY

EVERY_UNIT: tuple[Unit, ...] = tuple(unit for quantity in QUANTITIES for unit in REGISTRY[quantity])

any_float = st.floats(allow_nan=True, allow_infinity=True)
finite = st.floats(allow_nan=False, allow_infinity=False)
readings = st.floats(min_value=1e-6, max_value=1e6)  # what a kit, a meter or a bill may say, whatever the unit
hardnesses = st.floats(min_value=0.0, max_value=2000.0)  # mg/L CaCO3, from softened to brackish
shares = st.floats(min_value=0.0, max_value=1.0)

quantities = st.sampled_from(QUANTITIES)
every_unit = st.sampled_from(EVERY_UNIT)


def units_of_one_quantity(count: int) -> st.SearchStrategy[tuple[Unit, ...]]:
    """Some units, not always different, of one quantity."""
    return quantities.flatmap(lambda q: st.tuples(*[st.sampled_from(REGISTRY[q])] * count))


def ways_to_write() -> st.SearchStrategy[tuple[str, Unit]]:
    """A symbol or an alias of a unit, in any letter case and with stray spaces, and the unit."""
    written = every_unit.flatmap(lambda unit: st.tuples(st.sampled_from((unit.symbol, *unit.aliases)), st.just(unit)))
    dressed = st.sampled_from((str, str.lower, str.upper, lambda text: f"  {text} ", lambda text: f"{text}\n"))
    return st.tuples(written, dressed).map(lambda drawn: (drawn[1](drawn[0][0]), drawn[0][1]))


@st.composite
def waters(draw: st.DrawFn) -> dict[str, float]:
    """A water in charge balance, closed by sodium or chloride; mmol per kg of water, alkalinity in meq."""
    water = {
        "temp_c": draw(st.floats(0.0, 90.0)),
        "ph": draw(st.floats(5.5, 9.5)),
        "ca": draw(st.floats(0.0, 8.0)),
        "mg": draw(st.floats(0.0, 4.0)),
        "na": draw(st.floats(0.0, 20.0)),
        "k": draw(st.floats(0.0, 0.5)),
        "so4": draw(st.floats(0.0, 6.0)),
        "no3": draw(st.floats(0.0, 1.0)),
        "alkalinity": draw(st.floats(0.1, 10.0)),
    }
    cations = 2 * (water["ca"] + water["mg"]) + water["na"] + water["k"]
    anions = 2 * water["so4"] + water["no3"] + water["alkalinity"]
    water["cl"] = max(cations - anions, 0.0)
    water["na"] += max(anions - cations, 0.0)
    return water
