"""Messages of the drawing surface say what the layout and its solution say."""

import numpy as np
import pytest

from app.canvas import Scale, difference_of, field_of, scene_of
from app.refs import Ref
from solver import parse_layout, planes, solve
from solver.planes import PlaneField

DOCUMENT = {
    "format": "heat-spreader-layout", "version": 1, "ambient_c": 30.0, "plate": {"width_mm": 60.0, "height_mm": 40.0},
    "layers": [{"id": "foil", "thickness_mm": 0.1, "material": "copper"}, {"id": "base", "thickness_mm": 2.0, "material": "aluminium"}],
    "zones": [{"id": "cut", "layers": ["foil"], "x_mm": 30.0, "y_mm": 5.0, "width_mm": 2.0, "height_mm": 30.0, "material": "void"}],
    "sources": [{"id": "Q1", "x_mm": 10.0, "y_mm": 15.0, "width_mm": 8.0, "height_mm": 8.0, "power_w": 9.0, "limit_c": 200.0},
                {"id": "Q2", "x_mm": 40.0, "y_mm": 15.0, "width_mm": 8.0, "height_mm": 8.0, "power_w": 1.0, "face": "bottom"}],
    "edges": {"east": [{"from_mm": 0.0, "to_mm": 25.0, "kind": "fixed"},
                       {"from_mm": 25.0, "to_mm": 40.0, "kind": "convective", "film_w_m2k": 300.0, "fluid_c": 35.0}]},
    "faces": {"bottom": {"kind": "convective", "film_w_m2k": 20.0}},
    "contacts": [{"id": "stud", "face": "bottom", "x_mm": 1.0, "y_mm": 1.0, "width_mm": 5.0, "height_mm": 5.0,
                  "conductance_w_m2k": 500.0}],
}


@pytest.fixture(scope="module")
def solution():
    return solve(parse_layout(DOCUMENT | {"limits": {"plate_c": 45.0, "warn_margin_k": 3.0}}))


def shapes(plane="top", selection=()):
    return {shape["id"]: shape for shape in scene_of(parse_layout(DOCUMENT), selection, plane)["shapes"]}


def test_every_rectangle_is_there_with_its_watts_or_material():
    found = shapes()
    assert list(found) == ["cut", "stud", "Q1", "Q2"]
    assert found["Q1"]["lines"] == ["Q1", "9 W"]
    assert found["Q2"]["lines"] == ["Q2", "1 W (bottom)"]
    assert found["cut"]["void"] and found["cut"]["lines"] == ["cut", "void"]
    assert found["stud"]["lines"] == ["stud", "500 W/m²K"]


def test_what_is_not_on_the_plane_stands_aside():
    assert not shapes("top")["Q1"]["aside"] and shapes("top")["Q2"]["aside"]
    assert shapes("bottom")["Q1"]["aside"] and not shapes("bottom")["stud"]["aside"]
    assert shapes("layer:base")["cut"]["aside"] and not shapes("layer:foil")["cut"]["aside"]


def test_the_selection_is_marked():
    chosen = shapes(selection=(Ref("source", "Q1"),))
    assert [id_ for id_, shape in chosen.items() if shape["selected"]] == ["Q1"]


def test_edges_say_their_kind_and_figures_with_units():
    east = scene_of(parse_layout(DOCUMENT), (Ref("edge", "east:1"),), "top")["edges"]["east"]
    assert [segment["text"] for segment in east] == ["30 °C", "300 W/m²K, 35 °C"]
    assert [segment["selected"] for segment in east] == [False, True]
    assert east[0]["about"] == "East edge, 0 to 25 mm, fixed 30 °C"


def test_the_field_carries_the_plane_and_the_verdict(solution):
    field = field_of(solution, "top", seq=7)
    assert field["seq"] == 7 and field["unit"] == "°C" and not field["draft"]
    assert field["t"].dtype == np.float32 and field["t"].size == field["width"] * field["height"]
    shown = planes.temperature(solution, "top")
    assert field["high"] == pytest.approx(float(np.nanmax(shown.t_c)))
    assert field["parts"]["Q1"]["verdict"] == "pass"
    assert "±" in field["peak"]["text"] and "°C" in field["peak"]["text"]
    assert field["marks"] == [45.0]


def test_bands_are_drawn_where_the_plate_is_over_and_near_its_limit(solution):
    field = field_of(solution, "top")
    shown = planes.temperature(solution, "top")
    assert np.nanmax(shown.t_c) > 45.0, "the example must be over its limit"
    over = field["over"]["xy"].reshape(-1, 2)
    assert len(over) and all(planes.at(shown, x, y) > 44.0 or np.isnan(planes.at(shown, x, y)) for x, y in over)
    assert len(field["near"]["offsets"]) > 1


def test_a_shared_scale_is_kept(solution):
    field = field_of(solution, "bottom", Scale(0.0, 100.0))
    assert (field["low"], field["high"]) == (0.0, 100.0)
    assert field["isotherms"]["levels"] == [10.0 * n for n in range(1, 10)]


def test_a_difference_is_coloured_evenly_about_zero_in_kelvin():
    line = np.linspace(0.0, 0.1, 5)
    field = difference_of(PlaneField(line, line, np.broadcast_to(np.linspace(-2.0, 6.0, 5), (5, 5))))
    assert (field["low"], field["high"], field["unit"], field["kind"]) == (-6.0, 6.0, "K", "difference")
    assert 0.0 in field["isotherms"]["levels"]
