"""Units as people write them: found, asked back, or refused with a sentence."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.errors import AmbiguousUnit, UnitError
from core.units import QUANTITIES, Unit, convert, find_unit, quantity_named, units_of
from core.units.lookup import _AMBIGUOUS, REGISTRY
from core.units.typed import plain
from tests import strategies

WRITTEN = {
    "hardness": {
        "mg/L CaCO3": [
            "ppm CaCO3",
            "ppm as CaCO3",
            "mg/l as CaCO₃",
            "MG/L CACO3",
            "mg CaCO3/l",
            "mg l-1 CaCO3",
        ],
        "mmol/L": ["mmol", "mmol/l", "mol/m³", "mmol·L⁻¹", "mmol.l-1", "mmol per litre"],
        "meq/L": ["mval", "mval/l", "meq", "°Ж", "me/L"],
        "gpg": ["gr/gal", "grains", "Grains per Gallon", "GPG", "grains/US gallon", "gr / gal"],
        "°dH": ["dH", "°d", "º dH", "dGH", "deg dH", "german degrees", "degrees German"],
        "°fH": ["°f", "fH", "TH", "°TH", "f", "french degrees", "°F"],
        "°e": ["clark", "°Clark", "Clark degrees", "e", "grains per imperial gallon", "gr/imp. gal"],
        "mg/L Ca": ["mg/l Ca2+", "ppm Ca", "mg Ca/L", "mg/L as Ca", "calcium"],
    },
    "alkalinity": {
        "mmol/L K_S4.3": ["KS4,3", "K S4.3", "mmol/l", "SBV"],
        "°dKH": ["dKH", "dH", "°d"],
        "mg/L HCO3": ["mg/l HCO3-", "ppm HCO3", "mg/L as HCO₃⁻"],
        "°fH": ["TAC", "°f"],
    },
    "nitrate": {"mg/L NO3": ["mg/L as NO3", "mg/l NO3-"], "mg/L NO3-N": ["NO3-N", "mg/L as N", "mg/l N"]},
    "sulfate": {"mg/L SO4": ["mg/L", "ppm", "mg/l SO4 2-", "mg/L SO4²⁻"]},
    "iron": {"mg/L Fe": ["mg/l", "ppm", "mg/L Fe2+"], "µg/L Fe": ["ug/L", "μg/l", "ppb"]},
    "volume": {
        "ft³": ["cu ft", "cubic feet", "cu. ft.", "ft3", "CF"],
        "m³": ["m3", "m^3", "cubic metres", "cbm"],
    },
    "flow": {
        "L/min": ["l/min", "lpm", "litres per minute"],
        "gpm": ["US gal/min"],
        "m³/h": ["m3/hr", "m3 h-1"],
    },
    "water use": {"L/person/day": ["L/p/d", "litres per person per day", "l/(p·d)", "L/head/day", "lpcd"]},
    "resin capacity": {"kgr/ft³": ["kilograins per cubic foot", "kgr/cu ft"]},
    "exchanged amount": {"m³·°dH": ["m³ °dH", "°dH·m³", "m3.dH", "m3 x dH"], "grain": ["gr", "grains"]},
    "salt efficiency": {"grain/lb": ["gr/lb", "grains per pound", "grains/lb"]},
    "surface loading": {"gpm/ft²": ["gpm/sq ft", "gpm per square foot", "gpm/ft2"]},
    "pressure": {"m H₂O": ["mWS", "m H2O"], "kg/cm²": ["kgf/cm2"]},
    "temperature": {"°F": ["F", "°f", "Fahrenheit", "degrees fahrenheit"], "°C": ["c", "deg C", "° C"]},
    "conductivity": {"µS/cm": ["uS/cm", "μS/cm", "US/CM"]},
    "time": {"day": ["d", "days"], "h": ["hr", "hours"]},
    "length": {"in": ['"', "inches", "″"], "ft": ["'", "feet"]},
    "share": {"%": ["percent", "per cent"]},
}
SYMBOLS = {unit.symbol for table in REGISTRY.values() for unit in table}
CASES = [(q, symbol, text) for q, found in WRITTEN.items() for symbol, texts in found.items() for text in texts]

ASKED_BACK = [  # text, quantity, choices that must be among those offered
    ("°F", None, {"°fH", "°F (temperature)"}),
    ("F", None, {"°fH", "°F (temperature)"}),
    ("ppm", None, {"mg/L CaCO3", "mg/L Ca"}),
    ("ppm", "hardness", {"mg/L CaCO3", "mg/L Ca"}),
    ("mg/L", None, {"mg/L CaCO3", "mg/L Na", "mg/L (concentration)"}),
    ("mg/L", "hardness", {"mg/L CaCO3", "mg/L Ca"}),
    ("mg/L hardness", "hardness", {"mg/L CaCO3", "mg/L Ca"}),
    ("mg/L hardness", None, {"mg/L CaCO3", "mg/L Ca"}),
    ("mg/L", "alkalinity", {"mg/L CaCO3", "mg/L HCO3"}),
    ("mg/L", "nitrate", {"mg/L NO3", "mg/L NO3-N"}),
    ("mg/L", "ammonium", {"mg/L NH4", "mg/L NH4-N"}),
    ("mg/L N", None, {"mg/L NO3-N", "mg/L NH4-N"}),
    ("ppm", "calcium", {"mg/L Ca", "mg/L CaCO3"}),
    ("GH", "hardness", {"°dH", "mg/L CaCO3"}),
    ("KH", "alkalinity", {"°dKH", "mg/L CaCO3"}),
    ("KH", None, {"°dKH", "mg/L CaCO3"}),
    ("degrees", "hardness", {"°dH", "°fH", "°e"}),
    ("°", "hardness", {"°dH", "°fH", "°e"}),
    ("degrees", None, {"°dH", "°fH", "°C", "°F (temperature)"}),
    ("gal", None, {"US gal", "imp gal"}),
    ("gallons", "volume", {"US gal", "imp gal"}),
    ("gal/min", "flow", {"gpm", "imp gpm"}),
    ("gal/day", "flow", {"gpd", "imp gal/day"}),
    ("gallons per person per day", "water use", {"US gal/person/day", "imp gal/person/day"}),
    ("grains", None, {"gpg", "grain (mass)", "grain (exchanged amount)"}),
    ("gr", "mass", {"grain", "g"}),
    ("ton", None, {"t", "US ton", "imp ton"}),
    ("d", None, {"°dH", "day"}),
]


@pytest.mark.parametrize(("quantity", "symbol", "text"), CASES, ids=[f"{c[0]}: {c[2]}" for c in CASES])
def test_ways_people_write_it(quantity, symbol, text):
    """What stands on kits, bills and reports of different countries is understood."""
    assert find_unit(text, quantity).symbol == symbol


@pytest.mark.parametrize(("text", "quantity", "expected"), ASKED_BACK)
def test_ambiguous_is_asked_back(text, quantity, expected):
    """A unit with several readings is never guessed: it is asked back, and each choice is accepted."""
    with pytest.raises(AmbiguousUnit, match=r"can mean .* or .*: say which") as question:
        find_unit(text, quantity)

    assert expected <= set(question.value.choices)
    for choice in question.value.choices:
        assert isinstance(find_unit(choice, quantity), Unit)


@pytest.mark.parametrize(
    ("text", "symbol", "quantity"),
    [
        ("°f", "°fH", "hardness"),
        ("°d", "°dH", "hardness"),
        ("mmol/L", "mmol/L", "hardness"),
        ("gpg", "gpg", "hardness"),
        ("German", "°dH", "hardness"),
        ("mg/L HCO3", "mg/L HCO3", "alkalinity"),
        ("mg/L NO3-N", "mg/L NO3-N", "nitrate"),
        ("mg/L (sodium)", "mg/L Na", "sodium"),
        ("psi", "psi", "pressure"),
        ("°F (temperature)", "°F", "temperature"),
        ("h", "h", "time"),
        ("cu ft", "ft³", "volume"),
    ],
)
def test_clear_without_a_quantity(text, symbol, quantity):
    """What has one usual reading needs no quantity; a quantity in brackets gives one."""
    unit = find_unit(text)

    assert (unit.symbol, unit.quantity) == (symbol, quantity)


@given(strategies.ways_to_write())
def test_every_way_of_writing_finds_its_unit(case):
    """A symbol or alias, in capitals or small letters, with stray spaces, is the unit it belongs to."""
    text, unit = case

    assert find_unit(text, unit.quantity) == unit


@pytest.mark.parametrize("quantity", QUANTITIES)
def test_no_way_of_writing_means_two_things(quantity):
    """Within a quantity no text belongs to two units, or to a unit and to a question."""
    meanings: dict[str, set[str]] = {}
    for unit in REGISTRY[quantity]:
        for text in (unit.symbol, *unit.aliases):
            meanings.setdefault(plain(text), set()).add(unit.symbol)
    for text, choices in _AMBIGUOUS.get(quantity, {}).items():
        meanings.setdefault(plain(text), set()).add(str(choices))

    assert {text: found for text, found in meanings.items() if len(found) > 1 or not text} == {}


def test_unknown_unit_says_what_is_accepted():
    """A refusal names the text, the quantity and the units that would do."""
    with pytest.raises(UnitError, match="“furlong” is not a unit of hardness known here; accepted are mg/L CaCO3"):
        find_unit("furlong", "hardness")
    with pytest.raises(UnitError, match="The unit is missing; accepted are °C, °F, K"):
        find_unit(" ", "temperature")
    with pytest.raises(UnitError, match="“dKH” measures alkalinity, not hardness"):
        find_unit("dKH", "hardness")
    with pytest.raises(UnitError, match="“colour” is not a quantity known here"):
        convert(1, "mg/L", "g/L", "colour")


@given(st.text(max_size=80), st.one_of(st.none(), strategies.quantities))
def test_any_text_finds_a_unit_or_a_sentence(text, quantity):
    """No text, however odd, does anything but find a unit or raise a sentence that ends."""
    try:
        answer = str(find_unit(text, quantity))
    except UnitError as refusal:
        answer = str(refusal)

    assert answer in SYMBOLS or answer.endswith(".")


def test_long_text_is_refused_at_once():
    """A page pasted into a unit field is refused without being read, and quoted in short."""
    with pytest.raises(UnitError) as refusal:
        find_unit("mg/L " * 100_000)

    assert len(str(refusal.value)) < 250


@pytest.mark.parametrize(
    ("name", "quantity"),
    [("Na", "sodium"), ("Sulphate", "sulfate"), ("aluminum", "aluminium"), (" Hardness ", "hardness")],
)
def test_quantities_by_their_other_names(name, quantity):
    """A quantity may be named by formula, in British or American spelling, with capitals."""
    assert quantity_named(name) == quantity
    assert units_of(name) == units_of(quantity)
