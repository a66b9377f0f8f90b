"""Files are read and written whole; the schema says what the models say."""

import json
import os
import stat

import pytest
from hypothesis import given
from hypothesis import strategies as st
from jsonschema import Draft202012Validator

from solver import solve
from solver.document import (
    LayoutError,
    dump_layout,
    dump_results,
    layout_schema,
    parse_layout,
    parse_results,
    read_layout,
    results_schema,
    write_atomic,
    write_layout,
)

from .test_reading import document, source, zone

sizes = st.floats(0.01, 20.0)
names = st.text(min_size=1, max_size=12)
temperatures = st.none() | st.floats(-200.0, 300.0)


def some(value):
    return {name: item for name, item in value.items() if item is not None}


@st.composite
def layouts(draw):
    sources = [some(source(id=id_, x_mm=draw(st.floats(0.0, 60.0)), y_mm=draw(st.floats(0.0, 40.0)), width_mm=draw(sizes),
                           height_mm=draw(sizes), power_w=draw(st.floats(-100.0, 100.0)), limit_c=draw(temperatures),
                           interface_k_mm2_w=draw(st.none() | st.floats(0.1, 1e3))))
               for id_ in draw(st.lists(names, max_size=4, unique=True))]
    zones = [zone(id=id_, x_mm=draw(st.floats(-10.0, 70.0)), width_mm=draw(sizes), layers=draw(st.sampled_from(["all", ["base"]])))
             for id_ in draw(st.lists(names, max_size=3, unique=True))]
    edges = {"east": [some({"kind": "fixed", "from_mm": 0.0, "to_mm": 10.0, "temperature_c": draw(temperatures)}),
                      {"kind": "convective", "from_mm": 10.0, "to_mm": 60.0, "film_w_m2k": draw(sizes)}]}
    return document(sources=sources, zones=zones, edges=edges, title=draw(st.text(max_size=20)), notes=draw(st.text(max_size=20)))


@given(layouts())
def test_a_layout_comes_back_as_it_was_saved(tmp_path_factory, given_document):
    path = tmp_path_factory.mktemp("trip") / "layout.json"
    layout = parse_layout(given_document)
    write_layout(path, layout)
    again = read_layout(path)
    assert again == layout
    assert [s.id for s in again.sources] == [s["id"] for s in given_document["sources"]]
    assert dump_layout(again) == dump_layout(layout)


@given(layouts())
def test_the_schema_accepts_what_the_models_accept(given_document):
    Draft202012Validator(layout_schema()).validate(given_document)
    Draft202012Validator(layout_schema()).validate(json.loads(dump_layout(parse_layout(given_document))))


@pytest.mark.parametrize("change", [{"colour": 1}, {"layers": []}, {"plate": {"width_mm": -1.0, "height_mm": 1.0}},
                                    {"sources": [source(face="side")]}, {"edges": {"west": [{"kind": "hot"}]}}, {"version": 2}])
def test_the_schema_refuses_what_the_models_refuse(change):
    assert list(Draft202012Validator(layout_schema()).iter_errors(document(**change)))
    with pytest.raises(LayoutError):
        parse_layout(document(**change))


def test_both_schemas_are_valid_and_of_their_draft():
    for schema in (layout_schema(), results_schema()):
        Draft202012Validator.check_schema(schema)
        assert schema["$schema"] == "https://json-schema.org/draft/2020-12/schema"


def test_results_follow_their_schema_and_come_back():
    doc = document(faces={"bottom": {"kind": "convective", "film_w_m2k": 50.0}})
    results = solve(parse_layout(doc)).results
    text = dump_results(results)
    Draft202012Validator(results_schema()).validate(json.loads(text))
    assert parse_results(text) == results


def test_a_failed_write_leaves_the_old_file_and_nothing_else(tmp_path, monkeypatch):
    path = tmp_path / "layout.json"
    path.write_text("old")

    def broken(*_):
        raise OSError("no space left")

    monkeypatch.setattr(os, "fsync", broken)
    with pytest.raises(OSError, match="no space"):
        write_layout(path, parse_layout(document()))
    assert path.read_text() == "old"
    assert [p.name for p in tmp_path.iterdir()] == ["layout.json"]


def test_a_text_that_cannot_be_encoded_leaves_the_old_file(tmp_path):
    path = tmp_path / "layout.json"
    path.write_text("old")
    with pytest.raises(UnicodeEncodeError):
        write_atomic(path, "\ud800")
    assert path.read_text() == "old"
    assert len(list(tmp_path.iterdir())) == 1


def test_writing_keeps_the_mode_of_a_file_and_follows_a_link(tmp_path):
    path, link = tmp_path / "layout.json", tmp_path / "link.json"
    path.write_text("old")
    path.chmod(0o640)
    link.symlink_to(path)
    write_atomic(link, "new")
    assert link.is_symlink() and path.read_text() == "new"
    assert stat.S_IMODE(path.stat().st_mode) == 0o640


def test_a_file_too_large_is_refused_before_it_is_read(tmp_path):
    path = tmp_path / "large.json"
    with path.open("wb") as file:
        file.truncate(6_000_000)
    with pytest.raises(LayoutError, match="at most 5,000,000"):
        read_layout(path)
