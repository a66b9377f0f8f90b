"""Whole-face heating: resistances in series, by hand.

Sources: the sum of thickness/conductivity and 1/film (any textbook); the chip on a substrate is an
example of the chapter on one-dimensional conduction of Bergman, Lavine, Incropera & DeWitt, Fundamentals
of Heat and Mass Transfer, recalled from memory (printed 75.3 degC); effective conductivities of a board
are the parallel and series sums.

Tolerance: 1e-6 of the rise, the grid being exact where the heat flows straight; 1e-4 of the heat between
two held faces, where the iteration stops at a residual measured against the much larger conductance to
the held faces.
"""

from __future__ import annotations

import pytest

from tests.published.plates import document, solved, source


def test_three_layers_with_a_joint_between_two_fluids():
    """20 W on 50 x 40 mm: copper, joint of 20 K mm2/W, laminate, aluminium.

    Above are 12 W/m2K to 30 degC, below 300 W/m2K to 20 degC. The joint is a layer of 0.01 mm with the
    joint's conductance.
    """
    joint = (0.01, 0.01e-3 / 2e-5)
    layout = document(
        50.0, 40.0, [(1.0, 390.0), joint, (0.2, 1.2), (3.0, 160.0)], ambient_c=20.0,
        sources=[source(0.0, 0.0, 50.0, 40.0, 20.0)],
        faces={"top": {"kind": "convective", "film_w_m2k": 12.0, "fluid_c": 30.0},
               "bottom": {"kind": "convective", "film_w_m2k": 300.0, "fluid_c": 20.0}})
    results = solved(layout).results
    assert results.peak.temperature_c == pytest.approx(54.3772126, abs=3e-5)
    assert results.sources[0].mean_c == pytest.approx(54.3772126, abs=3e-5)


def test_chip_joined_to_an_aluminium_substrate():
    """A chip of 1e4 W/m2 on 8 mm of aluminium through 0.9e-4 m2K/W, 100 W/m2K to 25 degC on both sides.

    The film on the chip's own side acts on the chip: a contact as wide as the chip would act on the
    plate, so the chip is a layer of its own, 0.1 mm thin and far more conductive than the joint.
    """
    side = 10.0
    film = {"kind": "convective", "film_w_m2k": 100.0}
    joint = (0.05, 0.05e-3 / 0.9e-4)
    layout = document(side, side, [(0.1, 1e6), joint, (8.0, 239.0)], ambient_c=25.0,
                      sources=[source(0.0, 0.0, side, side, 1e4 * side * side * 1e-6)],
                      faces={"top": film, "bottom": film})
    assert solved(layout).results.peak.temperature_c == pytest.approx(75.306788, abs=1e-4)


def test_case_and_junction_over_a_joint():
    """A part of 12 W over a whole face: case = plate + P r/A, junction = case + P R, each by hand."""
    part = source(0.0, 0.0, 30.0, 20.0, 12.0, interface_k_mm2_w=30.0, r_junction_case_k_w=0.8)
    layout = document(30.0, 20.0, [(2.0, 200.0)], ambient_c=40.0, sources=[part],
                      faces={"bottom": {"kind": "convective", "film_w_m2k": 500.0}})
    found = solved(layout).results.sources[0]
    plate = 40.0 + 12.0 / (30.0 * 20.0 * 1e-6) * (1 / 500.0 + 0.002 / 200.0)
    case = plate + 12.0 * 30.0 / (30.0 * 20.0)
    wanted = (plate, case, case + 12.0 * 0.8)
    assert (found.mean_c, found.case_c, found.junction_c) == pytest.approx(wanted, abs=1e-4)


def test_effective_conductivities_of_a_board():
    """1.6 mm board, four foils of 35 um at k 390, the rest at 0.3: 34.399 in plane, 0.32874 through."""
    foil, core = (0.035, 390.0), ((1.6 - 4 * 0.035) / 3, 0.3)
    stack = [foil, core, foil, core, foil, core, foil]
    in_plane = document(50.0, 10.0, stack, ambient_c=0.0,
                        edges={"west": [{"kind": "fixed", "temperature_c": 10.0}],
                               "east": [{"kind": "fixed", "temperature_c": 0.0}]})
    heat = solved(in_plane).results.heat_balance.out_w["east"]
    assert heat / (10.0 * 1.6e-3 * 0.010 / 0.050) == pytest.approx(34.39875, rel=1e-4)
    through = document(50.0, 10.0, stack, ambient_c=0.0,
                       faces={"top": {"kind": "fixed", "temperature_c": 10.0},
                              "bottom": {"kind": "fixed", "temperature_c": 0.0}})
    heat = solved(through).results.heat_balance.out_w["bottom"]
    assert heat / (10.0 * 500e-6 / 1.6e-3) == pytest.approx(0.328742875, rel=1e-4)
