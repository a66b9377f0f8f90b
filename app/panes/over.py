"""What lies over the page: the welcome, a question that waits for an answer, a notice."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from ..desk import Desk
from ..samples import Sample
from .controls import button
from .html import Html, join, tag
from .pane import Later, Pane
from .topbar import discard, file_button, open_chosen, recovery_list, restore, sample_cards

NOTICE_MARKS = {"info": "✓", "warning": "▲", "error": "✕"}


class Over(Pane):
    desk_watched = ("notice", "question", "left", "active", "restored")
    sheet_watched = ("revision",)

    def __init__(self, desk: Desk, later: Later, samples: Sequence[Sample]) -> None:
        self._samples = samples
        super().__init__(desk, later)

    def draw(self, desk: Desk) -> Html:
        return join(self._welcome(desk), _question(desk), _notice(desk))

    def _welcome(self, desk: Desk) -> Html | None:
        """Shown until something has been opened, begun or drawn."""
        if list(desk.sheets) != ["A"] or desk.sheets["A"].revision > 0 or desk.restored:
            return None
        left = tag("section", tag("h2", "Unsaved work found"), recovery_list(desk)) if desk.left else None
        return tag("div", tag("div",
                              tag("h1", "Lay out heat sources on a plate and watch the temperatures follow."),
                              tag("p", "Place parts, set what the edges and faces touch, and read every "
                                  "temperature, margin and watt while you move things.", class_="soft"),
                              left,
                              tag("div",
                                  button("Begin with an empty plate", "new", {"key": "A"}, class_="main",
                                         data_name="begin"),
                                  file_button("Open a file…", "open_file", {"key": "A"},
                                              "A layout as JSON, at most 5 MB"),
                                  class_="row wrap"),
                              tag("section", tag("h2", "Or look at a sample"),
                                  sample_cards(self._samples, "A")),
                              class_="welcome-sheet"), class_="welcome", data_name="welcome",
                   data_key="welcome")

    # --- actions ---

    def do_new(self, arg: Any, _: Any) -> None:
        self.desk.new(arg["key"])

    def do_open_file(self, arg: Any, file: Any) -> None:
        open_chosen(self.desk, arg["key"], file)

    def do_open_sample(self, arg: Any, _: Any) -> None:
        self.desk.open_sample(arg["key"], self._samples[int(arg["sample"])])

    def do_restore(self, arg: Any, _: Any) -> None:
        restore(self.desk, arg)

    def do_discard(self, arg: Any, _: Any) -> None:
        discard(self.desk, arg)

    def do_agree(self, *_: Any) -> None:
        self.desk.agree()

    def do_save_first(self, *_: Any) -> None:
        self.desk.save_first()

    def do_decline(self, *_: Any) -> None:
        self.desk.decline()

    def do_dismiss(self, *_: Any) -> None:
        self.desk.dismiss_notice()


def _question(desk: Desk) -> Html | None:
    question = desk.question
    if question is None:
        return None
    can_save = question.may_save and desk.sheets[question.key].path is not None
    return tag("dialog", tag("p", question.text, class_="break"),
               tag("p", "Save it first (Save as), or discard the changes.", class_="soft small")
               if question.may_save and not can_save else None,
               tag("div", button("Go back", "decline", autofocus=True, data_name="decline"),
                   button(question.yes, "agree", class_="danger", data_name="agree"),
                   button("Save, then go on", "save_first", class_="main", data_name="save-first")
                   if can_save else None,
                   class_="row"), data_cancel="decline", data_key="question", aria_label="Question")


def _notice(desk: Desk) -> Html | None:
    notice = desk.notice
    if notice is None:
        return None
    details = tag("ul",
                  [tag("li", detail, class_="break")
                   for detail in notice.details[:12]]) if notice.details else None
    more = len(notice.details) - 12
    return tag("div", tag("i", NOTICE_MARKS[notice.kind], aria_hidden="true"),
               tag("div", tag("p", notice.text, class_="break"), details,
                   tag("p", f"and {more} more", class_="small") if more > 0 else None, class_="grow"),
               button("Close", "dismiss", title="Close this message", class_="plain", data_name="dismiss"),
               class_=f"notice {notice.kind}", role="alert" if notice.kind == "error" else "status",
               data_name="notice",
               data_fades="8000" if notice.kind == "info" else None, data_key=f"notice {notice.text}")
