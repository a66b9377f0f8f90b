"""Our solve of a case: assembly, set-up and iterations together."""

from __future__ import annotations

import numpy as np

from solver.linear import kernels, solve_pcg, warm_up
from tests.benchmarks.layouts import case, operator, rhs
from tests.benchmarks.timing import least


def work(n: int, nz: int, times: int = 5) -> dict[str, float]:
    """Seconds cold to 1e-8, of a zone moved by two cells warm to 1e-4, and of one pass over the coefficients."""
    warm_up()
    before, after = case(n, nz), case(n, nz, shift=2)
    cold, solved = least(lambda: solve_pcg(operator(before), rhs(before), rtol=1e-8), times)
    edit, edited = least(lambda: solve_pcg(operator(after), rhs(after), solved.field, rtol=1e-4), times)
    op, out = operator(before), np.empty(before.k.shape)
    touch, _ = least(lambda: kernels.apply_cells(solved.field.cells, op.gx, op.gy, op.gz, op.ground, out), 4 * times)
    return {"cold": cold, "cold_iterations": solved.iterations, "edit": edit, "edit_iterations": edited.iterations,
            "touch": touch, "cells": op.gs.size, "peak_k": float(solved.field.cells.max())}
