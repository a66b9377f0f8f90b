"""The bar at the top: the file, what is done to it as a whole, undo and redo, comparing, theme and help."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import Any

from solver.document import MAX_BYTES

from ..desk import Desk
from ..samples import Sample
from ..sheet import Sheet
from .controls import button, labelled, opener, text_field
from .help import help_sheet
from .html import Html, join, tag
from .pane import Later, Pane


class TopBar(Pane):
    """download: hands a file name and a text to the browser."""

    desk_watched = ("active", "theme", "linked_view", "difference", "scale", "left")
    sheet_watched = ("history", "name", "dirty", "path", "layout")

    def __init__(self, desk: Desk, later: Later, samples: Sequence[Sample],
                 download: Callable[[str, str], None]) -> None:
        self._samples, self._download = samples, download
        super().__init__(desk, later)

    def draw(self, desk: Desk) -> Html:
        sheet = desk.sheets[desk.active]
        return tag("header", tag("span", "Heat-Spreader Layout Studio", class_="studio"),
                   _file_name(desk, sheet),
                   tag("nav", *self._file_controls(desk, sheet), class_="group", aria_label="File"),
                   tag("nav", *_history_controls(sheet), class_="group", aria_label="History"),
                   tag("nav", *self._view_controls(desk), class_="group", aria_label="View"), class_="bar")

    def _file_controls(self, desk: Desk, sheet: Sheet) -> list[Html]:
        return [
            opener("Open", "open-menu", "Open a layout file, a sample or an empty plate", data_keys="Ctrl+o",
                   data_keys_typing=True, data_name="open"),
            tag("div", *self._open_menu(desk), id="open-menu", popover=True, aria_label="Open"),
            _save_button(desk, sheet),
            opener("Save as", "save-menu", "Save under another name (Ctrl+Shift+S)", data_keys="Ctrl+Shift+s",
                   data_keys_typing=True, data_name="save-as"),
            tag("div", *_save_menu(desk, sheet), id="save-menu", popover=True, aria_label="Save as"),
            opener("Export", "export-menu", "Download the layout or the results as a JSON file",
                   data_name="export"),
            tag("div", tag("div",
                           button("Layout (JSON)", "export_layout", title="Download the layout document",
                                  data_name="export-layout"),
                           button("Results (JSON)", "export_results", title="Download the results document",
                                  data_name="export-results"), class_="menu", data_closes=True),
                id="export-menu", popover=True, aria_label="Export"),
        ]

    def _open_menu(self, desk: Desk) -> list[Html]:
        key = desk.active
        by_path = tag("form", text_field("Path on this computer", "", None, None, name="path",
                                         placeholder="/home/me/board.json", whole=True),
                      tag("button", "Open this path"), data_act="open_path", data_arg={"key": key},
                      data_closes=True)
        return [
            join(tag("h2", "Unsaved work found"), recovery_list(desk)) if desk.left else None,
            tag("h2", f"Open on sheet {key}"),
            tag("div",
                file_button("Choose a file…", "open_file", {"key": key}, "A layout as JSON, at most 5 MB"),
                button("Empty plate", "new", {"key": key}, "A bare plate to draw on"), class_="menu",
                data_closes=True),
            by_path if desk.may_use_paths else None,
            tag("p", "A layout file can also be dropped on the plate.", class_="soft small"),
            tag("h2", "Samples"), sample_cards(self._samples, key),
        ]

    def _view_controls(self, desk: Desk) -> list[Html]:
        dark = desk.theme == "dark"
        return [
            opener("Compare", "compare-menu", "Two layouts side by side", data_name="compare",
                   aria_pressed="true" if "B" in desk.sheets else None),
            tag("div", *_compare_menu(desk), id="compare-menu", popover=True, aria_label="Compare"),
            button("◐", "theme", title=f"Change to the {'light' if dark else 'dark'} theme",
                   aria_label=f"Change to the {'light' if dark else 'dark'} theme", data_name="theme"),
            opener("Help", "help-sheet", "Keys and cautions (?)", data_keys="?", data_name="help"),
            help_sheet("help-sheet"),
        ]

    # --- actions ---

    def do_new(self, arg: Any, _: Any) -> None:
        self.desk.new(arg["key"])

    def do_open_file(self, arg: Any, file: Any) -> None:
        open_chosen(self.desk, arg["key"], file)

    def do_open_path(self, arg: Any, values: Any) -> None:
        self.desk.open_path(arg["key"], str(values.get("path", "")))

    def do_open_sample(self, arg: Any, _: Any) -> None:
        self.desk.open_sample(arg["key"], self._samples[int(arg["sample"])])

    def do_restore(self, arg: Any, _: Any) -> None:
        restore(self.desk, arg)

    def do_discard(self, arg: Any, _: Any) -> None:
        discard(self.desk, arg)

    def do_save(self, *_: Any) -> None:
        self.desk.save(self.desk.active)

    def do_save_as(self, _: Any, values: Any) -> None:
        self.desk.save_as(self.desk.active, str(values.get("path", "")))

    def do_export_layout(self, *_: Any) -> None:
        self._download(*self.desk.layout_download(self.desk.active))
        self.desk.downloaded(self.desk.active)

    def do_export_results(self, *_: Any) -> None:
        document = self.desk.results_download(self.desk.active)
        if document is not None:
            self._download(*document)

    def do_undo(self, *_: Any) -> None:
        self.desk.undo(self.desk.active)

    def do_redo(self, *_: Any) -> None:
        self.desk.redo(self.desk.active)

    def do_jump(self, arg: Any, _: Any) -> None:
        self.desk.jump(self.desk.active, int(arg["at"]))

    def do_fork(self, *_: Any) -> None:
        self.desk.fork()

    def do_close_b(self, *_: Any) -> None:
        self.desk.close_b()

    def do_linked(self, _: Any, on: Any) -> None:
        self.desk.linked_view = bool(on)

    def do_difference(self, _: Any, on: Any) -> None:
        self.desk.difference = bool(on)

    def do_theme(self, *_: Any) -> None:
        self.desk.theme = "light" if self.desk.theme == "dark" else "dark"


def file_button(label: str, act: str, arg: Any, title: str) -> Html:
    """A button that lets a file be chosen."""
    return tag("label", label,
               tag("input", type="file", accept=".json,application/json", data_act=act, data_arg=arg,
                   data_most=MAX_BYTES, aria_label=label,
                   data_name=f"file-{arg['key']}"), class_="button file", title=title)


def open_chosen(desk: Desk, key: str, file: dict[str, Any]) -> None:
    """Open a file chosen in the browser, which tells only the size of one that is too large."""
    if file.get("text") is None:
        size, most = file["size"] / 1e6, MAX_BYTES / 1e6
        desk.tell(f"{file['name']} has {size:.1f} MB; a layout has at most {most:g} MB.", "error")
        return
    desk.open_text(key, str(file["name"]), str(file["text"]))


def sample_cards(samples: Sequence[Sample], key: str) -> Html:
    """The samples as cards with the first line of their story."""
    if not samples:
        return tag("p", "No samples are installed here.", class_="soft")
    return tag("ul",
               [tag("li", button(join(tag("b", sample.title), tag("span", sample.about, class_="soft small")),
                                 "open_sample", {"key": key, "sample": n}, class_="card",
                                 data_name=f"sample-{sample.path.stem}"))
                for n, sample in enumerate(samples)], class_="cards", data_closes=True)


def recovery_list(desk: Desk) -> Html:
    """What was left unsaved by a page that is gone: restore it or throw it away."""
    return tag("ul",
               [tag("li",
                    tag("div", tag("b", left.heading.title, class_="break"), tag("div", _left_words(left),
                                                                                 class_="soft small"),
                        class_="grow"),
                    button("Restore", "restore", {"id": left.id}, "Put this on the desk again"),
                    button("Discard", "discard", {"id": left.id}, "Remove it for good",
                           class_="danger"),
                    class_="row", data_key=left.id) for left in desk.left], class_="left",
               data_closes=True)


def restore(desk: Desk, arg: Any) -> None:
    for left in desk.left:
        if left.id == arg["id"]:
            desk.restore(left)
            break


def discard(desk: Desk, arg: Any) -> None:
    for left in desk.left:
        if left.id == arg["id"]:
            desk.discard(left)
            break


def _left_words(left: Any) -> str:
    steps = left.heading.unsaved_steps
    when = left.heading.saved_at.astimezone().strftime("%-d %B, %H:%M")
    return f"{steps} unsaved {'step' if steps == 1 else 'steps'}, last change {when}"


def _file_name(desk: Desk, sheet: Sheet) -> Html:
    where = sheet.path or "not saved to a file yet"
    return tag("span", tag("b", desk.active, class_="key") if "B" in desk.sheets else None,
               tag("span", sheet.name, class_="clip"),
               tag("span", "● unsaved", class_="unsaved small", title="There are changes that are not saved")
               if sheet.dirty
               else None, class_="file-name row grow", title=f"{sheet.name} ({where})", data_name="file-name",
               data_dirty="true" if sheet.dirty else "false")


def _save_button(desk: Desk, sheet: Sheet) -> Html:
    keys = {"data_keys": "Ctrl+s", "data_keys_typing": True, "data_name": "save"}
    if sheet.path is not None:
        return button("Save", "save", title=f"Save to {sheet.path} (Ctrl+S)", **keys)
    if desk.may_use_paths:
        return opener("Save", "save-menu", "Save to a file (Ctrl+S)", **keys)
    return button("Save", "export_layout", title="Download the layout to keep it (Ctrl+S)", **keys)


def _save_menu(desk: Desk, sheet: Sheet) -> list[Html]:
    download = button("Download a copy", "export_layout",
                      title="Keep the layout where the browser keeps downloads")
    if not desk.may_use_paths:
        return [tag("p",
                    "This studio is served from another computer; its layouts are kept by downloading them."),
                tag("div", download, class_="menu", data_closes=True)]
    name = sheet.name if sheet.name.endswith(".json") else f"{sheet.name}.json"
    form = tag("form", labelled("Path on this computer (~ is your home folder)",
                                tag("input", type="text", name="path", value=sheet.path or f"~/{name}",
                                    autofocus=True,
                                    spellcheck="false", autocomplete="off", data_name="save-path")),
               tag("div", tag("button", "Save", class_="main"), class_="row"),
               data_act="save_as", data_closes=True, class_="menu")
    return [form, tag("div", download, class_="menu", data_closes=True)]


def _history_controls(sheet: Sheet) -> list[Html]:
    history = sheet.history
    undo = f"Undo: {history.undo_name} (Ctrl+Z)" if history.can_undo else "Nothing to undo (Ctrl+Z)"
    redo = f"Redo: {history.redo_name} (Ctrl+Y)" if history.can_redo else "Nothing to redo (Ctrl+Y)"
    steps = [tag("li", button(step.name, "jump", {"at": n}, aria_current="true" if n == history.at else None,
                              class_="undone" if n > history.at else None))
             for n, step in reversed(list(enumerate(history.steps)))]
    return [
        button("↶ Undo", "undo", title=undo, disabled=not history.can_undo, data_keys="Ctrl+z",
               data_name="undo"),
        button("↷ Redo", "redo", title=redo, disabled=not history.can_redo, data_keys="Ctrl+y Ctrl+Shift+z",
               data_name="redo"),
        opener("History", "history-menu", "All steps; choose one to go there", data_name="history"),
        tag("div", tag("h2", "Newest step first"), tag("ol", steps, class_="menu steps"), id="history-menu",
            popover=True,
            aria_label="History"),
    ]


def _compare_menu(desk: Desk) -> list[Html]:
    if "B" not in desk.sheets:
        return [tag("h2", "A second layout beside this one, as sheet B"),
                tag("div",
                    button("Copy of this layout", "fork",
                           title="Change the copy and see what the change does",
                           data_name="fork"),
                    file_button("Choose a file…", "open_file", {"key": "B"},
                                "A layout as JSON, at most 5 MB"),
                    button("Empty plate", "new", {"key": "B"}, "A bare plate to draw on"), class_="menu",
                    data_closes=True)]
    return [_switch("Zoom and move both together", desk.linked_view, "linked"),
            _switch("Map of the difference, B \u2212 A", desk.difference, "difference"),
            tag("div", button("Copy A to B again", "fork", title="Replace B by a copy of A"),
                file_button("Choose a file for B…", "open_file", {"key": "B"},
                            "A layout as JSON, at most 5 MB"),
                button("Close B", "close_b", title="Go on with sheet A alone", data_name="close-b"),
                class_="menu",
                data_closes=True)]


def _switch(label: str, on: bool, act: str) -> Html:
    return tag("label", tag("input", type="checkbox", checked=on, data_act=act, data_name=act), label,
               class_="choice")
