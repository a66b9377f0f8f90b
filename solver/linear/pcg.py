"""Conjugate gradients, preconditioned by one multigrid cycle an iteration (Hestenes and Stiefel 1952)."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from . import kernels
from .multigrid import Multigrid
from .operator import Field, Operator, plain
from .solved import Solved, Stopped

MOST_ITERATIONS = 300


def apply(op: Operator, field: Field) -> Field:
    """A · field."""
    out = _zero(op)
    _apply_into(op, _fitting("field", field, op), out)
    return out


def _apply_into(op: Operator, field: Field, out: Field) -> float:
    """out = A · field; returns field · out."""
    dot = kernels.apply_cells(field.cells, op.gx, op.gy, op.gz, op.ground, out.cells)
    if not op.bodies:
        return dot
    out.bodies[:] = op.body_diagonal * field.bodies - op.body_body @ field.bodies
    for n, body in enumerate(op.bodies):
        under = np.sum(body.g * field.cells[body.where])
        out.bodies[n] -= under
        out.cells[body.where] -= body.g * field.bodies[n]
        dot -= under * field.bodies[n]
    return dot + field.bodies @ out.bodies


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
    rhs = _fitting("rhs", rhs, op)
    start = None if start is None else _fitting("start", start, op)
    scale = float(np.sqrt(kernels.squared(rhs.cells) + rhs.bodies @ rhs.bodies))
    if scale == 0.0:
        return Solved(_zero(op), 0, 0.0, True)
    if stop is not None and stop():
        raise Stopped
    return _iterate(op, rhs, start, rtol, scale, stop)


def _iterate(op: Operator, rhs: Field, start: Field | None, rtol: float, scale: float,
             stop: Callable[[], bool] | None) -> Solved:
    x, r = _begun(op, rhs, start)
    p, q = _zero(op), _zero(op)
    precondition = Multigrid(op)
    alpha, rz = 0.0, 1.0
    for iteration in range(MOST_ITERATIONS + 1):
        # takes the step of the iteration before; the first time alpha is zero
        squared = kernels.step_and_pack(x.cells, p.cells, r.cells, q.cells, alpha, precondition.rhs)
        x.bodies[:] += alpha * p.bodies
        r.bodies[:] -= alpha * q.bodies
        relative = float(np.sqrt(squared + r.bodies @ r.bodies)) / scale
        if not relative > rtol or iteration == MOST_ITERATIONS:
            break
        if stop is not None and stop():
            raise Stopped
        z_bodies = precondition.cycle(r.bodies)
        new = kernels.dot_unpacked(r.cells, precondition.correction) + r.bodies @ z_bodies
        beta = new / rz if iteration else 0.0
        rz = new
        kernels.direction(p.cells, precondition.correction, beta)
        p.bodies[:] = z_bodies + beta * p.bodies
        curvature = _apply_into(op, p, q)
        if not curvature > 0.0:  # the system is singular, or a figure in it is no number
            break
        alpha = rz / curvature
    return Solved(x, iteration, relative, bool(relative <= rtol))


def _begun(op: Operator, rhs: Field, start: Field | None) -> tuple[Field, Field]:
    """The first guess and its residual."""
    if start is None:
        return _zero(op), Field(rhs.cells.copy(), rhs.bodies.copy())
    x = Field(start.cells.copy(), start.bodies.copy())
    back = apply(op, x)
    return x, Field(rhs.cells - back.cells, rhs.bodies - back.bodies)


def _fitting(name: str, field: Field, op: Operator) -> Field:
    return Field(plain(f"{name}.cells", field.cells, op.shape), plain(f"{name}.bodies", field.bodies, (len(op.bodies),)))


def _zero(op: Operator) -> Field:
    return Field(np.zeros(op.shape), np.zeros(len(op.bodies)))
