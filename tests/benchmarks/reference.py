"""SciPy's splu with default options, factor and solve, on the same system."""

from __future__ import annotations

from scipy.sparse.linalg import splu

from solver.linear import matrix
from tests.benchmarks.layouts import case, operator, rhs
from tests.benchmarks.timing import least


def work(n: int, nz: int, times: int = 1) -> dict[str, float]:
    c = case(n, nz)
    a, b = matrix(operator(c)), rhs(c).cells.ravel()
    seconds, x = least(lambda: splu(a).solve(b), times)
    return {"seconds": seconds, "peak_k": float(x.max())}
