"""The only place that reads the time. Times are ISO 8601 texts in UTC, so that they sort as they pass."""

from __future__ import annotations

from datetime import UTC, date, datetime, timedelta
from typing import Protocol


class Clock(Protocol):
    """Tells the time, as a text."""

    def now(self) -> str:
        """The present moment, as "2031-05-04T09:30:00.250Z"."""

    def today(self) -> str:
        """The date where the user is, as "2031-05-04"."""


class SystemClock:
    """The clock of the device."""

    def now(self) -> str:
        """The present moment, as "2031-05-04T09:30:00.250Z"."""
        return as_text(datetime.now(UTC))

    def today(self) -> str:
        """The date where the user is, as "2031-05-04"."""
        return date.today().isoformat()


class HandClock:
    """A clock that stands still until it is set or turned on by hand; for tests and samples."""

    def __init__(self, start: str = "2031-05-04T09:30:00.000Z") -> None:
        self._now = as_moment(start)

    def now(self) -> str:
        """The moment it was set to."""
        return as_text(self._now)

    def today(self) -> str:
        """The date of the moment it was set to."""
        return self._now.date().isoformat()

    def turn(self, **amount: float) -> None:
        """Turn it on by days, hours, minutes, seconds or milliseconds."""
        self._now += timedelta(**amount)


def as_text(moment: datetime) -> str:
    """A moment that knows its time zone, as text in UTC, to the millisecond."""
    return moment.astimezone(UTC).isoformat(timespec="milliseconds").replace("+00:00", "Z")


def as_moment(text: str) -> datetime:
    """The moment that a text of `now()` stands for; ValueError where it is none."""
    moment = datetime.fromisoformat(text)
    return moment if moment.tzinfo else moment.replace(tzinfo=UTC)


def days_before(text: str, days: int) -> str:
    """The moment so many days before another; both as texts."""
    return as_text(as_moment(text) - timedelta(days=days))
