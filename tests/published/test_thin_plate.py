"""The plain two-dimensional plate with films: the exact double cosine series of the fin-plate equation.

Source: separation of variables of k t (T_xx + T_yy) - h (T - T_a) + q = 0 with insulated edges (Carslaw &
Jaeger 1959, the method). The figures were summed by two independent methods that agree to 1e-8 K, and
checked with finite elements.

Tolerance: 0.5 % of the rise.
"""

from __future__ import annotations

from dataclasses import dataclass

import pytest

from tests.published.plates import document, solved, source, temperature


@dataclass(frozen=True)
class Case:
    plate_mm: tuple[float, float]
    kt_w_k: float
    film_w_m2k: float
    ambient_c: float
    sources: tuple[tuple[float, float, float, float, float], ...]  # x, y, width, height mm, W
    points_c: dict[tuple[float, float], float]
    means_c: tuple[float, ...]


CASES = {
    "one source in a corner": Case(
        (100.0, 80.0), 0.2, 20.0, 0.0, ((20.0, 10.0, 30.0, 30.0, 5.0),),
        {(35, 25): 36.166514, (0, 0): 34.353999, (100, 80): 27.674406, (20, 10): 35.322227}, (35.279555,)),
    "one source in the middle": Case(
        (100.0, 80.0), 1.0, 25.0, 25.0, ((35.0, 30.0, 30.0, 20.0, 10.0),),
        {(50, 40): 76.677136, (0, 0): 74.4603503, (100, 80): 74.4603503}, (76.305049,)),
    "two sources": Case(
        (160.0, 100.0), 0.225, 14.0, 30.0, ((10.0, 10.0, 20.0, 30.0, 4.0), (90.0, 50.0, 30.0, 30.0, 6.0)),
        {(20, 25): 79.8550783, (105, 65): 78.6885838, (0, 0): 79.3059861, (160, 100): 73.4600045},
        (79.2102567, 77.7138989)),
}


@pytest.mark.parametrize("case", CASES.values(), ids=CASES.keys())
def test_plane_plate(case: Case):
    thickness_mm = 1.0
    face = {"kind": "convective", "film_w_m2k": case.film_w_m2k / 2}
    sheet = (thickness_mm, case.kt_w_k / (thickness_mm * 1e-3))
    layout = document(*case.plate_mm, [sheet], ambient_c=case.ambient_c,
                      sources=[source(*s, id=f"Q{n}") for n, s in enumerate(case.sources)],
                      faces={"top": face, "bottom": face})
    solution = solved(layout, plane=True)
    near = 0.005 * (max(case.points_c.values()) - case.ambient_c)
    found = [temperature(solution, *point, plane="layer:layer-1") for point in case.points_c]
    assert found == pytest.approx(list(case.points_c.values()), abs=near)
    assert [part.mean_c for part in solution.results.sources] == pytest.approx(case.means_c, abs=near)
