"""The help sheet: every key, and the cautions."""

from __future__ import annotations

from .html import Html, tag

CAUTION = ("Heated plates and parts can burn. These figures are estimates: they do not replace measurement. "
           "Local codes and licensed practice prevail.")

KEYS = (
    ("On the plate", (
        ("Tab, Shift+Tab", "go from shape to shape"),
        ("Arrow keys", "move what is selected by one grid step"),
        ("Shift, click or drag", "add to the selection"),
        ("Alt, while dragging", "suspend snapping"),
        ("Delete", "delete what is selected"),
        ("Ctrl+D", "duplicate what is selected"),
        ("Escape", "put a gesture back; then clear the selection"),
        ("Wheel; middle button or Space with drag", "zoom; move the view"),
    )),
    ("Anywhere", (
        ("V, S, Z, C", "tools: select, source, zone, contact"),
        ("F", "go to the figures of what is selected"),
        ("Ctrl+Z, Ctrl+Y", "undo, redo"),
        ("Ctrl+O", "open"),
        ("Ctrl+S, Ctrl+Shift+S", "save, save as"),
        ("?", "this sheet"),
    )),
    ("In a field", (
        ("Enter or Tab", "take the figure over"),
        ("Arrow up, Arrow down", "one step more or less; Page keys: ten steps"),
        ("Escape", "put the figure back"),
    )),
)


def help_sheet(id_: str) -> Html:
    groups = [tag("section", tag("h2", title),
                  tag("dl", [(tag("dt", keys), tag("dd", words)) for keys, words in rows]))
              for title, rows in KEYS]
    return tag("div", tag("h3", "Keys"), tag("div", *groups, class_="keys"),
               tag("p", "Everything can be done without the mouse: the lists at the left and right select, "
                   "the fields beside them take exact figures, and “+” places a new thing in the middle."),
               tag("p", tag("b", "Caution. "), CAUTION),
               tag("div",
                   tag("button", "Close", type="button", popovertarget=id_, popovertargetaction="hide",
                       autofocus=True),
                   class_="row"), id=id_, popover=True, class_="middle", aria_label="Help")
