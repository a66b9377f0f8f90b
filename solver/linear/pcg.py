"""Conjugate gradients, preconditioned by one multigrid cycle an iteration (Hestenes and Stiefel 1952)."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from . import kernels
from .multigrid import Multigrid
from .operator import Field, Operator
from .solved import Solved, Stopped

MOST_ITERATIONS = 300


def apply(op: Operator, field: Field) -> Field:
    """A · field."""
    cells = np.empty(op.shape)
    kernels.apply_cells(np.ascontiguousarray(field.cells, dtype=np.float64), op.gx, op.gy, op.gz, op.ground, cells)
    bodies = op.body_diagonal * field.bodies - op.body_body @ field.bodies
    for n, body in enumerate(op.bodies):
        bodies[n] -= np.sum(body.g * field.cells[body.where])
        cells[body.where] -= body.g * field.bodies[n]
    return Field(cells, bodies)


def residual(op: Operator, rhs: Field, field: Field) -> float:
    """Relative residual, 2-norm; the plain norm where the right-hand side is zero."""
    back = apply(op, field)
    size = np.hypot(np.linalg.norm(rhs.cells - back.cells), np.linalg.norm(rhs.bodies - back.bodies))
    scale = np.hypot(np.linalg.norm(rhs.cells), np.linalg.norm(rhs.bodies))
    return float(size / scale) if scale > 0.0 else float(size)


def solve_pcg(op: Operator, rhs: Field, start: Field | None = None, rtol: float = 1e-8,
              stop: Callable[[], bool] | None = None) -> Solved:
    """Solve op · field = rhs to a relative residual of rtol.

    start: a first guess. stop: asked before every iteration; `Stopped` is raised when it says True. A solve that
    does not reach rtol says converged=False and gives the best it has. Raises ValueError for fields of wrong shape.
    """
    for name, given, shape in (("rhs.cells", rhs.cells, op.shape), ("rhs.bodies", rhs.bodies, (len(op.bodies),))):
        if given.shape != shape:
            raise ValueError(f"{name}: shape {shape} is needed, {given.shape} was given")
    isolated = _isolated(op)
    x = _zero(op) if start is None else Field(np.where(isolated, 0.0, start.cells), start.bodies.astype(float))
    scale = float(np.hypot(np.linalg.norm(rhs.cells), np.linalg.norm(rhs.bodies)))
    if scale == 0.0:
        return Solved(_zero(op), 0, 0.0, True)
    return _iterate(op, rhs, x, rtol, scale, stop)


def _iterate(op: Operator, rhs: Field, x: Field, rtol: float, scale: float, stop: Callable[[], bool] | None) -> Solved:
    back = apply(op, x)
    r = Field(rhs.cells - back.cells, rhs.bodies - back.bodies)
    p, q = _zero(op), back
    precondition: Multigrid | None = None
    alpha, rz = 0.0, 1.0
    for iteration in range(MOST_ITERATIONS + 1):
        if stop is not None and stop():
            raise Stopped
        if precondition is None:
            precondition = Multigrid(op)
        # also takes the step of the iteration before; the first time alpha is zero
        squared = kernels.step_and_pack(x.cells, p.cells, r.cells, q.cells, alpha, precondition.rhs)
        x.bodies[:] += alpha * p.bodies
        r.bodies[:] -= alpha * q.bodies
        relative = float(np.sqrt(squared + r.bodies @ r.bodies)) / scale
        if not relative > rtol or iteration == MOST_ITERATIONS:
            return Solved(x, iteration, relative, bool(relative <= rtol))
        z_bodies = precondition.cycle(r.bodies)
        new = kernels.dot_unpacked(r.cells, precondition.correction) + r.bodies @ z_bodies
        beta = new / rz if iteration else 0.0
        rz = new
        kernels.direction(p.cells, precondition.correction, beta)
        p.bodies[:] = z_bodies + beta * p.bodies
        q = apply(op, p)
        curvature = np.vdot(p.cells, q.cells) + p.bodies @ q.bodies
        if not curvature > 0.0:
            return Solved(x, iteration, relative, False)
        alpha = rz / curvature
    raise AssertionError("unreachable")


def _zero(op: Operator) -> Field:
    return Field(np.zeros(op.shape), np.zeros(len(op.bodies)))


def _isolated(op: Operator) -> np.ndarray:
    """Cells without any conductance."""
    linked = op.ground > 0.0
    for g, low, high in ((op.gx, np.s_[:, :, :-1], np.s_[:, :, 1:]), (op.gy, np.s_[:, :-1], np.s_[:, 1:]),
                         (op.gz, np.s_[:-1], np.s_[1:])):
        linked[low] |= g > 0.0
        linked[high] |= g > 0.0
    return ~linked
