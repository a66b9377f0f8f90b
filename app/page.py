"""Puts the parts of one page together."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from functools import cache
from pathlib import Path

import panel as pn
from bokeh.document import Document

import solver

from .autosave import StateFolder
from .browser import Browser
from .desk import Desk
from .files import FileAccess
from .look import FRAME, STYLE
from .loop import PageLoop
from .panes.caption import Caption, DifferenceCaption
from .panes.inspector import Inspector
from .panes.over import Over
from .panes.rail import Rail
from .panes.stage import Stage
from .panes.status import StatusLine
from .panes.topbar import TopBar
from .panes.verdict import VerdictPane
from .samples import samples
from .sessions import open_desk

_open: dict[Desk, Callable[[], bool]] = {}
"""The desks of this process, each with whether its page has hung up."""

samples_here = cache(samples)
state_folder = cache(StateFolder)


def page(files: Sequence[Path] = (), access: FileAccess | None = None) -> pn.Template:
    """The page of one browser tab. files: opened on sheets A and B of a desk that is new."""
    document = pn.state.curdoc
    loop = PageLoop(document)
    _close_those_gone()
    wanted = _argument("desk")
    desk = open_desk(wanted, solve=solver.solve, schedule=loop.soon, later=loop.later,
                     folder=state_folder(), access=access, alive=lambda: _is_connected(document))
    pn.state.on_session_destroyed(lambda _: _close(desk))
    if not wanted:
        for key, path in zip(("A", "B"), files, strict=False):
            desk.open_path(key, str(path))
        desk.active = "A"

    browser = Browser(desk)
    _open[desk] = lambda: browser.there and not _is_connected(document)
    stage = Stage(desk, loop.later, browser.press)
    items = {
        "top": TopBar(desk, loop.later, samples_here(), browser.download), "rail": Rail(desk, loop.later),
        "caption_a": Caption(desk, loop.later, "A"), "canvas_a": stage.surfaces["A"].canvas,
        "caption_b": Caption(desk, loop.later, "B"), "canvas_b": stage.surfaces["B"].canvas,
        "caption_d": DifferenceCaption(desk, loop.later), "canvas_d": stage.difference,
        "inspector": Inspector(desk, loop.later), "verdict": VerdictPane(desk, loop.later),
        "status": StatusLine(desk, loop.later),
        "over": Over(desk, loop.later, samples_here()), "browser": browser,
    }
    template = pn.Template(FRAME, items=items)
    template.add_variable("style", STYLE)
    return template


def _is_connected(document: Document) -> bool:
    """Whether a browser is on the other end. The session comes only after the page has been built."""
    session = document.session_context.session if document.session_context else None
    return session is not None and session.connection_count > 0


def _close_those_gone() -> None:
    """Close the desks of pages that have hung up, so that what they left unsaved is on offer at once.

    Their sessions end only some time later.
    """
    for desk in [desk for desk, is_gone in _open.items() if is_gone()]:
        _close(desk)


def close_desks() -> None:
    """The server ends: finish every autosave."""
    for desk in list(_open):
        _close(desk)


def _close(desk: Desk) -> None:
    if _open.pop(desk, None) is not None:
        desk.close()


def _argument(name: str) -> str:
    values = pn.state.session_args.get(name, [b""])
    return values[0].decode("ascii", "replace")
