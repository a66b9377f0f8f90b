"""Giving a page its desk: the one it had before, or a new one with what a crash left behind on offer."""

from __future__ import annotations

import time
from collections.abc import Callable
from typing import Any

from solver import Solution

from .autosave import StateFolder
from .desk import Desk
from .files import FileAccess

RETRIES_MS = (100, 200, 400, 800, 1600)
"""Waits between attempts to get a desk that another page still has."""

CONNECT_S = 1.5
"""A page younger than this counts as alive though its browser has not connected yet."""


def open_desk(wanted: str, *, solve: Callable[..., Solution], schedule: Callable[[Callable[[], Any]], Any],
              later: Callable[[Callable[[], Any], int], Any], folder: StateFolder,
              access: FileAccess | None = None, alive: Callable[[], bool] = lambda: True,
              connect_s: float = CONNECT_S) -> Desk:
    """The desk of a page.

    wanted: the desk id the browser tab remembers, or "". The page has to remember `desk.id` there whenever
    that changes, and to call `desk.close()` when its session ends. schedule, later: hand a callable to the
    event loop, at once or after so many milliseconds (a document's `add_next_tick_callback` and
    `add_timeout_callback`). alive: whether this page's browser is still connected; it is asked when another
    page wants the same desk.

    On a reload the new page is asked for before the old one has hung up, so its desk may be free only a
    moment later: then the page has a new desk first, and moves in when the old page is gone, if nothing was
    done on the new desk meanwhile. A second page on a desk that stays in use keeps its own. `desk.restored`
    says which.
    """
    access = access or FileAccess()
    desk = Desk(solve=solve, schedule=schedule, access=access)
    born_s = time.monotonic()

    def living() -> bool:
        return alive() or time.monotonic() - born_s < connect_s

    drawer = folder.claim(wanted, living)
    desk.move_in(drawer or folder.fresh(living))

    def try_again(waits: tuple[int, ...]) -> None:
        if not desk.untouched or desk.stopped:
            return
        freed = folder.claim(wanted, living)
        if freed is not None:
            desk.move_in(freed)
        elif waits:
            later(lambda: try_again(waits[1:]), waits[0])

    if wanted and drawer is None:
        later(lambda: try_again(RETRIES_MS[1:]), RETRIES_MS[0])
    if access.allow_paths:  # else the folder holds other people's desks
        desk.look_for_left()
    return desk
