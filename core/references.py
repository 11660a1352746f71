"""The one bibliography: key -> citation, with how well each was checked.

A key stands in square brackets in docstrings, or as the source of a card or a table. A test checks that each key
used is here, and that none here is unused.

Status of a source, as it is shown to the user:
  checked       the text or table was read while the number was entered
  from memory   the source is named, the figure was not read again there
  secondary     a copy or a page that quotes the source was read
"""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Reference:
    """One source: what it is, and how well the figures taken from it were checked."""

    citation: str
    status: str


REFERENCES: dict[str, Reference] = {
    "EXACT": Reference("Exact by definition: SI Brochure (2019); international yard and pound; gallon acts", "checked"),
    "IUPAC21": Reference("IUPAC CIAAW, Standard atomic weights 2021 (abridged or conventional values)", "checked"),
}
