"""What is wrong with a document: the field's path, what was given, what is allowed."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Fault:
    """path: where in the document, "sources[2].power_w"; message: what is wrong, what was given, what is allowed."""

    path: str
    message: str

    def __str__(self) -> str:
        return f"{self.path}: {self.message}" if self.path else self.message


class LayoutError(Exception):
    """A layout with faults, all of them."""

    def __init__(self, faults: tuple[Fault, ...]) -> None:
        super().__init__("\n".join(str(fault) for fault in faults))
        self.faults = faults


def shown(value: object, most: int = 60) -> str:
    """A value as a fault shows it: short, one line."""
    text = " ".join(repr(value).split())
    return text if len(text) <= most else text[: most - 1] + "…"
