"""Doing things on a page's event loop, from any thread.

A document's own `add_next_tick_callback` and `add_timeout_callback` will not do: they are events of the document, and
such events are lost now and then while its session begins or while a change of the page is under way. Here the loop
itself is asked, and the document is locked for the call as it would be.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from bokeh.document import Document
from panel.io.state import set_curdoc
from tornado.ioloop import IOLoop

UNTIL_SESSION_S = 0.02
"""A call that comes before the page has its session is tried again after this time."""


class PageLoop:
    """The event loop of one page; made on it."""

    def __init__(self, document: Document) -> None:
        self._document, self._loop = document, IOLoop.current()

    def soon(self, callback: Callable[[], Any]) -> None:
        """Call it on the loop; may be asked from any thread."""
        self._loop.add_callback(self._run, callback)

    def later(self, callback: Callable[[], Any], ms: int) -> None:
        """Call it after so many milliseconds; asked on the loop."""
        self._loop.call_later(ms / 1000.0, self._run, callback)

    async def _run(self, callback: Callable[[], Any]) -> None:
        context = self._document.session_context
        if context is None:  # the page is gone
            return
        if context.session is None:
            self._loop.call_later(UNTIL_SESSION_S, self._run, callback)
        elif not context.session.destroyed:
            await context.session.with_document_locked(self._call, callback)

    def _call(self, callback: Callable[[], Any]) -> None:
        with set_curdoc(self._document):
            callback()
