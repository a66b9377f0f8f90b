"""The live solve: one worker a sheet, newest request wins, off the event loop.

A worker has one slot. A request replaces the one that waits there and stops the final solve that runs; a
running draft, which is short, is let finish so that a hand that never rests still sees the field follow.
Answers go back through `schedule`, which has to call what it is given on the event loop
(`add_next_tick_callback`).
"""

from __future__ import annotations

import logging
import threading
import time
from collections.abc import Callable
from dataclasses import dataclass, replace
from functools import partial
from typing import Any, Literal

from solver import Solution, TooLargeError
from solver.document import Layout, LayoutError

Effort = Literal["draft", "final"]

QUICK_FINAL_S = 0.12
"""A final solve expected to take no longer than this is not preceded by a draft."""

log = logging.getLogger(__name__)


@dataclass(frozen=True)
class Request:
    """`ticket` counts requests of one worker; `seq` is the canvas message it answers, None for none."""

    ticket: int
    layout: Layout
    effort: Effort
    seq: int | None
    due_s: float


@dataclass(frozen=True)
class Answer:
    """A solution, or words on why there is none. `newest`: no request has come since the one it answers."""

    request: Request
    effort: Effort
    solution: Solution | None
    trouble: str
    seconds: float
    newest: bool = True


class LiveSolve:
    """The worker of one sheet.

    solve: `solver.solve` or a stand-in, called as solve(layout, effort=, start=, stop=) on its thread.
    schedule: hands a callable to the event loop. report: gets each Answer there, no older after a newer.
    """

    def __init__(self, solve: Callable[..., Solution], schedule: Callable[[Callable[[], Any]], Any],
                 report: Callable[[Answer], None]) -> None:
        self._solve, self._schedule, self._report = solve, schedule, report
        self._wake = threading.Condition()
        self._waiting: Request | None = None
        self._thread: threading.Thread | None = None
        self._closed = False
        self._newest = 0
        """Ticket of the newest request."""
        self._floor = 0
        """Answers to tickets below this are not reported."""
        self._last: Solution | None = None
        """Where the next solve starts from."""
        self._final_s = float("inf")
        """How long the last final solve took."""

    def request(self, layout: Layout, effort: Effort = "final", seq: int | None = None,
                delay_s: float = 0.0) -> None:
        """Ask for a layout's solution; with a delay it is solved only when no newer request comes
        meanwhile."""
        with self._wake:
            if self._closed:
                return
            self._newest += 1
            self._waiting = Request(self._newest, layout, effort, seq, time.monotonic() + delay_s)
            if self._thread is None:
                self._thread = threading.Thread(target=self._work, name="live-solve", daemon=True)
                self._thread.start()
            self._wake.notify()

    def reset(self) -> None:
        """Forget everything asked and solved so far: another layout has been opened."""
        with self._wake:
            self._newest += 1
            self._floor = self._newest
            self._waiting = self._last = None
            self._final_s = float("inf")

    def close(self, wait_s: float = 0.0) -> None:
        """Stop what runs and end the thread, waiting for that at most `wait_s`; nothing is reported any
        more."""
        with self._wake:
            self._closed, self._waiting = True, None
            self._wake.notify()
        if wait_s and self._thread is not None:
            self._thread.join(wait_s)

    def _work(self) -> None:
        while (request := self._next()) is not None:
            for effort in self._efforts(request):
                answer = self._answered(request, effort)
                if answer is None:
                    break
                self._hand_back(answer)
                if answer.solution is None:
                    break

    def _next(self) -> Request | None:
        """Wait for a request that is due; None when the worker is closed."""
        with self._wake:
            while not self._closed:
                if self._waiting is None:
                    self._wake.wait()
                elif (rest := self._waiting.due_s - time.monotonic()) > 0:
                    self._wake.wait(rest)
                else:
                    request, self._waiting = self._waiting, None
                    return request
            return None

    def _efforts(self, request: Request) -> tuple[Effort, ...]:
        if request.effort == "draft":
            return ("draft",)
        seen = self._last is not None and self._last.layout == request.layout
        return ("final",) if seen or self._final_s <= QUICK_FINAL_S else ("draft", "final")

    def _stale(self, request: Request, effort: Effort) -> bool:
        return self._closed or request.ticket < self._floor or (
            effort == "final" and request.ticket < self._newest)

    def _answered(self, request: Request, effort: Effort) -> Answer | None:
        """Solve; None when the solve became stale, whatever it then raised or returned."""
        stop = partial(self._stale, request, effort)
        if stop():
            return None
        start_s = time.monotonic()
        solution, trouble = None, ""
        try:
            solution = self._solve(request.layout, effort=effort, start=self._last, stop=stop)
            _ = solution.results  # computed on first use: here, not on the event loop
        except Exception as error:
            if stop():
                return None
            solution, trouble = None, trouble_in_words(error)
        if stop():
            return None
        seconds = time.monotonic() - start_s
        if solution is not None:
            with self._wake:
                if request.ticket >= self._floor:
                    self._last = solution
                    self._final_s = seconds if effort == "final" else self._final_s
        return Answer(request, effort, solution, trouble, seconds)

    def _hand_back(self, answer: Answer) -> None:
        try:
            self._schedule(partial(self._deliver, answer))
        except Exception:
            if not self._closed:
                log.exception("An answer of the live solve could not be handed to the page")

    def _deliver(self, answer: Answer) -> None:
        """On the event loop: report an answer unless a newer one was reported or everything was reset."""
        ticket = answer.request.ticket
        with self._wake:
            newest = ticket == self._newest
            if self._closed or ticket < self._floor or (answer.solution is None and not newest):
                return
            self._floor = ticket
        self._report(replace(answer, newest=newest))


def trouble_in_words(error: Exception) -> str:
    """Why there is no solution, as the screen says it; what is no known kind of fault is logged as well."""
    if isinstance(error, LayoutError):
        return "\n".join(str(fault) for fault in error.faults)
    if isinstance(error, TooLargeError):
        return str(error)
    if isinstance(error, MemoryError):
        return "There is not enough free memory to solve this layout; close other programs or simplify it."
    log.error("The solver failed unexpectedly", exc_info=error)
    return (f"The solver failed unexpectedly ({type(error).__name__}: {error}). "
            "The layout is kept; undo the last step.")
