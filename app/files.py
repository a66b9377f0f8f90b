"""Layouts and results as files: open, save, export. Faults are told in words a user can act on."""

from __future__ import annotations

import os
import re
from dataclasses import dataclass
from pathlib import Path

from solver.document import (
    MAX_BYTES,
    Layout,
    LayoutError,
    Results,
    dump_layout,
    dump_results,
    parse_layout,
    read_layout,
    write_layout,
)


class FileFault(Exception):
    """A file could not be read or written; the message is the sentence for the screen."""


@dataclass(frozen=True)
class FileAccess:
    """What a page may do with this computer's files: nothing unless it is served to this computer alone."""

    allow_paths: bool = True

    def read(self, path: str) -> tuple[Layout, Path]:
        """A layout and its absolute path. Raises FileFault, LayoutError."""
        self._check()
        full = _absolute(path)
        return layout_from_path(full), full

    def target(self, path: str) -> Path:
        """The absolute path to save to, with ".json" added. Raises FileFault when it cannot be saved to."""
        self._check()
        full = _absolute(path)
        if full.suffix.lower() != ".json":
            full = full.with_name(full.name + ".json")
        if not full.parent.is_dir():
            raise FileFault(f"There is no folder {full.parent}; choose a path in a folder that exists.")
        if full.is_dir():
            raise FileFault(f"{full} is a folder; add a file name.")
        if not os.access(full if full.exists() else full.parent, os.W_OK):
            raise FileFault(f"{full} may not be written; choose another path.")
        return full

    def write(self, path: Path, layout: Layout) -> None:
        """Save whole or not at all. Raises FileFault; the old file is then untouched."""
        self._check()
        try:
            write_layout(path, layout)
        except OSError as error:
            raise FileFault(f"{path} was not saved: {_reason(error)}. Your layout is still open.") from error

    def _check(self) -> None:
        if not self.allow_paths:
            raise FileFault("This studio is served to other computers, so it neither reads nor writes files "
                            "here; use upload and download.")


def layout_from_text(text: str | bytes) -> Layout:
    """A layout from a file's content. Raises FileFault for one too large, LayoutError for a faulty one."""
    size = len(text if isinstance(text, bytes) else text.encode())
    if size > MAX_BYTES:
        raise FileFault(f"The file has {size / 1e6:.1f} MB; a layout has at most {MAX_BYTES / 1e6:g} MB.")
    return parse_layout(text)


def layout_from_path(path: Path) -> Layout:
    """A layout from a file. Raises FileFault when it cannot be read, LayoutError for a faulty one."""
    try:
        return read_layout(path)
    except OSError as error:
        raise FileFault(f"{path} was not opened: {_reason(error)}.") from error


def changed_since(path: Path, layout: Layout) -> bool:
    """Whether a file that held this layout holds something else by now; False when it is gone."""
    try:
        return path.exists() and read_layout(path) != layout
    except (OSError, LayoutError):
        return True


def layout_text(layout: Layout) -> str:
    """The layout document as it is saved."""
    return dump_layout(layout)


def results_text(results: Results) -> str:
    """The results document as it is saved."""
    return dump_results(results)


def download_name(name: str, suffix: str = "") -> str:
    """A plain file name: "Copy of board.json", "results" -> "Copy-of-board-results.json"."""
    stem = re.sub(r"[^\w.-]+", "-", name.removesuffix(".json")).strip("-.") or "layout"
    return f"{stem[:80]}-{suffix}.json" if suffix else f"{stem[:80]}.json"


def _absolute(path: str) -> Path:
    if not path.strip() or "\0" in path:
        raise FileFault("Give a path.")
    return Path(path.strip()).expanduser().absolute()


def _reason(error: OSError) -> str:
    return (error.strerror or str(error)).lower()
