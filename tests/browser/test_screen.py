"""What the screen looks like: it fits in both themes and sizes, and every control has a name."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from playwright.sync_api import Page, expect

from .board import board, written
from .conftest import Server, Studio

SIZES = ((1440, 900), (1024, 768))

SPILLS = """() => {
  const found = []
  const walk = (tree) => { for (const node of tree.querySelectorAll("*")) {
    if (node.shadowRoot) walk(node.shadowRoot)
    const box = node.getBoundingClientRect()
    if (box.width && getComputedStyle(node).visibility !== "hidden" && !node.closest("svg")
        && (box.right > innerWidth + 1 || box.left < -1) && !node.closest("[popover]"))
      found.push(node.outerHTML.slice(0, 120))
    const clipped = getComputedStyle(node).overflowX !== "visible" && node.scrollWidth > node.clientWidth + 1
    const panes = ".rail-body, .inspector-body, .results, .bar, .status"
    if (clipped && node.matches(`button, label, td, th, p, h2, h3, ${panes}`))
      found.push("cut off: " + node.outerHTML.slice(0, 120))
  } }
  walk(document)
  if (document.documentElement.scrollWidth > innerWidth) found.push("the page scrolls sideways")
  return found
}"""

NAMELESS = """() => {
  const found = []
  const walk = (tree) => { for (const node of tree.querySelectorAll("*")) {
    if (node.shadowRoot) walk(node.shadowRoot)
    if (node.ariaLabel) continue
    if (node.matches("button") && !node.textContent.trim()
        || node.matches("input, select, textarea") && !node.labels?.length)
      found.push(node.outerHTML.slice(0, 120))
  } }
  walk(document)
  return found
}"""


@pytest.mark.parametrize("theme", ["light", "dark"])
@pytest.mark.parametrize("size", SIZES, ids=lambda size: f"{size[0]}x{size[1]}")
def test_everything_fits_in_every_state(server: Server, open_page: Callable[..., Page], tmp_path, theme,
                                        size) -> None:
    studio = Studio(open_page(server.address, theme, *size))
    page = studio.page
    assert page.evaluate("document.documentElement.dataset.theme") == theme
    expect(studio.named("welcome")).to_be_visible()
    assert page.evaluate(SPILLS) == []
    long = board(limits={"plate_c": 60.0, "warn_margin_k": 5.0}, contacts=[
        {"id": "stud-at-the-corner", "face": "bottom", "x_mm": 2.0, "y_mm": 2.0, "width_mm": 6.0,
         "height_mm": 6.0,
         "conductance_w_m2k": 3000.0}])
    long["sources"][0] |= {"id": "synchronous-rectifier-A", "interface_k_mm2_w": 30.0,
                           "r_junction_case_k_w": 0.8,
                           "limit_at": "junction"}
    long["zones"] = [{"id": "insulating-laminate-1", "layers": "all", "x_mm": 40.0, "y_mm": -2.0,
                      "width_mm": 4.0,
                      "height_mm": 30.0, "material": "fr4"}]
    studio.open_file(written(tmp_path, "a-board-with-a-rather-long-name.json", long))
    for name in ("source-synchronous-rectifier-A", "zone-insulating-laminate-1", "contact-stud-at-the-corner",
                 "edge-east:0",
                 "plane-layer:base", "plane-bottom"):
        studio.named(name).click()
        expect(studio.named(name)).to_be_visible()
        studio.settled()
        assert page.evaluate(SPILLS) == [], name
        assert page.evaluate(NAMELESS) == [], name
    for menu in ("open", "save-as", "export", "history", "compare", "help"):
        studio.named(menu).click()
        shown = page.locator("[popover]:popover-open")
        expect(shown).to_be_visible()
        box = shown.bounding_box()
        assert box["x"] >= 0 and box["x"] + box["width"] <= size[0], menu
        assert box["y"] + box["height"] <= size[1], menu
        page.keyboard.press("Escape")
        expect(shown).to_have_count(0)


def test_the_theme_changes_and_is_remembered(studio: Studio) -> None:
    page = studio.page
    paper = page.evaluate("getComputedStyle(document.body).backgroundColor")
    studio.named("begin").click()
    studio.named("theme").click()
    expect(page.locator("html")).to_have_attribute("data-theme", "dark")
    assert page.evaluate("getComputedStyle(document.body).backgroundColor") != paper
    page.reload()
    expect(page.locator("html")).to_have_attribute("data-theme", "dark")


def test_the_verdict_stands_beside_its_caution(studio: Studio, tmp_path) -> None:
    studio.open_file(written(tmp_path))
    expect(studio.named("results")).to_contain_text("do not replace measurement")
    expect(studio.named("results")).to_contain_text("Local codes and licensed practice prevail")


def test_a_sample_opens_from_the_welcome(studio: Studio) -> None:
    cards = studio.named("welcome").locator(".card")
    assert cards.count() >= 8
    studio.after(lambda: cards.filter(has_text="Supply with its parts crowded").click())
    expect(studio.named("results")).to_have_attribute("data-verdict", "fail")
    expect(studio.page.locator(".cell-a [data-band=over]")).to_be_visible()


def test_a_layout_that_cannot_be_solved_says_why(studio: Studio, tmp_path) -> None:
    alone = board(faces={}, edges={})
    studio.page.locator('[popover] [data-name="file-A"]').first.set_input_files(written(tmp_path,
                                                                                        "alone.json", alone))
    expect(studio.named("status")).to_have_attribute("data-state", "failed")
    expect(studio.named("status")).to_contain_text("Not solved")
    assert len(studio.named("status").inner_text()) > 60
