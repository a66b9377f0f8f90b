"""Grid lines hit every given position and grow gently away from it."""

import numpy as np
from hypothesis import given
from hypothesis import strategies as st

from solver.mesh.lines import Grading, graded, halved, merged

positions = st.lists(st.floats(0.0, 0.1), min_size=0, max_size=30)


@given(positions)
def test_every_position_is_within_the_tolerance_of_a_line(given_positions):
    snapped = merged(np.array(given_positions), 0.1, 1e-5)
    for position in given_positions:
        assert np.abs(snapped - position).min() <= 1e-5
    assert snapped[0] == 0.0 and snapped[-1] == 0.1
    assert np.all(np.diff(snapped) > 0)


@given(positions, st.floats(5e-4, 5e-3))
def test_snapped_lines_stay_and_no_cell_is_wider_than_allowed(given_positions, largest):
    snapped = merged(np.array(given_positions), 0.1, 1e-5)
    lines = graded(snapped, np.full(len(snapped), 5e-4), Grading(0.35, largest))
    assert np.isin(snapped, lines).all()
    assert np.diff(lines).max() <= 1.3 * largest
    assert np.all(np.diff(lines) > 0)


def test_neighbouring_cells_differ_by_less_than_a_factor_of_three_beside_a_narrow_gap():
    snapped = np.array([0.0, 0.05, 0.0501, 0.1])
    widths = np.diff(graded(snapped, np.full(4, 3e-3), Grading(0.35, 3e-3)))
    jumps = widths[1:] / widths[:-1]
    assert max(jumps.max(), (1 / jumps).max()) < 3.0


def test_halving_cuts_every_cell_in_two_equal_ones():
    assert np.allclose(halved(np.array([0.0, 1.0, 4.0])), [0.0, 0.5, 1.0, 2.5, 4.0])
