"""The same plate (one layer) in FiPy with its LU and PCG solvers from SciPy."""

from __future__ import annotations

import os

import numpy as np

from tests.benchmarks.layouts import case
from tests.benchmarks.timing import least


def work(n: int, nz: int, conjugate_gradients: int = 0) -> dict[str, float]:
    os.environ["FIPY_SOLVERS"] = "scipy"
    import fipy  # noqa: PLC0415  reads the variable when it is imported

    if nz != 1:
        raise ValueError(f"nz {nz} was given; only one layer is compared here")
    c = case(n, 1)
    solid = c.k[0] > 0
    k = np.where(solid, c.k[0], 1e-3) * c.dz[0]

    def solve() -> np.ndarray:
        mesh = fipy.Grid2D(nx=n, ny=n, dx=c.d, dy=c.d)
        t = fipy.CellVariable(mesh=mesh, value=0.0)
        conductivity = fipy.CellVariable(mesh=mesh, value=k.ravel()).harmonicFaceValue
        heat = fipy.CellVariable(mesh=mesh, value=c.heat[0].ravel() / c.d**2)
        film = fipy.CellVariable(mesh=mesh, value=c.film * solid.ravel())
        equation = fipy.DiffusionTerm(coeff=conductivity) + heat - fipy.ImplicitSourceTerm(coeff=film)
        solver = fipy.LinearPCGSolver(tolerance=1e-8, iterations=20_000) if conjugate_gradients else fipy.LinearLUSolver()
        equation.solve(var=t, solver=solver)
        return np.asarray(t.value)

    seconds, t = least(solve, 1)
    return {"seconds": seconds, "peak_k": float(t.max())}
