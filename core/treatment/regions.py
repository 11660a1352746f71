"""The regions whose rules are known. Apart from the rules, so that a form can list them before numpy is there."""

from __future__ import annotations

REGIONS = {
    "US": "United States",
    "US-CA": "United States, California",
    "US-PUBLIC": "United States, public supply",
    "DE": "Germany",
    "UK": "United Kingdom",
    "EU": "European Union, other",
}
