"""One open layout: what it is, what was done to it, and what the solver last said about it."""

from __future__ import annotations

from pathlib import Path

import param

from solver.document import Layout

from .history import History
from .live import Answer
from .refs import selection_after

STATES = ("draft", "current", "solving", "failed")


class Sheet(param.Parameterized):
    """The state of one sheet. Panes and canvases watch its parameters; only the desk calls its methods.

    Parameters that belong together change together, so one watcher on several sees them consistent.
    """

    layout = param.ClassSelector(class_=Layout, doc="""
        What is shown and solved: the present step, or the draft of a gesture that has not ended.""")
    history = param.ClassSelector(class_=History, doc="""
        The committed layouts; `history.present` is the real one.""")
    saved = param.ClassSelector(class_=Layout, doc="The layout as last opened or saved.")
    selection = param.ClassSelector(class_=tuple, default=(), doc="Refs of what is selected.")
    solution = param.Parameter(default=None, doc="""
        The newest Solution, or None. It may be of an older layout: `state` says.""")
    state = param.Selector(objects=list(STATES), default="solving", doc="""
        What is seen. "current": the final solution of `layout`. "draft": a draft-grid solution that follows
        the hand or is about to be replaced by the final one. "solving": no solution of this layout yet.
        "failed": there is none, `trouble` says why.""")
    trouble = param.String(default="", doc="Why the state is failed, one fault a line; else empty.")
    seconds = param.Number(default=None, allow_None=True, doc="How long the solve behind `solution` took.")
    answered = param.Integer(default=None, allow_None=True, doc="""
        Seq of the newest canvas message that is answered, well or not; changes together with `solution`.""")
    path = param.String(default=None, allow_None=True, doc="""
        The file it was opened from or saved to, or None.""")
    name = param.String(default="Untitled", constant=False, doc="What the title of the sheet says.")
    dirty = param.Boolean(default=False, doc="Whether `history.present` differs from `saved`.")
    revision = param.Integer(default=0, doc="Goes up with every change of `layout`.")

    def __init__(self, key: str, layout: Layout, name: str = "Untitled", path: Path | None = None) -> None:
        super().__init__(layout=layout, history=History.start(f"Open {name}", layout), saved=layout,
                         name=name, path=None if path is None else str(path))
        self.key = key

    @property
    def in_gesture(self) -> bool:
        """Whether the layout shown is a draft that is not in the history."""
        return self.layout is not self.history.present

    def start(self, history: History, saved: Layout, name: str, path: Path | None) -> None:
        """Another layout altogether: nothing of the one before is kept."""
        self.param.update(
            layout=history.present, history=history, saved=saved, selection=(), solution=None, answered=None,
            state="solving", trouble="", name=name, path=None if path is None else str(path),
            dirty=history.present != saved, revision=self.revision + 1)

    def draft(self, layout: Layout) -> None:
        """Show a layout without making it a step."""
        self.param.update(layout=layout, revision=self.revision + 1)

    def commit(self, history: History) -> None:
        """The history has moved on (or back): show its present; keep selected what is still there."""
        selection = selection_after(self.history.present, history.present, self.selection)
        self.param.update(layout=history.present, history=history, selection=selection,
                          dirty=history.present != self.saved, revision=self.revision + 1)

    def keep(self, path: Path | None = None) -> None:
        """The present layout has been saved, to `path` if given."""
        named = {} if path is None else {"path": str(path), "name": path.name}
        self.param.update(saved=self.history.present, dirty=False, **named)

    def ask(self, effort: str) -> None:
        """A solve of `layout` has been asked for."""
        following = effort == "draft" and self.state == "draft"
        seen = self.solution is not None and self.solution.layout == self.layout
        self.param.update(state="draft" if following or seen else "solving", trouble="")

    def fail(self, trouble: str, seq: int | None) -> None:
        """There is no solution of `layout`; what was solved before stays, marked by the state."""
        self.param.update(state="failed", trouble=trouble, **self._seen(seq))

    def take(self, answer: Answer) -> None:
        """An answer of the live solve has come."""
        if answer.solution is None:
            self.fail(answer.trouble, answer.request.seq)
            return
        if not answer.newest:
            state = "draft" if self.state == "draft" else "solving"
        else:
            state = "current" if answer.effort == "final" else "draft"
        self.param.update(solution=answer.solution, state=state, trouble="", seconds=answer.seconds,
                          **self._seen(answer.request.seq))

    @staticmethod
    def _seen(seq: int | None) -> dict[str, int]:
        return {} if seq is None else {"answered": seq}
