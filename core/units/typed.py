"""Units as people type them, brought to one plain form: "Grains / US Gallon" and "gr/us gal" meet there."""

from __future__ import annotations

import re

LONGEST = 60  # characters; anything longer is no unit

_SIGNS = str.maketrans(
    {
        **dict.fromkeys("µμ", "u"),
        **dict.fromkeys("°º˚.,^_[]()\u200b", ""),  # often left out
        **dict.fromkeys("·⋅•*×", " "),
        **dict.fromkeys("−⁻‐‑–", "-"),
        **dict(zip("₀₁₂₃₄₅₆₇₈₉⁰¹²³⁴⁵⁶⁷⁸⁹", "01234567890123456789", strict=True)),
        **dict.fromkeys("÷∕⁄", "/"),
        "⁺": "+",
        "″": '"',
        "”": '"',
        "′": "'",
        "’": "'",
    }
)
_WORDS = {
    word: plain
    for plain, words in {
        "l": "litre litres liter liters ltr ltrs",
        "gal": "gallon gallons gals",
        "ft": "foot feet",
        "in": "inch inches",
        "m": "metre metres meter meters",
        "cm": "centimetre centimetres centimeter centimeters",
        "mm": "millimetre millimetres millimeter millimeters",
        "g": "gram grams gramme grammes",
        "kg": "kilogram kilograms kilogramme kilogrammes kilos",
        "mg": "milligram milligrams",
        "lb": "lbs pound pounds",
        "grain": "grains",
        "kgr": "kilograin kilograins kgrain kgrains",
        "h": "hour hours hr hrs",
        "min": "minute minutes mins",
        "s": "second seconds sec secs",
        "day": "days",
        "year": "years yr yrs",
        "person": "persons people capita",
        "cu": "cubic",
        "sq": "square",
        "deg": "degree degrees",
        "imp": "imperial uk british",
        "us": "usa american",
        "/": "per",
        "": "as of",
    }.items()
    for word in words.split()
}
_WORD = re.compile(r"[^\W\d_]+")
_POWER = re.compile(r"\b(cu|sq) ?(ft|in|mm|cm|m)\b")
_NEGATIVE_POWER = re.compile(r" ?\b([a-z]+)-([123])\b")
_SHORT_TIME = re.compile(r"/(d|p|a|y)(?=$|/)")
_LONG = {"d": "day", "p": "person", "a": "year", "y": "year"}
_DOT_TIMES = re.compile(r"\.(?=[A-Za-z]+[-−⁻][1¹])")  # mg.L-1
_CHARGE = re.compile(r"[ 123]?\+$|2?-$")


def plain(text: str) -> str:
    """The one form in which ways of writing a unit are compared; "" if there is nothing to compare."""
    if len(text) > LONGEST:
        return ""
    form = " ".join(_DOT_TIMES.sub(" ", text).casefold().translate(_SIGNS).split())
    form = _WORD.sub(lambda word: _WORDS.get(word[0], word[0]), form)
    form = _POWER.sub(lambda found: found[2] + ("3" if found[1] == "cu" else "2"), form)
    form = _NEGATIVE_POWER.sub(lambda found: "/" + found[1] + found[2].replace("1", ""), form)
    if len(form) > 2:
        form = _CHARGE.sub("", form)
    form = _SHORT_TIME.sub(lambda found: "/" + _LONG[found[1]], form.replace(" ", ""))
    form = "grain" + form[2:] if form.startswith("gr/") else form
    return form or ("deg" if any(sign in text for sign in "°º˚") else "")
