"""The sample jobs that ship with the app."""

from __future__ import annotations

import json
from functools import cache
from importlib import resources

from core.job.record import Job

PACKAGE = "sample_tests"


@cache
def SAMPLES() -> tuple[tuple[str, str, str], ...]:
    """File name, name and story of each sample."""
    files = sorted(item.name for item in resources.files(PACKAGE).iterdir() if item.name.endswith(".json"))
    found = []
    for name in files:
        document = json.loads(_text(name))
        found.append((name, document["name"], document.get("notes", "")))
    return tuple(found)


def load_sample(name: str) -> Job:
    """A sample as a job."""
    return Job.from_text(_text(name))


def _text(name: str) -> str:
    return resources.files(PACKAGE).joinpath(name).read_text(encoding="utf-8")
