"""What the results say: verdicts, margins, junctions, heat balance, cautions, and undetermined temperatures."""

import pytest

from solver import UndeterminedError, parse_layout, solve


def document(**changes):
    base = {
        "format": "heat-spreader-layout", "version": 1, "ambient_c": 20.0,
        "plate": {"width_mm": 40.0, "height_mm": 20.0},
        "materials": {"metal": {"k_w_mk": 100.0}},
        "layers": [{"id": "base", "thickness_mm": 2.0, "material": "metal"}],
        "sources": [{"id": "S", "x_mm": 0.0, "y_mm": 0.0, "width_mm": 40.0, "height_mm": 20.0, "power_w": 8.0}],
        "faces": {"bottom": {"kind": "convective", "film_w_m2k": 500.0}},
    }
    return base | changes


def with_source(**fields):
    source = {"id": "S", "x_mm": 0.0, "y_mm": 0.0, "width_mm": 40.0, "height_mm": 20.0, "power_w": 8.0}
    return document(sources=[source | fields])


def results(doc, **how):
    return solve(parse_layout(doc), **how).results


def test_a_joint_and_a_junction_stand_above_the_plate_as_series_resistances():
    """8 W over 800 mm²: joint 30 K·mm²/W -> 0.3 K; junction 0.8 K/W -> 6.4 K; plate face at 40.2 °C. By hand."""
    part = results(with_source(interface_k_mm2_w=30.0, r_junction_case_k_w=0.8)).sources[0]
    assert part.mean_c == pytest.approx(40.2, abs=1e-6)
    assert part.case_c == pytest.approx(40.5, abs=1e-6)
    assert part.junction_c == pytest.approx(46.9, abs=1e-6)


def test_a_junction_without_a_joint_stands_on_the_mean_of_the_footprint():
    part = results(with_source(r_junction_case_k_w=0.8)).sources[0]
    assert part.case_c is None
    assert part.junction_c == pytest.approx(46.6, abs=1e-6)


@pytest.mark.parametrize(("limit", "verdict"), [(40.0, "fail"), (45.0, "warn"), (60.0, "pass"), (None, "no-limits")])
def test_a_limit_is_judged_with_its_margin(limit, verdict):
    found = results(with_source(limit_c=limit) if limit else document())
    assert found.verdict == verdict
    assert found.sources[0].verdict == verdict
    if limit:
        assert found.sources[0].margin_k == pytest.approx(limit - 40.2, abs=1e-6)


def test_the_plate_has_its_own_limit():
    assert results(document(limits={"plate_c": 40.0})).verdict == "fail"
    assert results(document(limits={"plate_c": 41.0, "warn_margin_k": 0.5})).verdict == "pass"


def test_the_heat_balance_closes_and_names_every_way_out():
    doc = document(
        edges={"east": [{"from_mm": 0.0, "to_mm": 10.0, "kind": "fixed", "temperature_c": 25.0}]},
        contacts=[{"id": "stud", "face": "bottom", "x_mm": 2.0, "y_mm": 2.0, "width_mm": 6.0, "height_mm": 6.0,
                   "conductance_w_m2k": 3000.0, "sink_c": 15.0}])
    balance = results(doc).heat_balance
    assert set(balance.out_w) == {"west", "east", "south", "north", "top", "bottom", "contact:stud"}
    assert balance.out_w["contact:stud"] > 0.5
    assert balance.out_w["east"] > 0.5
    assert balance.out_w["west"] == 0.0
    assert abs(balance.residual_w) < 1e-6 * balance.sources_w


def test_a_plate_with_no_way_out_is_an_error_that_names_the_part():
    with pytest.raises(UndeterminedError) as caught:
        solve(parse_layout(document(faces={})))
    assert caught.value.faults[0].path == "sources[0]"
    assert "'S'" in str(caught.value.faults[0])


SLOT = {"id": "moat", "layers": "all", "y_mm": 0.0, "width_mm": 2.0, "height_mm": 20.0, "x_mm": 19.0, "material": "void"}


def test_a_part_on_an_island_without_a_sink_is_named():
    doc = document(zones=[SLOT], faces={}, edges={"west": [{"kind": "fixed"}]},
                   sources=[{"id": "near", "x_mm": 2.0, "y_mm": 2.0, "width_mm": 5.0, "height_mm": 5.0, "power_w": 1.0},
                            {"id": "far", "x_mm": 30.0, "y_mm": 2.0, "width_mm": 5.0, "height_mm": 5.0, "power_w": 1.0}])
    with pytest.raises(UndeterminedError) as caught:
        solve(parse_layout(doc))
    assert [fault.path for fault in caught.value.faults] == ["sources[1]"]


def test_an_empty_island_is_a_warning_and_shows_no_temperature():
    doc = document(zones=[SLOT], faces={}, edges={"west": [{"kind": "fixed"}]},
                   sources=[{"id": "near", "x_mm": 2.0, "y_mm": 2.0, "width_mm": 5.0, "height_mm": 5.0, "power_w": 1.0}])
    solution = solve(parse_layout(doc))
    assert "island" in [w.code for w in solution.results.warnings]
    assert solution.cells[0, 0, -1] != solution.cells[0, 0, -1]


def test_two_islands_bridged_by_one_jointed_part_are_one():
    doc = document(zones=[SLOT], faces={}, edges={"west": [{"kind": "fixed"}]},
                   sources=[{"id": "bridge", "x_mm": 10.0, "y_mm": 2.0, "width_mm": 20.0, "height_mm": 5.0, "power_w": 1.0,
                             "interface_k_mm2_w": 20.0}])
    found = results(doc)
    assert found.heat_balance.out_w["west"] == pytest.approx(1.0, abs=1e-6)
    assert found.warnings == ()


def test_a_zone_past_the_plate_is_clipped_with_a_warning():
    zone = {"id": "pour", "layers": "all", "x_mm": 30.0, "y_mm": 0.0, "width_mm": 30.0, "height_mm": 5.0, "material": "copper"}
    found = results(document(zones=[zone]))
    assert [(w.code, w.where) for w in found.warnings] == [("zone-clipped", "zones[0]")]


def test_a_layout_with_no_sources_sits_at_ambient():
    found = results(document(sources=[]))
    assert found.peak.temperature_c == pytest.approx(20.0, abs=1e-9)
    assert found.verdict == "no-limits"


def test_a_draft_has_no_uncertainty_and_says_so():
    found = results(document(), effort="draft")
    assert found.peak.grid_uncertainty_k is None
    assert "draft" in [w.code for w in found.warnings]


def test_a_limit_on_cells_is_said_and_the_heat_balance_still_closes():
    doc = document(sources=[{"id": f"S{n}", "x_mm": 1.0 + 1.901 * n, "y_mm": 1.0 + 0.917 * n, "width_mm": 1.3,
                             "height_mm": 1.1, "power_w": 0.5} for n in range(18)])
    found = results(doc, most_cells=20_000)
    assert "grid-limited" in [w.code for w in found.warnings]
    assert abs(found.heat_balance.residual_w) < 1e-6 * 9.0
    assert found.grid.cells <= 40_000


def test_the_peak_is_where_the_heat_is():
    doc = document(sources=[{"id": "S", "x_mm": 28.0, "y_mm": 4.0, "width_mm": 4.0, "height_mm": 4.0, "power_w": 8.0}])
    peak = results(doc).peak
    assert 28.0 <= peak.x_mm <= 32.0 and 4.0 <= peak.y_mm <= 8.0
    assert peak.layer == "base"
    assert peak.grid_uncertainty_k > 0.0


def test_a_hot_edge_is_the_peak_of_a_plate_without_parts():
    doc = document(sources=[], edges={"east": [{"kind": "fixed", "temperature_c": 80.0}]})
    peak = results(doc).peak
    assert peak.temperature_c == pytest.approx(80.0)
    assert peak.x_mm == pytest.approx(40.0)
