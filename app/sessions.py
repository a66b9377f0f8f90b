"""Giving a page its desk: the one it had before, or a new one with what a crash left behind on offer."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from solver import Solution

from .autosave import StateFolder
from .desk import Desk
from .files import FileAccess
from .record import DamagedRecordError


def open_desk(wanted: str | None, *, solve: Callable[..., Solution],
              schedule: Callable[[Callable[[], Any]], Any], folder: StateFolder,
              access: FileAccess | None = None, alive: Callable[[], bool] = lambda: True) -> Desk:
    """The desk of a page.

    wanted: the desk id the browser tab remembers, or None. The page has to remember `desk.id` there, and to
    call `desk.close()` when its session ends. alive: whether this page's browser is still connected; it is
    asked when another page wants the same desk. `desk.restored` says whether the desk of before is back.
    """
    access = access or FileAccess()
    drawer = folder.drawer(wanted, alive)
    desk = Desk(solve=solve, schedule=schedule, access=access, drawer=drawer)
    drawer.on_give_up = desk.stop
    drawer.on_failure = lambda words: schedule(lambda: desk.tell(words, "error"))
    try:
        record = drawer.read()
    except DamagedRecordError as error:
        record = None
        desk.tell(f"This page's autosave was skipped: {error}. The file is put aside in {folder.folder}.",
                  "warning")
    if record is not None:
        desk.load(record)
        desk.restored = True
    if access.allow_paths:  # else the folder holds other people's desks
        desk.look_for_left()
    return desk
