"""One user's state: the open sheets and what is done to them. The only place state changes.

How a page uses it
    desk = sessions.open_desk(...)   or Desk(solve=solver.solve, schedule=document.add_next_tick_callback)
    desk.param.watch(...)            on sheets, active, notice, question, left, plane, tool, snap, theme,
                                     linked_view, scale, difference, id, restored
    desk.sheets["A"].param.watch(...)  on layout, selection, history, solution, state, trouble, seconds,
                                     answered, path, name, dirty, revision (see sheet.py)
    desk.edit("A", edits.move(refs, 2.0, 0.0))               one step; False and a notice when refused
    desk.gesture("A", edits.place(items, "Move Q1"), seq=7)  a draft; the last call, final=True, is the step
    desk.cancel_gesture("A"), undo("A"), redo("A"), jump("A", 3), select("A", refs)
    desk.new("A"), open_text("A", name, text), open_path("A", path), open_sample("A", sample)
    desk.save("A"), save_as("A", path), layout_download("A"), results_download("A")
    desk.fork(), open_b(), close_b(), restore(left_desk), discard(left_desk), close()

What would lose unsaved work or overwrite a file is not done at once: `question` is set, the page shows its
text, and calls `agree()` (do it), `save_first()` (where `question.may_save`) or `decline()`.

All calls are made on the page's event loop; no call waits for a solve. Nothing here raises for bad input:
what is refused becomes a `notice` and leaves everything as it was.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import param

from solver import Solution
from solver.document import Layout, LayoutError

from . import files
from .autosave import Drawer, LeftDesk
from .editing import Editing, Key, Notice, blank, in_lines
from .history import History
from .record import DamagedRecordError, DeskRecord, SheetRecord, now
from .samples import Sample

__all__ = ["Desk", "Key", "Notice", "Question"]


@dataclass(frozen=True)
class Question:
    """Something that waits for a yes: `yes` is what that button says; `may_save`: saving first is offered."""

    text: str
    yes: str
    action: Callable[[], Any]
    key: Key
    may_save: bool = False


class Desk(Editing):
    """One user's desk with one or two sheets."""

    id = param.String(default=None, allow_None=True, doc="""
        What the page has to remember to get this desk back after a reload; None without autosave.""")
    restored = param.Boolean(default=False, doc="Whether the sheets are those of before a reload or restart.")
    question = param.Parameter(default=None, doc="The Question that waits for an answer, or None.")
    left = param.ClassSelector(class_=tuple, default=(), doc="""
        A LeftDesk for every unsaved desk that nobody has open, newest first.""")
    tool = param.Selector(default="select", objects=["select", "source", "zone", "contact"], doc="""
        What dragging on the plate does.""")
    snap = param.Boolean(default=True, doc="Whether gestures snap to the grid and to other edges.")
    theme = param.Selector(default="light", objects=["light", "dark"])
    linked_view = param.Boolean(default=True, doc="Whether zoom and pan of the two sheets go together.")
    scale = param.Parameter(default=None, doc="(low, high) in °C fixed by the user; None: from the fields.")
    difference = param.Boolean(default=False, doc="Whether the map of temperature differences is shown.")

    def __init__(self, *, solve: Callable[..., Solution], schedule: Callable[[Callable[[], Any]], Any],
                 access: files.FileAccess | None = None, layout: Layout | None = None) -> None:
        """solve: `solver.solve` or a stand-in. schedule: hands a callable to the event loop. access: what may
        be read and written on this computer. Nothing is autosaved before `move_in`."""
        self._access = access or files.FileAccess()
        self._drawer: Drawer | None = None
        super().__init__(solve, schedule, layout)

    # --- sheets ---

    def new(self, key: Key) -> None:
        """A bare plate in place of what the sheet holds; sheet B is opened if need be."""
        self._ask_if_unsaved(key, lambda: self._open(key, blank(), "Untitled", None))

    def open_text(self, key: Key, name: str, text: str | bytes) -> None:
        """Open a layout from the text of a file that was chosen or dropped in the browser."""
        self._open_from(key, name, lambda: (files.layout_from_text(text), None))

    def open_path(self, key: Key, path: str) -> None:
        """Open a layout from a file of this computer."""
        self._open_from(key, Path(path).name, lambda: self._access.read(path))

    def open_sample(self, key: Key, sample: Sample) -> None:
        """Open a sample layout; it has no path, so saving asks for one."""
        self._open_from(key, sample.path.name, lambda: (files.layout_from_path(sample.path), None))

    def fork(self) -> None:
        """Open a copy of sheet A as sheet B."""
        self.cancel_gesture("A")
        a = self.sheets["A"]
        self._ask_if_unsaved("B", lambda: self._open("B", a.history.present, f"Copy of {a.name}", None))

    def open_b(self) -> None:
        """Open sheet B with a bare plate, to be drawn on or to open a file into."""
        self.new("B")

    def close_b(self) -> None:
        """Close sheet B."""
        self._ask_if_unsaved("B", self._close_b)

    # --- files ---

    @property
    def may_use_paths(self) -> bool:
        """Whether paths of this computer can be opened and saved to; else layouts are down- and uploaded."""
        return self._access.allow_paths

    def save(self, key: Key) -> bool:
        """Save to the sheet's own file. False when it has none (ask for a path), when the write failed, or
        when the file holds something else by now and a question is asked first."""
        sheet = self.sheets[key]
        if sheet.path is None:
            return False
        path = Path(sheet.path)
        if files.changed_since(path, sheet.saved):
            self.question = Question(f"{path} was changed by someone else meanwhile. Overwrite it?",
                                     "Overwrite", lambda: self._write(key, path), key)
            return False
        return self._write(key, path)

    def save_as(self, key: Key, path: str) -> bool:
        """Save to another path; ".json" is added. A question is asked before a file is overwritten."""
        try:
            target = self._access.target(path)
        except files.FileFault as fault:
            self.tell(str(fault), "error")
            return False
        own = self.sheets[key].path
        if target.exists() and (own is None or target != Path(own)):
            self.question = Question(f"{target} exists already. Overwrite it?", "Overwrite",
                                     lambda: self._write(key, target), key)
            return False
        return self._write(key, target)

    def layout_download(self, key: Key) -> tuple[str, str]:
        """File name and JSON text of the present layout. Call `downloaded` once it has been handed over."""
        sheet = self.sheets[key]
        return files.download_name(sheet.name), files.layout_text(sheet.history.present)

    def downloaded(self, key: Key) -> None:
        """The layout has been downloaded: it counts as saved."""
        self.sheets[key].keep()
        self._changed()

    def results_download(self, key: Key) -> tuple[str, str] | None:
        """File name and JSON text of the results; None, with a notice, unless the state is "current"."""
        sheet = self.sheets[key]
        if sheet.state != "current":
            self.tell(f"{sheet.name} has no final results to export: its state is {sheet.state}.", "warning")
            return None
        return files.download_name(sheet.name, "results"), files.results_text(sheet.solution.results)

    # --- questions ---

    def agree(self) -> None:
        """Do what the question is about."""
        question, self.question = self.question, None
        if question is not None:
            question.action()

    def save_first(self) -> bool:
        """Save the sheet, then do what the question is about. False when it was not saved (no path yet)."""
        question = self.question
        if question is None or not self.save(question.key):
            return False
        self.agree()
        return True

    def decline(self) -> None:
        """Leave everything as it is."""
        self.question = None

    # --- autosave and recovery ---

    @property
    def untouched(self) -> bool:
        """Whether nothing has been edited: there are only layouts as they were opened."""
        return all(len(sheet.history.steps) == 1 and not sheet.in_gesture for sheet in self.sheets.values())

    def move_in(self, drawer: Drawer) -> None:
        """Autosave to this drawer from now on, after putting what it holds on the desk."""
        if self._drawer is not None:
            self._drawer.close()
            if self.untouched:
                self._drawer.folder.discard(self._drawer.id)
        self._drawer = drawer
        drawer.on_give_up = self.stop
        drawer.on_failure = lambda words: self._schedule(lambda: self.tell(words, "error"))
        try:
            record = drawer.read()
        except DamagedRecordError as error:
            record = None
            self.tell(f"This page's autosave was skipped: {error}. The file is put aside in "
                      f"{drawer.folder.folder}.", "warning")
        if record is not None:
            self.load(record)
        self.param.update(id=drawer.id, restored=record is not None)

    def record(self) -> DeskRecord:
        """What autosave keeps. A gesture that has not ended is not in it."""
        sheets = {key: SheetRecord(sheet.name, sheet.path, sheet.history, sheet.saved)
                  for key, sheet in self.sheets.items()}
        return DeskRecord(now(), self.active, sheets)

    def load(self, record: DeskRecord) -> None:
        """Put a record's sheets in place of those that are open."""
        if "B" in self.sheets and "B" not in record.sheets:
            self._drop("B")
        for key, sheet in record.sheets.items():
            path = None if sheet.path is None else Path(sheet.path)
            self._start(key, sheet.history, sheet.saved, sheet.name, path)
        self.active = record.active
        self._changed()

    def look_for_left(self) -> None:
        """Fill `left`; a notice tells of autosaves that cannot be read."""
        if self._drawer is None:
            return
        self.left, damaged = self._drawer.folder.left()
        if damaged:
            self.tell(f"{damaged} damaged autosave(s) skipped and put aside in {self._drawer.folder.folder}.",
                      "warning")

    def restore(self, left: LeftDesk) -> None:
        """Put a left desk in place of what is open, asking first when that is unsaved."""
        self._ask_if_unsaved("A", lambda: self._ask_if_unsaved("B", lambda: self._restore(left)))

    def discard(self, left: LeftDesk) -> None:
        """Remove a left desk for good."""
        self._drawer.folder.discard(left.id)
        self._forget(left)

    def close(self) -> None:
        """The page is gone: stop the workers, finish the autosave and let go of the drawer."""
        self.stop()
        if self._drawer is not None:
            self._drawer.close()

    # --- inside ---

    def _changed(self) -> None:
        if self._drawer is not None:
            self._drawer.keep(self.record())

    def _ask_if_unsaved(self, key: Key, action: Callable[[], Any]) -> None:
        """Do what throws a sheet's layout away, asking first when it has unsaved changes."""
        sheet = self.sheets.get(key)
        if sheet is None or not sheet.dirty:
            action()
            return
        text = f"{sheet.name} (sheet {key}) has unsaved changes."
        self.question = Question(text, "Discard changes", action, key, may_save=True)

    def _open_from(self, key: Key, name: str, read: Callable[[], tuple[Layout, Path | None]]) -> None:
        """Read first: a faulty file is refused before anything is asked or thrown away."""
        try:
            layout, path = read()
        except LayoutError as error:
            self.tell(f"{name} was not opened.", "error", in_lines(error).splitlines())
        except files.FileFault as fault:
            self.tell(str(fault), "error")
        else:
            self._ask_if_unsaved(key, lambda: self._open(key, layout, name, path))

    def _open(self, key: Key, layout: Layout, name: str, path: Path | None) -> None:
        self._start(key, History.start(f"Open {name}", layout), layout, name, path)
        self.active = key
        self._changed()

    def _close_b(self) -> None:
        self._drop("B")
        self.difference = False
        self._changed()

    def _write(self, key: Key, path: Path) -> bool:
        sheet = self.sheets[key]
        try:
            self._access.write(path, sheet.history.present)
        except files.FileFault as fault:
            self.tell(str(fault), "error")
            return False
        sheet.keep(path)
        self.tell(f"Saved {path}.")
        self._changed()
        return True

    def _restore(self, left: LeftDesk) -> None:
        def into(record: DeskRecord) -> None:
            self.load(record)
            if not self._drawer.keep(self.record()).result(timeout=10):
                raise files.FileFault(f"{left.heading.title} is open; its autosave also stays as it was.")

        try:
            if not self._drawer.folder.take(left.id, into):
                self.tell(f"{left.heading.title} is no longer there; another page has it.", "warning")
        except DamagedRecordError as error:
            self.tell(f"{left.heading.title} was not restored: {error}.", "error")
        except files.FileFault as fault:
            self.tell(str(fault), "warning")
        self._forget(left)

    def _forget(self, left: LeftDesk) -> None:
        self.left = tuple(desk for desk in self.left if desk != left)
