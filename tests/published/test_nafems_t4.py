"""NAFEMS, The Standard NAFEMS Benchmarks, test T4: two-dimensional heat transfer with convection.

A 0.6 m x 1.0 m rectangle, k 52, bottom 100 degC, left insulated, right and top 750 W/m2K to 0 degC. The
target, 18.3 degC at (0.6, 0.2) m, is recalled from memory; recomputed and converged it is 18.254 degC.

Tolerance: 0.05 K against the converged figure.
"""

from __future__ import annotations

import pytest

from tests.published.plates import convective, document, fixed, solved, temperature

CONVERGED_C = 18.254


def test_t4():
    edges = {"south": fixed(100.0), "east": convective(750.0, 0.0), "north": convective(750.0, 0.0)}
    solution = solved(document(600.0, 1000.0, [(10.0, 52.0)], ambient_c=0.0, edges=edges), plane=True)
    assert temperature(solution, 600.0, 200.0, "layer:layer-1") == pytest.approx(CONVERGED_C, abs=0.05)
