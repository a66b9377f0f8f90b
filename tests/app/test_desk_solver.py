"""The desk on the real solver: what the hand does is what is solved, and what cannot be solved is said."""

from __future__ import annotations

import json

import pytest

import solver
from app import edits
from app.desk import Desk
from app.refs import Ref
from solver.document import parse_results

Q1 = Ref("source", "Q1")


@pytest.fixture
def desk(loop, board):
    desk = Desk(solve=solver.solve, schedule=loop.schedule, layout=board)
    yield desk
    desk.close()


@pytest.fixture
def current(desk, loop):
    """Waits until sheet A shows the final solution of its layout."""
    sheet = desk.sheets["A"]

    def wait():
        loop.run_until(lambda: sheet.state == "current", 60.0)
        assert sheet.solution.layout == sheet.layout == sheet.history.present
        return sheet.solution.results

    return wait


def test_the_peak_follows_a_drag_and_the_release_makes_it_final(desk, loop, current):
    before = current()
    sheet = desk.sheets["A"]
    xs = []
    for seq, x_mm in enumerate((20.0, 24.0, 27.0)):
        desk.gesture("A", edits.place([{"kind": "source", "id": "Q1", "x_mm": x_mm}], "Move Q1"), seq=seq)
        loop.run_until(lambda seq=seq: sheet.answered == seq, 60.0)
        assert sheet.state == "draft" and sheet.solution.results.peak.grid_uncertainty_k is None
        xs.append(sheet.solution.results.peak.x_mm)
    assert before.peak.x_mm < xs[0] < xs[1] < xs[2], "the hottest point is under the source that moves"
    desk.gesture("A", edits.resize(Q1, x_mm=27.0), final=True, seq=9)
    after = current()
    assert after.peak.grid_uncertainty_k is not None and sheet.answered == 9
    desk.undo("A")
    assert current().peak.temperature_c == pytest.approx(before.peak.temperature_c, abs=1e-3)


def test_twice_the_power_gives_twice_the_rise_on_an_edit(desk, board, current):
    """Conduction is linear: with every sink at ambient, all rises scale with the powers."""
    desk.edit("A", edits.set_segment("east", 0, "fixed", temperature_c=None))
    once = current().peak.temperature_c - board.ambient_c
    desk.edit("A", edits.set_field(Q1, "power_w", 24.0))
    desk.edit("A", edits.set_field(Ref("source", "Q2"), "power_w", 6.0))
    assert current().peak.temperature_c - board.ambient_c == pytest.approx(2 * once, rel=1e-5)


def test_a_layout_without_a_way_out_for_the_heat_says_which_part(desk, loop, current):
    current()
    desk.edit("A", edits.set_face("bottom", "insulated"))
    desk.edit("A", edits.set_edge_segments("east", []))
    desk.edit("A", edits.delete([Ref("contact", "stud")]))
    sheet = desk.sheets["A"]
    loop.run_until(lambda: sheet.state == "failed", 60.0)
    assert "Q1" in sheet.trouble
    assert desk.results_download("A") is None
    desk.undo("A")
    assert current().verdict


def test_exported_results_are_of_the_layout_shown(desk, current):
    current()
    name, text = desk.results_download("A")
    results = parse_results(text)
    assert name == "Untitled-results.json" and results.layout == desk.sheets["A"].layout
    assert json.loads(text)["heat_balance"]["sources_w"] == pytest.approx(15.0)


def test_two_sheets_are_solved_side_by_side(desk, loop, current):
    current()
    desk.fork()
    desk.edit("B", edits.set_field(Q1, "power_w", 1.0))
    desk.edit("A", edits.set_field(Q1, "power_w", 30.0))
    b = desk.sheets["B"]
    hot = current().peak.temperature_c
    loop.run_until(lambda: b.state == "current", 60.0)
    assert b.solution.results.peak.temperature_c < hot
