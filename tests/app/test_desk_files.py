"""Opening, saving and exporting: whole or not at all, paths only on the user's own computer."""

from __future__ import annotations

import json

import pytest

from app import edits, files
from app.desk import Desk
from app.refs import Ref
from app.samples import samples
from solver.document import dump_layout, read_layout

SOUTH = edits.move([Ref("source", "Q1")], 0.0, -5.0)


@pytest.fixture
def desk(loop, quick_solver, board):
    desk = Desk(solve=quick_solver, schedule=loop.schedule, layout=board)
    yield desk
    desk.close()


def test_save_as_adds_the_ending_and_save_writes_there_again(desk, tmp_path):
    assert not desk.save("A"), "a sheet without a file has to be given a path"
    desk.edit("A", SOUTH)
    assert desk.save_as("A", str(tmp_path / "board"))
    sheet = desk.sheets["A"]
    assert (sheet.name, sheet.path, sheet.dirty) == ("board.json", str(tmp_path / "board.json"), False)
    assert read_layout(tmp_path / "board.json") == sheet.layout
    desk.undo("A")
    assert sheet.dirty and desk.save("A") and not sheet.dirty
    assert read_layout(tmp_path / "board.json") == sheet.layout


def test_an_existing_file_is_overwritten_only_after_a_yes(desk, tmp_path):
    other = tmp_path / "other.json"
    other.write_text("precious")
    assert not desk.save_as("A", str(other))
    assert other.read_text() == "precious" and desk.question.yes == "Overwrite"
    desk.decline()
    assert other.read_text() == "precious"
    desk.save_as("A", str(other))
    desk.agree()
    assert read_layout(other) == desk.sheets["A"].layout


def test_a_failed_write_leaves_the_old_file_and_the_unsaved_mark(desk, tmp_path, monkeypatch):
    desk.save_as("A", str(tmp_path / "board.json"))
    before = (tmp_path / "board.json").read_bytes()
    desk.edit("A", SOUTH)

    def full(*args):
        raise OSError(28, "No space left on device")

    monkeypatch.setattr("os.fsync", full)
    assert not desk.save("A")
    assert (tmp_path / "board.json").read_bytes() == before
    assert [path.name for path in tmp_path.iterdir()] == ["board.json"], "no temporary file is left"
    assert desk.sheets["A"].dirty and "no space left" in desk.notice.text


@pytest.mark.parametrize("path, words", [("", "Give a path"), ("{tmp}/missing/board.json", "no folder"),
                                         ("{tmp}/folder.json", "is a folder"), ("a\0b", "Give a path")])
def test_paths_that_cannot_be_saved_to_are_refused_in_words(desk, tmp_path, path, words):
    (tmp_path / "folder.json").mkdir()
    assert not desk.save_as("A", path.format(tmp=tmp_path))
    assert words in desk.notice.text and desk.sheets["A"].path is None


def test_open_path_and_its_failures(desk, tmp_path, board):
    desk.open_path("A", str(tmp_path / "none.json"))
    assert "no such file" in desk.notice.text
    (tmp_path / "board.json").write_text(dump_layout(board))
    desk.open_path("A", str(tmp_path / "board.json"))
    assert desk.sheets["A"].path == str(tmp_path / "board.json") and desk.sheets["A"].layout == board
    (tmp_path / "picture.json").write_bytes(b"\x89PNG\r\n")
    desk.open_path("A", str(tmp_path / "picture.json"))
    assert desk.notice.kind == "error" and desk.sheets["A"].name == "board.json"


def test_dropped_files_that_are_too_large_are_refused(desk):
    desk.open_text("A", "huge.json", " " * 5_000_001)
    assert desk.notice.kind == "error" and "5 MB" in desk.notice.text


def test_without_paths_nothing_is_read_or_written(loop, quick_solver, board, tmp_path):
    (tmp_path / "board.json").write_text(dump_layout(board))
    desk = Desk(solve=quick_solver, schedule=loop.schedule, access=files.FileAccess(allow_paths=False))
    try:
        desk.open_path("A", str(tmp_path / "board.json"))
        assert desk.sheets["A"].layout.sources == () and "upload" in desk.notice.text
        assert not desk.save_as("A", str(tmp_path / "new.json")) and not (tmp_path / "new.json").exists()
        desk.open_text("A", "board.json", dump_layout(board))
        assert desk.sheets["A"].layout == board
    finally:
        desk.close()


def test_downloading_counts_as_saving(desk):
    desk.edit("A", SOUTH)
    name, text = desk.layout_download("A")
    assert name == "Untitled.json" and json.loads(text)["sources"][0]["y_mm"] == 15.0
    desk.downloaded("A")
    assert not desk.sheets["A"].dirty


def test_results_are_exported_only_when_they_are_of_this_layout(loop, hand_solver, board):
    desk = Desk(solve=hand_solver, schedule=loop.schedule, layout=board)
    try:
        assert desk.results_download("A") is None and desk.notice.kind == "warning"
    finally:
        desk.close()


def test_file_names_for_download_are_plain():
    assert files.download_name("Copy of board.json", "results") == "Copy-of-board-results.json"
    assert files.download_name("../../etc/passwd") == "etc-passwd.json"
    assert files.download_name("???") == "layout.json"


def test_samples_have_a_title_and_a_first_line(tmp_path, board):
    (tmp_path / "b.json").write_text(dump_layout(board.model_copy(update={"notes": "One line.\nAnother."})))
    (tmp_path / "a.json").write_text("{")
    (sample,) = samples(tmp_path)
    assert (sample.title, sample.about) == ("Board", "One line.")


def test_opening_a_sample_leaves_the_sheet_without_a_path(desk, tmp_path, board):
    (tmp_path / "b.json").write_text(dump_layout(board))
    desk.open_sample("A", samples(tmp_path)[0])
    assert desk.sheets["A"].path is None and desk.sheets["A"].name == "b.json"


def test_save_first_then_do_what_was_asked(desk, tmp_path):
    desk.save_as("A", str(tmp_path / "board.json"))
    desk.edit("A", SOUTH)
    desk.new("A")
    assert desk.save_first()
    assert read_layout(tmp_path / "board.json").sources[0].y_mm == 15.0
    assert desk.sheets["A"].layout.sources == () and desk.question is None


def test_save_first_without_a_path_keeps_the_question(desk):
    desk.edit("A", SOUTH)
    desk.new("A")
    assert not desk.save_first()
    assert desk.question is not None and desk.sheets["A"].layout.sources


def test_a_file_changed_by_someone_else_is_not_overwritten_without_a_yes(desk, tmp_path, board):
    desk.save_as("A", str(tmp_path / "board.json"))
    desk.open_path("B", str(tmp_path / "board.json"))
    desk.edit("B", SOUTH)
    assert desk.save("B")
    desk.edit("A", edits.set_layout_field("title", "Mine"))
    assert not desk.save("A") and "changed" in desk.question.text
    assert read_layout(tmp_path / "board.json") == desk.sheets["B"].layout
    desk.agree()
    assert read_layout(tmp_path / "board.json").title == "Mine" and not desk.sheets["A"].dirty
