"""The sample layouts that come with the studio."""

from __future__ import annotations

import logging
import sysconfig
from dataclasses import dataclass
from pathlib import Path

from solver.document import LayoutError, read_layout

log = logging.getLogger(__name__)


@dataclass(frozen=True)
class Sample:
    """One sample: its title and the first line of its notes."""

    path: Path
    title: str
    about: str


def samples(folder: Path | None = None) -> tuple[Sample, ...]:
    """The samples by title. A file that cannot be read is left out and logged."""
    folder = folder or samples_folder()
    found = []
    for path in sorted(folder.glob("*.json")) if folder else ():
        try:
            layout = read_layout(path)
        except (OSError, LayoutError) as error:
            log.warning("Sample %s is left out: %s", path.name, error)
            continue
        found.append(Sample(path, layout.title or path.stem, first_line(layout.notes)))
    return tuple(sorted(found, key=lambda sample: sample.title))


def samples_folder() -> Path | None:
    """`sample_layouts/` beside the package in a working copy, else where an installation put it, else
    None."""
    beside = Path(__file__).resolve().parent.parent / "sample_layouts"
    installed = Path(sysconfig.get_path("data"), "share", "heat-spreader-studio", "sample_layouts")
    return next((folder for folder in (beside, installed) if folder.is_dir()), None)


def first_line(notes: str) -> str:
    return notes.strip().partition("\n")[0].strip()
