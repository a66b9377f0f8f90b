"""SciPy's sparse factorisation: the reference in tests, and quick enough for small systems."""

from __future__ import annotations

import numpy as np
from scipy.sparse.linalg import splu

from .operator import Field, Operator, matrix
from .pcg import residual
from .solved import Solved

WORST_RESIDUAL = 1e-6
"""Factors that leave more than this solved nothing: the system is singular but for rounding."""


def solve_direct(op: Operator, rhs: Field) -> Solved:
    """Solve by LU factors in an ordering for symmetric matrices.

    Raises RuntimeError for an exactly singular system, ValueError for a right-hand side of wrong shape.
    """
    factors = splu(matrix(op), permc_spec="MMD_AT_PLUS_A", diag_pivot_thresh=0.0, options={"SymmetricMode": True})
    x = factors.solve(np.concatenate([rhs.cells.ravel(), rhs.bodies]))
    n = op.gs.size
    field = Field(x[:n].reshape(op.shape), x[n:])
    left = residual(op, rhs, field)
    return Solved(field, 1, left, left <= WORST_RESIDUAL)
