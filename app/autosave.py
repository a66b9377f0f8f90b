"""Autosave and recovery: a folder of this user's desks, and one desk's drawer in it.

A drawer is a JSON file named by the desk's id, and a lock that its desk holds while it is open; the lock ends
with the process, so a drawer that is unlocked and has unsaved steps was left by a crash or a closed browser.
"""

from __future__ import annotations

import contextlib
import logging
import os
import re
import threading
from collections.abc import Callable
from concurrent.futures import Future, ThreadPoolExecutor
from dataclasses import dataclass
from datetime import timedelta
from pathlib import Path
from uuid import uuid4

import platformdirs

from solver.document import Layout, dump_layout, write_atomic

from .lock import FileLock, is_held
from .record import DamagedRecordError, DeskRecord, Heading, now, parse_heading, parse_record, record_text

CLEAN_KEPT = timedelta(days=7)
"""A drawer without unsaved steps is removed when its desk was last changed longer ago."""

UNREADABLE = (DamagedRecordError, OSError, UnicodeDecodeError)
"""What reading a drawer's file can raise."""

log = logging.getLogger(__name__)


@dataclass(frozen=True)
class LeftDesk:
    """An unsaved desk that nobody has open: its heading has title, saved_at (UTC) and unsaved_steps."""

    id: str
    heading: Heading


def default_folder() -> Path:
    """Where this user's desks are kept: HEAT_STUDIO_STATE, else the system's place for a program's state."""
    named = os.environ.get("HEAT_STUDIO_STATE")
    return Path(named) if named else platformdirs.user_state_path("heat-spreader-studio", appauthor=False)


class StateFolder:
    """All drawers of one user. One object a process; its methods may be called from any thread."""

    def __init__(self, folder: Path | None = None) -> None:
        self.folder = folder or default_folder()
        self.writer = ThreadPoolExecutor(1, thread_name_prefix="autosave")
        self._open: dict[str, Drawer] = {}
        self._guard = threading.RLock()
        self._looking = threading.Lock()
        """Looking whether a lock is held takes it for a moment: two who look at once would mislead themselves."""
        self.writer.submit(self.sweep)

    def claim(self, id_: str, alive: Callable[[], bool] = lambda: True) -> Drawer | None:
        """The drawer of that id; None when it is in use, or the text is no id.

        alive: whether the page this is for still has its browser. A page that is reloaded asks for its drawer
        while the server still holds the old page: an owner that is no longer alive gives its drawer up.
        """
        if not is_id(id_):
            return None
        with self._guard:
            owner = self._open.get(id_)
            if owner is not None and not owner.alive():
                owner.give_up()
            if id_ in self._open:
                return None
            self.folder.mkdir(parents=True, exist_ok=True, mode=0o700)
            lock = FileLock(self._lock_path(id_))
            if not lock.acquire():
                return None
            self._open[id_] = Drawer(self, id_, lock, alive)
            return self._open[id_]

    def fresh(self, alive: Callable[[], bool] = lambda: True) -> Drawer:
        """A drawer of a new id."""
        return self.claim(uuid4().hex, alive)

    def left(self) -> tuple[tuple[LeftDesk, ...], int]:
        """Unsaved desks that nobody has open, newest first; and how many files could not be read."""
        found, damaged = [], 0
        for path in self._unlocked():
            try:
                heading = parse_heading(path.read_text("utf-8"))
            except UNREADABLE as error:
                put_aside(path, error)
                damaged += 1
                continue
            if heading.unsaved_steps:
                found.append(LeftDesk(path.stem, heading))
        return tuple(sorted(found, key=lambda desk: desk.heading.saved_at, reverse=True)), damaged

    def take(self, id_: str, into: Callable[[DeskRecord], None]) -> bool:
        """Hand the record of a left desk to `into` and then remove it; False when it is gone or in use.

        Raises DamagedRecordError. Nothing is removed when `into` raises.
        """
        path, lock = self.path(id_), FileLock(self._lock_path(id_))
        if not is_id(id_) or not path.exists() or not lock.acquire():
            return False
        try:
            into(read_record(path))
            path.unlink(missing_ok=True)
            lock.remove()
            return True
        finally:
            lock.release()

    def discard(self, id_: str) -> None:
        """Remove a left desk; one that is in use stays."""
        lock = FileLock(self._lock_path(id_))
        if is_id(id_) and lock.acquire():
            self.path(id_).unlink(missing_ok=True)
            lock.remove()

    def sweep(self) -> None:
        """Remove old drawers without unsaved steps, and locks without a drawer, that nobody holds."""
        for path in self._unlocked():
            with contextlib.suppress(*UNREADABLE):
                heading = parse_heading(path.read_text("utf-8"))
                if not heading.unsaved_steps and now() - heading.saved_at > CLEAN_KEPT:
                    self.discard(path.stem)
        for path in self.folder.glob("*.lock"):
            lock = FileLock(path)
            if not self.path(path.stem).exists() and lock.acquire(0.0):
                lock.remove()

    def path(self, id_: str) -> Path:
        return self.folder / f"{id_}.json"

    def closed(self, drawer: Drawer) -> None:
        """A drawer tells that it is no longer in use."""
        with self._guard:
            if self._open.get(drawer.id) is drawer:
                del self._open[drawer.id]

    def _unlocked(self) -> list[Path]:
        with self._looking:
            return [path for path in sorted(self.folder.glob("*.json"))
                    if is_id(path.stem) and not is_held(self._lock_path(path.stem))]

    def _lock_path(self, id_: str) -> Path:
        return self.folder / f"{id_}.lock"


class Drawer:
    """The place of one open desk. Keeping is done on the folder's writer thread; the newest record wins."""

    def __init__(self, folder: StateFolder, id_: str, lock: FileLock, alive: Callable[[], bool]) -> None:
        self.folder, self.id, self.alive = folder, id_, alive
        self.on_give_up: Callable[[], None] = lambda: None
        """Called when another page of the same browser tab takes the drawer over: close the desk."""
        self.on_failure: Callable[[str], None] = lambda words: None
        """Called on the writer thread when a record could not be written."""
        self._lock = lock
        self._guard = threading.Lock()
        self._waiting: DeskRecord | None = None
        self._closed = False
        self._texts: dict[int, tuple[Layout, str]] = {}

    def read(self) -> DeskRecord | None:
        """What the drawer holds, None when it is empty. Raises DamagedRecordError once the file is put
        aside."""
        path = self.folder.path(self.id)
        return read_record(path) if path.exists() else None

    def keep(self, record: DeskRecord) -> Future[bool]:
        """Write a record soon, unless a newer one is given before; the result says whether it was written.

        A closed drawer keeps nothing: it may be another page's by now.
        """
        with self._guard:
            self._waiting = None if self._closed else record
        return self.folder.writer.submit(self._write)

    def close(self) -> None:
        """Write what waits, then let go of the drawer."""
        with self._guard:
            if self._closed:
                return
            self._closed = True
        self.folder.writer.submit(self._write).result(timeout=10)
        if self.folder.path(self.id).exists():
            self._lock.release()
        else:
            self._lock.remove()
        self.folder.closed(self)

    def give_up(self) -> None:
        self.on_give_up()
        self.close()

    def _write(self) -> bool:
        with self._guard:
            record, self._waiting = self._waiting, None
        if record is None:
            return True
        try:
            write_atomic(self.folder.path(self.id), record_text(record, self._text))
        except OSError as error:
            log.warning("Autosave failed: %s", error)
            reason = (error.strerror or str(error)).lower()
            self.on_failure(f"Autosave failed: {reason}. Save your work to a file.")
            return False
        in_use = {id(step.layout) for sheet in record.sheets.values() for step in sheet.history.steps}
        self._texts = {key: kept for key, kept in self._texts.items() if key in in_use}
        return True

    def _text(self, layout: Layout) -> str:
        """A layout's JSON, remembered while it is in the history."""
        if id(layout) not in self._texts:
            self._texts[id(layout)] = (layout, dump_layout(layout))
        return self._texts[id(layout)][1]


def read_record(path: Path) -> DeskRecord:
    """A record from its file. Raises DamagedRecordError once a file that cannot be read is put aside."""
    try:
        return parse_record(path.read_text("utf-8"))
    except UNREADABLE as error:
        put_aside(path, error)
        raise DamagedRecordError(str(error)) from error


def put_aside(path: Path, error: Exception) -> None:
    """Give a file that cannot be read the ending ".damaged", so that it is told of once and not lost."""
    log.warning("Autosave %s is skipped: %s", path.name, error)
    with contextlib.suppress(OSError):  # gone by now
        path.replace(path.with_suffix(".damaged"))


def is_id(text: str) -> bool:
    """Whether a text is a desk's id, and so safe as a file name."""
    return re.fullmatch(r"[0-9a-f]{32}", text) is not None
