"""Whole layouts with zones, slots, joints, contacts and mixed edges, against finite elements by scikit-fem.

Source: scikit-fem (Gustafsson & McBain, Journal of Open Source Software 5, 2020), triquadratic hexahedra
on an own mesh; the model is in finite_elements.py and is itself held against the exact series here.

Tolerance: 1 % of the rise at the peak, in footprint means and in cases; 1 % of the power in every outlet.
"""

from __future__ import annotations

import numpy as np
import pytest

from tests.published.finite_elements import Plate
from tests.published.layered_series import Film, Heat, Slab, solve_series
from tests.published.plates import convective, document, fixed, insulated, solved, source
from tests.published.random_layered import document_of

AMBIENT_C = 30.0
POWER_W = 20.0
CELL_MM = 4.0
"""Rectangles stand on a lattice of this pitch, which keeps the reference's mesh small."""
STACKS = (
    [(1.0, 390.0), (0.5, 3.0), (2.0, 160.0)],
    [(0.3, 390.0), (0.635, 25.0), (3.0, 390.0)],
    [(4.0, 200.0)],
)


def boxes(rng: np.random.Generator, count: int) -> list[dict]:
    """Rectangles of one or two lattice cells a side on a plate of 12 x 9 cells, none over another."""
    taken = np.zeros((9, 12), dtype=bool)
    found: list[dict] = []
    while len(found) < count:
        wide, high = rng.integers(1, 3, 2)
        i, j = rng.integers(0, 13 - wide), rng.integers(0, 10 - high)
        if not taken[j : j + high, i : i + wide].any():
            taken[j : j + high, i : i + wide] = True
            sides = zip(("x_mm", "y_mm", "width_mm", "height_mm"), (i, j, wide, high), strict=True)
            found.append({name: CELL_MM * float(cells) for name, cells in sides})
    return found


def random_plate(seed: int) -> dict:
    """A plate with everything the series cannot have."""
    rng = np.random.default_rng(seed)
    slot, patch, plain, joined, below, stud = boxes(rng, 6)
    stack = STACKS[seed % len(STACKS)]
    zones = [{"id": "patch", "layers": ["layer-1"], "material": "patch", **patch},
             {"id": "slot", "layers": "all", "material": "void", **slot}]
    sources = [source(**plain, power_w=POWER_W / 2),
               source(**joined, power_w=POWER_W / 4, id="Q2", interface_k_mm2_w=float(rng.uniform(10, 60))),
               source(**below, power_w=POWER_W / 4, id="Q3", face="bottom")]
    east = [{"from_mm": 0.0, "to_mm": 16.0, **fixed(AMBIENT_C + 5.0)[0]},
            {"from_mm": 20.0, "to_mm": 36.0, **convective(500.0, AMBIENT_C)[0]}]
    return document(
        48.0, 36.0, stack, ambient_c=AMBIENT_C, zones=zones, sources=sources,
        edges={"east": east, "west": convective(200.0, AMBIENT_C - 10.0), "north": insulated()},
        materials={"patch": {"k_in_plane_w_mk": 5.0, "k_through_w_mk": 1.0}},
        faces={"top": {"kind": "convective", "film_w_m2k": 15.0},
               "bottom": {"kind": "convective", "film_w_m2k": float(rng.uniform(50, 400))}},
        contacts=[{"id": "stud", "face": "bottom", "conductance_w_m2k": 3000.0, "sink_c": AMBIENT_C + 8.0,
                   **stud}])


def test_reference_agrees_with_the_series():
    """The finite elements themselves, on a plate the series can solve: 0.2 % of the rise."""
    series = solve_series((48.0, 36.0), [Slab(1, 390, 390, 390), Slab(0.5, 3, 3, 3), Slab(2, 160, 160, 160)],
                          Film(10, 25), Film(300, 25), [Heat(8, 8, 8, 8, 10), Heat(24, 20, 12, 8, 15)])
    answer = Plate({**document_of(series), "edges": {}}).solve()
    peak = series.peak().temperature_c
    near = 2e-3 * (peak - 25.0)
    assert answer.peak_c == pytest.approx(peak, abs=near)
    assert answer.mean_c == pytest.approx([series.mean(s) for s in series.sources], abs=near)
    assert answer.out_w == pytest.approx(series.heat_out_w(), abs=1e-6)


@pytest.mark.parametrize("seed", [0, 1, 2])
def test_random_plate(seed: int):
    layout = random_plate(seed)
    answer = Plate(layout).solve()
    results = solved(layout).results
    near = 0.01 * (answer.peak_c - AMBIENT_C)
    assert results.peak.temperature_c == pytest.approx(answer.peak_c, abs=near)
    assert [part.mean_c for part in results.sources] == pytest.approx(answer.mean_c, abs=near)
    assert results.sources[1].case_c == pytest.approx(answer.case_c[1], abs=near)
    out = {name: watts for name, watts in results.heat_balance.out_w.items() if name in answer.out_w}
    assert out == pytest.approx(answer.out_w, abs=0.01 * POWER_W)
    assert sum(answer.out_w.values()) == pytest.approx(POWER_W, rel=1e-6)
