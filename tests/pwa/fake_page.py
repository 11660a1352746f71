"""A page without a browser: components render to a tree of controls that tests read and poke.

The connection encodes every message, as the real one does; only then does Flet keep what it has sent and notice
what changes.
"""

from __future__ import annotations

import asyncio
from collections.abc import Callable, Iterator
from typing import Any

import flet as ft
import msgpack
from flet.controls.base_control import BaseControl
from flet.controls.context import _context_page
from flet.messaging.connection import Connection
from flet.messaging.protocol import (
    Message,
    MessageAction,
    RegisterClientResponseBody,
    configure_encode_object_for_msgpack,
)
from flet.messaging.session import Session
from flet.pubsub.pubsub_hub import PubSubHub

PARTS = ("controls", "content", "actions", "title", "appbar", "items", "leading", "subtitle", "label", "views", "error")


class _Connection(Connection):
    def __init__(self) -> None:
        super().__init__()
        self.pubsubhub, self.loop, self.page_url = PubSubHub(), asyncio.get_running_loop(), "http://test/"
        self.messages = 0

    def send_message(self, message: Message) -> None:
        """Encode it, as the wire would."""
        msgpack.packb([message.action, message.body], default=configure_encode_object_for_msgpack(BaseControl))
        self.messages += 1


class FakePage:
    """A page with what is on it."""

    def __init__(self, width: int = 412, height: int = 915) -> None:
        self._connection = _Connection()
        self.session = Session(self._connection)
        self.page: ft.Page = self.session.page
        self.session.apply_page_patch({"route": "/", "width": width, "height": height, "web": True})
        patch = self.session.get_page_patch()
        body = RegisterClientResponseBody(session_id=self.session.id, page_patch=patch, error="")
        self._connection.send_message(Message(MessageAction.REGISTER_CLIENT, body))
        _context_page.set(self.page)

    def show(self, component: Callable[..., Any], *arguments: Any) -> None:
        """Render a component."""
        self.page.render(component, *arguments)

    def show_views(self, component: Callable[..., Any], *arguments: Any) -> None:
        """Render a component that gives views."""
        self.page.render_views(component, *arguments)

    async def settle(self, seconds: float = 0.02) -> None:
        """Let the page's own tasks run."""
        await asyncio.sleep(seconds)

    def controls(self) -> Iterator[Any]:
        """Everything on the page, dialogs included, top views last."""
        yield from walk(self.page.views)
        yield from walk(self.page._dialogs)

    def find(self, kind: type, **wanted: Any) -> Any:
        """The first control of a kind with these properties in the view on top."""
        for control in reversed(list(self.controls())):
            if isinstance(control, kind) and all(getattr(control, name) == value for name, value in wanted.items()):
                return control
        raise AssertionError(f"no {kind.__name__} with {wanted} among: {self.texts()}")

    def texts(self) -> list[str]:
        """What can be read on the page."""
        found = []
        for control in self.controls():
            if isinstance(control, ft.Text) and control.value:
                found.append(control.value)
            for name in ("label", "content", "text", "title", "subtitle", "error"):
                value = getattr(control, name, None)
                if isinstance(value, str) and value:
                    found.append(value)
        return found

    def reads(self, words: str) -> bool:
        """Whether these words stand somewhere on the page."""
        return any(words in text for text in self.texts())

    async def type(self, label: str, text: str) -> None:
        """Type into a text field."""
        field = self.find(ft.TextField, label=label)
        self.session.apply_patch(field._i, {"value": text})
        await self.session.dispatch_event(field._i, "change", text)
        await self.settle()

    async def click(self, control: Any) -> None:
        """Tap a control."""
        await self.session.dispatch_event(control._i, "click", None)
        await self.settle()


def walk(node: Any) -> Iterator[Any]:
    """A control and everything in it, components looked through."""
    if isinstance(node, list | tuple):
        for part in node:
            yield from walk(part)
    elif type(node).__name__ == "Component":
        yield from walk(node._b)
    elif isinstance(node, BaseControl):
        yield node
        for name in PARTS:
            value = getattr(node, name, None)
            if isinstance(value, BaseControl | list | tuple):
                yield from walk(value)
