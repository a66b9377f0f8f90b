"""Autosave and recovery: a reload gets its desk back, a crash is offered, damage skipped, nobody fights."""

from __future__ import annotations

import json
import subprocess
import sys
from datetime import timedelta

import pytest

from app import edits
from app.autosave import CLEAN_KEPT, StateFolder, is_id
from app.files import FileAccess
from app.record import DeskRecord, now, parse_record, record_text
from app.refs import Ref
from app.sessions import open_desk
from solver.document import dump_layout

SOUTH = edits.move([Ref("source", "Q1")], 0.0, -5.0)


@pytest.fixture
def process(tmp_path):
    """Makes state folders on the same path, each as a server process of its own would have it."""
    made = []

    def start():
        made.append(StateFolder(tmp_path))
        return made[-1]

    yield start
    for folder in made:
        for drawer in list(folder._open.values()):
            drawer.close()
        folder.writer.shutdown()


@pytest.fixture
def page(loop, quick_solver):
    """Opens a page's desk; all are closed at the end. What is to be done later waits on `loop` too."""
    desks = []

    def later(callback, milliseconds):
        loop.schedule(callback)

    def open_(folder, wanted="", **kwargs):
        desks.append(open_desk(wanted, solve=quick_solver, schedule=loop.schedule, later=later, folder=folder,
                               **{"connect_s": 0.0} | kwargs))
        return desks[-1]

    yield open_
    for desk in desks:
        desk.close()


def work_on(desk, board):
    """A board opened on A and changed, forked to B and changed there."""
    desk._open("A", board, "board.json", None)
    desk.edit("A", SOUTH)
    desk.edit("A", edits.set_field(Ref("source", "Q1"), "power_w", 20.0))
    desk.undo("A")
    desk.fork()
    desk.edit("B", edits.delete([Ref("source", "Q2")]))


def crash(folder):
    """The process is gone: what was queued is written, locks end, nothing is closed in order."""
    folder.writer.submit(lambda: None).result()
    for drawer in folder._open.values():
        drawer._lock.release()
    folder._open.clear()


def test_a_reload_gets_its_desk_back_with_undo_and_both_sheets(process, page, board):
    folder = process()
    before = page(folder)
    work_on(before, board)
    before.close()
    after = page(folder, before.id)
    assert after.restored and after.id == before.id and after.active == "B"
    for key in ("A", "B"):
        old, new = before.sheets[key], after.sheets[key]
        assert (new.layout, new.history) == (old.layout, old.history)
        assert (new.name, new.dirty) == (old.name, old.dirty)
    assert after.redo("A") and after.undo("A") and after.undo("A") and after.sheets["A"].layout == board


def test_a_reload_that_is_faster_than_the_server_takes_the_desk_over(process, page, board):
    folder = process()
    connected = {"old": True}
    before = page(folder, alive=lambda: connected["old"])
    work_on(before, board)
    connected["old"] = False
    after = page(folder, before.id)
    assert after.id == before.id and after.restored
    assert after.sheets["A"].layout == before.sheets["A"].layout
    before.edit("A", edits.set_layout_field("title", "ghost"))
    after.close()
    assert page(folder, after.id).sheets["A"].layout.title != "ghost", "the old page writes no more"


def test_a_reload_moves_in_when_the_old_page_hangs_up_a_moment_later(process, page, loop, board):
    folder = process()
    connected = {"old": True}
    before = page(folder, alive=lambda: connected["old"])
    work_on(before, board)
    after = page(folder, before.id)
    assert not after.restored and after.id != before.id
    connected["old"] = False
    loop.run_until(lambda: after.restored)
    assert after.id == before.id and after.sheets["B"].history == before.sheets["B"].history


def test_a_file_opened_at_the_start_gives_way_to_the_desk_of_before(process, page, loop, board, tmp_path):
    folder = process()
    connected = {"old": True}
    before = page(folder, alive=lambda: connected["old"])
    work_on(before, board)
    after = page(folder, before.id)
    after.open_text("A", "given.json", dump_layout(board))
    fresh = after.id
    connected["old"] = False
    loop.run_until(lambda: after.restored)
    assert after.sheets["A"].name == "board.json" and not (tmp_path / f"{fresh}.json").exists()


def test_a_page_that_has_had_no_time_to_connect_keeps_its_desk(process, page, board):
    folder = process()
    young = page(folder, alive=lambda: False, connect_s=60.0)
    assert page(folder, young.id).id != young.id


def test_a_page_that_is_worked_on_does_not_move(process, page, loop, board):
    folder = process()
    connected = {"old": True}
    before = page(folder, alive=lambda: connected["old"])
    work_on(before, board)
    after = page(folder, before.id)
    after.edit("A", edits.set_plate(50.0))
    connected["old"] = False
    loop.run_all()
    assert not after.restored and after.sheets["A"].layout.plate.width_mm == 50.0


def test_a_second_page_with_the_same_id_gets_a_desk_of_its_own(process, page, loop, board):
    folder = process()
    first = page(folder)
    work_on(first, board)
    second = page(folder, first.id)
    loop.run_all()
    assert second.id != first.id and not second.restored
    assert second.left == (), "a desk that is open is not offered"
    assert page(process(), first.id).id != first.id, "nor to another server process"


def test_after_a_crash_a_new_page_is_offered_the_unsaved_desk(process, page, board):
    crashed = process()
    before = page(crashed)
    work_on(before, board)
    crash(crashed)
    desk = page(process())
    (left,) = desk.left
    assert left.heading.title == "board.json and Copy of board.json" and left.heading.unsaved_steps == 2
    desk.restore(left)
    assert desk.sheets["B"].layout == before.sheets["B"].layout and desk.left == ()
    assert desk.sheets["A"].dirty
    assert page(process()).left == (), "it has moved to the page that restored it"


def test_restoring_asks_before_unsaved_work_is_replaced(process, page, board):
    crashed = process()
    work_on(page(crashed), board)
    crash(crashed)
    desk = page(process())
    desk.edit("A", edits.set_plate(30.0))
    desk.restore(desk.left[0])
    assert desk.question is not None and desk.sheets["A"].layout.plate.width_mm == 30.0
    desk.agree()
    assert desk.sheets["A"].layout.plate.width_mm == 80.0


def test_a_discarded_desk_is_gone(process, page, board):
    crashed = process()
    work_on(page(crashed), board)
    crash(crashed)
    desk = page(process())
    desk.discard(desk.left[0])
    assert desk.left == () and page(process()).left == ()


def test_saved_work_is_not_offered(process, page, board, tmp_path):
    crashed = process()
    desk = page(crashed)
    work_on(desk, board)
    desk.save_as("A", str(tmp_path / "a.json")), desk.save_as("B", str(tmp_path / "b.json"))
    crash(crashed)
    assert page(process()).left == ()


def test_damaged_autosaves_are_put_aside_with_a_notice(process, page, board, tmp_path):
    crashed = process()
    desk = page(crashed)
    work_on(desk, board)
    crash(crashed)
    path = tmp_path / f"{desk.id}.json"
    text = path.read_text()
    path.write_text(text[: len(text) // 2])
    other = page(process())
    assert other.left == () and "damaged" in other.notice.text
    assert path.with_suffix(".damaged").exists() and not path.exists()


@pytest.mark.parametrize("damage", [
    lambda d: d.update(version=99), lambda d: d["sheets"].pop("A"), lambda d: d["sheets"]["A"].update(at=77),
    lambda d: d["sheets"]["A"]["layouts"].__setitem__(0, '{"format": "heat-spreader-layout"}'),
    lambda d: d["sheets"]["A"].update(steps="none"), lambda d: d["sheets"]["A"].update(saved=5000),
    lambda d: d.update(saved_at="yesterday"), lambda d: d.update(active="C"), lambda d: d.update(sheets=[])])
def test_a_page_whose_own_autosave_is_damaged_starts_anew_and_says_so(process, page, board, tmp_path, damage):
    folder = process()
    desk = page(folder)
    work_on(desk, board)
    desk.close()
    path = tmp_path / f"{desk.id}.json"
    document = json.loads(path.read_text())
    damage(document)
    path.write_text(json.dumps(document))
    again = page(folder, desk.id)
    assert again.id == desk.id and not again.restored and again.sheets["A"].layout.sources == ()
    assert "autosave" in again.notice.text


def test_old_clean_desks_are_swept_and_unsaved_ones_stay(process, page, board, tmp_path):
    folder = process()
    clean, unsaved = page(folder), page(folder)
    clean._open("A", board, "board.json", None)
    work_on(unsaved, board)
    clean.close(), unsaved.close()
    for desk in (clean, unsaved):
        path = tmp_path / f"{desk.id}.json"
        document = json.loads(path.read_text())
        document["saved_at"] = (now() - CLEAN_KEPT - timedelta(hours=1)).isoformat()
        path.write_text(json.dumps(document))
    folder.sweep()
    assert not (tmp_path / f"{clean.id}.json").exists() and not (tmp_path / f"{clean.id}.lock").exists()
    assert (tmp_path / f"{unsaved.id}.json").exists()


def test_a_page_that_did_nothing_leaves_nothing(process, page, tmp_path):
    folder = process()
    page(folder).close()
    folder.sweep()
    assert list(tmp_path.iterdir()) == []


def test_a_failed_autosave_is_told_and_the_one_before_stays(process, page, loop, board, tmp_path,
                                                            monkeypatch):
    folder = process()
    desk = page(folder)
    desk._open("A", board, "board.json", None)
    folder.writer.submit(lambda: None).result()
    before = (tmp_path / f"{desk.id}.json").read_bytes()

    def full(*args):
        raise OSError(28, "No space left on device")

    with monkeypatch.context() as broken:
        broken.setattr("os.fsync", full)
        desk.edit("A", SOUTH)
        folder.writer.submit(lambda: None).result()
    loop.run_until(lambda: desk.notice is not None)
    assert "no space left" in desk.notice.text
    assert (tmp_path / f"{desk.id}.json").read_bytes() == before


def test_on_a_shared_server_nobody_is_offered_other_peoples_desks(process, page, board):
    crashed = process()
    work_on(page(crashed), board)
    crash(crashed)
    assert page(process(), access=FileAccess(allow_paths=False)).left == ()


@pytest.mark.parametrize("wanted", ["", "..", "../../etc/passwd", "A" * 32, "0" * 31, "0" * 33,
                                    "0" * 32 + "\n"])
def test_what_is_no_id_names_no_file(process, page, wanted):
    desk = page(process(), wanted)
    assert is_id(desk.id) and desk.id != wanted


def test_a_lock_ends_with_its_process(process, page, board, tmp_path):
    folder = process()
    desk = page(folder)
    desk.close()
    code = (f"from app.autosave import StateFolder; import os, pathlib;"
            f"drawer = StateFolder(pathlib.Path({str(tmp_path)!r})).claim({desk.id!r});"
            f"print(drawer.id, flush=True); input(); os._exit(1)")
    with subprocess.Popen([sys.executable, "-c", code], stdin=subprocess.PIPE, stdout=subprocess.PIPE,
                          text=True) as other:
        assert other.stdout.readline().strip() == desk.id
        assert page(folder, desk.id).id != desk.id
        other.stdin.write("\n")
        other.stdin.flush()
        other.wait(timeout=30)
    assert page(folder, desk.id).id == desk.id


def test_a_very_long_history_is_cut_not_the_layout(process, page, board, monkeypatch):
    folder = process()
    desk = page(folder)
    work_on(desk, board)
    monkeypatch.setattr("app.record.MOST_HISTORY_CHARS", 10)
    record = parse_record(record_text(desk.record()))
    assert record.sheets["A"].history.present == desk.sheets["A"].layout
    assert len(record.sheets["A"].history.steps) == 1 and record.sheets["A"].saved == board


def test_unsaved_steps_are_counted_from_the_saved_layout(process, page, board):
    desk = page(process())
    desk._open("A", board, "board.json", None)
    assert desk.record().unsaved_steps == 0
    for power in (1.0, 2.0, 3.0):
        desk.edit("A", edits.set_field(Ref("source", "Q1"), "power_w", power))
    assert desk.record().unsaved_steps == 3
    desk.downloaded("A")
    desk.undo("A")
    assert desk.record().unsaved_steps == 1


def test_a_record_survives_its_json(process, page, board):
    desk = page(process())
    work_on(desk, board)
    record = desk.record()
    again = parse_record(record_text(record))
    assert isinstance(again, DeskRecord) and again == record
