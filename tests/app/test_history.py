"""Undo and redo of any sequence of layouts."""

from __future__ import annotations

from hypothesis import given
from hypothesis import strategies as st

from app.history import History


def chain(titles, board, most=200):
    history = History.start("Open", board)
    for title in titles:
        history = history.push(f"Title {title}", board.model_copy(update={"title": title}), most)
    return history


TITLES = st.lists(st.text("abc", min_size=1, max_size=2), max_size=12)


@given(titles=TITLES)
def test_undoing_everything_restores_the_start_and_redoing_the_end(titles, board):
    history = chain(titles, board)
    back = history
    while back.can_undo:
        back = back.undo()
    assert back.present == board
    while back.can_redo:
        back = back.redo()
    assert back == history


@given(titles=TITLES)
def test_an_equal_layout_makes_no_step(titles, board):
    history = chain(titles, board)
    assert history.push("Nothing", history.present.model_copy()) is history


@given(titles=TITLES, away=st.integers(0, 12))
def test_a_new_step_drops_what_was_undone(titles, away, board):
    history = chain(titles, board)
    there = history.jump(history.at - away)
    pushed = there.push("New", board.model_copy(update={"title": "new"}))
    assert not pushed.can_redo
    assert pushed.steps[:-1] == history.steps[: there.at + 1]
    assert pushed.undo().present == there.present


@given(titles=TITLES, most=st.integers(1, 5))
def test_the_history_is_bounded_and_keeps_the_newest(titles, most, board):
    whole, bounded = chain(titles, board), chain(titles, board, most)
    assert len(bounded.steps) <= max(most, 1)
    assert bounded.steps == whole.steps[-len(bounded.steps):]
    assert bounded.present == whole.present


@given(titles=TITLES, back=st.integers(0, 12), reach=st.integers(0, 4))
def test_keeping_what_is_near_keeps_the_present(titles, back, reach, board):
    history = chain(titles, board)
    history = history.jump(history.at - back)
    near = history.kept_near(reach)
    assert near.present == history.present
    assert near.at <= reach and len(near.steps) <= 2 * reach + 1


def test_names_say_what_undo_and_redo_would_do(board):
    history = chain(["a", "b"], board)
    assert (history.undo_name, history.redo_name) == ("Title b", "")
    assert (history.undo().undo_name, history.undo().redo_name) == ("Title a", "Title b")
    assert (history.jump(-5).undo_name, history.jump(99)) == ("", history)
