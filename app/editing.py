"""The sheets of one desk and what is done to their layouts: edits, gestures, undo, and the live solve behind
them."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any, Literal

import param

from solver import Solution, planes
from solver.document import Layout, LayoutError, parse_layout

from .edits import Edit
from .history import History
from .live import LiveSolve
from .refs import Ref, find
from .sheet import Sheet

Key = Literal["A", "B"]
NoticeKind = Literal["info", "warning", "error"]

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
    kind: NoticeKind = "info"
    details: tuple[str, ...] = ()


class Editing(param.Parameterized):
    """One or two sheets, edited and solved. `Desk` adds files and recovery."""

    sheets = param.Dict(doc="""
        "A" and, while a second layout is open, "B" -> Sheet. Replaced, never changed in place.""")
    active = param.Selector(default="A", objects=["A", "B"], doc="The sheet that commands are about.")
    notice = param.Parameter(default=None, doc="The newest Notice, or None once dismissed.")
    plane = param.String(default="top", doc='The plane shown on both: "top", "layer:ID", "bottom".')

    def __init__(self, solve: Callable[..., Solution], schedule: Callable[[Callable[[], Any]], Any],
                 layout: Layout | None = None) -> None:
        self._solve, self._schedule = solve, schedule
        self._live: dict[str, LiveSolve] = {}
        self._seq: dict[str, int | None] = {}
        self.stopped = False
        super().__init__(sheets={"A": Sheet("A", layout or blank())})
        self._request("A")

    def edit(self, key: Key, edit: Edit) -> bool:
        """Make one step. False, with a notice, when the result would be faulty; False when nothing
        changes."""
        sheet = self.sheets[key]
        self.cancel_gesture(key)
        try:
            layout = edit.apply(sheet.history.present)
        except LayoutError as error:
            self._refuse(edit, error)
            return False
        return self._step(key, sheet.history.push(edit.name, layout), TYPING_PAUSE_S)

    def gesture(self, key: Key, edit: Edit, *, final: bool = False, seq: int | None = None) -> bool:
        """A gesture's edit of the layout as it was when the gesture began.

        Until `final` the result is shown and solved as a draft; then it becomes one step. A faulty draft
        leaves the last good one shown, with the sheet's state "failed" saying why; a faulty end puts the
        layout back. `seq` is the canvas message; the sheet's `answered` reaches it when it is answered, well
        or not.
        """
        sheet = self.sheets[key]
        self._seq[key] = self._seq.get(key) if seq is None else seq
        try:
            layout = edit.apply(sheet.history.present)
        except LayoutError as error:
            if final:
                self._refuse(edit, error)
                self._put_back(key)
            else:
                sheet.fail(in_lines(error), seq)
            return False
        if not final:
            sheet.draft(layout)
            self._request(key, "draft")
            return True
        if layout == sheet.history.present:
            self._put_back(key)
            return False
        return self._step(key, sheet.history.push(edit.name, layout))

    def cancel_gesture(self, key: Key) -> None:
        """Put the layout back as it was before the gesture; nothing happens when there is none."""
        if self.sheets[key].in_gesture:
            self._put_back(key)

    def undo(self, key: Key) -> bool:
        """Take the last step back. During a gesture, end that instead."""
        return self._travel(key, History.undo)

    def redo(self, key: Key) -> bool:
        """Make the step again that was last taken back."""
        return self._travel(key, History.redo)

    def jump(self, key: Key, at: int) -> bool:
        """To the step of that index in `history.steps`."""
        return self._travel(key, lambda history: history.jump(at))

    def select(self, key: Key, refs: Sequence[Ref]) -> None:
        """Select things; refs the layout does not have are dropped. The sheet becomes the active one."""
        layout = self.sheets[key].layout
        known = (ref for ref in dict.fromkeys(refs) if find(layout, ref) is not None)
        self.sheets[key].selection = tuple(known)
        self.active = key

    def plane_of(self, layout: Layout) -> str:
        """The plane to show of a layout: the one chosen, or the top where the layout has no such layer."""
        return self.plane if self.plane in planes.names(layout) else "top"

    def tell(self, text: str, kind: NoticeKind = "info", details: Sequence[str] = ()) -> None:
        """Set the notice."""
        self.notice = Notice(text, kind, tuple(details))

    def dismiss_notice(self) -> None:
        """The user has read the notice."""
        self.notice = None

    def stop(self) -> None:
        """Stop the workers for good. Nothing is called back any more."""
        self.stopped = True
        for live in self._live.values():
            live.close()
        self._live.clear()

    def _changed(self) -> None:
        """A committed change has been made."""

    def _step(self, key: Key, history: History, delay_s: float = 0.0) -> bool:
        """Make a changed history the sheet's; False when it is not changed."""
        sheet = self.sheets[key]
        if history is sheet.history or (history.at, history.steps) == (sheet.history.at, sheet.history.steps):
            return False
        sheet.commit(history)
        self._request(key, "final", delay_s)
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
        self._request(key)

    def _start(self, key: Key, history: History, saved: Layout, name: str, path: Path | None) -> None:
        """Put another layout on a sheet, which is opened if need be."""
        if key not in self.sheets:
            self.sheets = {**self.sheets, key: Sheet(key, saved, name, path)}
        if key in self._live:
            self._live[key].reset()
        self._seq.pop(key, None)
        self.sheets[key].start(history, saved, name, path)
        self._request(key)

    def _drop(self, key: Key) -> None:
        """Close sheet B. Its worker is stopped."""
        if key in self._live:
            self._live.pop(key).close()
        self._seq.pop(key, None)
        left = {other: sheet for other, sheet in self.sheets.items() if other != key}
        self.param.update(active="A", sheets=left)

    def _request(self, key: Key, effort: Literal["draft", "final"] = "final", delay_s: float = 0.0) -> None:
        if self.stopped:
            return
        if key not in self._live:
            self._live[key] = LiveSolve(self._solve, self._schedule, self.sheets[key].take)
        self.sheets[key].ask(effort)
        self._live[key].request(self.sheets[key].layout, effort, self._seq.get(key), delay_s)

    def _refuse(self, edit: Edit, error: LayoutError) -> None:
        self.tell(f"“{edit.name}” was not done.", "error", in_lines(error).splitlines())


def blank() -> Layout:
    """The layout of a new sheet."""
    return parse_layout(BLANK)


def in_lines(error: LayoutError) -> str:
    """The faults of a layout, one a line."""
    return "\n".join(str(fault) for fault in error.faults)
