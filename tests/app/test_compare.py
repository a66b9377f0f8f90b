"""Two layouts side by side, on real solutions."""

from __future__ import annotations

import numpy as np
import pytest

from app import edits
from app.compare import difference_map, part_differences, shared_range, why_no_difference
from app.refs import Ref
from solver import planes, solve

Q1, Q2 = Ref("source", "Q1"), Ref("source", "Q2")


@pytest.fixture(scope="module")
def solved(board):
    return solve(board, effort="draft")


@pytest.fixture(scope="module")
def warmer(board):
    """Everything around it 5 K warmer: by superposition every temperature rises by exactly 5 K."""
    layout = edits.set_layout_field("ambient_c", board.ambient_c + 5.0).apply(board)
    return solve(edits.set_segment("east", 0, "fixed", temperature_c=45.0).apply(layout), effort="draft")


def test_the_map_of_differences_shows_a_uniform_rise(solved, warmer):
    field = difference_map(solved, warmer, "top", "top")
    known = field.t_c[~np.isnan(field.t_c)]
    assert np.allclose(known, 5.0, atol=0.02)
    assert np.isnan(field.t_c).any(), "the void stays unknown"
    assert (field.x_m[-1], field.y_m[-1]) == pytest.approx((0.080, 0.060))
    assert field.t_c.shape == (len(field.y_m), len(field.x_m))


def test_the_map_is_of_b_less_a_and_of_the_planes_asked_for(solved, warmer):
    there, back = (difference_map(*pair, "layer:base", "bottom").t_c for pair in
                   ((solved, warmer), (warmer, solved)))
    assert np.nanmean(there) > 0 > np.nanmean(back)


def test_plates_of_different_size_have_no_map(solved, board):
    wider = solve(edits.set_plate(width_mm=90.0).apply(board), effort="draft")
    assert "80 x 60 mm and 90 x 60 mm" in why_no_difference(solved, wider)
    with pytest.raises(ValueError, match="differ in size"):
        difference_map(solved, wider, "top", "top")
    assert why_no_difference(solved, None)


def test_parts_are_compared_by_id(solved, board):
    layout = edits.rename(Q2, "extra").apply(edits.set_field(Q1, "power_w", 24.0).apply(board))
    rows = {row.id: row for row in part_differences(solved.results, solve(layout, effort="draft").results)}
    assert {row.id: row.where for row in rows.values()} == {"Q1": "both", "Q2": "only A", "extra": "only B"}
    assert rows["Q1"].difference["power_w"] == 12.0 and rows["Q1"].difference["max_c"] > 0
    assert "junction_c" not in rows["Q1"].difference, "neither has a junction"
    assert rows["Q2"].b is None and rows["extra"].a is None and rows["Q2"].difference == {}


def test_one_range_covers_both_fields(solved, warmer):
    fields = [planes.temperature(one, "top").t_c for one in (solved, warmer)]
    low, high = shared_range(*fields)
    assert low == min(np.nanmin(field) for field in fields)
    assert high == max(np.nanmax(field) for field in fields)
    assert shared_range(np.full((2, 2), np.nan)) is None
