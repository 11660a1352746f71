"""A component that fails says so in its own place; the rest of the screen lives on.

Flet's update loop has no guard of its own: an exception while a component redraws would end it, and the app would
freeze without a word.
"""

from __future__ import annotations

import functools
import logging
from collections.abc import Callable
from typing import Any

import flet as ft

from pwa import theme

log = logging.getLogger("tapwright")


def guarded(function: Callable[..., Any]) -> Callable[..., Any]:
    """A Flet component from a function; a failure inside becomes a panel that says what failed."""

    @ft.component
    @functools.wraps(function)
    def Guarded(*args: Any, **kwargs: Any) -> Any:
        try:
            return function(*args, **kwargs)
        except Exception as error:
            log.exception("%s failed", function.__name__)
            return Failed(function.__name__, error)

    return Guarded


def Failed(what: str, error: Exception) -> ft.Control:
    """What stands in the place of a part that failed."""
    return ft.Container(
        padding=theme.PAD,
        border=ft.Border.all(1, ft.Colors.ERROR),
        border_radius=theme.RADIUS,
        content=ft.Text(
            f"This part could not be shown ({what}: {error}). Your entries are kept; go back and open it again.",
            color=ft.Colors.ERROR,
        ),
    )
