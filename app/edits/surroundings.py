"""Edits of what the plate touches: the segments of its four edges, and its two faces."""

from __future__ import annotations

from typing import Any

from solver.document import Fault, Layout, LayoutError

from .edit import Document, Edit, canonical, changing, mm

FIGURES: dict[str, dict[str, float | None]] = {
    "insulated": {},
    "fixed": {"temperature_c": None},
    "convective": {"film_w_m2k": 10.0, "fluid_c": None},
}
"""The figures each kind takes, with what a newly chosen one starts from; None: not given, so ambient."""

LENGTH = {"west": "height_mm", "east": "height_mm", "south": "width_mm", "north": "width_mm"}


def set_segment(side: str, index: int, kind: str, **figures: float | None) -> Edit:
    """Another kind and figures for one edge segment; figures not given stay, or start from FIGURES."""

    def change(document: Document, layout: Layout) -> None:
        segment = _segments(document, side, index)[index]
        span = {field: segment[field] for field in ("from_mm", "to_mm") if field in segment}
        document["edges"][side][index] = span | _condition(kind, segment, figures)

    return changing(f"Set {side} edge to {kind}", change)


def split_segment(side: str, index: int, at_mm: float | None = None) -> Edit:
    """Cut a segment in two alike, in its middle or at a distance from the edge's south or west end."""

    def change(document: Document, layout: Layout) -> None:
        segments = _segments(document, side, index)
        low, high = _span(document, side, segments[index])
        at = mm((low + high) / 2 if at_mm is None else at_mm)
        if not low < at < high:
            raise _fault(side, f"the cut at {at:g} mm must lie inside the segment, {low:g} to {high:g} mm")
        segments[index : index + 1] = [dict(segments[index], from_mm=low, to_mm=at),
                                       dict(segments[index], from_mm=at, to_mm=high)]

    return changing(f"Split {side} edge", change)


def merge_segments(side: str, index: int) -> Edit:
    """Join a segment with the next one along the edge; the joined one is what the first was."""

    def change(document: Document, layout: Layout) -> None:
        segments = _segments(document, side, index)
        low, end = _span(document, side, segments[index])
        after = [segment for segment in segments if _span(document, side, segment)[0] >= end]
        if not after:
            raise _fault(side, "there is no next segment to join with")
        following = min(after, key=lambda segment: _span(document, side, segment)[0])
        _, high = _span(document, side, following)
        segments[index] = dict(segments[index], from_mm=low, to_mm=high)
        segments.remove(following)
        if len(segments) == 1 and (low, high) == (0.0, document["plate"][LENGTH[side]]):
            del segments[0]["from_mm"], segments[0]["to_mm"]

    return changing(f"Merge segments of {side} edge", change)


def move_cut(side: str, index: int, at_mm: float) -> Edit:
    """Move the end of a segment; the segment that started there now starts at the new place."""

    def change(document: Document, layout: Layout) -> None:
        segments = _segments(document, side, index)
        low, end = _span(document, side, segments[index])
        for segment in segments:
            start, high = _span(document, side, segment)
            if start == end:
                segment |= {"from_mm": mm(at_mm), "to_mm": high}
        segments[index] |= {"from_mm": low, "to_mm": mm(at_mm)}

    return changing(f"Move cut of {side} edge", change)


def set_edge_segments(side: str, segments: list[Document] | tuple[Document, ...]) -> Edit:
    """All segments of one side at once, as they are written in the document."""

    def change(document: Document, layout: Layout) -> None:
        document["edges"][side] = [
            {field: canonical(field, value) for field, value in segment.items() if value is not None}
            for segment in segments]

    return changing(f"Set {side} edge", change)


def set_face(face: str, kind: str, **figures: float | None) -> Edit:
    """Another kind and figures for a face; figures not given stay, or start from FIGURES."""

    def change(document: Document, layout: Layout) -> None:
        document["faces"][face] = _condition(kind, document["faces"][face], figures)

    return changing(f"Set {face} face to {kind}", change)


def _condition(kind: str, before: Document, figures: dict[str, Any]) -> Document:
    """A face's or segment's own fields; a figure given as None is taken back to ambient."""
    defaults = FIGURES.get(kind, {})
    values = {**defaults, **{field: before[field] for field in defaults if field in before}, **figures}
    return {"kind": kind} | {
        field: canonical(field, value) for field, value in values.items() if value is not None}


def _segments(document: Document, side: str, index: int) -> list[Document]:
    segments = document["edges"].get(side, [])
    if not 0 <= index < len(segments):
        raise _fault(side, f"there is no segment {index + 1}, the edge has {len(segments)}")
    return segments


def _span(document: Document, side: str, segment: Document) -> tuple[float, float]:
    """Where a segment starts and ends along its side, mm."""
    return segment.get("from_mm", 0.0), segment.get("to_mm", document["plate"][LENGTH[side]])


def _fault(side: str, message: str) -> LayoutError:
    return LayoutError((Fault(f"edges.{side}", message),))
