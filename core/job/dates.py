"""Days of the calendar as numbers and as ISO dates; there is no clock here, the caller says what day it is.

day_number("2031-05-04")     days since 1970-01-01; InputError with a sentence where it is no date
iso_date(22403)              "2031-05-04"
months_later("2031-01-31", 1) "2031-02-28"
"""

from __future__ import annotations

import re

import numpy as np

from core.errors import InputError

FIRST_YEAR, LAST_YEAR = 1900, 2999
_ISO = re.compile(r"(\d{4})-(\d{2})-(\d{2})", re.ASCII)


def day_number(iso: str) -> int:
    """Days from 1970-01-01 to a date written as YYYY-MM-DD."""
    found = _ISO.fullmatch(iso)
    try:
        if not found or not FIRST_YEAR <= int(found[1]) <= LAST_YEAR:
            raise ValueError
        return int(np.datetime64(iso, "D").astype(int))
    except ValueError:
        text = f"“{iso[:20]}” is not a date. Write it as year-month-day, such as 2031-05-04."
        raise InputError("date", iso, text) from None


def iso_date(day: float) -> str:
    """The date of a day number, parts of a day cut off."""
    return str(np.datetime64(int(day // 1), "D"))


def months_later(iso: str, months: int) -> str:
    """The same day some months later; the last day of the month where it has no such day."""
    day = np.datetime64(day_number(iso), "D")
    month = day.astype("datetime64[M]")
    in_month = (day - month.astype("datetime64[D]")).astype(int)
    wanted = month + months
    longest = ((wanted + 1).astype("datetime64[D]") - wanted.astype("datetime64[D]")).astype(int)
    return str(wanted.astype("datetime64[D]") + min(int(in_month), int(longest) - 1))
