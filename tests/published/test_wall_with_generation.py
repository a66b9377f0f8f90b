"""Plane walls with uniform generation: T0 - Ts = q L^2/(2 k), and a composite wall.

Source: any textbook of heat transfer; the composite wall is an example of the chapter on one-dimensional
conduction of Bergman, Lavine, Incropera & DeWitt, Fundamentals of Heat and Mass Transfer, recalled from
memory and equal to the closed form. A wall is a plane plate between two edges; since a plane plate has no
resolution through its thickness, a source over the whole plate heats it uniformly through its volume.

Tolerance: 0.1 % of the rise.
"""

from __future__ import annotations

import pytest

from tests.published.plates import convective, document, fixed, insulated, solved, source, temperature

HEIGHT_MM, DEPTH_MM = 10.0, 1.0
SECTION = "layer:layer-1"


def generation(length_mm: float, q_w_m3: float) -> dict:
    """A source that generates q through the wall's first length."""
    return source(0.0, 0.0, length_mm, HEIGHT_MM, q_w_m3 * length_mm * HEIGHT_MM * DEPTH_MM * 1e-9)


def along(solution, x_mm: float) -> float:
    return temperature(solution, x_mm, HEIGHT_MM / 2, SECTION)


def test_wall_between_held_sides():
    """1e6 W/m3 in 20 mm of k 20: the middle is 2.5 K over the sides."""
    wall = document(20.0, HEIGHT_MM, [(DEPTH_MM, 20.0)], ambient_c=30.0, sources=[generation(20.0, 1e6)],
                    edges={"west": fixed(30.0), "east": fixed(30.0)})
    solution = solved(wall, plane=True)
    assert along(solution, 10.0) - 30.0 == pytest.approx(2.5, rel=1e-3)
    assert solution.results.peak.temperature_c - 30.0 == pytest.approx(2.5, rel=1e-3)


def test_half_wall_with_a_film():
    """1e5 W/m3 in 50 mm of k 5, insulated behind, 200 W/m2K to 25 degC: 75 and 50 degC."""
    wall = document(50.0, HEIGHT_MM, [(DEPTH_MM, 5.0)], ambient_c=25.0, sources=[generation(50.0, 1e5)],
                    edges={"west": insulated(), "east": convective(200.0, 25.0)})
    solution = solved(wall, plane=True)
    assert along(solution, 50.0) == pytest.approx(50.0, abs=0.05)
    assert along(solution, 0.0) == pytest.approx(75.0, abs=0.05)


def test_composite_wall():
    """50 mm of k 75 with 1.5e6 W/m3, 20 mm of k 150 without, 1000 W/m2K to 30 degC: 140, 115 and 105 degC."""
    cover = {"id": "cover", "layers": "all", "material": "cover",
             "x_mm": 50.0, "y_mm": 0.0, "width_mm": 20.0, "height_mm": HEIGHT_MM}
    wall = document(70.0, HEIGHT_MM, [(DEPTH_MM, 75.0)], ambient_c=30.0, sources=[generation(50.0, 1.5e6)],
                    zones=[cover], materials={"cover": {"k_w_mk": 150.0}},
                    edges={"east": convective(1000.0, 30.0)})
    solution = solved(wall, plane=True)
    assert [along(solution, x) for x in (0.0, 50.0, 70.0)] == pytest.approx([140.0, 115.0, 105.0], abs=0.11)
