"""Running coroutines in tests: in a loop of their own, and in one whose time is a number."""

from __future__ import annotations

import asyncio
import selectors
from collections.abc import Coroutine
from concurrent.futures import ThreadPoolExecutor
from typing import Any


class _Jump(selectors.DefaultSelector):  # type: ignore[misc, valid-type]
    """Waits for nothing: where the loop would sleep, its clock is put forward."""

    loop: VirtualLoop

    def select(self, timeout: float | None = None) -> list[Any]:
        """What is ready now; the clock jumps over the rest of the wait."""
        if timeout:
            self.loop.now += timeout
        return super().select(0)


class VirtualLoop(asyncio.SelectorEventLoop):
    """A loop in which an hour passes at once."""

    def __init__(self) -> None:
        self.now = 0.0
        selector = _Jump()
        selector.loop = self
        super().__init__(selector)

    def time(self) -> float:
        """Seconds since the start, as the loop counts them."""
        return self.now


def run(scenario: Coroutine[Any, Any, Any], *, virtual: bool = False) -> Any:
    """Run a scenario to its end in a loop of its own.

    It runs in another thread because a browser test of the same session may keep a loop running in this one.
    """

    def work() -> Any:
        factory = VirtualLoop if virtual else None
        with asyncio.Runner(loop_factory=factory) as runner:
            return runner.run(scenario)

    with ThreadPoolExecutor(1) as pool:
        return pool.submit(work).result()
