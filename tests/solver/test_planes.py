"""Planes show surface and layer temperatures where they are, and nothing where there is a void."""

import numpy as np
import pytest

from solver import parse_layout, planes, solve


def slab(**changes):
    """A plate of one layer, 40 mm x 20 mm x 2 mm, k = 100 W/(m K), cooled below."""
    document = {
        "format": "heat-spreader-layout", "version": 1, "ambient_c": 20.0,
        "plate": {"width_mm": 40.0, "height_mm": 20.0},
        "materials": {"metal": {"k_w_mk": 100.0}},
        "layers": [{"id": "base", "thickness_mm": 2.0, "material": "metal"}],
        "sources": [{"id": "S", "x_mm": 0.0, "y_mm": 0.0, "width_mm": 40.0, "height_mm": 20.0, "power_w": 8.0}],
        "faces": {"bottom": {"kind": "convective", "film_w_m2k": 500.0}},
    }
    return parse_layout(document | changes)


def test_a_plane_wall_under_uniform_flux_has_the_temperatures_of_its_series_resistances():
    """q = 10 kW/m²: 20 K over the film (1/500), 0.2 K over the metal (2 mm / 100 W/mK). Hand calculation."""
    solution = solve(slab())
    assert planes.at(planes.temperature(solution, "bottom"), 13.0, 7.0) == pytest.approx(40.0, abs=1e-6)
    assert planes.at(planes.temperature(solution, "top"), 13.0, 7.0) == pytest.approx(40.2, abs=1e-6)
    assert planes.at(planes.temperature(solution, "layer:base"), 13.0, 7.0) == pytest.approx(40.1, abs=1e-6)


def test_names_run_from_top_to_bottom():
    assert planes.names(slab()) == ("top", "layer:base", "bottom")


def test_an_unknown_plane_is_refused_with_what_is_allowed():
    with pytest.raises(KeyError, match="layer:base"):
        planes.temperature(solve(slab(), effort="draft"), "layer:lid")


def test_edges_at_a_temperature_show_it():
    east = {"edges": {"east": [{"kind": "fixed", "temperature_c": 90.0}]}}
    field = planes.temperature(solve(slab(**east)), "top")
    assert planes.at(field, 40.0, 10.0) == pytest.approx(90.0)
    assert planes.at(field, 40.1, 10.0) != planes.at(field, 40.1, 10.0)  # off the plate there is no temperature


def test_voids_have_no_temperature_and_do_not_darken_their_neighbours():
    slot = {"zones": [{"id": "slot", "layers": "all", "x_mm": 18.0, "y_mm": 5.0, "width_mm": 4.0, "height_mm": 10.0,
                       "material": "void"}],
            "sources": [{"id": "S", "x_mm": 0.0, "y_mm": 0.0, "width_mm": 40.0, "height_mm": 20.0, "power_w": 8.0}]}
    field = planes.temperature(solve(slab(**slot)), "top")
    picture = planes.raster(field, 80, 40)
    x, y = np.meshgrid((np.arange(80) + 0.5) * 0.5, (np.arange(40) + 0.5) * 0.5)
    inside = (x > 18) & (x < 22) & (y > 5) & (y < 15)
    assert np.isnan(picture[inside]).all()
    assert np.isfinite(picture[~inside]).all()
    assert np.nanmin(picture) >= np.nanmin(field.t_c) - 1e-3
    assert picture.dtype == np.float32


def test_the_raster_starts_in_the_south():
    north = {"edges": {"north": [{"kind": "fixed", "temperature_c": 90.0}]}}
    picture = planes.raster(planes.temperature(solve(slab(**north)), "top"), 20, 10)
    assert picture[-1].mean() > picture[0].mean()
