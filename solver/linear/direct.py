"""SciPy's sparse factorisation: the reference in tests, and quick enough for small systems."""

from __future__ import annotations

import numpy as np
from scipy.sparse.linalg import splu

from .operator import Field, Operator, matrix
from .solved import Solved


def solve_direct(op: Operator, rhs: Field) -> Solved:
    """Solve by LU factors in an ordering for symmetric matrices. Raises RuntimeError for a singular system."""
    a = matrix(op)
    factors = splu(a, permc_spec="MMD_AT_PLUS_A", diag_pivot_thresh=0.0, options={"SymmetricMode": True})
    b = np.concatenate([rhs.cells.ravel(), rhs.bodies])
    x = factors.solve(b)
    scale = float(np.linalg.norm(b))
    residual = float(np.linalg.norm(b - a @ x)) / scale if scale > 0.0 else 0.0
    n = op.gs.size
    return Solved(Field(x[:n].reshape(op.shape), x[n:]), 1, residual, bool(np.isfinite(x).all()))
