"""Units in words, for a screen reader: "gpg" is read out as "grains per gallon"."""

from __future__ import annotations

from functools import cache

# Whole symbols that are not read piece by piece.
_WHOLE = {
    "": "",
    "1": "",
    "%": "percent",
    "% w/v": "percent weight by volume",
    "gpg": "grains per gallon",
    "gpm": "US gallons per minute",
    "gph": "US gallons per hour",
    "gpd": "US gallons per day",
    "imp gpm": "imperial gallons per minute",
    "MGD": "million US gallons per day",
    "°dH": "German degrees",
    "°fH": "French degrees",
    "°e": "English degrees",
    "°dKH": "German degrees of carbonate hardness",
    "°C": "degrees Celsius",
    "°F": "degrees Fahrenheit",
    "mmol/L K_S4.3": "millimoles per litre of acid capacity to pH 4.3",
    "lb/MG": "pounds per million US gallons",
    "m³·°dH": "cubic metre German degrees",
    "m³·°fH": "cubic metre French degrees",
}

# One piece of a symbol: alone or before the slash, and after it.
_PIECES = {
    "L": ("litres", "litre"),
    "mL": ("millilitres", "millilitre"),
    "m³": ("cubic metres", "cubic metre"),
    "US gal": ("US gallons", "US gallon"),
    "1000 US gal": ("thousand US gallons", "thousand US gallons"),
    "imp gal": ("imperial gallons", "imperial gallon"),
    "gpm": ("US gallons per minute", "US gallon per minute"),
    "imp gpm": ("imperial gallons per minute", "imperial gallon per minute"),
    "ft³": ("cubic feet", "cubic foot"),
    "m": ("metres", "metre"),
    "cm": ("centimetres", "centimetre"),
    "mm": ("millimetres", "millimetre"),
    "in": ("inches", "inch"),
    "ft": ("feet", "foot"),
    "m²": ("square metres", "square metre"),
    "cm²": ("square centimetres", "square centimetre"),
    "ft²": ("square feet", "square foot"),
    "in²": ("square inches", "square inch"),
    "kg": ("kilograms", "kilogram"),
    "g": ("grams", "gram"),
    "mg": ("milligrams", "milligram"),
    "µg": ("micrograms", "microgram"),
    "t": ("tonnes", "tonne"),
    "lb": ("pounds", "pound"),
    "oz": ("ounces", "ounce"),
    "grain": ("grains", "grain"),
    "kgr": ("kilograins", "kilograin"),
    "US ton": ("US tons", "US ton"),
    "imp ton": ("imperial tons", "imperial ton"),
    "bar": ("bar", "bar"),
    "mbar": ("millibar", "millibar"),
    "kPa": ("kilopascals", "kilopascal"),
    "psi": ("pounds per square inch", "pound per square inch"),
    "m H₂O": ("metres of water", "metre of water"),
    "ft H₂O": ("feet of water", "foot of water"),
    "atm": ("atmospheres", "atmosphere"),
    "K": ("kelvin", "kelvin"),
    "µS": ("microsiemens", "microsiemens"),
    "mS": ("millisiemens", "millisiemens"),
    "S": ("siemens", "siemens"),
    "mol": ("moles", "mole"),
    "mmol": ("millimoles", "millimole"),
    "µmol": ("micromoles", "micromole"),
    "eq": ("equivalents", "equivalent"),
    "meq": ("milliequivalents", "milliequivalent"),
    "BV": ("bed volumes", "bed volume"),
    "m³·°dH": ("cubic metre German degrees", "cubic metre German degree"),
    "kWh": ("kilowatt hours", "kilowatt hour"),
    "MJ": ("megajoules", "megajoule"),
    "kcal": ("kilocalories", "kilocalorie"),
    "BTU": ("British thermal units", "British thermal unit"),
    "therm": ("therms", "therm"),
    "day": ("days", "day"),
    "h": ("hours", "hour"),
    "min": ("minutes", "minute"),
    "s": ("seconds", "second"),
    "week": ("weeks", "week"),
    "year": ("years", "year"),
    "person": ("persons", "person"),
}

_SUBSTANCES = {
    "CaCO3": "as calcium carbonate",
    "CaO": "as calcium oxide",
    "Ca": "of calcium",
    "Mg": "of magnesium",
    "Na": "of sodium",
    "K": "of potassium",
    "Fe": "of iron",
    "Mn": "of manganese",
    "Sr": "of strontium",
    "Ba": "of barium",
    "Al": "of aluminium",
    "Zn": "of zinc",
    "NH4": "of ammonium",
    "NH4-N": "of ammonium nitrogen",
    "HCO3": "of bicarbonate",
    "CO3": "of carbonate",
    "SO4": "of sulfate",
    "SO4-S": "of sulfate sulfur",
    "Cl": "of chloride",
    "NO3": "of nitrate",
    "NO3-N": "of nitrate nitrogen",
    "F": "of fluoride",
    "SiO2": "of silica",
    "Si": "of silicon",
    "CO2": "of carbon dioxide",
}


@cache
def unit_words(symbol: str) -> str:
    """A unit in words, "milligrams per litre as calcium carbonate"; the symbol itself where it is not known."""
    if symbol in _WHOLE:
        return _WHOLE[symbol]
    pieces, substance = [], ""
    for number, piece in enumerate(symbol.split("/")):
        head, _, tail = piece.rpartition(" ")
        if piece not in _PIECES and tail in _SUBSTANCES:
            piece, substance = head, _SUBSTANCES[tail]
        if piece not in _PIECES:
            return symbol
        pieces.append(_PIECES[piece][min(number, 1)])
    return f"{' per '.join(pieces)} {substance}".rstrip()
