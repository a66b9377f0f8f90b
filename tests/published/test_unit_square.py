"""A square with three sides at 0 and one at 1 (Carslaw & Jaeger, Conduction of Heat in Solids, 1959).

The centre is exactly one quarter, since four rotations of the square superpose to a square at 1
throughout. The other points are the Fourier series.

Tolerance: 1e-4 at the centre, 1e-3 elsewhere.
"""

from __future__ import annotations

import pytest

from tests.published.plates import document, fixed, solved, temperature

POINTS = {(50.0, 75.0): 0.540529218, (50.0, 25.0): 0.095414118, (25.0, 75.0): 0.432028332}


@pytest.fixture(scope="module")
def square():
    edges = {"west": fixed(0.0), "east": fixed(0.0), "south": fixed(0.0), "north": fixed(1.0)}
    return solved(document(100.0, 100.0, [(1.0, 150.0)], ambient_c=0.0, edges=edges), plane=True)


def test_centre_is_one_quarter(square):
    assert temperature(square, 50.0, 50.0, "layer:layer-1") == pytest.approx(0.25, abs=1e-4)


def test_points_of_the_series(square):
    found = {point: temperature(square, *point, plane="layer:layer-1") for point in POINTS}
    assert found == pytest.approx(POINTS, abs=1e-3)
