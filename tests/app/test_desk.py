"""The desk: gestures, undo, two sheets, questions before anything is lost, what state is shown."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from app import edits
from app.desk import Desk
from app.refs import Ref

Q1 = Ref("source", "Q1")
SOUTH = edits.move([Q1], 0.0, -5.0)


def place(x_mm, y_mm=20.0):
    return edits.place([{"kind": "source", "id": "Q1", "x_mm": x_mm, "y_mm": y_mm}], "Move Q1")


def wrong_width():
    return edits.set_field(Q1, "width_mm", -1.0)


@pytest.fixture
def desk(loop, quick_solver, board):
    desk = Desk(solve=quick_solver, schedule=loop.schedule, layout=board)
    yield desk
    desk.close()


@pytest.fixture
def slow_desk(loop, hand_solver, board):
    desk = Desk(solve=hand_solver, schedule=loop.schedule, layout=board)
    yield desk
    desk.close()


def a(desk):
    return desk.sheets["A"]


def test_an_edit_makes_one_named_step_and_undo_takes_it_back(desk, board):
    assert desk.edit("A", SOUTH)
    assert a(desk).layout.sources[0].y_mm == 15.0
    assert a(desk).history.undo_name == "Move Q1" and a(desk).dirty
    assert desk.undo("A") and a(desk).layout == board and not a(desk).dirty
    assert desk.redo("A") and a(desk).layout.sources[0].y_mm == 15.0
    assert not desk.redo("A")


def test_a_refused_edit_leaves_everything_and_says_why(desk, board):
    assert not desk.edit("A", wrong_width())
    assert a(desk).layout is a(desk).history.present and a(desk).layout == board
    assert desk.notice.kind == "error" and "sources[0].width_mm" in desk.notice.details[0]


def test_an_edit_that_changes_nothing_makes_no_step(desk):
    revision = a(desk).revision
    assert not desk.edit("A", edits.set_field(Q1, "power_w", 12))
    assert not a(desk).history.can_undo and a(desk).revision == revision


def test_a_gesture_shows_drafts_and_makes_one_step(desk, board):
    for x in (13.0, 14.0, 15.0):
        assert desk.gesture("A", place(x))
        assert a(desk).layout.sources[0].x_mm == x
        assert a(desk).history.present == board and not a(desk).dirty
    assert desk.gesture("A", place(16.0), final=True)
    assert [step.name for step in a(desk).history.steps] == ["Open Untitled", "Move Q1"]
    assert a(desk).layout.sources[0].x_mm == 16.0 and not a(desk).in_gesture


def test_a_cancelled_gesture_leaves_no_trace(desk, board):
    desk.gesture("A", place(30.0))
    desk.cancel_gesture("A")
    assert a(desk).layout == board and not a(desk).history.can_undo and not a(desk).in_gesture


def test_undo_during_a_gesture_ends_the_gesture_only(desk):
    desk.edit("A", SOUTH)
    desk.gesture("A", place(30.0, 15.0))
    assert desk.undo("A")
    assert a(desk).layout.sources[0].y_mm == 15.0 and a(desk).history.can_undo


def test_a_gesture_that_ends_where_it_began_makes_no_step(desk, board):
    desk.gesture("A", place(30.0))
    assert not desk.gesture("A", place(12.0), final=True)
    assert a(desk).layout == board and not a(desk).history.can_undo


def test_a_faulty_draft_keeps_the_last_good_one_and_a_faulty_end_puts_back(desk, board):
    desk.gesture("A", place(30.0), seq=1)
    assert not desk.gesture("A", wrong_width(), seq=2)
    assert a(desk).layout.sources[0].x_mm == 30.0
    assert (a(desk).state, a(desk).answered) == ("failed", 2) and "width_mm" in a(desk).trouble
    assert not desk.gesture("A", wrong_width(), final=True, seq=3)
    assert a(desk).layout == board and desk.notice.kind == "error"


def test_states_from_solving_over_draft_to_current(slow_desk, loop, hand_solver):
    sheet = a(slow_desk)
    assert sheet.state == "solving" and sheet.solution is None
    hand_solver.finish(1)
    loop.run_until(lambda: sheet.state == "draft")
    hand_solver.finish(2)
    loop.run_until(lambda: sheet.state == "current")
    assert sheet.solution.effort == "final"


def test_states_during_and_after_a_gesture(slow_desk, loop, hand_solver):
    sheet = a(slow_desk)
    hand_solver.finish(1), hand_solver.finish(2)
    loop.run_until(lambda: sheet.state == "current")
    slow_desk.gesture("A", place(20.0), seq=1)
    assert sheet.state == "solving"
    hand_solver.finish(3)
    loop.run_until(lambda: sheet.answered == 1)
    assert sheet.state == "draft" and sheet.solution.layout == sheet.layout
    slow_desk.gesture("A", place(21.0), seq=2)
    assert sheet.state == "draft", "while the hand moves the state does not flicker"
    hand_solver.finish(4)
    loop.run_until(lambda: sheet.answered == 2)
    slow_desk.gesture("A", place(21.0), final=True, seq=3)
    assert sheet.state == "draft", "the draft of this layout is what is seen until the final one is there"
    hand_solver.finish(5)
    loop.run_until(lambda: sheet.answered == 3)
    assert sheet.state == "current" and sheet.solution.effort == "final"


def test_a_canvas_message_is_answered_even_when_a_typed_edit_overtakes_it(slow_desk, loop, hand_solver):
    hand_solver.finish(1), hand_solver.finish(2)
    loop.run_until(lambda: a(slow_desk).state == "current")
    slow_desk.gesture("A", place(20.0), final=True, seq=8)
    hand_solver.started(3)
    slow_desk.edit("A", edits.set_field(Q1, "power_w", 3.0))
    hand_solver.wait_stopped(3)
    hand_solver.finish(4)
    loop.run_until(lambda: a(slow_desk).answered == 8)


def test_a_failed_solve_says_why_and_the_next_step_recovers(slow_desk, loop, hand_solver):
    hand_solver.finish(1, ArithmeticError("overflow"))
    loop.run_until(lambda: a(slow_desk).state == "failed")
    assert "overflow" in a(slow_desk).trouble
    slow_desk.edit("A", SOUTH)
    assert (a(slow_desk).state, a(slow_desk).trouble) == ("solving", "")
    hand_solver.finish(2), hand_solver.finish(3)
    loop.run_until(lambda: a(slow_desk).state == "current")


def test_selection_is_of_what_exists_and_follows_edits(desk):
    desk.select("A", [Q1, Q1, Ref("source", "ghost"), Ref("edge", "east:1"), Ref("face", "top")])
    assert a(desk).selection == (Q1, Ref("edge", "east:1"), Ref("face", "top"))
    desk.edit("A", edits.delete([Q1]))
    assert a(desk).selection == (Ref("edge", "east:1"), Ref("face", "top"))
    desk.undo("A")
    assert a(desk).selection == (Q1,)


def test_watchers_see_a_step_whole(desk):
    seen = []
    a(desk).param.watch(lambda *events: seen.append({e.name for e in events}), ["layout", "history", "dirty"])
    desk.edit("A", SOUTH)
    assert seen == [{"layout", "history", "dirty"}]


def test_plane_falls_back_where_a_layout_lacks_the_layer(desk):
    desk.plane = "layer:foil"
    assert desk.plane_of(a(desk).layout) == "layer:foil"
    desk.edit("A", edits.rename(Ref("layer", "foil"), "copper"))
    assert desk.plane_of(a(desk).layout) == "top"


# --- two sheets ---

def test_a_fork_is_edited_on_its_own(desk, board):
    desk.edit("A", SOUTH)
    desk.fork()
    assert desk.active == "B" and desk.sheets["B"].layout == a(desk).layout
    desk.edit("B", edits.delete([Q1]))
    assert len(a(desk).layout.sources) == 2 and len(desk.sheets["B"].layout.sources) == 1
    assert desk.undo("B") and not desk.undo("B") and a(desk).history.can_undo


def test_closing_an_unsaved_b_asks_first(desk):
    desk.fork()
    desk.edit("B", SOUTH)
    desk.close_b()
    assert "B" in desk.sheets and desk.question.may_save
    desk.decline()
    assert "B" in desk.sheets and desk.question is None
    desk.close_b()
    desk.agree()
    assert list(desk.sheets) == ["A"] and desk.active == "A"


def test_answers_for_a_closed_sheet_go_nowhere(slow_desk, loop, hand_solver):
    hand_solver.finish(1), hand_solver.finish(2)
    loop.run_until(lambda: a(slow_desk).state == "current")
    slow_desk.fork()
    hand_solver.finish(3)
    late = loop.waiting.get(timeout=5.0)
    b = slow_desk.sheets["B"]
    slow_desk.close_b()
    late()
    assert b.solution is None


def test_new_and_open_ask_before_unsaved_changes_are_lost(desk, board):
    desk.new("A")
    assert desk.question is None and a(desk).layout.sources == ()
    desk.edit("A", edits.set_plate(50.0, 40.0))
    desk.open_text("A", "board.json", desk.layout_download("A")[1])
    assert desk.question is not None and a(desk).name == "Untitled"
    desk.agree()
    assert a(desk).name == "board.json" and not a(desk).dirty and not a(desk).history.can_undo


def test_a_faulty_file_is_refused_before_anything_is_asked(desk):
    desk.edit("A", SOUTH)
    desk.open_text("A", "bad.json", '{"format": "heat-spreader-layout", "version": 1, "colour": 3}')
    assert desk.question is None and desk.notice.kind == "error"
    assert any("colour" in line for line in desk.notice.details)
    assert a(desk).history.undo_name == "Move Q1"


@settings(max_examples=60, deadline=None)
@given(steps=st.lists(st.sampled_from(["north", "south", "draft", "end", "cancel", "undo", "redo", "power"]),
                      max_size=25))
def test_whatever_is_done_undo_leads_back_to_the_start(steps, board):
    from .conftest import Loop, at_once

    desk = Desk(solve=at_once, schedule=Loop().schedule, layout=board)
    acts = {"north": lambda: desk.edit("A", edits.move([Q1], 0.0, 3.0)),
            "south": lambda: desk.edit("A", SOUTH),
            "draft": lambda: desk.gesture("A", place(25.0)),
            "end": lambda: desk.gesture("A", place(27.0), final=True),
            "cancel": lambda: desk.cancel_gesture("A"), "undo": lambda: desk.undo("A"),
            "redo": lambda: desk.redo("A"),
            "power": lambda: desk.edit("A", edits.set_field(Q1, "power_w", 2.0))}
    try:
        for step in steps:
            acts[step]()
            sheet = a(desk)
            assert sheet.in_gesture or sheet.layout is sheet.history.present
            assert sheet.dirty == (sheet.history.present != sheet.saved)
        desk.cancel_gesture("A")
        while desk.undo("A"):
            pass
        assert a(desk).layout == board and not a(desk).dirty
    finally:
        desk.close()
