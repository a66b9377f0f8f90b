"""What autosave keeps of a desk, and its JSON form."""

from __future__ import annotations

import json
from collections.abc import Callable
from dataclasses import dataclass
from datetime import UTC, datetime

from solver.document import Layout, LayoutError, dump_layout, parse_layout

from .history import History, Step

FORMAT = "heat-spreader-desk"
VERSION = 1
STEPS_KEPT = 20
"""Steps of the history kept either side of the present one."""
MOST_HISTORY_CHARS = 4_000_000
"""A longer record is written again without its history."""


BROKEN = (ValueError, KeyError, TypeError, IndexError, AttributeError, LayoutError)
"""What reading a damaged record can raise."""


class DamagedRecordError(Exception):
    """A record cannot be read; the message says why."""


@dataclass(frozen=True)
class SheetRecord:
    """A sheet: its title and file, its history, and the layout as last opened or saved."""

    name: str
    path: str | None
    history: History
    saved: Layout

    @property
    def unsaved_steps(self) -> int:
        """Steps from the saved layout to the present one; at least 1 when they differ."""
        history = self.history
        if history.present == self.saved:
            return 0
        away = [abs(history.at - i) for i, step in enumerate(history.steps) if step.layout == self.saved]
        return min(away, default=max(history.at, 1))


@dataclass(frozen=True)
class DeskRecord:
    """A desk at one moment: its sheets by key, and which one was active."""

    saved_at: datetime
    active: str
    sheets: dict[str, SheetRecord]

    @property
    def unsaved_steps(self) -> int:
        return sum(sheet.unsaved_steps for sheet in self.sheets.values())

    @property
    def title(self) -> str:
        return " and ".join(sheet.name for sheet in self.sheets.values())


@dataclass(frozen=True)
class Heading:
    """What a list of records shows of one."""

    title: str
    saved_at: datetime
    unsaved_steps: int


def now() -> datetime:
    return datetime.now(UTC)


def record_text(record: DeskRecord, layout_text: Callable[[Layout], str] = dump_layout) -> str:
    """The JSON of a record, with the history near the present as far as it is not too long.

    layout_text: gives a layout's JSON; an autosave remembers what it has written before.
    """
    for reach in (STEPS_KEPT, 0):
        sheets = {key: _sheet_document(sheet, reach, layout_text) for key, sheet in record.sheets.items()}
        text = json.dumps({"format": FORMAT, "version": VERSION, "saved_at": record.saved_at.isoformat(),
                           "active": record.active, "unsaved_steps": record.unsaved_steps,
                           "title": record.title, "sheets": sheets})
        if len(text) <= MOST_HISTORY_CHARS:
            break
    return text


def parse_heading(text: str) -> Heading:
    """What a list of records shows, without reading their layouts. Raises DamagedRecordError."""
    try:
        document = _document(text)
        return Heading(str(document["title"]), datetime.fromisoformat(document["saved_at"]),
                       int(document["unsaved_steps"]))
    except BROKEN as error:
        raise DamagedRecordError(f"it cannot be read ({type(error).__name__})") from error


def parse_record(text: str) -> DeskRecord:
    """A record from its JSON; every layout is checked as a file would be. Raises DamagedRecordError."""
    try:
        document = _document(text)
        written = document["sheets"]
        sheets = {key: _sheet_record(written[key]) for key in ("A", "B") if key in written}
        active = document["active"]
        if "A" not in sheets or active not in sheets:
            raise DamagedRecordError("it has no sheet A")
        return DeskRecord(datetime.fromisoformat(document["saved_at"]), active, sheets)
    except BROKEN as error:
        raise DamagedRecordError(f"it cannot be read ({type(error).__name__})") from error


def _document(text: str) -> dict:
    document = json.loads(text)
    if (document["format"], document["version"]) != (FORMAT, VERSION):
        raise DamagedRecordError("it is of another version")
    return document


def _sheet_document(sheet: SheetRecord, reach: int, layout_text: Callable[[Layout], str]) -> dict:
    history = sheet.history.kept_near(reach)
    texts: list[str] = []
    places: dict[int, int] = {}

    def place(layout: Layout) -> int:
        if id(layout) not in places:
            places[id(layout)] = len(texts)
            texts.append(layout_text(layout))
        return places[id(layout)]

    steps = [[step.name, place(step.layout)] for step in history.steps]
    return {"name": sheet.name, "path": sheet.path, "at": history.at, "steps": steps,
            "saved": place(sheet.saved), "layouts": texts}


def _sheet_record(document: dict) -> SheetRecord:
    layouts = [parse_layout(text) for text in document["layouts"]]
    steps = tuple(Step(str(name), layouts[place]) for name, place in document["steps"])
    at, path = document["at"], document["path"]
    if not (isinstance(at, int) and 0 <= at < len(steps)) or not isinstance(path, str | None):
        raise DamagedRecordError("its history does not fit together")
    return SheetRecord(str(document["name"]), path, History(steps, at), layouts[document["saved"]])
