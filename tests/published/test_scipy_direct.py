"""The iterative solution against SciPy's sparse factorisation of the same equations (splu, SuperLU).

Tolerance: 1e-6 of the peak in every cell and every part's case.
"""

from __future__ import annotations

import numpy as np
import pytest

from solver import parse_layout, solve
from solver.linear import solve_direct
from tests.published.random_layered import random_layered
from tests.published.test_finite_elements import random_plate


def agrees(layout: dict) -> None:
    solution = solve(parse_layout(layout), most_cells=60_000)
    equations, field = solution.equations, solution.solved.field
    exact = solve_direct(equations.operator, equations.rhs).field
    peak = np.abs(exact.cells).max()
    assert field.cells == pytest.approx(exact.cells, abs=1e-6 * peak)
    assert field.bodies == pytest.approx(exact.bodies, abs=1e-6 * peak)


@pytest.mark.parametrize("seed", range(4))
def test_layered_layouts(seed: int):
    agrees(random_layered(np.random.default_rng(seed))[0])


@pytest.mark.parametrize("seed", range(3))
def test_plates_with_zones_slots_joints_and_contacts(seed: int):
    agrees(random_plate(seed))
