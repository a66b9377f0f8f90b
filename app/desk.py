"""One user's state: the open sheets and what is done to them. The only place state changes.

How a page uses it
    desk = Desk(solve=solver.solve, schedule=document.add_next_tick_callback, ...)    or `sessions.open_desk`
    desk.param.watch(...)            sheets, active, notice, question, left, plane, theme, linked_view, scale, difference
    desk.sheets["A"].param.watch(...)    layout, selection, history, solution, state, trouble, path, name, dirty, ...
    desk.edit("A", edits.move(refs, 2.0, 0.0))                  one step; False and a notice when it is refused
    desk.gesture("A", edits.place(items, "Move Q1"), seq=7)     drafts; the last call with final=True makes the step
    desk.cancel_gesture("A"); desk.undo("A"); desk.redo("A"); desk.jump("A", 3); desk.select("A", refs)
    desk.new("A"); desk.open_text("A", name, text); desk.open_path("A", path); desk.open_sample("A", sample)
    desk.save("A"); desk.save_as("A", path); desk.layout_download("A"); desk.results_download("A")
    desk.fork(); desk.open_b(); desk.close_b(); desk.restore(left_desk); desk.discard(left_desk); desk.close()

What would lose unsaved work or overwrite a file is not done at once: `question` is set, the page shows its text, and
calls `desk.agree()` (do it), `desk.save_first()` (where `question.may_save`) or `desk.decline()`.

All calls are made on the page's event loop; no call blocks on a solve. Nothing here raises for bad input: what is
refused becomes a `notice` and leaves everything as it was.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any, Literal

import param

from solver import Solution, planes
from solver.document import Layout, LayoutError, parse_layout

from . import edits, files
from .history import History
from .live import Answer, LiveSolve
from .refs import Ref, find
from .samples import Sample
from .sheet import Sheet

Key = Literal["A", "B"]

TYPING_PAUSE_S = 0.02
"""An edit that is no gesture waits this long for a following one before it is solved."""

BLANK = {
    "format": "heat-spreader-layout", "version": 1,
    "plate": {"width_mm": 100.0, "height_mm": 80.0},
    "layers": [{"id": "plate", "thickness_mm": 3.0, "material": "aluminium"}],
    "faces": {"bottom": {"kind": "convective", "film_w_m2k": 50.0}},
}
"""A new sheet: a bare plate that can lose heat, so that the first source placed has a temperature."""


@dataclass(frozen=True)
class Notice:
    """Something to tell the user: one sentence, and what there is to say in detail, one fault a line."""

    text: str
    kind: Literal["info", "warning", "error"] = "info"
    details: tuple[str, ...] = ()


@dataclass(frozen=True)
class Question:
    """Something that waits for a yes. `yes` is what the agreeing button says; `may_save`: saving first is offered."""

    text: str
    yes: str
    action: Callable[[], Any]
    key: Key
    may_save: bool = False


class Desk(param.Parameterized):
    """One user's desk with one or two sheets."""

    sheets = param.Dict(doc='"A" and, while a second layout is open, "B" -> Sheet. Replaced, never changed in place.')
    active = param.Selector(default="A", objects=["A", "B"], doc="The sheet that commands and panes are about.")
    notice = param.Parameter(default=None, doc="The newest Notice, or None once dismissed.")
    question = param.Parameter(default=None, doc="The Question that waits for an answer, or None.")
    left = param.ClassSelector(class_=tuple, default=(), doc="LeftDesk of every unsaved desk a crash left behind, newest first.")
    plane = param.String(default="top", doc='The plane shown on both sheets: "top", "layer:ID", "bottom".')
    theme = param.Selector(default="light", objects=["light", "dark"])
    linked_view = param.Boolean(default=True, doc="Whether zoom and pan of the two sheets go together.")
    scale = param.Parameter(default=None, doc="(low, high) in °C fixed by the user, or None: from the fields shown.")
    difference = param.Boolean(default=False, doc="Whether the map of temperature differences is shown.")

    def __init__(self, *, solve: Callable[..., Solution], schedule: Callable[[Callable[[], Any]], Any],
                 access: files.FileAccess | None = None, layout: Layout | None = None,
                 on_change: Callable[[Desk], None] | None = None) -> None:
        """solve: `solver.solve` or a stand-in. schedule: hands a callable to the event loop. access: what may be
        read and written on this computer. on_change: called after every committed change (autosave)."""
        self._solve, self._schedule = solve, schedule
        self._access = access or files.FileAccess()
        self._on_change = on_change or (lambda desk: None)
        self._live: dict[str, LiveSolve] = {}
        self._seq: dict[str, int | None] = {}
        super().__init__(sheets={"A": Sheet("A", layout or parse_layout(BLANK))})
        self._solve_now("A")

    # --- editing -----------------------------------------------------------------------------------------------

    def edit(self, key: Key, edit: edits.Edit) -> bool:
        """Make one step. False, with a notice, when the result would be faulty; False when nothing changes."""
        sheet = self.sheets[key]
        self.cancel_gesture(key)
        try:
            layout = edit.apply(sheet.history.present)
        except LayoutError as error:
            self._refused(edit.name, error)
            return False
        return self._step(key, sheet.history.push(edit.name, layout), TYPING_PAUSE_S)

    def gesture(self, key: Key, edit: edits.Edit, *, final: bool = False, seq: int | None = None) -> bool:
        """A gesture's edit of the layout as it was when the gesture began.

        Until `final` the result is shown and solved as a draft; then it becomes one step. A faulty draft leaves
        the last good one shown, with the sheet's state "failed" saying why; a faulty end puts the layout back.
        `seq` is the canvas message; the sheet's `answered` reaches it when it is answered.
        """
        sheet = self.sheets[key]
        self._seq[key] = seq if seq is not None else self._seq.get(key)
        try:
            layout = edit.apply(sheet.history.present)
        except LayoutError as error:
            if final:
                self._refused(edit.name, error)
                self._put_back(key)
            else:
                sheet.fail("\n".join(str(fault) for fault in error.faults), seq)
            return False
        if final:
            if layout == sheet.history.present:
                self._put_back(key)
                return False
            return self._step(key, sheet.history.push(edit.name, layout))
        sheet.draft(layout)
        self._solve_now(key, "draft")
        return True

    def cancel_gesture(self, key: Key) -> None:
        """Put the layout back as it was before the gesture; nothing happens when there is none."""
        if self.sheets[key].in_gesture:
            self._put_back(key)

    def undo(self, key: Key) -> bool:
        """Take the last step back. During a gesture, end that instead."""
        return self._travel(key, lambda history: history.undo())

    def redo(self, key: Key) -> bool:
        return self._travel(key, lambda history: history.redo())

    def jump(self, key: Key, at: int) -> bool:
        """To the step of that index in `history.steps`."""
        return self._travel(key, lambda history: history.jump(at))

    def select(self, key: Key, refs: Sequence[Ref]) -> None:
        """Select things; refs the layout does not have are dropped. The sheet becomes the active one."""
        layout = self.sheets[key].layout
        self.sheets[key].select(tuple(ref for ref in dict.fromkeys(refs) if find(layout, ref) is not None))
        self.active = key

    def plane_of(self, layout: Layout) -> str:
        """The plane to show of a layout: the one chosen, or the top where the layout has no such layer."""
        return self.plane if self.plane in planes.names(layout) else "top"

    # --- sheets ------------------------------------------------------------------------------------------------

    def new(self, key: Key) -> None:
        """A bare plate in place of what the sheet holds."""
        self._guarded(key, lambda: self._open(key, parse_layout(BLANK), "Untitled", None))

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
        a = self.sheets["A"]

        def copy() -> None:
            self.cancel_gesture("A")
            self._put_b(a.history.present, f"Copy of {a.name}")

        self._guarded("B", copy)

    def open_b(self) -> None:
        """Open sheet B with a bare plate, to be drawn on or to open a file into."""
        self._guarded("B", lambda: self._put_b(parse_layout(BLANK), "Untitled"))

    def close_b(self) -> None:
        self._guarded("B", self._drop_b)

    # --- files -------------------------------------------------------------------------------------------------

    @property
    def may_use_paths(self) -> bool:
        """Whether layouts can be opened from and saved to paths of this computer; else only down- and uploaded."""
        return self._access.allow_paths

    def save(self, key: Key) -> bool:
        """Save to the sheet's own file. False when it has none (ask for a path), or the write failed."""
        path = self.sheets[key].path
        return path is not None and self._write(key, Path(path))

    def save_as(self, key: Key, path: str) -> bool:
        """Save to another path (".json" is added). An existing file is overwritten only once that was agreed to."""
        try:
            target = self._access.target(path)
        except files.FileFault as fault:
            self.notice = Notice(str(fault), "error")
            return False
        own = self.sheets[key].path
        if target.exists() and (own is None or target != Path(own)):
            self.question = Question(f"{target} exists already. Overwrite it?", "Overwrite",
                                     lambda: self._write(key, target), key)
            return False
        return self._write(key, target)

    def layout_download(self, key: Key) -> tuple[str, str]:
        """File name and JSON text of the present layout, for a download. Call `downloaded` when it was handed over."""
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
            self.notice = Notice(f"There are no results of {sheet.name} to export yet: its state is {sheet.state}.",
                                 "warning")
            return None
        return files.download_name(sheet.name, "results"), files.results_text(sheet.solution.results)

    # --- questions and notices ---------------------------------------------------------------------------------

    def agree(self) -> None:
        """Do what the question is about."""
        question, self.question = self.question, None
        if question is not None:
            question.action()

    def save_first(self) -> bool:
        """Save the sheet, then do what the question is about. False when it could not be saved (no path yet)."""
        question = self.question
        if question is None or not self.save(question.key):
            return False
        self.agree()
        return True

    def decline(self) -> None:
        """Leave everything as it is."""
        self.question = None

    def tell(self, text: str, kind: Literal["info", "warning", "error"] = "info", details: Sequence[str] = ()) -> None:
        self.notice = Notice(text, kind, tuple(details))

    def dismiss_notice(self) -> None:
        self.notice = None

    def close(self) -> None:
        """The page is gone: stop the workers. Nothing is called back any more."""
        for live in self._live.values():
            live.close()
        self._live.clear()

    # --- inside ------------------------------------------------------------------------------------------------

    def _step(self, key: Key, history: History, delay_s: float = 0.0) -> bool:
        """Make a changed history the sheet's; False when it is not changed."""
        sheet = self.sheets[key]
        if history == sheet.history:
            return False
        sheet.commit(history)
        self._solve_now(key, "final", delay_s)
        self._changed()
        return True

    def _travel(self, key: Key, to: Callable[[History], History]) -> bool:
        sheet = self.sheets[key]
        if sheet.in_gesture:
            self.cancel_gesture(key)
            return True
        return self._step(key, to(sheet.history))

    def _put_back(self, key: Key) -> None:
        sheet = self.sheets[key]
        sheet.draft(sheet.history.present)
        self._solve_now(key)

    def _solve_now(self, key: Key, effort: Literal["draft", "final"] = "final", delay_s: float = 0.0) -> None:
        if key not in self._live:
            self._live[key] = LiveSolve(self._solve, self._schedule, lambda answer: self._answered(key, answer))
        self.sheets[key].asked(effort)
        self._live[key].request(self.sheets[key].layout, effort, self._seq.get(key), delay_s)

    def _answered(self, key: Key, answer: Answer) -> None:
        if key in self.sheets:
            self.sheets[key].take(answer)

    def _refused(self, name: str, error: LayoutError) -> None:
        self.notice = Notice(f"“{name}” was not done.", "error", tuple(str(fault) for fault in error.faults))

    def _guarded(self, key: Key, action: Callable[[], Any]) -> None:
        """Do what throws a sheet's layout away, asking first when it has unsaved changes."""
        sheet = self.sheets.get(key)
        if sheet is None or not sheet.dirty:
            action()
            return
        self.question = Question(f"{sheet.name} (sheet {key}) has unsaved changes.", "Discard changes", action, key,
                                 may_save=True)

    def _open_from(self, key: Key, name: str, read: Callable[[], tuple[Layout, Path | None]]) -> None:
        """Read first: a faulty file is refused before anything is asked or thrown away."""
        try:
            layout, path = read()
        except LayoutError as error:
            self.notice = Notice(f"{name} was not opened.", "error", tuple(str(fault) for fault in error.faults))
        except files.FileFault as fault:
            self.notice = Notice(str(fault), "error")
        else:
            self._guarded(key, lambda: self._open(key, layout, name, path))

    def _open(self, key: Key, layout: Layout, name: str, path: Path | None) -> None:
        if key not in self.sheets:
            self._put_b(layout, name, path)
            return
        self._start(key, History.start(f"Open {name}", layout), layout, name, path)
        self._changed()

    def _start(self, key: Key, history: History, saved: Layout, name: str, path: Path | None) -> None:
        if key in self._live:
            self._live[key].reset()
        self.sheets[key].start(history, saved, name, path)
        self._solve_now(key)

    def _put_b(self, layout: Layout, name: str, path: Path | None = None) -> None:
        self._drop_b()
        self.sheets = {**self.sheets, "B": Sheet("B", layout, name, path)}
        self.active = "B"
        self._solve_now("B")
        self._changed()

    def _drop_b(self) -> None:
        if "B" not in self.sheets:
            return
        if "B" in self._live:
            self._live.pop("B").close()
        self._seq.pop("B", None)
        self.active = "A"
        self.param.update(sheets={"A": self.sheets["A"]}, difference=False)
        self._changed()

    def _write(self, key: Key, path: Path) -> bool:
        sheet = self.sheets[key]
        try:
            self._access.write(path, sheet.history.present)
        except files.FileFault as fault:
            self.notice = Notice(str(fault), "error")
            return False
        sheet.keep(path)
        self.notice = Notice(f"Saved {path}.")
        self._changed()
        return True

    def _changed(self) -> None:
        self._on_change(self)
