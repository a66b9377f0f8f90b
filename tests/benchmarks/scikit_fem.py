"""The same plate (one layer) in scikit-fem: bilinear quadrilaterals, assembly and its default solve."""

from __future__ import annotations

import numpy as np
import skfem
from skfem.helpers import dot, grad

from tests.benchmarks.layouts import case
from tests.benchmarks.timing import least


def work(n: int, nz: int, times: int = 1) -> dict[str, float]:
    if nz != 1:
        raise ValueError(f"nz {nz} was given; only one layer is compared here")
    c = case(n, 1)
    solid = c.k[0] > 0
    k = np.where(solid, c.k[0], 1e-3) * c.dz[0]
    lines = np.arange(n + 1) * c.d

    def solve() -> np.ndarray:
        mesh = skfem.MeshQuad.init_tensor(lines, lines)
        basis = skfem.Basis(mesh, skfem.ElementQuad1())
        constant = basis.with_element(skfem.ElementQuad0())
        x, y = mesh.p[:, mesh.t].mean(axis=1)
        j, i = (np.clip((at / c.d).astype(int), 0, n - 1) for at in (y, x))
        conduction, heat, film = constant.zeros(), constant.zeros(), constant.zeros()
        place = constant.element_dofs[0]
        conduction[place], heat[place], film[place] = k[j, i], c.heat[0, j, i] / c.d**2, c.film * solid[j, i]

        @skfem.BilinearForm
        def form(u, v, w):
            return w.k * dot(grad(u), grad(v)) + w.h * u * v

        @skfem.LinearForm
        def load(v, w):
            return w.q * v

        a = form.assemble(basis, k=constant.interpolate(conduction), h=constant.interpolate(film))
        b = load.assemble(basis, q=constant.interpolate(heat))
        return skfem.solve(a, b)

    seconds, t = least(solve, times)
    return {"seconds": seconds, "peak_k": float(t.max())}
