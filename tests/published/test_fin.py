"""Straight fins with an insulated tip: efficiency tanh(mL)/(mL), tip 1/cosh(mL), m = sqrt(2 h/(k t)).

Source: any textbook of heat transfer, e.g. the chapter on extended surfaces of Bergman, Lavine, Incropera
& DeWitt, Fundamentals of Heat and Mass Transfer. A fin is a plate held at its west edge with films on its
faces.

Tolerance: 0.2 % of the efficiency and of the base's excess.
"""

from __future__ import annotations

from math import cosh, sqrt, tanh

import pytest

from tests.published.plates import document, fixed, solved, temperature

LENGTH_MM, THICKNESS_MM, DEPTH_MM, K = 40.0, 1.0, 10.0, 200.0
BASE_C, FLUID_C = 80.0, 20.0


def fin(film_w_m2k: float, plane: bool):
    face = {"kind": "convective", "film_w_m2k": film_w_m2k}
    layout = document(LENGTH_MM, DEPTH_MM, [(THICKNESS_MM, K)], ambient_c=FLUID_C,
                      edges={"west": fixed(BASE_C)}, faces={"top": face, "bottom": face})
    return solved(layout, plane=plane)


def efficiency(solution, film_w_m2k: float) -> float:
    out = solution.results.heat_balance.out_w
    ideal = 2 * film_w_m2k * LENGTH_MM * DEPTH_MM * 1e-6 * (BASE_C - FLUID_C)
    assert out["west"] == pytest.approx(-(out["top"] + out["bottom"]), rel=1e-6)
    return (out["top"] + out["bottom"]) / ideal


@pytest.mark.parametrize("plane", [True, False], ids=["plane", "layered"])
def test_efficiency_of_a_sheet_metal_fin(plane: bool):
    assert efficiency(fin(50.0, plane), 50.0) == pytest.approx(0.797799, rel=2e-3)


@pytest.mark.parametrize("m_l, expected, tip", [
    (0.5, 0.924234315, 0.886818884),
    (1.0, 0.761594156, 0.648054274),
    (2.0, 0.48201379, 0.265802229),
])
def test_efficiency_and_tip_over_fin_parameter(m_l: float, expected: float, tip: float):
    assert (tanh(m_l) / m_l, 1 / cosh(m_l)) == pytest.approx((expected, tip), rel=1e-8)
    film = (m_l / (LENGTH_MM * 1e-3)) ** 2 * K * THICKNESS_MM * 1e-3 / 2
    assert sqrt(2 * film / (K * THICKNESS_MM * 1e-3)) * LENGTH_MM * 1e-3 == pytest.approx(m_l)
    solution = fin(film, plane=True)
    assert efficiency(solution, film) == pytest.approx(expected, rel=2e-3)
    excess = (temperature(solution, LENGTH_MM, DEPTH_MM / 2, "layer:layer-1") - FLUID_C) / (BASE_C - FLUID_C)
    assert excess == pytest.approx(tip, abs=2e-3)
