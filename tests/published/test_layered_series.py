"""Layered plates with rectangular sources, against the exact double cosine series.

Source: Carslaw & Jaeger, Conduction of Heat in Solids, 1959; Yovanovich, Muzychka & Culham 1999; Muzychka,
Culham & Yovanovich 2003 (the method). The figures are the series summed to 1e-8 by an independent program and
checked against finite elements to 1e-6 K; they hold this project's series, and the series holds the solver.

Tolerance: the series 2e-6 K at points and 1e-3 K in means; the solver 1 % of the rise on its default grid.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pytest

from tests.published.layered_series import Film, Heat, Held, Series, Slab, solve_series
from tests.published.plates import solved, temperature
from tests.published.random_layered import document_of


def slab(thickness_mm: float, k: float, through: float | None = None) -> Slab:
    return Slab(thickness_mm, k, k, through or k)


@dataclass(frozen=True)
class Case:
    series: Series
    peak_c: float
    peak_at_mm: tuple[float, float]
    means_c: tuple[float, ...]
    centres_c: tuple[float, ...]
    corners_c: tuple[float, ...]  # south-west, south-east, north-west, north-east
    bottom_under_first_c: float
    out_w: tuple[float, float]  # top, bottom


CASES = {
    "one layer": Case(
        solve_series((100, 80), [slab(5, 200)], Film(0, 25), Film(500, 25), [Heat(35, 30, 30, 20, 50)]),
        46.173143, (50.0, 40.0), (44.334234,), (46.173143,), (35.22632,) * 4, 45.008998, (0.0, 50.0)),
    "copper on aluminium": Case(
        solve_series((100, 100), [slab(1, 390), slab(6, 180)], Film(0, 25), Film(400, 25),
                     [Heat(10, 10, 20, 20, 40), Heat(55, 20, 20, 30, 60), Heat(30, 65, 20, 20, 25)]),
        65.136506, (18.971, 17.186), (63.92407, 62.218283, 56.278191), (64.995031, 63.742524, 56.91467),
        (62.100377, 55.694463, 51.558388, 50.011885), 63.269303, (0.0, 125.0)),
    "insulated metal board": Case(
        solve_series((50, 40), [slab(0.105, 390), slab(0.1, 2), slab(1.5, 150)], Film(8, 40), Film(150, 40),
                     [Heat(5, 5, 5, 5, 3), Heat(20, 6, 6, 8, 4), Heat(36, 8, 6, 6, 2.5),
                      Heat(15, 25, 8, 8, 5)]),
        94.732853, (7.475, 7.286), (93.495299, 91.889862, 87.919634, 90.593318),
        (94.719994, 93.071014, 88.772111, 91.89887), (89.765335, 84.109149, 84.66263, 80.690603), 90.550072,
        (0.740476, 13.759524)),
    "held bottom": Case(
        solve_series((40, 40), [slab(4, 150)], Film(0, 20), Held(20),
                     [Heat(8, 8, 8, 8, 40), Heat(22, 20, 8, 12, 60)]),
        33.095674, (25.996, 25.989), (29.56837, 30.440978), (32.036611, 33.095663),
        (20.077809, 20.001188, 20.000975, 20.044645), 20.0, (0.0, 100.0)),
    "graphite on aluminium": Case(
        solve_series((80, 60), [slab(0.5, 1200, 8), slab(1.5, 160)], Film(12, 25), Film(35, 25),
                     [Heat(10, 12, 12, 12, 6), Heat(50, 30, 12, 14, 9)]),
        95.093797, (56.118, 37.299), (93.567283, 94.426127), (94.035232, 95.091887),
        (91.998696, 90.537241, 90.21958, 91.598077), 92.514982, (3.836957, 11.163043)),
}


@pytest.fixture(params=CASES.values(), ids=CASES.keys())
def case(request) -> Case:
    return request.param


def centres(series: Series) -> tuple[list[float], list[float]]:
    x = [s.x_mm + s.width_mm / 2 for s in series.sources]
    y = [s.y_mm + s.height_mm / 2 for s in series.sources]
    return x, y


def corners(series: Series) -> tuple[list[float], list[float]]:
    width, height = series.plate_mm
    return [0, width, 0, width], [0, 0, height, height]


def test_series_gives_the_published_figures(case: Case):
    hottest = case.series.peak()
    assert hottest.temperature_c == pytest.approx(case.peak_c, abs=2e-6)
    assert (hottest.x_mm, hottest.y_mm) == pytest.approx(case.peak_at_mm, abs=2e-3)
    assert [case.series.mean(s) for s in case.series.sources] == pytest.approx(case.means_c, abs=1e-3)
    assert case.series.at(*centres(case.series)) == pytest.approx(np.array(case.centres_c), abs=2e-6)
    assert case.series.at(*corners(case.series)) == pytest.approx(np.array(case.corners_c), abs=2e-6)
    x, y = (place[0] for place in centres(case.series))
    assert float(case.series.at(x, y, "bottom")) == pytest.approx(case.bottom_under_first_c, abs=2e-6)
    assert tuple(case.series.heat_out_w().values()) == pytest.approx(case.out_w, abs=2e-6)


def test_solver_agrees_within_one_percent_of_the_rise(case: Case):
    bottom = case.series.bottom
    ambient = bottom.fixed_c if isinstance(bottom, Held) else bottom.fluid_c
    solution = solved({**document_of(case.series), "ambient_c": ambient})
    results = solution.results
    near = 0.01 * (case.peak_c - ambient)
    assert results.peak.temperature_c == pytest.approx(case.peak_c, abs=near)
    assert [part.mean_c for part in results.sources] == pytest.approx(case.means_c, abs=near)
    for places, wanted in ((centres, case.centres_c), (corners, case.corners_c)):
        found = [temperature(solution, x, y) for x, y in zip(*places(case.series), strict=True)]
        assert found == pytest.approx(wanted, abs=near)
    x, y = (place[0] for place in centres(case.series))
    assert temperature(solution, x, y, "bottom") == pytest.approx(case.bottom_under_first_c, abs=near)
    out = results.heat_balance.out_w
    assert (out["top"], out["bottom"]) == pytest.approx(case.out_w, abs=2e-3 * sum(case.out_w))


def test_series_is_the_same_upside_down():
    """A plate turned over is the same plate: top and bottom swap, to the last digits."""
    layers = [Slab(1, 390, 200, 100, joint_below_m2k_w=2e-5), slab(0.2, 1.2), slab(3, 160)]
    turned = [slab(3, 160), Slab(0.2, 1.2, 1.2, 1.2, joint_below_m2k_w=2e-5), Slab(1, 390, 200, 100)]
    up = solve_series((50, 40), layers, Film(12, 30), Film(300, 20),
                      [Heat(5, 5, 10, 12, 3), Heat(20, 20, 8, 5, 6, "bottom")])
    down = solve_series((50, 40), turned, Film(300, 20), Film(12, 30),
                        [Heat(5, 5, 10, 12, 3, "bottom"), Heat(20, 20, 8, 5, 6)])
    x, y = [1, 10, 20], [4, 3, 25]
    assert up.at(x, y) == pytest.approx(down.at(x, y, "bottom"), abs=1e-10)
    assert up.at(x, y, "bottom") == pytest.approx(down.at(x, y), abs=1e-10)
