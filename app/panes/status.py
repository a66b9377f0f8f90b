"""The line at the bottom: whether what is seen is current, and how it was solved."""

from __future__ import annotations

from ..desk import Desk
from ..sheet import Sheet
from .figures import seconds
from .html import Html, join, tag
from .pane import Pane

STATES = {"current": ("●", "Current", "final grid, of the layout shown"),
          "draft": ("◐", "Draft", "coarse grid; the final one follows when the hand rests"),
          "solving": ("◌", "Solving", "what is seen is of the layout before"),
          "failed": ("✕", "Not solved", "what is seen is of the layout before")}


class StatusLine(Pane):
    desk_watched = ("active", "plane")
    sheet_watched = ("state", "trouble", "solution", "seconds", "layout", "name")

    def draw(self, desk: Desk) -> Html:
        sheet = desk.sheets[desk.active]
        return tag("footer", state_words(sheet, whole=True), _solve_words(sheet),
                   tag("span", plane_words(desk.plane_of(sheet.layout)).capitalize(), class_="cell"),
                   tag("span", tag("span", "Connected", class_="if-connected"),
                       tag("span", "Connection lost", class_="if-lost"),
                       class_="cell connection"), class_="status", data_name="status", data_state=sheet.state,
                   data_of=f"{sheet.key}{sheet.revision}")


def state_words(sheet: Sheet, whole: bool = False) -> Html:
    """The state as a mark, a word and, if whole, what that means or what is wrong."""
    mark, word, meaning = STATES[sheet.state]
    why = sheet.trouble.replace("\n", "; ") if sheet.state == "failed" and sheet.trouble else meaning
    return tag("span", tag("i", mark, aria_hidden="true"), tag("b", word),
               tag("span", f" – {why}", class_="clip") if whole else None,
               class_=f"state {sheet.state}" + (" grow" if whole else ""),
               title=why, role="status" if whole else None)


def _solve_words(sheet: Sheet) -> Html | None:
    if sheet.solution is None:
        return None
    grid = sheet.solution.results.grid
    cells = f"{grid.cells:,}".replace(",", "\u202f")
    return join(tag("span", f"Grid {grid.nx} × {grid.ny} × {grid.nz} = {cells} cells", class_="cell"),
                tag("span", f"Solved in {seconds(sheet.seconds or 0.0)}", class_="cell"))


def plane_words(plane: str) -> str:
    """A plane in words: "top face", "layer foil"."""
    if plane.startswith("layer:"):
        return f"layer {plane.removeprefix('layer:')}, mean through it"
    return f"{plane} face"
