"""Drawing, moving and setting figures, by mouse and by keyboard, and what field and verdict say then."""

from __future__ import annotations

import re

import pytest
from playwright.sync_api import expect

from .board import Q1_CORNER, Q1_SIZE, board, written
from .conftest import Studio


@pytest.fixture
def opened(studio: Studio, tmp_path) -> Studio:
    studio.open_file(written(tmp_path))
    return studio


def test_a_drawn_source_heats_the_plate(opened: Studio) -> None:
    cooler = opened.peak
    q1 = opened.shape("source", "Q1")
    opened.named("tool-source").click()
    start, end = (opened.at(*place, q1, Q1_CORNER, Q1_SIZE) for place in ((30.0, 34.0), (40.0, 44.0)))
    opened.after(lambda: opened.drag(start, end))
    expect(opened.shape("source", "Q3")).to_be_visible()
    assert opened.value("x_mm") == pytest.approx(30.0, abs=0.6)
    assert opened.value("width_mm") == pytest.approx(10.0, abs=1.1)
    expect(opened.named("tool-select")).to_have_attribute("aria-pressed", "true")
    assert opened.peak > cooler + 1.0


def test_a_part_dragged_to_the_cooled_edge_gets_cooler_and_undo_puts_it_back(opened: Studio) -> None:
    hot = opened.peak
    q1 = opened.shape("source", "Q1")
    start, end = (opened.at(*place, q1, Q1_CORNER, Q1_SIZE) for place in ((16.0, 22.5), (66.0, 8.5)))
    opened.after(lambda: opened.drag(start, end))
    assert opened.value("x_mm") == pytest.approx(60.0, abs=0.6)
    assert opened.peak < hot - 5.0, opened.named("undo").get_attribute("title")
    expect(opened.named("undo")).to_have_attribute("title", re.compile("Undo: Move Q1"))
    opened.after(lambda: opened.page.keyboard.press("Control+z"))
    assert opened.value("x_mm") == 10.0
    assert opened.peak == pytest.approx(hot, abs=1e-6)
    opened.after(lambda: opened.named("redo").click())
    assert opened.peak < hot - 5.0, opened.named("undo").get_attribute("title")


def test_a_part_made_larger_by_a_handle_runs_cooler(opened: Studio) -> None:
    hot = opened.peak
    opened.shape("source", "Q1").click()
    handle = opened.page.locator(".cell-a").get_by_test_id("handle-ne").bounding_box()
    q1 = opened.shape("source", "Q1")
    start = (handle["x"] + handle["width"] / 2, handle["y"] + handle["height"] / 2)
    end = opened.at(32.0, 40.0, q1, Q1_CORNER, Q1_SIZE)
    opened.after(lambda: opened.drag(start, end))
    assert (opened.value("width_mm"), opened.value("height_mm")) == pytest.approx((22.0, 20.0), abs=0.6)
    assert opened.peak < hot - 1.0


def test_escape_puts_a_drag_back(opened: Studio) -> None:
    q1 = opened.shape("source", "Q1")
    mouse = opened.page.mouse
    mouse.move(*opened.at(16.0, 22.5, q1, Q1_CORNER, Q1_SIZE))
    mouse.down()
    mouse.move(*opened.at(40.0, 30.0, q1, Q1_CORNER, Q1_SIZE))
    opened.page.keyboard.press("Escape")
    mouse.up()
    opened.settled()
    assert opened.value("x_mm") == 10.0
    expect(opened.named("undo")).to_be_disabled()


def test_an_edge_is_set_split_and_drawn(opened: Studio) -> None:
    hot = opened.peak
    opened.page.locator(".cell-a").get_by_test_id("edge-west-0").locator(".grip").click()
    opened.after(lambda: opened.named("kind").select_option("fixed"))
    opened.after(lambda: opened.set("temperature_c", "30"))
    assert opened.peak < hot - 5.0, opened.named("undo").get_attribute("title")
    expect(opened.named("edge-west:0")).to_contain_text("held at 30 °C")
    opened.after(lambda: opened.named("split").click())
    expect(opened.page.locator(".cell-a").get_by_test_id("edge-west-1")).to_be_visible()
    opened.after(lambda: opened.named("kind").select_option("insulated"))
    expect(opened.named("edge-west:0")).to_contain_text("insulated")
    opened.after(lambda: opened.named("merge").click())
    assert opened.peak == pytest.approx(hot, abs=1e-6)


def test_the_limit_band_and_the_verdict_follow_the_power(opened: Studio) -> None:
    expect(opened.named("results")).to_have_attribute("data-verdict", "pass")
    over = opened.page.locator(".cell-a [data-band=over]")
    expect(over).to_be_hidden()
    opened.shape("source", "Q1").click()
    opened.after(lambda: opened.set("power_w", "30"))
    expect(opened.named("results")).to_have_attribute("data-verdict", "fail")
    expect(over).to_be_visible()
    expect(opened.named("verdict")).to_contain_text("over")
    expect(opened.named("part-Q1")).to_contain_text("✕")


def test_everything_by_keyboard(opened: Studio) -> None:
    page, hot = opened.page, opened.peak

    def tab_to(name: str) -> None:
        for _ in range(120):
            page.keyboard.press("Tab")
            focused = page.evaluate("""() => { let at = document.activeElement
                while (at?.shadowRoot?.activeElement) at = at.shadowRoot.activeElement
                return at?.dataset?.name }""")
            if focused == name:
                return
        pytest.fail(f"the Tab key does not reach {name}")

    tab_to("source-Q1")
    page.keyboard.press("Enter")
    opened.named("power_w").wait_for()
    page.keyboard.press("f")
    tab_to("power_w")
    opened.after(lambda: (page.keyboard.press("Control+a"), page.keyboard.type("5"),
                          page.keyboard.press("Enter")))
    assert opened.peak < hot - 5.0, opened.named("undo").get_attribute("title")
    opened.after(lambda: page.keyboard.press("ArrowUp"))
    assert opened.value("power_w") == 5.5
    tab_to("part-Q1")
    opened.after(lambda: page.keyboard.press("Delete"))
    expect(opened.shape("source", "Q1")).to_have_count(0)
    opened.after(lambda: page.keyboard.press("Control+z"))
    expect(opened.shape("source", "Q1")).to_be_visible()


def test_a_figure_that_is_none_is_refused_in_words(opened: Studio) -> None:
    opened.shape("source", "Q1").click()
    opened.set("power_w", "ten")
    expect(opened.named("notice")).to_contain_text("Power: “ten” was given; a number in W is needed.")
    expect(opened.named("power_w")).to_have_value("10")
    opened.set("width_mm", "-3")
    expect(opened.named("notice")).to_contain_text("width_mm")
    expect(opened.named("width_mm")).to_have_value("12")
    expect(opened.named("undo")).to_be_disabled()


def test_text_of_a_file_never_becomes_markup(studio: Studio, tmp_path) -> None:
    nasty = '<img src=x onerror="window.harmed=1"><script>window.harmed=1</script>'
    document = board(title=nasty, notes=nasty, materials={nasty: {"k_w_mk": 100.0}})
    document["layers"][0]["material"] = document["layers"][0]["id"] = nasty
    document["sources"][0]["id"] = document["zones"] = nasty
    document["zones"] = [{"id": nasty, "layers": [nasty], "x_mm": 30.0, "y_mm": 5.0, "width_mm": 9.0,
                          "height_mm": 9.0,
                          "material": "copper"}]
    studio.open_file(written(tmp_path, "nasty.json", document))
    expect(studio.page.locator(".cell-a svg").first).to_be_visible()
    for name in (f"source-{nasty}", f"zone-{nasty}", f"plane-layer:{nasty}"):
        buttons = studio.page.get_by_role("button").and_(studio.page.locator("[data-name]"))
        button = buttons.filter(has_text="<img")
        assert button.count() > 0, name
        button.first.click()
        studio.settled()
    assert studio.page.evaluate("window.harmed") is None
    assert studio.page.locator("img").count() == 0
