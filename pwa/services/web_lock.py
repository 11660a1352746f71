"""One writer among the tabs: the Web Locks of the browser. Imported in a browser alone.

Where a page has none (it was not loaded over TLS), every tab may write; the revision that each transaction
names then keeps them from undoing each other's work.
"""

from __future__ import annotations

import asyncio
from collections.abc import Callable
from typing import Any

import js
from pyodide.ffi import JsException, JsProxy, create_proxy, jsnull, to_js


class WebLock:
    """A named lock that a tab holds until it lets go or ends, however it ends."""

    def __init__(self, name: str) -> None:
        self._name = name
        self._let_go: Any = None  # ends the promise for whose life the browser leaves us the lock
        self._leave: Any = None  # takes us out of the queue
        self._proxies: list[JsProxy] = []

    async def take(self, granted: Callable[[], None]) -> bool:
        """Take it if it is free; otherwise queue for it, and call `granted` when the turn has come."""
        if not getattr(js.navigator, "locks", None):
            return True
        if await self._request({"ifAvailable": True}):
            return True
        self._leave = js.AbortController.new()
        turn = asyncio.ensure_future(self._request({"signal": self._leave.signal}))
        turn.add_done_callback(lambda task: granted() if not task.cancelled() and task.result() else None)
        return False

    async def _request(self, options: dict[str, Any]) -> bool:
        """Ask for the lock; True once we have it, False where we are not to have it."""
        answer: asyncio.Future[bool] = asyncio.get_running_loop().create_future()

        def hold(lock: Any) -> Any:
            ours = lock is not None and lock is not jsnull
            if not answer.done():
                answer.set_result(ours)
            return js.Promise.new(self._kept(self._holding)) if ours else None

        asked = js.navigator.locks.request(
            self._name, to_js(options, dict_converter=js.Object.fromEntries), self._kept(hold)
        )
        ended = asyncio.ensure_future(asked)
        ended.add_done_callback(lambda task: _left(task, answer))
        return await answer

    def _holding(self, resolve: Any, reject: Any) -> None:
        self._let_go = resolve

    def _kept(self, function: Callable[..., Any]) -> JsProxy:
        self._proxies.append(create_proxy(function))  # JavaScript may call it for as long as we hold or wait
        return self._proxies[-1]

    def release(self) -> None:
        """Give it back, or leave the queue."""
        if self._let_go is not None:
            self._let_go()
        elif self._leave is not None:
            self._leave.abort()
        self._let_go = self._leave = None


def _left(task: asyncio.Future[Any], answer: asyncio.Future[bool]) -> None:
    failed = not task.cancelled() and isinstance(task.exception(), JsException)  # also says that we looked
    if failed and not answer.done():
        answer.set_result(False)
