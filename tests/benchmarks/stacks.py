"""Iterations on real stacks (foil and dielectric on metal, snapped and graded lines) against a uniform box."""

from __future__ import annotations

import numpy as np

from solver import parse_layout
from solver.linear import solve_pcg
from solver.mesh import grid_for
from solver.system import equations
from tests.benchmarks.layouts import case, operator, rhs


def document(seed: int) -> dict:
    """0.035-0.1 mm foil and dielectric on 1-3 mm metal with a dozen parts, a few gaps in the foil and a slot."""
    rng = np.random.default_rng(seed)
    width, height = (round(side, 1) for side in rng.uniform(40, 120, 2).tolist())

    def rectangle(low: float, high: float) -> dict:
        w, h = (round(side, 2) for side in rng.uniform(low, high, 2).tolist())
        return {"width_mm": w, "height_mm": h, "x_mm": round(rng.uniform(0, width - w), 2), "y_mm": round(rng.uniform(0, height - h), 2)}

    return {
        "format": "heat-spreader-layout", "version": 1, "plate": {"width_mm": width, "height_mm": height},
        "materials": {"resin": {"k_w_mk": float(rng.uniform(0.3, 3.0))}},
        "layers": [{"id": "foil", "thickness_mm": float(rng.choice([0.035, 0.07, 0.1])), "material": "copper"},
                   {"id": "resin", "thickness_mm": float(rng.uniform(0.05, 0.1)), "material": "resin"},
                   {"id": "base", "thickness_mm": float(rng.uniform(1.0, 3.0)), "material": "aluminium"}],
        "zones": [{"id": f"gap{n}", "layers": ["foil"], "material": "fr4", **rectangle(1.0, 15.0)} for n in range(4)]
        + [{"id": "slot", "layers": "all", "material": "void", **rectangle(1.0, 8.0)}],
        "sources": [{"id": f"Q{n}", "power_w": 3.0, **rectangle(2.0, 9.0)} for n in range(12)],
        "faces": {"bottom": {"kind": "convective", "film_w_m2k": 100.0}},
    }


def iterations(seeds: range) -> tuple[int, list[int], float]:
    """Of the uniform box; of each real stack; and how many times wider than high its foil cells are at most."""
    uniform = case(160, 6)
    even = solve_pcg(operator(uniform), rhs(uniform)).iterations
    found, widest = [], 0.0
    for seed in seeds:
        layout = parse_layout(document(seed))
        grid = grid_for(layout, 400_000)
        eq = equations(layout, grid)
        found.append(solve_pcg(eq.operator, eq.rhs).iterations)
        widest = max(widest, float(max(grid.dx.max(), grid.dy.max()) / grid.dz.min()))
    return even, found, widest
