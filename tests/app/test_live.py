"""The live solve: newest wins, nothing stale is shown, what is stale is stopped, failures become words."""

from __future__ import annotations

import threading
import time

import pytest

from app.live import LiveSolve
from solver.document import Fault, LayoutError


@pytest.fixture
def titled(board):
    return lambda title: board.model_copy(update={"title": title})


@pytest.fixture
def live(loop, hand_solver):
    """A worker, with `answers` collecting what it reports."""
    worker = LiveSolve(hand_solver, loop.schedule, lambda answer: worker.answers.append(answer))
    worker.answers = []
    yield worker
    worker.close(wait_s=5.0)


def shown(live):
    return [(answer.request.layout.title, answer.effort) for answer in live.answers]


def test_a_draft_comes_before_a_final_that_may_be_slow(live, loop, hand_solver, titled):
    live.request(titled("a"))
    hand_solver.finish(1), hand_solver.finish(2)
    loop.run_until(lambda: len(live.answers) == 2)
    assert shown(live) == [("a", "draft"), ("a", "final")]
    assert [call.effort for call in hand_solver.calls] == ["draft", "final"]
    assert hand_solver.calls[1].start.layout.title == "a", "the final starts from the draft"


def test_a_quick_final_comes_alone(live, loop, hand_solver, titled):
    live.request(titled("a"))
    hand_solver.finish(1), hand_solver.finish(2)
    loop.run_until(lambda: len(live.answers) == 2)
    live.request(titled("b"))
    hand_solver.finish(3)
    loop.run_until(lambda: len(live.answers) == 3)
    assert shown(live)[-1] == ("b", "final")
    assert hand_solver.calls[2].start.layout.title == "a"


def test_a_layout_seen_as_draft_is_finished_without_another_draft(live, loop, hand_solver, titled):
    layout = titled("a")
    live.request(layout, "draft")
    hand_solver.finish(1)
    loop.run_until(lambda: live.answers)
    live.request(layout, "final")
    hand_solver.finish(2)
    loop.run_until(lambda: len(live.answers) == 2)
    assert shown(live) == [("a", "draft"), ("a", "final")]


def test_only_the_newest_of_many_requests_is_solved(live, loop, hand_solver, titled):
    live.request(titled("first"), "draft")
    hand_solver.started(1)
    for title in "bcdef":
        live.request(titled(title), "draft")
    hand_solver.finish(1), hand_solver.finish(2)
    loop.run_until(lambda: shown(live)[-1:] == [("f", "draft")])
    assert [call.layout.title for call in hand_solver.calls] == ["first", "f"]
    assert [answer.newest for answer in live.answers] == [False, True]


def test_a_newer_request_stops_a_running_final(live, loop, hand_solver, titled):
    live.request(titled("old"))
    hand_solver.finish(1)
    hand_solver.started(2)
    live.request(titled("new"), "draft")
    hand_solver.wait_stopped(2)
    hand_solver.finish(3)
    loop.run_until(lambda: ("new", "draft") in shown(live))
    assert ("old", "final") not in shown(live)


def test_an_answer_that_waited_on_the_loop_never_covers_a_newer_one(live, loop, hand_solver, titled):
    live.request(titled("old"), "draft")
    hand_solver.finish(1)
    late = loop.waiting.get(timeout=5.0)
    live.request(titled("new"), "draft")
    hand_solver.finish(2)
    loop.run_until(lambda: live.answers)
    late()
    assert shown(live) == [("new", "draft")]


def test_after_a_reset_nothing_of_before_is_reported(live, loop, hand_solver, titled):
    live.request(titled("closed"), "draft")
    hand_solver.started(1)
    live.reset()
    hand_solver.wait_stopped(1)
    live.request(titled("opened"), "draft")
    assert hand_solver.finish(2).start is None
    loop.run_until(lambda: live.answers)
    assert shown(live) == [("opened", "draft")]


def test_an_answer_on_the_loop_is_dropped_by_a_reset(live, loop, hand_solver, titled):
    live.request(titled("closed"), "draft")
    hand_solver.finish(1)
    late = loop.waiting.get(timeout=5.0)
    live.reset()
    late()
    assert live.answers == []


def test_a_delayed_request_is_replaced_by_the_one_that_follows(live, loop, hand_solver, titled):
    live.request(titled("1"), delay_s=0.2)
    live.request(titled("12"), delay_s=0.01)
    hand_solver.finish(1), hand_solver.finish(2)
    loop.run_until(lambda: ("12", "final") in shown(live))
    assert {call.layout.title for call in hand_solver.calls} == {"12"}


@pytest.mark.parametrize("error, words", [
    (LayoutError((Fault("sources[0]", "no way out for the heat"),)), "sources[0]: no way out for the heat"),
    (MemoryError(), "not enough free memory"),
    (ZeroDivisionError("by zero"), "ZeroDivisionError: by zero"),
])
def test_failures_become_words(live, loop, hand_solver, titled, error, words):
    live.request(titled("bad"), seq=4)
    hand_solver.finish(1, error)
    loop.run_until(lambda: live.answers)
    (answer,) = live.answers
    assert answer.solution is None and words in answer.trouble and answer.request.seq == 4
    live.request(titled("good"), "draft")
    hand_solver.finish(2)
    loop.run_until(lambda: shown(live)[-1:] == [("good", "draft")])


def test_the_failure_of_an_older_layout_is_not_reported(live, loop, hand_solver, titled):
    live.request(titled("bad"), "draft")
    hand_solver.started(1)
    live.request(titled("good"), "draft")
    hand_solver.finish(1, ValueError("old"))
    hand_solver.finish(2)
    loop.run_until(lambda: ("good", "draft") in shown(live))
    assert shown(live) == [("good", "draft")]


def test_closing_stops_the_solve_and_ends_the_thread(live, loop, hand_solver, titled):
    live.request(titled("a"))
    hand_solver.started(1)
    live.close(wait_s=5.0)
    assert hand_solver.calls[0].stopped
    assert not live._thread.is_alive()
    live.request(titled("b"))
    loop.run_all()
    assert live.answers == [] and len(hand_solver.calls) == 1


def test_a_resting_worker_uses_no_processor_time(live, loop, hand_solver, titled):
    live.request(titled("a"), "draft")
    hand_solver.finish(1)
    loop.run_until(lambda: live.answers)
    before = time.process_time()
    threading.Event().wait(0.3)
    assert time.process_time() - before < 0.1
