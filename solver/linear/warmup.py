"""Compile, or load from the cache, every kernel a solve needs."""

from __future__ import annotations

import numpy as np

from .assembly import conductances
from .operator import Body, Field, Operator
from .pcg import solve_pcg


def warm_up() -> None:
    """Solve one small system that reaches every kernel in every type it is used with."""
    nz, ny, nx = 2, 24, 24
    k = np.ones((nz, ny, nx))
    g = conductances(k, k, k, np.ones(nx), np.ones(ny), np.ones(nz))
    body = Body(0, 3, 9, 3, 9, np.ones((6, 6)))
    op = Operator(*g, np.full(k.shape, 0.1), (body,))
    solve_pcg(op, Field(np.ones(k.shape), np.ones(1)))
