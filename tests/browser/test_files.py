"""Opening, saving, exporting, comparing, and getting work back after a reload or a crash."""

from __future__ import annotations

import json
import re
import signal
from collections.abc import Callable

import pytest
from playwright.sync_api import Page, expect

from solver.document import parse_layout, parse_results, read_layout

from .board import BOARD, board, written
from .conftest import Server, Studio, free_port


def test_two_layouts_side_by_side(studio: Studio, tmp_path) -> None:
    warmer = board(title="Warmer")
    warmer["sources"][0]["power_w"] = 14.0
    studio.open_file(written(tmp_path, "cool.json"))
    cool = studio.peak
    studio.open_file(written(tmp_path, "warm.json", warmer), "B")
    assert studio.peak > cool + 5.0
    for sheet in ("a", "b"):
        expect(studio.shape("source", "Q1", sheet)).to_be_visible()
    row = studio.named("differences").get_by_role("row").filter(has_text="Q1")
    expect(row).to_contain_text(re.compile(r"\+\d+\.\d K"))
    ends = [studio.page.locator(f".cell-{sheet}").get_by_test_id("high") for sheet in ("a", "b")]
    if all(end.count() for end in ends):
        assert ends[0].inner_text() == ends[1].inner_text()
    studio.named("difference-map").check()
    expect(studio.named("difference-words")).to_contain_text("in K")
    expect(studio.page.locator(".cell-d canvas").first).to_be_visible()
    studio.named("sheet-A").click()
    expect(studio.named("status")).to_have_attribute("data-of", re.compile("A"))
    studio.shape("source", "Q2", "a").click()
    studio.after(lambda: studio.set("power_w", "3"))
    studio.named("compare").click()
    studio.named("close-b").click()
    expect(studio.shape("source", "Q1", "b")).to_be_hidden()


def test_plates_of_different_size_have_no_map_and_the_page_says_why(studio: Studio, tmp_path) -> None:
    studio.open_file(written(tmp_path))
    studio.open_file(written(tmp_path, "wide.json", board(plate={"width_mm": 90.0, "height_mm": 50.0})), "B")
    studio.named("difference-map").check()
    why = "The plates differ in size: 80 x 50 mm and 90 x 50 mm."
    expect(studio.named("difference-words")).to_contain_text(why)
    expect(studio.page.locator(".cell-d canvas").first).to_be_hidden()


def test_a_fork_is_changed_without_touching_the_original(studio: Studio, tmp_path) -> None:
    studio.open_file(written(tmp_path))
    cool = studio.peak
    studio.named("compare").click()
    studio.after(lambda: studio.named("fork").click())
    studio.shape("source", "Q1", "b").click()
    studio.after(lambda: studio.set("power_w", "20"))
    assert studio.peak > cool + 20.0
    studio.named("sheet-A").click()
    expect(studio.named("status")).to_have_attribute("data-of", re.compile("A"))
    studio.settled()
    assert studio.peak == pytest.approx(cool, abs=1e-6)


def test_exported_documents_read_back(studio: Studio, tmp_path) -> None:
    studio.open_file(written(tmp_path))
    studio.shape("source", "Q1").click()
    studio.after(lambda: studio.set("power_w", "11.5"))
    saved = {}
    for name in ("layout", "results"):
        studio.named("export").click()
        with studio.page.expect_download() as download:
            studio.named(f"export-{name}").click()
        saved[name] = tmp_path / download.value.suggested_filename
        download.value.save_as(saved[name])
    layout = read_layout(saved["layout"])
    assert layout == parse_layout(BOARD).model_copy(update={"sources": layout.sources})
    assert layout.sources[0].power_w == 11.5
    results = parse_results(saved["results"].read_text("utf-8"))
    assert results.layout == layout
    assert results.peak.temperature_c == pytest.approx(studio.peak, abs=1e-6)
    peak = studio.peak
    studio.open_file(saved["layout"])
    assert studio.peak == pytest.approx(peak, abs=1e-6)


def test_saving_to_a_path_and_the_question_before_unsaved_work_goes(studio: Studio, tmp_path) -> None:
    studio.open_file(written(tmp_path))
    studio.shape("source", "Q1").click()
    studio.after(lambda: studio.set("power_w", "7"))
    expect(studio.named("file-name")).to_have_attribute("data-dirty", "true")
    studio.page.locator('[popover] [data-name="file-A"]').first.set_input_files(written(tmp_path,
                                                                                        "other.json"))
    question = studio.page.get_by_role("dialog", name="Question")
    expect(question).to_contain_text("unsaved changes")
    studio.named("decline").click()
    expect(studio.named("power_w")).to_have_value("7")
    studio.page.keyboard.press("Control+s")
    studio.named("save-path").fill(str(tmp_path / "kept.json"))
    studio.named("save-path").press("Enter")
    expect(studio.named("file-name")).to_have_attribute("data-dirty", "false")
    assert read_layout(tmp_path / "kept.json").sources[0].power_w == 7.0
    studio.after(lambda: studio.set("power_w", "8"))
    studio.page.keyboard.press("Control+s")
    expect(studio.named("file-name")).to_have_attribute("data-dirty", "false")
    assert read_layout(tmp_path / "kept.json").sources[0].power_w == 8.0


def test_a_dropped_file_is_opened_and_a_faulty_one_is_told_of(studio: Studio) -> None:
    studio.after(studio.named("begin").click)
    surface = studio.page.locator(".cell-a svg").first

    def drop(name: str, text: str) -> None:
        files = studio.page.evaluate_handle(
            """([name, text]) => { const data = new DataTransfer()
               data.items.add(new File([text], name, {type: "application/json"})); return data }""",
            [name, text])
        surface.dispatch_event("drop", {"dataTransfer": files})

    studio.after(lambda: drop("dropped.json", json.dumps(BOARD)))
    expect(studio.named("file-name")).to_contain_text("dropped.json")
    faulty = board()
    faulty["sources"][0]["power_w"] = "much"
    faulty["sources"][1]["x_mm"] = 500.0
    drop("faulty.json", json.dumps(faulty))
    expect(studio.named("notice")).to_contain_text("sources[0].power_w")
    expect(studio.named("notice")).to_contain_text("faulty.json was not opened")
    expect(studio.named("file-name")).to_contain_text("dropped.json")


def test_a_reload_brings_the_work_back(studio: Studio, tmp_path) -> None:
    studio.open_file(written(tmp_path))
    studio.shape("source", "Q1").click()
    studio.after(lambda: studio.set("power_w", "13"))
    peak = studio.peak
    studio.page.reload()
    expect(studio.named("source-Q1")).to_contain_text("13 W")
    studio.settled()
    assert studio.peak == pytest.approx(peak, abs=1e-6)
    studio.after(lambda: studio.page.keyboard.press("Control+z"))
    expect(studio.named("source-Q1")).to_contain_text("10 W")


def test_a_crash_of_the_server_loses_nothing(open_page: Callable[..., Page], tmp_path) -> None:
    (tmp_path / "state").mkdir()
    server = Server(free_port(), tmp_path / "state", (str(written(tmp_path)),)).start()
    studio = Studio(open_page(server.address))
    studio.shape("source", "Q1").click()
    studio.after(lambda: studio.set("power_w", "13"))
    server.stop(signal.SIGKILL)
    expect(studio.page.locator("#lost")).to_be_visible()
    again = Server(server.port, server.state).start()
    try:
        expect(studio.page.locator("#lost")).to_be_hidden()
        expect(studio.named("source-Q1")).to_contain_text("13 W")
        studio.settled()
        # Another page is offered what a page that is gone has left.
        studio.page.context.close()
        other = Studio(open_page(again.address))
        other.page.reload()
        expect(other.named("welcome")).to_contain_text("Unsaved work found")
        other.named("welcome").get_by_role("button", name="Restore").click()
        expect(other.named("source-Q1")).to_contain_text("13 W")
    finally:
        assert again.stop() == 0
