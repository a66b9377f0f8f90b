"""A layout is read whole, or every one of its faults is told with its path, what was given and what is allowed."""

import json

import pytest

from solver.document import MAX_BYTES, Layout, LayoutError, parse_layout


def document(**changes):
    base = {
        "format": "heat-spreader-layout", "version": 1,
        "plate": {"width_mm": 80.0, "height_mm": 60.0},
        "materials": {"sheet-A": {"k_w_mk": 120.0}},
        "layers": [{"id": "foil", "thickness_mm": 0.07, "material": "copper"},
                   {"id": "base", "thickness_mm": 1.5, "material": "sheet-A"}],
        "sources": [source()],
    }
    return base | changes


def source(**changes):
    return {"id": "Q1", "x_mm": 12.0, "y_mm": 20.0, "width_mm": 10.0, "height_mm": 9.0, "power_w": 12.0} | changes


def zone(**changes):
    return {"id": "gap", "layers": ["foil"], "x_mm": 38.0, "y_mm": 0.0, "width_mm": 4.0, "height_mm": 60.0,
            "material": "fr4"} | changes


def faults(data):
    with pytest.raises(LayoutError) as caught:
        parse_layout(data)
    return {fault.path: fault.message for fault in caught.value.faults}


def without(name):
    return {key: value for key, value in document().items() if key != name}


def test_the_defaults_are_those_of_the_format():
    layout = parse_layout({"format": "heat-spreader-layout", "version": 1, "plate": {"width_mm": 1, "height_mm": 2},
                           "layers": [{"id": "a", "thickness_mm": 1, "material": "copper"}]})
    assert layout.ambient_c == 25.0
    assert layout.zones == layout.sources == layout.contacts == ()
    assert [segment.kind for segment in layout.edges.west] == ["insulated"]
    assert layout.faces.top.kind == layout.faces.bottom.kind == "insulated"
    assert layout.limits.plate_c is None and layout.limits.warn_margin_k == 10.0
    assert parse_layout(document()).sources[0].face == "top"
    assert parse_layout(document()).sources[0].limit_at == "plate"


@pytest.mark.parametrize("name", ["format", "version", "plate", "layers"])
def test_a_required_field_that_is_missing_is_named(name):
    assert "missing" in faults(without(name))[name]


@pytest.mark.parametrize(
    ("change", "path", "words"),
    [
        ({"format": "another"}, "format", "heat-spreader-layout"),
        ({"version": 2}, "version", "allowed: 1"),
        ({"version": True}, "version", "allowed: 1"),
        ({"colour": "red"}, "colour", "unknown field"),
        ({"ambient_c": -300.0}, "ambient_c", "above -273.15"),
        ({"ambient_c": "warm"}, "ambient_c", "'warm' was given; allowed: a number"),
        ({"ambient_c": True}, "ambient_c", "number"),
        ({"plate": {"width_mm": 0.0, "height_mm": 60.0}}, "plate.width_mm", "0.0 was given; allowed: a number above 0"),
        ({"layers": []}, "layers", "at least 1"),
        ({"layers": "copper"}, "layers", "a list"),
        ({"layers": [{"id": "a", "thickness_mm": -1.0, "material": "copper"}]}, "layers[0].thickness_mm", "-1.0 was given"),
        ({"layers": [{"id": "a", "thickness_mm": 1.0, "material": "void"}]}, "layers[0].material", "zone"),
        ({"layers": [{"id": "a", "thickness_mm": 1.0, "material": "coper"}]}, "layers[0].material", "copper"),
        ({"materials": {"void": {"k_w_mk": 1.0}, "sheet-A": {"k_w_mk": 1.0}}}, "materials.void", "reserved"),
        ({"materials": {"x": {}}}, "materials.x", "given: none"),
        ({"materials": {"x": {"k_w_mk": 1.0, "k_x_w_mk": 2.0}}}, "materials.x", "k_w_mk alone"),
        ({"materials": {"x": {"k_in_plane_w_mk": 1.0}}}, "materials.x", "k_through_w_mk"),
        ({"materials": {"x": {"k_w_mk": 0.0}}}, "materials.x.k_w_mk", "above 0"),
        ({"sources": [source(width_mm=-3.0)]}, "sources[0].width_mm", "-3.0 was given"),
        ({"sources": [source(face="side")]}, "sources[0].face", "'top' or 'bottom'"),
        ({"sources": [source(limit_at="lid")]}, "sources[0].limit_at", "'junction', 'case' or 'plate'"),
        ({"sources": [source(interface_k_mm2_w=0.0)]}, "sources[0].interface_k_mm2_w", "above 0"),
        ({"sources": [source(x_mm=75.0)]}, "sources[0]", "wholly on the plate"),
        ({"sources": [source(), source()]}, "sources[1].id", "already used by sources[0]"),
        ({"zones": [zone(layers=["lid"])]}, "zones[0].layers[0]", "allowed: foil, base"),
        ({"zones": [zone(layers=[])]}, "zones[0].layers", "at least one"),
        ({"zones": [zone(layers=["foil", 3])]}, "zones[0].layers[1]", "3 was given; allowed: text"),
        ({"zones": [zone(material="wood")]}, "zones[0].material", "unknown material"),
        ({"edges": {"west": [{"kind": "hot"}]}}, "edges.west[0]", "'insulated', 'fixed', 'convective'"),
        ({"edges": {"up": []}}, "edges.up", "unknown field"),
        ({"edges": {"east": [{"kind": "convective"}]}}, "edges.east[0].film_w_m2k", "missing"),
        ({"edges": {"east": [{"kind": "fixed", "from_mm": 3.0}]}}, "edges.east[0]", "both or neither"),
        ({"edges": {"east": [{"kind": "fixed", "from_mm": 30.0, "to_mm": 20.0}]}}, "edges.east[0]", "less than to_mm"),
        ({"edges": {"east": [{"kind": "fixed", "from_mm": 0.0, "to_mm": 61.0}]}}, "edges.east[0]", "0 to 60 mm"),
        ({"edges": {"east": [{"kind": "fixed", "from_mm": 0.0, "to_mm": 30.0},
                             {"kind": "fixed", "from_mm": 29.0, "to_mm": 40.0}]}}, "edges.east[1]", "overlaps edges.east[0]"),
        ({"faces": {"top": {"kind": "fan"}}}, "faces.top", "'insulated', 'fixed', 'convective'"),
        ({"faces": {"top": {"kind": "natural", "orientation": "vertical"}}}, "faces.top.kind", "not supported by this version"),
        ({"faces": {"top": {"kind": "forced", "velocity_m_s": 1.0, "along": "x"}}}, "faces.top.kind", "not supported"),
        ({"faces": {"top": {"kind": "convective", "film_w_m2k": 5.0, "emissivity": 0.9}}}, "faces.top.emissivity", "radiation"),
        ({"transient": {"initial_c": 40.0}}, "transient", "not supported by this version"),
        ({"contacts": [{"id": "c", "face": "bottom", "x_mm": 79.0, "y_mm": 0.0, "width_mm": 5.0, "height_mm": 5.0,
                        "conductance_w_m2k": 100.0}]}, "contacts[0]", "wholly on the plate"),
        ({"limits": {"warn_margin_k": -1.0}}, "limits.warn_margin_k", "at least 0"),
        ({"zones": [zone(material="void", x_mm=10.0, width_mm=20.0, layers=["foil"])]}, "sources[0]", "wholly over a void"),
    ],
)
def test_a_fault_names_its_path_and_what_is_allowed(change, path, words):
    found = faults(document(**change))
    assert list(found) == [path]
    assert words in found[path]


def test_all_faults_are_told_at_once_those_of_fields_and_those_between_them():
    found = faults(document(
        plate={"width_mm": 80.0, "height_mm": 60.0}, colour="red", ambient_c=-999.0,
        sources=[source(power_w="much"), source(id="Q2", x_mm=200.0)],
        zones=[zone(), zone()], edges={"west": [{"kind": "fixed", "from_mm": 1.0}]}))
    assert set(found) == {"colour", "ambient_c", "sources[0].power_w", "sources[1]", "zones[1].id", "edges.west[0]"}


def test_what_a_later_zone_lays_over_a_void_carries_a_part():
    over = zone(id="bridge", x_mm=12.0, y_mm=20.0, width_mm=5.0, height_mm=5.0, material="copper")
    hole = zone(id="hole", material="void", x_mm=10.0, width_mm=20.0)
    parse_layout(document(zones=[hole, over]))
    assert "sources[0]" in faults(document(zones=[over, hole]))


def test_a_part_partly_over_a_void_and_a_zone_past_the_plate_are_allowed():
    parse_layout(document(zones=[zone(material="void", x_mm=5.0, width_mm=10.0), zone(id="far", x_mm=200.0)]))


def test_a_power_may_be_negative_and_numbers_may_be_whole():
    layout = parse_layout(document(sources=[source(power_w=-3)], plate={"width_mm": 80, "height_mm": 60}))
    assert layout.sources[0].power_w == -3.0


@pytest.mark.parametrize("figure", ["NaN", "Infinity", "-Infinity", "1e400"])
def test_numbers_that_are_not_finite_are_refused_where_they_stand(figure):
    text = json.dumps(document()).replace("12.0, \"y_mm\"", f"{figure}, \"y_mm\"")
    assert "finite" in faults(text)["sources[0].x_mm"]


@pytest.mark.parametrize(
    ("text", "words"),
    [("", "not JSON at line 1"), ('{"a": 1,}', "line 1"), ("[1, 2]", "one JSON object"), ("3", "one JSON object"),
     (b'{"title": "\xff"}', "UTF-8"), ("[" * 100_000, "nested too deeply"), ("{" + " " * MAX_BYTES + "}", "at most 5,000,000")],
)
def test_what_is_no_layout_at_all_is_refused_in_a_sentence(text, words):
    assert words in faults(text)[""]


def test_a_field_given_twice_is_refused():
    text = json.dumps(document()).replace('"version": 1', '"version": 1, "version": 1')
    assert "twice" in faults(text)["version"]


def test_too_many_rectangles_are_refused_in_a_sentence():
    many = [source(id=f"Q{n}", x_mm=1.0, y_mm=1.0) for n in range(2001)]
    assert "at most 2,000" in faults(document(sources=many))[""]


def test_a_byte_order_mark_does_no_harm():
    assert parse_layout("\ufeff" + json.dumps(document())) == parse_layout(document())


def test_a_layout_is_frozen():
    layout = parse_layout(document())
    with pytest.raises(ValueError):
        layout.ambient_c = 30.0
    assert isinstance(layout, Layout)
