"""Undo and redo: an immutable list of named layouts and a place in it."""

from __future__ import annotations

from dataclasses import dataclass, replace

from solver.document import Layout

MOST_STEPS = 200


@dataclass(frozen=True)
class Step:
    """A layout and what was done to arrive at it ("Move Q1")."""

    name: str
    layout: Layout


@dataclass(frozen=True)
class History:
    """`steps[0]` is where the sheet started; `steps[at]` is the present; what follows can be redone."""

    steps: tuple[Step, ...]
    at: int = 0

    @classmethod
    def start(cls, name: str, layout: Layout) -> History:
        return cls((Step(name, layout),))

    @property
    def present(self) -> Layout:
        return self.steps[self.at].layout

    @property
    def can_undo(self) -> bool:
        return self.at > 0

    @property
    def can_redo(self) -> bool:
        return self.at < len(self.steps) - 1

    @property
    def undo_name(self) -> str:
        """The step that undo takes back, "" when there is none."""
        return self.steps[self.at].name if self.can_undo else ""

    @property
    def redo_name(self) -> str:
        """The step that redo makes again, "" when there is none."""
        return self.steps[self.at + 1].name if self.can_redo else ""

    def push(self, name: str, layout: Layout, most: int = MOST_STEPS) -> History:
        """One step further; undone steps are dropped, as are the oldest beyond `most`.

        A layout equal to the present one makes no step.
        """
        if layout == self.present:
            return self
        steps = (*self.steps[: self.at + 1], Step(name, layout))[-most:]
        return History(steps, len(steps) - 1)

    def jump(self, at: int) -> History:
        """To the step of that index, held within the list."""
        return replace(self, at=min(max(at, 0), len(self.steps) - 1))

    def undo(self) -> History:
        return self.jump(self.at - 1)

    def redo(self) -> History:
        return self.jump(self.at + 1)

    def kept_near(self, reach: int) -> History:
        """The same present with at most `reach` steps either side of it."""
        first = max(self.at - reach, 0)
        return History(self.steps[first : self.at + reach + 1], self.at - first)
