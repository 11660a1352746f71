"""The errors of the core, one small tree.

TapwrightError
├── UnitError            a unit that is not known, or does not measure the quantity asked for
│   └── AmbiguousUnit    a unit that means several things; `.choices` says which
├── InputError           a value outside what is possible; `.field` and `.value` say where
└── JobFileError         a job file that cannot be read; the text says why and what is accepted
"""

from __future__ import annotations


class TapwrightError(ValueError):
    """Anything the core refuses; its text is a sentence a user can act on."""


class UnitError(TapwrightError):
    """A unit that is not known, or that does not measure the quantity asked for."""


class AmbiguousUnit(UnitError):
    """A unit that means several things: the user is asked which."""

    def __init__(self, text: str, choices: tuple[str, ...]) -> None:
        super().__init__(text)
        self.choices = choices


class InputError(TapwrightError):
    """A value that cannot be; says the field, the value, what is accepted, and what to do next."""

    def __init__(self, field: str, value: object, text: str) -> None:
        super().__init__(text)
        self.field = field
        self.value = value


class JobFileError(TapwrightError):
    """A job file that cannot be read, with the reason and what is accepted."""
