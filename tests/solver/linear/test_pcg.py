"""Conjugate gradients with multigrid agree with SciPy's factorisation on every kind of network."""

import threading
from contextlib import suppress
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from solver.linear import Body, Field, Operator, Stopped, apply, conductances, residual, solve_direct, solve_pcg


def network(seed, nz, ny, nx, bodies=0, slots=0, graded=True):
    """Random conductors up to 4000 times apart, voids, graded lines, and bodies on joints from weak to strong."""
    rng = np.random.default_rng(seed)
    k = rng.choice([0.1, 2.0, 150.0, 390.0], (nz, 1, 1)) * np.ones((nz, ny, nx))
    for _ in range(4):
        j, i = rng.integers(0, ny), rng.integers(0, nx)
        k[rng.integers(nz), j : j + 1 + ny // 3, i : i + 1 + nx // 3] = rng.choice([0.1, 20.0, 390.0])
    for _ in range(slots):
        j, i = rng.integers(0, ny), rng.integers(0, nx)
        k[:, j : j + 1, i : i + 1 + nx // 3] = 0.0
    spread = 1.4 if graded else 0.0
    dx, dy = (1e-3 * np.exp(rng.uniform(-spread, spread, n)) for n in (nx, ny))
    dz = rng.choice([35e-6, 1e-4, 1e-3], nz)
    gx, gy, gz = conductances(k, k, k, dx, dy, dz)
    area = dy[:, None] * dx[None, :]
    gs = np.zeros_like(k)
    gs[-1] = 50.0 * area * (k[-1] > 0)
    placed = []
    for _ in range(bodies):
        j, i = rng.integers(0, ny), rng.integers(0, nx)
        patch = np.s_[j : j + 1 + ny // 4, i : i + 1 + nx // 4]
        joint = area[patch] * 10.0 ** rng.uniform(3.0, 6.0) * (k[0][patch] > 0)
        placed.append(Body(0, j, j + joint.shape[0], i, i + joint.shape[1], joint))
    sink = rng.uniform(0.0, 0.01, bodies) + 1e-6
    between = np.zeros((bodies, bodies))
    if bodies > 1:
        between[0, 1] = between[1, 0] = 0.3
    heat = rng.uniform(0.0, 1.0, k.shape) * (k > 0)
    op = Operator(gx, gy, gz, gs, tuple(placed), sink, between, dx=dx, dy=dy)
    return op, Field(heat, rng.uniform(0.0, 5.0, bodies))


def same(a, b, relative=1e-6):
    scale = max(np.abs(b.cells).max(), np.abs(b.bodies).max(initial=0.0))
    return (np.abs(a.cells - b.cells).max() <= relative * scale
            and np.abs(a.bodies - b.bodies).max(initial=0.0) <= relative * scale)


@given(st.integers(0, 10**6), st.integers(1, 5), st.integers(1, 24), st.integers(1, 24), st.integers(0, 3))
def test_agrees_with_the_factorisation(seed, nz, ny, nx, bodies):
    op, rhs = network(seed, nz, ny, nx, bodies)
    solved = solve_pcg(op, rhs, rtol=1e-11)
    assert solved.converged
    assert same(solved.field, solve_direct(op, rhs).field)


@given(st.integers(0, 10**6))
def test_voids_stay_at_zero_and_disturb_nothing(seed):
    op, rhs = network(seed, 2, 20, 24, bodies=1, slots=3)
    inside = np.zeros(op.shape)
    for g, low, high in ((op.gx, np.s_[:, :, :-1], np.s_[:, :, 1:]), (op.gy, np.s_[:, :-1], np.s_[:, 1:])):
        inside[low] += g
        inside[high] += g
    # without pieces that a slot cut off from the film of the lowest layer the system is regular
    if np.any((inside == 0) & (op.gs == 0) & (rhs.cells > 0)):
        return
    solved = solve_pcg(op, rhs, rtol=1e-11)
    void = (rhs.cells == 0.0) & (op.ground == 0.0)
    assert np.all(solved.field.cells[void & (inside == 0)] == 0.0)
    assert same(solved.field, solve_direct(op, rhs).field)


@pytest.mark.parametrize("shape", [(1, 1, 1), (1, 1, 40), (1, 40, 1), (6, 1, 1), (1, 97, 103), (5, 64, 3)])
def test_every_shape_of_box(shape):
    op, rhs = network(3, *shape)
    solved = solve_pcg(op, rhs, rtol=1e-11)
    assert solved.converged
    assert same(solved.field, solve_direct(op, rhs).field)


def test_the_residual_it_reports_is_the_true_one():
    op, rhs = network(1, 3, 30, 40, bodies=2)
    solved = solve_pcg(op, rhs, rtol=1e-8)
    assert residual(op, rhs, solved.field) == pytest.approx(solved.residual, rel=0.05)
    assert solved.residual <= 1e-8


def test_apply_is_the_matrix_and_symmetric():
    op, _ = network(8, 3, 9, 11, bodies=3)
    rng = np.random.default_rng(0)
    one, other = (Field(rng.normal(size=op.shape), rng.normal(size=3)) for _ in range(2))
    a, b = apply(op, one), apply(op, other)
    left = np.vdot(a.cells, other.cells) + a.bodies @ other.bodies
    right = np.vdot(b.cells, one.cells) + b.bodies @ one.bodies
    assert left == pytest.approx(right, rel=1e-12)


def test_a_good_start_saves_iterations():
    op, rhs = network(2, 3, 60, 60)
    solved = solve_pcg(op, rhs, rtol=1e-8)
    again = solve_pcg(op, rhs, start=solved.field, rtol=1e-8)
    assert again.iterations == 0


def test_no_heat_is_no_rise():
    op, rhs = network(2, 2, 10, 10, bodies=1)
    solved = solve_pcg(op, Field(np.zeros_like(rhs.cells), np.zeros(1)))
    assert solved.converged and not solved.field.cells.any()


def test_without_a_way_out_it_says_that_it_did_not_converge():
    op, rhs = network(2, 2, 10, 10)
    closed = Operator(op.gx, op.gy, op.gz, np.zeros_like(op.gs), dx=op.dx, dy=op.dy)
    assert not solve_pcg(closed, rhs).converged


def test_figures_that_are_no_numbers_are_not_called_a_solution():
    op, rhs = network(2, 2, 10, 10)
    heat = rhs.cells.copy()
    heat[0, 0, 0] = np.nan
    assert not solve_pcg(op, Field(heat, rhs.bodies)).converged


def test_it_stops_when_told():
    op, rhs = network(2, 3, 40, 40)
    asked = []
    with pytest.raises(Stopped):
        solve_pcg(op, rhs, stop=lambda: len(asked) > 2 or asked.append(1))
    assert len(asked) == 3


def test_two_threads_get_what_one_gets():
    cases = [network(seed, 3, 50, 60, bodies=2) for seed in range(4)]
    alone = [solve_pcg(*case).field for case in cases]
    found = [None] * 4

    def work(n):
        found[n] = solve_pcg(*cases[n]).field

    threads = [threading.Thread(target=work, args=(n,)) for n in range(4)]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    for one, other in zip(alone, found, strict=True):
        assert np.array_equal(one.cells, other.cells)


@pytest.mark.parametrize(("field", "value"), [("gx", np.zeros((2, 3, 4))), ("gz", np.zeros((2, 4, 4))), ("dx", np.ones(3))])
def test_a_wrong_shape_is_named(field, value):
    right = {"gx": np.ones((2, 4, 3)), "gy": np.ones((2, 3, 4)), "gz": np.ones((1, 4, 4)), "gs": np.ones((2, 4, 4))}
    with pytest.raises(ValueError, match=field):
        Operator(**(right | {field: value}))


def test_a_right_hand_side_of_wrong_shape_is_named():
    op, _ = network(2, 2, 10, 10)
    with pytest.raises(ValueError, match="rhs.cells"):
        solve_pcg(op, Field(np.zeros((2, 10, 9)), np.zeros(0)))


def test_a_start_of_wrong_shape_is_named():
    op, rhs = network(2, 2, 10, 10)
    with pytest.raises(ValueError, match="start.cells"):
        solve_pcg(op, rhs, start=Field(np.zeros((2, 9, 10)), np.zeros(0)))


@pytest.mark.parametrize("value", [-5.0, np.nan, np.inf])
def test_a_conductance_that_is_none_is_named(value):
    op, _ = network(2, 2, 10, 10)
    g = op.gx.copy()
    g[0, 0, 0] = value
    with pytest.raises(ValueError, match="gx"):
        replace(op, gx=g)


@pytest.mark.parametrize("shape", [(1, 1, 1), (1, 1, 2), (2, 2, 2), (1, 32, 32)])
def test_the_smallest_boxes_without_a_way_out_are_not_called_solved(shape):
    nz, ny, nx = shape
    closed = Operator(np.ones((nz, ny, nx - 1)), np.ones((nz, ny - 1, nx)), np.ones((nz - 1, ny, nx)), np.zeros(shape))
    heat = Field(np.ones(shape), np.zeros(0))
    assert not solve_pcg(closed, heat).converged
    with suppress(RuntimeError):  # an exactly singular matrix
        assert not solve_direct(closed, heat).converged


def test_arrays_in_any_order_and_precision_are_taken():
    op, rhs = network(4, 3, 20, 30, bodies=1)
    turned = replace(op, **{name: np.asfortranarray(getattr(op, name)) for name in ("gx", "gy", "gz", "gs")})
    other = solve_pcg(turned, Field(np.asfortranarray(rhs.cells), rhs.bodies))
    assert np.array_equal(other.field.cells, solve_pcg(op, rhs).field.cells)
    single = replace(op, **{name: getattr(op, name).astype(np.float32) for name in ("gx", "gy", "gz", "gs")})
    assert solve_pcg(single, rhs).converged
