"""Edits: what each does, that none yields a faulty layout silently, and that any sequence can be undone."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from app import edits
from app.history import History
from app.refs import Ref, find, refs_of, selection_after
from solver.document import LayoutError, dump_layout, parse_layout

Q1, Q2, GAP, PAD, STUD = (Ref("source", "Q1"), Ref("source", "Q2"), Ref("zone", "gap"), Ref("zone", "pad"),
                          Ref("contact", "stud"))


def box(layout, ref):
    thing = find(layout, ref)
    return thing.x_mm, thing.y_mm, thing.width_mm, thing.height_mm


# --- rectangles ---

def test_moving_several_things_keeps_them_together(board):
    moved = edits.move([Q1, GAP], 1.5, -2.0).apply(board)
    assert box(moved, Q1) == (13.5, 18.0, 10.0, 9.0)
    assert box(moved, GAP) == (39.5, -2.0, 4.0, 60.0)


def test_a_group_stops_where_its_first_source_meets_the_edge(board):
    moved = edits.move([Q1, Q2], 500.0, 0.0).apply(board)
    assert box(moved, Q2)[0] == 70.0
    assert box(moved, Q1)[0] == 32.0


def test_a_zone_may_be_moved_past_the_plate(board):
    assert box(edits.move([PAD], 15.0, 0.0).apply(board), PAD)[0] == 75.0


def test_numbers_are_canonical_so_that_nothing_changes_by_rounding(board):
    item = {"kind": "source", "id": "Q1", "x_mm": 12 + 1e-9, "y_mm": 20, "width_mm": 10, "height_mm": 9}
    assert edits.place([item]).apply(board) is board
    assert edits.set_field(Q1, "power_w", 12).apply(board) is board
    assert edits.move([Q1], 0.1, 0.2).apply(edits.move([Q1], -0.1, -0.2).apply(board)) == board


def test_a_source_dragged_off_the_plate_is_held_at_its_edge(board):
    item = {"kind": "source", "id": "Q1", "x_mm": -7.0, "y_mm": 58.0, "width_mm": 10.0, "height_mm": 9.0}
    assert box(edits.place([item]).apply(board), Q1) == (0.0, 51.0, 10.0, 9.0)


def test_a_source_resized_past_the_plate_is_cut_at_its_edge(board):
    assert box(edits.resize(Q1, width_mm=100.0).apply(board), Q1) == (12.0, 20.0, 68.0, 9.0)
    assert box(edits.resize(Q1, x_mm=-5.0, width_mm=27.0).apply(board), Q1) == (0.0, 20.0, 22.0, 9.0)


@pytest.mark.parametrize("add, kind", [(edits.add_source, "source"), (edits.add_zone, "zone"),
                                       (edits.add_contact, "contact")])
def test_added_things_have_fresh_ids_and_lie_on_the_plate(board, add, kind):
    layout = board
    for _ in range(3):
        layout = add(layout, 200.0, -50.0, 10.0, 10.0).apply(layout)
    ids = [ref.id for ref in refs_of(layout) if ref.kind == kind]
    assert len(ids) == len(set(ids)) == len([r for r in refs_of(board) if r.kind == kind]) + 3
    if kind != "zone":
        assert box(layout, Ref(kind, ids[-1])) == (70.0, 0.0, 10.0, 10.0)


def test_added_source_takes_the_next_number_and_given_fields(board):
    edit = edits.add_source(board, 1.0, 2.0, 3.0, 4.0, power_w=7, face="bottom")
    source = find(edit.apply(board), Ref("source", "Q3"))
    assert edit.name == "Add source Q3"
    assert (source.power_w, source.face, source.width_mm) == (7.0, "bottom", 3.0)


def test_duplicates_lie_aside_with_fresh_ids(board):
    doubled = edits.duplicate([Q1, GAP]).apply(board)
    assert box(doubled, Ref("source", "Q3")) == (14.0, 18.0, 10.0, 9.0)
    assert box(doubled, Ref("zone", "gap2")) == (40.0, -2.0, 4.0, 60.0)
    assert [source.id for source in doubled.sources] == ["Q1", "Q2", "Q3"]


def test_a_duplicate_in_the_corner_goes_the_other_way(board):
    cornered = edits.move([Q1], 500.0, -500.0).apply(board)
    assert box(edits.duplicate([Q1]).apply(cornered), Ref("source", "Q3"))[:2] == (68.0, 2.0)


def test_deleting_takes_only_what_was_named(board):
    left = edits.delete([Q1, PAD, Ref("face", "top")]).apply(board)
    assert [r.id for r in refs_of(left) if r.kind in ("source", "zone", "contact")] == ["Q2", "gap", "stud"]


def test_zone_order_decides_which_lies_over_which(board):
    assert [zone.id for zone in edits.reorder_zone("gap", 1).apply(board).zones] == ["pad", "gap"]
    assert edits.reorder_zone("gap", -1).apply(board) is board
    assert [zone.id for zone in edits.reorder_zone("pad", -99).apply(board).zones] == ["pad", "gap"]


# --- fields ---

def test_step_names_carry_words_and_units():
    assert edits.set_field(Q1, "power_w", 12).name == "Set power of Q1 to 12 W"
    assert edits.set_field(Q1, "limit_c", None).name == "Clear limit of Q1"
    assert edits.set_field(Ref("layer", "foil"), "material", "tin").name == "Set material of foil to tin"
    assert edits.set_layout_field("ambient_c", 30).name == "Set ambient to 30 °C"
    assert edits.set_plate(width_mm=90.0).name == "Set plate width to 90 mm"
    assert edits.delete([Q1, Q2]).name == "Delete Q1 and Q2"
    assert edits.move([Q1, Q2, GAP, PAD], 1, 1).name == "Move 4 things"


def test_a_field_is_set_and_cleared(board):
    with_limit = edits.set_field(Q1, "limit_c", 100).apply(board)
    assert find(with_limit, Q1).limit_c == 100.0
    assert edits.set_field(Q1, "limit_c", None).apply(with_limit) == board


def test_one_value_for_several_things(board):
    both = edits.set_field_of([Q1, Q2], "power_w", 4).apply(board)
    assert [source.power_w for source in both.sources] == [4.0, 4.0]


@pytest.mark.parametrize("edit, path", [
    (edits.set_field(Q1, "width_mm", -1.0), "sources[0].width_mm"),
    (edits.set_field(Q1, "power_w", float("nan")), "sources[0].power_w"),
    (edits.set_field(Q1, "power_w", "a lot"), "sources[0].power_w"),
    (edits.set_field(Q1, "colour", "red"), "sources[0].colour"),
    (edits.set_field(Ref("layer", "foil"), "material", "unobtainium"), "layers[0].material"),
    (edits.set_plate(width_mm=20.0), "sources[0]"),
    (edits.rename(Q1, "Q2"), "sources[1].id"),
    (edits.remove_layer("nowhere"), "layers"),
    (edits.set_segment("east", 0, "fixed", temperature_c=-400.0), "edges.east[0].temperature_c"),
    (edits.set_face("top", "convective", film_w_m2k=-2.0), "faces.top.film_w_m2k"),
    (edits.split_segment("east", 0, 31.0), "edges.east"),
    (edits.split_segment("east", 7), "edges.east"),
    (edits.move_cut("east", 0, 80.0), "edges.east"),
    (edits.merge_segments("west", 0), "edges.west"),
])
def test_what_cannot_be_is_refused_with_the_place(board, edit, path):
    with pytest.raises(LayoutError) as refused:
        edit.apply(board)
    assert any(fault.path.startswith(path) for fault in refused.value.faults), str(refused.value.faults)


def test_renaming_a_layer_takes_the_zones_along(board):
    renamed = edits.rename(Ref("layer", "foil"), "top copper").apply(board)
    assert renamed.layers[0].id == "top copper"
    assert renamed.zones[0].layers == ("top copper",)
    assert renamed.zones[1].layers == "all"


def test_a_larger_plate_takes_the_last_segments_along(board):
    larger = edits.set_plate(height_mm=70.0).apply(board)
    assert [(s.from_mm, s.to_mm) for s in larger.edges.east] == [(0.0, 30.0), (30.0, 70.0)]


def test_a_smaller_plate_drops_segments_beyond_it(board):
    smaller = edits.set_plate(height_mm=30.0).apply(edits.delete([GAP]).apply(board))
    assert [(s.kind, s.from_mm, s.to_mm) for s in smaller.edges.east] == [("fixed", 0.0, 30.0)]


def test_limits_title_and_materials_of_the_layout(board):
    layout = edits.set_limits("plate_c", 95).apply(board)
    layout = edits.set_layout_field("title", "Second try").apply(layout)
    layout = edits.set_material("mix", k_w_mk=12).apply(layout)
    layout = edits.set_field(PAD, "material", "mix").apply(layout)
    assert (layout.limits.plate_c, layout.title, layout.material("mix").kx) == (95.0, "Second try", 12.0)
    with pytest.raises(LayoutError):
        edits.remove_material("mix").apply(layout)


# --- layers ---

def test_layers_are_added_moved_and_removed(board):
    layout = edits.add_layer(1, "copper", 0.1).apply(board)
    assert [layer.id for layer in layout.layers] == ["foil", "layer1", "base"]
    layout = edits.reorder_layer("layer1", 1).apply(layout)
    assert [layer.id for layer in layout.layers] == ["foil", "base", "layer1"]
    layout = edits.remove_layer("foil").apply(layout)
    assert [layer.id for layer in layout.layers] == ["base", "layer1"]
    assert [zone.id for zone in layout.zones] == ["pad"], "a zone of the removed layer alone goes with it"


def test_the_last_layer_cannot_be_removed(board):
    one = edits.remove_layer("foil").apply(board)
    with pytest.raises(LayoutError):
        edits.remove_layer("base").apply(one)


# --- edges and faces ---

def test_splitting_and_merging_an_edge_are_inverse(board):
    split = edits.split_segment("west", 0).apply(board)
    assert [(s.from_mm, s.to_mm) for s in split.edges.west] == [(0.0, 30.0), (30.0, 60.0)]
    assert edits.merge_segments("west", 0).apply(split).edges.west == board.edges.west


def test_moving_a_cut_moves_both_segments(board):
    moved = edits.move_cut("east", 0, 25.0).apply(board)
    assert [(s.from_mm, s.to_mm) for s in moved.edges.east] == [(0.0, 25.0), (25.0, 60.0)]


def test_a_segment_keeps_its_place_and_shared_figures_when_its_kind_changes(board):
    layout = edits.set_segment("east", 0, "convective").apply(board)
    first = layout.edges.east[0]
    assert (first.kind, first.from_mm, first.to_mm, first.film_w_m2k) == ("convective", 0.0, 30.0, 10.0)
    layout = edits.set_segment("east", 1, "convective", fluid_c=20).apply(layout)
    assert (layout.edges.east[1].film_w_m2k, layout.edges.east[1].fluid_c) == (500.0, 20.0)
    layout = edits.set_segment("east", 1, "convective", fluid_c=None).apply(layout)
    assert layout.edges.east[1].fluid_c is None


def test_a_face_is_replaced(board):
    layout = edits.set_face("top", "fixed", temperature_c=30).apply(board)
    assert (layout.faces.top.kind, layout.faces.top.temperature_c) == ("fixed", 30.0)
    assert edits.set_face("top", "insulated").apply(layout) == board


# --- what always holds ---

COORDINATE = st.one_of(st.floats(-50, 150), st.integers(-20, 100), st.just(float("nan")))
REFS = st.sampled_from([Q1, Q2, GAP, PAD, STUD, Ref("source", "gone")])
SIDE = st.sampled_from(["west", "east", "south", "north"])
KIND = st.sampled_from(["insulated", "fixed", "convective", "natural", "sticky"])


@st.composite
def makers(draw):
    """A function from a layout to an edit of it, sound or not."""
    x, y, w, h = (draw(COORDINATE) for _ in range(4))
    ref, refs, side, kind, n = (draw(REFS), draw(st.lists(REFS, max_size=3)), draw(SIDE), draw(KIND),
                                draw(st.integers(-3, 3)))
    value = draw(st.one_of(st.none(), COORDINATE, st.text(max_size=3)))
    field = draw(st.sampled_from(["x_mm", "width_mm", "power_w", "limit_c", "material", "layers", "id"]))
    layer = draw(st.sampled_from(["foil", "base", "layer1"]))
    item = {"kind": ref.kind, "id": ref.id, "x_mm": x, "y_mm": y, "width_mm": w, "height_mm": h}
    return draw(st.sampled_from([
        lambda layout: edits.move(refs, x, y), lambda layout: edits.place([item]),
        lambda layout: edits.resize(ref, width_mm=w, height_mm=h),
        lambda layout: edits.add_source(layout, x, y, w, h),
        lambda layout: edits.add_zone(layout, x, y, w, h),
        lambda layout: edits.add_contact(layout, x, y, w, h), lambda layout: edits.delete(refs),
        lambda layout: edits.duplicate(refs, x, y), lambda layout: edits.reorder_zone("gap", n),
        lambda layout: edits.set_field(ref, field, value), lambda layout: edits.rename(ref, str(value)),
        lambda layout: edits.set_plate(w, h), lambda layout: edits.set_layout_field("ambient_c", value),
        lambda layout: edits.set_limits("plate_c", value), lambda layout: edits.add_layer(n),
        lambda layout: edits.remove_layer(layer), lambda layout: edits.reorder_layer(layer, n),
        lambda layout: edits.set_segment(side, n, kind, film_w_m2k=x),
        lambda layout: edits.split_segment(side, n, y), lambda layout: edits.merge_segments(side, n),
        lambda layout: edits.move_cut(side, n, y), lambda layout: edits.set_face("top", kind, film_w_m2k=x),
    ]))


@settings(max_examples=300, deadline=None)
@given(making=st.lists(makers(), max_size=8))
def test_edits_are_refused_or_sound_and_any_sequence_can_be_undone(making, board):
    history = History.start("Open", board)
    for make in making:
        before = dump_layout(history.present)
        try:
            edit = make(history.present)
            layout = edit.apply(history.present)
        except LayoutError as error:
            assert error.faults
        else:
            assert edit.name
            assert parse_layout(dump_layout(layout)) == layout
            history = history.push(edit.name, layout)
        assert history.can_undo or dump_layout(history.present) == before
    end = history.present
    for _ in range(history.at):
        history = history.undo()
    assert history.present == board
    for _ in range(len(history.steps)):
        history = history.redo()
    assert history.present == end


def test_selection_follows_what_an_edit_did(board):
    doubled = edits.duplicate([Q1]).apply(board)
    assert selection_after(board, doubled, (Q1,)) == (Ref("source", "Q3"),)
    assert selection_after(doubled, board, (Ref("source", "Q3"), Q2)) == (Q2,)
    renamed = edits.rename(Q1, "amplifier").apply(board)
    assert selection_after(board, renamed, (Q1, Q2)) == (Ref("source", "amplifier"),)
    assert selection_after(board, edits.move([Q1], 1, 1).apply(board), (Q1, STUD)) == (Q1, STUD)


def test_what_an_edit_leaves_alone_is_the_same_object(board):
    moved = edits.move([Q1], 1.0, 0.0).apply(board)
    assert moved.sources[1] is board.sources[1] and moved.sources[0] is not board.sources[0]
    assert moved.zones is board.zones and moved.layers is board.layers
