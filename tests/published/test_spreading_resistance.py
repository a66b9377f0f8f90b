"""Spreading resistance of rectangular sources on plain and compound plates.

Sources: Yovanovich, Muzychka & Culham, "Spreading resistance of isoflux rectangles and strips on compound
flux channels", J. Thermophysics and Heat Transfer 13, 1999; Muzychka, Culham & Yovanovich, "Thermal
spreading resistance of eccentric heat sources on rectangular flux channels", J. Electronic Packaging 125,
2003. The series were recalled from memory and evaluated with 1500 x 1500 terms; an independent solution
agrees to 1e-6. The half-space figure is a closed form.

Tolerance: the series of this project 1e-6 relative (half-space 1e-3); the solver 1 %.
"""

from __future__ import annotations

from math import log, pi, sqrt

import pytest

from tests.published.layered_series import Film, Heat, Held, Slab, solve_series
from tests.published.plates import document, solved, source

MODES = (3000, 3000)

CENTRED = {  # plate mm, source mm, thickness mm, W/mK, film W/m2K: total resistance K/W
    "30 x 20 on 100 x 80": ((100.0, 80.0), (30.0, 20.0), 5.0, 200.0, 500.0, 0.386684687),
    "10 square on 60 square": ((60.0, 60.0), (10.0, 10.0), 10.0, 390.0, 50.0, 5.66694749),
    "20 x 30 on 40 x 100": ((40.0, 100.0), (20.0, 30.0), 1.5, 5.0, 1000.0, 1.71667914),
}
ECCENTRIC = {  # plate mm, source mm, its centre mm, thickness mm, W/mK, film W/m2K, W: mean rise K
    "towards a corner": ((120.0, 80.0), (25.0, 15.0), (22.5, 22.5), 3.0, 167.0, 250.0, 30.0, 29.9458456),
    "on a poor conductor":
        ((300.0, 300.0), (50.0, 30.0), (200.0, 90.0), 12.7, 10.0, 100.0, 100.0, 152.155174),
}


def mean_rise(layout: dict) -> float:
    return solved(layout).results.sources[0].mean_c - layout["ambient_c"]


def plate(size, stack, film_w_m2k, part) -> dict:
    bottom = {"kind": "convective", "film_w_m2k": film_w_m2k}
    return document(*size, stack, ambient_c=0.0, sources=[part], faces={"bottom": bottom})


@pytest.mark.parametrize("case", CENTRED.values(), ids=CENTRED.keys())
def test_centred_source(case):
    (length, width), (a, b), thickness, k, film, resistance = case
    place = ((length - a) / 2, (width - b) / 2, a, b)
    heat = Heat(*place, power_w=1.0)
    slab = Slab(thickness, k, k, k)
    series = solve_series((length, width), [slab], Film(0, 0), Film(film, 0), [heat], MODES)
    assert series.mean(heat) == pytest.approx(resistance, rel=1e-6)
    layout = plate((length, width), [(thickness, k)], film, source(*place, power_w=1.0))
    assert mean_rise(layout) == pytest.approx(resistance, rel=0.01)


@pytest.mark.parametrize("case", ECCENTRIC.values(), ids=ECCENTRIC.keys())
def test_eccentric_source(case):
    size, (a, b), (x, y), thickness, k, film, power, rise = case
    place = (x - a / 2, y - b / 2, a, b)
    heat = Heat(*place, power_w=power)
    series = solve_series(size, [Slab(thickness, k, k, k)], Film(0, 0), Film(film, 0), [heat], MODES)
    assert series.mean(heat) == pytest.approx(rise, rel=2e-6)
    layout = plate(size, [(thickness, k)], film, source(*place, power_w=power))
    assert mean_rise(layout) == pytest.approx(rise, rel=0.01)


def test_compound_plate():
    """20 mm square on 100 mm square, 1 mm of k 390 over 6 mm of k 180, 400 W/m2K below."""
    spreading, uniform = 0.132436363, (0.001 / 390 + 0.006 / 180 + 1 / 400) / 0.01
    heat = Heat(40, 40, 20, 20, 1.0)
    stack = [Slab(1, 390, 390, 390), Slab(6, 180, 180, 180)]
    series = solve_series((100, 100), stack, Film(0, 0), Film(400, 0), [heat], MODES)
    assert series.mean(heat) - uniform == pytest.approx(spreading, rel=1e-6)
    layout = plate((100.0, 100.0), [(1.0, 390.0), (6.0, 180.0)], 400.0, source(40, 40, 20, 20, 1.0))
    assert mean_rise(layout) - uniform == pytest.approx(spreading, rel=0.01)


def test_square_on_a_half_space():
    """Uniform flux over a square of side w: k w R is 0.5611 at its centre and 0.4732 in the mean.

    The half-space is a cube of 20 w on a held face. What the cube lacks of a half-space is nearly the same at
    every point of the source, so the difference of centre and mean is compared.
    """
    centre = 2 * log(1 + sqrt(2)) / pi
    mean = (2 / pi) * (log(1 + sqrt(2)) - (sqrt(2) - 1) / 3)
    heat = Heat(95, 95, 10, 10, 1.0)
    series = solve_series((200, 200), [Slab(200, 100, 100, 100)], Film(0, 0), Held(0), [heat], MODES)
    per_k_w = 100.0 * 0.01
    difference = float(series.at(100, 100)) - series.mean(heat)
    assert per_k_w * difference == pytest.approx(centre - mean, rel=1e-3)
    layout = document(200.0, 200.0, [(200.0, 100.0)], ambient_c=0.0, sources=[source(95, 95, 10, 10, 1.0)],
                      faces={"top": {"kind": "insulated"}, "bottom": {"kind": "fixed"}})
    part = solved(layout).results.sources[0]
    assert per_k_w * (part.max_c - part.mean_c) == pytest.approx(centre - mean, rel=0.05)
