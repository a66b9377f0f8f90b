"""What holds for every layout, whatever the numbers: laws of steady conduction on random layouts.

Each law follows from the heat equation (Carslaw & Jaeger, Conduction of Heat in Solids, 1959):
conservation, the maximum principle, reciprocity, superposition, similarity. Solves are on small grids;
the laws hold on every grid, except where a tolerance says "grid".
"""

from __future__ import annotations

from copy import deepcopy

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from solver import Solution, parse_layout, solve
from tests.published.plates import document, source

AMBIENT_C = 20.0
STACKS = (
    [(2.0, 180.0)],
    [(0.1, 390.0), (0.1, 1.5), (1.5, 140.0)],
    [(0.3, 390.0), (0.4, 25.0), (0.3, 390.0)],
    [(1.0, 390.0), (3.0, 160.0)],
)


@st.composite
def rectangles(draw, width: int, height: int) -> tuple[float, float, float, float]:
    """A rectangle of whole millimetres on a plate: x, y, width, height."""
    w, h = draw(st.integers(3, width // 2)), draw(st.integers(3, height // 2))
    x, y = draw(st.integers(0, width - w)), draw(st.integers(0, height - h))
    return float(x), float(y), float(w), float(h)


def placed(rectangle: tuple[float, float, float, float]) -> dict:
    return dict(zip(("x_mm", "y_mm", "width_mm", "height_mm"), rectangle, strict=True))


@st.composite
def layouts(draw, most_sources: int = 3, least_sources: int = 1) -> dict:
    """A document with sources, a zone, films, an edge and perhaps joints and a contact; sinks at ambient."""
    width, height = draw(st.integers(20, 50)), draw(st.integers(20, 50))
    places = draw(st.lists(rectangles(width, height), min_size=least_sources, max_size=most_sources))
    sources = [source(*place, power_w=float(draw(st.integers(1, 10))), id=f"Q{n}")
               for n, place in enumerate(places)]
    for part in sources:
        if draw(st.booleans()):
            part["interface_k_mm2_w"] = float(draw(st.sampled_from([5, 50])))
        if draw(st.integers(0, 4)) == 0:
            part["face"] = "bottom"
    zone = {"id": "patch", "layers": ["layer-1"], "material": "patch",
            **placed(draw(rectangles(width, height)))}
    stud = {"id": "stud", "face": "bottom", "conductance_w_m2k": 2000.0,
            **placed(draw(rectangles(width, height)))}
    patch = {"k_in_plane_w_mk": float(draw(st.sampled_from([1, 20, 400]))), "k_through_w_mk": 3.0}
    edge = draw(st.sampled_from([[], [{"kind": "fixed"}], [{"kind": "convective", "film_w_m2k": 800.0}]]))
    return document(
        float(width), float(height), draw(st.sampled_from(STACKS)), ambient_c=AMBIENT_C, sources=sources,
        zones=[zone], materials={"patch": patch},
        edges={"east": edge} if edge else {}, contacts=[stud] if draw(st.booleans()) else [],
        faces={"top": {"kind": "convective", "film_w_m2k": 10.0},
               "bottom": {"kind": "convective", "film_w_m2k": float(draw(st.integers(20, 500)))}})


def solution(layout: dict) -> Solution:
    return solve(parse_layout(layout), most_cells=60_000)


def results(layout: dict):
    return solution(layout).results


def rises(layout: dict) -> np.ndarray:
    """Mean footprint rises of the sources, then the peak's rise, K."""
    found = results(layout)
    temperatures = [*(part.mean_c for part in found.sources), found.peak.temperature_c]
    return np.array(temperatures) - layout["ambient_c"]


def changed(layout: dict, **fields) -> dict:
    return {**deepcopy(layout), **fields}


def powered(layout: dict, watts: list[float]) -> dict:
    parts = zip(layout["sources"], watts, strict=True)
    return changed(layout, sources=[{**part, "power_w": power} for part, power in parts])


@given(layouts())
def test_heat_in_is_heat_out(layout: dict):
    balance = results(layout).heat_balance
    power = sum(part["power_w"] for part in layout["sources"])
    assert balance.sources_w == pytest.approx(power)
    assert sum(balance.out_w.values()) == pytest.approx(power, rel=1e-6)
    assert abs(balance.residual_w) <= 1e-6 * power


@given(layouts())
def test_nothing_is_colder_than_the_sinks_or_hotter_than_the_peak(layout: dict):
    found = solution(layout)
    peak = found.results.peak.temperature_c
    assert np.nanmin(found.cells) >= AMBIENT_C - 1e-6
    assert np.nanmax(found.cells) <= peak + 1e-6
    assert all(part.max_c <= peak + 1e-6 for part in found.results.sources)
    assert all(part.mean_c <= part.max_c + 1e-9 for part in found.results.sources)


@given(layouts(), st.integers(-40, 60))
def test_without_power_everything_is_between_the_sinks(layout: dict, warm_c: int):
    cold = powered(layout, [0.0] * len(layout["sources"]))
    faces = {**cold["faces"], "bottom": {**cold["faces"]["bottom"], "fluid_c": float(warm_c)}}
    cells = solution(changed(cold, faces=faces)).cells
    low, high = sorted((AMBIENT_C, float(warm_c)))
    assert low - 1e-6 <= cells.min() and cells.max() <= high + 1e-6


@given(layouts(least_sources=2, most_sources=2))
def test_influence_is_symmetric(layout: dict):
    """A watt in one part warms the other as a watt in the other warms the one (its case, if it has one)."""
    def warmed(watts: list[float], part: int) -> float:
        found = results(powered(layout, watts)).sources[part]
        return (found.mean_c if found.case_c is None else found.case_c) - AMBIENT_C

    assert warmed([1.0, 0.0], 1) == pytest.approx(warmed([0.0, 1.0], 0), rel=1e-5, abs=1e-7)


@given(layouts(least_sources=2))
def test_rises_add(layout: dict):
    watts = [part["power_w"] for part in layout["sources"]]
    alone = [rises(powered(layout, [w if n == only else 0.0 for n, w in enumerate(watts)]))[:-1]
             for only in range(len(watts))]
    assert rises(layout)[:-1] == pytest.approx(np.sum(alone, axis=0), rel=1e-5)


@given(layouts(), st.sampled_from([-1.0, 0.1, 3.0]))
def test_rises_scale_with_power(layout: dict, factor: float):
    watts = [factor * part["power_w"] for part in layout["sources"]]
    assert rises(powered(layout, watts))[:-1] == pytest.approx(factor * rises(layout)[:-1], rel=1e-5)


@given(layouts(), st.sampled_from([-30.0, 55.0]))
def test_rises_do_not_depend_on_the_ambient(layout: dict, shift: float):
    assert rises(changed(layout, ambient_c=AMBIENT_C + shift)) == pytest.approx(rises(layout), rel=1e-6)


@given(layouts())
def test_twice_the_size_is_the_same_field(layout: dict):
    """Lengths and powers doubled, films halved, joints doubled: similar plates have equal temperatures."""
    def scaled(value, name: str = ""):
        if isinstance(value, dict):
            return {key: scaled(inner, key) for key, inner in value.items()}
        if isinstance(value, list):
            return [scaled(inner, name) for inner in value]
        if name.endswith("_mm") or name in ("power_w", "interface_k_mm2_w"):
            return 2.0 * value
        return value / 2.0 if name in ("film_w_m2k", "conductance_w_m2k") else value

    assert rises(scaled(layout)) == pytest.approx(rises(layout), rel=1e-6)


@given(layouts())
def test_mirrored_layout_has_the_mirrored_field(layout: dict):
    width = layout["plate"]["width_mm"]

    def mirrored(boxes: list[dict]) -> list[dict]:
        return [{**box, "x_mm": width - box["x_mm"] - box["width_mm"]} for box in boxes]

    edges = {**layout["edges"], "east": layout["edges"]["west"], "west": layout["edges"]["east"]}
    other = changed(layout, edges=edges,
                    **{name: mirrored(layout[name]) for name in ("sources", "zones", "contacts")})
    assert rises(other) == pytest.approx(rises(layout), rel=1e-6)


@given(layouts())
def test_turned_layout_has_the_turned_field(layout: dict):
    """x and y exchanged."""
    def turned(boxes: list[dict]) -> list[dict]:
        return [{**box, "x_mm": box["y_mm"], "y_mm": box["x_mm"], "width_mm": box["height_mm"],
                 "height_mm": box["width_mm"]} for box in boxes]

    edges = {"south": layout["edges"]["west"], "north": layout["edges"]["east"]}
    plate = {"width_mm": layout["plate"]["height_mm"], "height_mm": layout["plate"]["width_mm"]}
    other = changed(layout, plate=plate, edges=edges,
                    **{name: turned(layout[name]) for name in ("sources", "zones", "contacts")})
    assert rises(other) == pytest.approx(rises(layout), rel=1e-6)


@given(layouts(), st.floats(1.05, 5.0))
def test_more_film_is_never_hotter(layout: dict, factor: float):
    more = deepcopy(layout)
    more["faces"]["bottom"]["film_w_m2k"] *= factor
    assert np.all(rises(more) <= rises(layout) * (1 + 1e-9))


@given(layouts())
def test_order_of_sources_does_not_matter(layout: dict):
    other = rises(changed(layout, sources=layout["sources"][::-1]))
    assert other[:-1][::-1] == pytest.approx(rises(layout)[:-1], rel=1e-6)


@given(layouts())
def test_equal_conductivities_are_isotropic(layout: dict):
    axes = ("k_x_w_mk", "k_y_w_mk", "k_z_w_mk")
    materials = {name: dict.fromkeys(axes, m["k_w_mk"]) if "k_w_mk" in m else m
                 for name, m in layout["materials"].items()}
    assert rises(changed(layout, materials=materials)) == pytest.approx(rises(layout), rel=1e-9)


@given(layouts())
def test_splitting_a_layer_changes_nothing(layout: dict):
    """To within the small grid: 2 % of the rise."""
    *upper, last = layout["layers"]
    halves = [{**last, "id": f"{last['id']}-{n}", "thickness_mm": last["thickness_mm"] / 2} for n in range(2)]
    zones = [{**zone, "layers": [half["id"] for half in halves]} if last["id"] in zone["layers"] else zone
             for zone in layout["zones"]]
    whole, split = rises(layout), rises(changed(layout, layers=upper + halves, zones=zones))
    assert split == pytest.approx(whole, abs=0.02 * whole[-1])


@given(layouts())
def test_a_zone_of_the_same_material_changes_nothing(layout: dict):
    """To within the small grid: 2 % of the rise."""
    none = rises(changed(layout, zones=[]))
    same = rises(changed(layout, zones=[{**layout["zones"][0], "material": "layer-1"}]))
    assert same == pytest.approx(none, abs=0.02 * none[-1])
