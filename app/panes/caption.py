"""The line over a surface while two sheets are open: which sheet it is, and the difference map's own line."""

from __future__ import annotations

from typing import Any

from ..compare import why_no_difference
from ..desk import Desk
from ..editing import Key
from .controls import button
from .html import Html, join, tag
from .pane import Later, Pane
from .status import plane_words, state_words


class Caption(Pane):
    desk_watched = ("active",)
    sheet_watched = ("name", "dirty", "state")

    def __init__(self, desk: Desk, later: Later, key: Key) -> None:
        self._key = key
        super().__init__(desk, later)

    def draw(self, desk: Desk) -> Html:
        sheet = desk.sheets.get(self._key)
        if sheet is None:
            return Html("")
        active = desk.active == self._key
        words = join(tag("b", self._key, class_="key"), tag("span", sheet.name, class_="clip"),
                     tag("span", "●", title="Unsaved changes", class_="unsaved") if sheet.dirty else None)
        return tag("div",
                   button(words, "activate", class_="plain grow sheet-name",
                          aria_pressed="true" if active else "false",
                          title="The lists, figures and commands are about the sheet chosen here",
                          data_name=f"sheet-{self._key}"),
                   tag("span", "chosen" if active else "", class_="small soft"),
                   tag("span", state_words(sheet), class_="small"), class_="caption-line row")

    def do_activate(self, *_: Any) -> None:
        self.desk.active = self._key


class DifferenceCaption(Pane):
    desk_watched = ("plane", "difference")
    sheet_watched = ("solution", "layout")

    def draw(self, desk: Desk) -> Html:
        if "B" not in desk.sheets or not desk.difference:
            return Html("")
        why = why_no_difference(desk.sheets["A"].solution, desk.sheets["B"].solution)
        words = (join(tag("b", "No map of the difference. "), why) if why else
                 join(tag("b", "B \u2212 A"), f" in K, {plane_words(desk.plane)}; above zero: B is hotter"))
        return tag("div", tag("span", words, class_="grow", data_name="difference-words"),
                   button("Close map", "close", class_="plain"), class_="caption-line row")

    def do_close(self, *_: Any) -> None:
        self.desk.difference = False
