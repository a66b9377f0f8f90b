"""A pane: HTML drawn from the desk, and what its controls do.

Messages between a pane and its page
    {ready}   browser -> server  the pane exists and shows nothing yet
    {html}    server -> browser  all there is to show; the browser changes only what differs
    {act, arg, value | values | file}
              browser -> server  a control was used. `act` and `arg` are its data-act and data-arg; then the
              value of an input or select, the values of a form, or a file's name, size and text
    {done}    server -> browser  the action was taken; inputs show what the server says again

The HTML is sent, not kept as a property: a property that changes while the page is being loaded can be lost.
"""

from __future__ import annotations

import logging
from collections.abc import Callable
from pathlib import Path
from typing import Any

from ..component import Component
from ..desk import Desk
from ..look import STYLE
from .html import Html

log = logging.getLogger(__name__)

Later = Callable[[Callable[[], Any], int], Any]
"""Calls a function on the page's event loop after so many ms."""

GESTURE_PAUSE_MS = 200
"""While a gesture lasts, panes are drawn at most this often, so that the canvas gets the time."""


class Pane(Component):
    """Draws `draw(desk)` whenever a watched parameter changes; `do_NAME(arg, value)` is the action NAME."""

    _esm = Path(__file__).with_name("pane.js")

    desk_watched: tuple[str, ...] = ()
    sheet_watched: tuple[str, ...] = ()

    def __init__(self, desk: Desk, later: Later, **params: Any) -> None:
        self.desk, self._later = desk, later
        self._due = self._ready = False
        self._shown = ""
        super().__init__(stylesheets=[STYLE], sizing_mode="stretch_both", margin=0, **params)
        watch_desk(desk, self.invalidate, self.desk_watched, self.sheet_watched)

    def draw(self, desk: Desk) -> Html:
        """What the pane shows of the desk."""
        raise NotImplementedError

    def invalidate(self) -> None:
        """Draw again soon, once for all changes until then."""
        if self._ready and not self._due:
            self._due = True
            in_gesture = any(sheet.in_gesture for sheet in self.desk.sheets.values())
            self._later(self.redraw, GESTURE_PAUSE_MS if in_gesture else 1)

    def redraw(self) -> None:
        """Draw now; nothing is sent when nothing has changed."""
        self._due = False
        html = self.draw(self.desk)
        if html != self._shown:
            self._shown = html
            self._send_msg({"html": html})

    def _handle_msg(self, data: Any) -> None:
        if data.get("ready"):
            self._ready, self._shown = True, ""
            self.redraw()
            return
        action = getattr(self, f"do_{data.get('act')}", None)
        if action is None:
            log.warning("%s has no action %r", type(self).__name__, data.get("act"))
            return
        action(data.get("arg"), data.get("values", data.get("file", data.get("value"))))
        self.redraw()
        self._send_msg({"done": True})


def watch_desk(desk: Desk, changed: Callable[[], None], desk_watched: tuple[str, ...],
               sheet_watched: tuple[str, ...]) -> None:
    """Call `changed` when a parameter of the desk or of any of its sheets changes, also of a later one."""
    known: set[int] = set()

    def watch_sheets(*_: Any) -> None:
        for sheet in desk.sheets.values():
            if id(sheet) not in known:
                known.add(id(sheet))
                if sheet_watched:
                    sheet.param.watch(lambda *_: changed(), list(sheet_watched))

    watch_sheets()
    desk.param.watch(lambda *_: (watch_sheets(), changed()), ["sheets"])
    if desk_watched:
        desk.param.watch(lambda *_: changed(), list(desk_watched))
