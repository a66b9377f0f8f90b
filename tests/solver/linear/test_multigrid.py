"""The cycle is a symmetric, positive preconditioner, and needs few iterations on uniform and on graded grids alike."""

from dataclasses import replace

import numpy as np
import pytest

from solver.linear import solve_pcg
from solver.linear.multigrid import Multigrid

from .test_pcg import network


def cycled(multigrid, op, cells, bodies):
    split = multigrid.rhs
    split[:] = 0.0
    nx = op.shape[2]
    split[:, 1:-1, 0, 1 : 1 + (nx + 1) // 2] = cells[:, :, 0::2]
    split[:, 1:-1, 1, 1 : 1 + nx // 2] = cells[:, :, 1::2]
    t = multigrid.cycle(bodies)
    out = np.empty(op.shape)
    out[:, :, 0::2] = multigrid.correction[:, 1:-1, 0, 1 : 1 + (nx + 1) // 2]
    out[:, :, 1::2] = multigrid.correction[:, 1:-1, 1, 1 : 1 + nx // 2]
    return out, t


@pytest.mark.parametrize("bodies", [0, 3])
@pytest.mark.parametrize("shape", [(1, 37, 50), (4, 40, 33)])
def test_the_cycle_is_symmetric_and_positive(shape, bodies):
    op, _ = network(11, *shape, bodies=bodies)
    multigrid = Multigrid(op)
    rng = np.random.default_rng(2)
    a, b = ((rng.normal(size=shape), rng.normal(size=bodies)) for _ in range(2))
    ma, mb = cycled(multigrid, op, *a), cycled(multigrid, op, *b)
    left = np.vdot(ma[0], b[0]) + ma[1] @ b[1]
    right = np.vdot(mb[0], a[0]) + mb[1] @ a[1]
    scale = np.sqrt(np.vdot(ma[0], a[0]) * np.vdot(mb[0], b[0]))
    assert abs(left - right) < 1e-4 * scale
    assert np.vdot(ma[0], a[0]) + ma[1] @ a[1] > 0.0


@pytest.mark.parametrize("seed", range(4))
def test_graded_lines_cost_at_most_twice_the_iterations_of_even_ones(seed):
    even = network(seed, 4, 96, 96, graded=False)
    uneven = network(seed, 4, 96, 96, graded=True)
    assert solve_pcg(*uneven).iterations <= 2 * solve_pcg(*even).iterations


@pytest.mark.parametrize("strength", [1e-3, 1.0, 1e3])
def test_weak_and_strong_joints_cost_about_the_iterations_of_none(strength):
    op, rhs = network(5, 3, 80, 80, bodies=3)
    bodies = tuple(replace(body, g=strength * body.g) for body in op.bodies)
    without = solve_pcg(*network(5, 3, 80, 80)).iterations
    assert solve_pcg(replace(op, bodies=bodies), rhs).iterations <= 2 * without
