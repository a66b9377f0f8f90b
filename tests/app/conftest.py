"""What the tests of the desk share: a layout, a solver that is told when to finish, a loop run by hand."""

from __future__ import annotations

import queue
import threading
import time
from dataclasses import dataclass, field
from types import SimpleNamespace

import pytest

from solver.document import parse_layout

BOARD = {
    "format": "heat-spreader-layout", "version": 1, "title": "Board",
    "plate": {"width_mm": 80.0, "height_mm": 60.0},
    "layers": [{"id": "foil", "thickness_mm": 0.07, "material": "copper"},
               {"id": "base", "thickness_mm": 1.5, "material": "aluminium"}],
    "zones": [{"id": "gap", "layers": ["foil"], "x_mm": 38.0, "y_mm": 0.0, "width_mm": 4.0, "height_mm": 60.0,
               "material": "void"},
              {"id": "pad", "layers": "all", "x_mm": 60.0, "y_mm": 10.0, "width_mm": 10.0, "height_mm": 10.0,
               "material": "copper"}],
    "sources": [{"id": "Q1", "x_mm": 12.0, "y_mm": 20.0, "width_mm": 10.0, "height_mm": 9.0, "power_w": 12.0},
                {"id": "Q2", "x_mm": 50.0, "y_mm": 20.0, "width_mm": 10.0, "height_mm": 9.0, "power_w": 3.0,
                 "limit_c": 90.0}],
    "edges": {"east": [{"from_mm": 0.0, "to_mm": 30.0, "kind": "fixed", "temperature_c": 40.0},
                       {"from_mm": 30.0, "to_mm": 60.0, "kind": "convective", "film_w_m2k": 500.0}]},
    "faces": {"bottom": {"kind": "convective", "film_w_m2k": 50.0}},
    "contacts": [{"id": "stud", "face": "bottom", "x_mm": 2.0, "y_mm": 2.0, "width_mm": 6.0, "height_mm": 6.0,
                  "conductance_w_m2k": 3000.0}],
}


@dataclass
class Loop:
    """Stands for a page's event loop: what is scheduled runs when the test says so, in the test's thread."""

    waiting: queue.SimpleQueue = field(default_factory=queue.SimpleQueue)

    def schedule(self, callback) -> None:
        self.waiting.put(callback)

    def run_until(self, reached, timeout_s: float = 10.0) -> None:
        """Run callbacks until `reached()`; fails when that does not come."""
        end = time.monotonic() + timeout_s
        while not reached():
            try:
                self.waiting.get(timeout=max(end - time.monotonic(), 0.0))()
            except queue.Empty:
                pytest.fail("the expected state was not reached")

    def run_all(self) -> None:
        """Run what is scheduled now."""
        while not self.waiting.empty():
            self.waiting.get()()


class HandSolver:
    """Stands for the solver: every solve waits until `finish` lets it go on, or until it is told to stop."""

    class Ended(Exception):
        """Raised by a solve that was told to stop."""

    def __init__(self) -> None:
        self.calls: list[SimpleNamespace] = []
        self._changed = threading.Condition()

    def __call__(self, layout, *, effort="final", start=None, stop=None):
        call = SimpleNamespace(layout=layout, effort=effort, start=start, stopped=False, error=None, go=False)
        with self._changed:
            self.calls.append(call)
            self._changed.notify_all()
            while not call.go:
                if stop():
                    call.stopped = True
                    self._changed.notify_all()
                    raise self.Ended
                self._changed.wait(0.002)
        if call.error is not None:
            raise call.error
        return SimpleNamespace(layout=layout, effort=effort, results=SimpleNamespace(effort=effort))

    def started(self, number: int) -> SimpleNamespace:
        """The call of that number (from 1), once it has begun."""
        with self._changed:
            assert self._changed.wait_for(lambda: len(self.calls) >= number, 10.0), "no such solve began"
            return self.calls[number - 1]

    def finish(self, number: int, error: Exception | None = None) -> SimpleNamespace:
        """Let a call end, with an error if given."""
        call = self.started(number)
        with self._changed:
            call.error, call.go = error, True
            self._changed.notify_all()
        return call

    def wait_stopped(self, number: int) -> None:
        call = self.started(number)
        with self._changed:
            assert self._changed.wait_for(lambda: call.stopped, 10.0), "the solve was not told to stop"


def at_once(layout, *, effort="final", start=None, stop=None):
    """Stands for the solver: solves in no time."""
    return SimpleNamespace(layout=layout, effort=effort, results=SimpleNamespace(effort=effort))



@pytest.fixture
def loop():
    return Loop()


@pytest.fixture
def hand_solver():
    return HandSolver()


@pytest.fixture
def quick_solver():
    return at_once


@pytest.fixture(scope="session")
def board():
    """The board once for all examples of a property: layouts are immutable."""
    return parse_layout(BOARD)
