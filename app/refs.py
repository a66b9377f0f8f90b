"""Pointing at one thing of a layout: a source, zone, contact, layer, face or edge segment."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Literal

from solver.document import Layout

Kind = Literal["source", "zone", "contact", "edge", "face", "layer"]

COLLECTIONS: dict[str, str] = {"source": "sources", "zone": "zones", "contact": "contacts", "layer": "layers"}
"""The kinds that have ids, and the layout's field each lives in."""

RECTANGLES = ("source", "zone", "contact")
"""The kinds drawn on the plate."""

SIDES = ("west", "east", "south", "north")
FACES = ("top", "bottom")


@dataclass(frozen=True)
class Ref:
    """One thing of a layout. `id` of an edge is "SIDE:INDEX" ("west:0"), of a face "top" or "bottom"."""

    kind: Kind
    id: str


def refs_of(layout: Layout) -> tuple[Ref, ...]:
    """Every thing that can be pointed at, in document order."""
    named = [Ref(kind, thing.id) for kind, field in COLLECTIONS.items() for thing in getattr(layout, field)]
    edges = [Ref("edge", f"{side}:{i}") for side in SIDES for i in range(len(getattr(layout.edges, side)))]
    return (*named, *edges, *(Ref("face", face) for face in FACES))


def find(layout: Layout, ref: Ref) -> Any:
    """The model a ref points at, or None when the layout has no such thing."""
    if ref.kind == "face":
        return getattr(layout.faces, ref.id, None)
    if ref.kind == "edge":
        side, _, index = ref.id.partition(":")
        segments = getattr(layout.edges, side, ())
        return segments[int(index)] if index.isdigit() and int(index) < len(segments) else None
    return next((thing for thing in getattr(layout, COLLECTIONS[ref.kind]) if thing.id == ref.id), None)


def words(ref: Ref) -> str:
    """How a step name or a notice calls the thing: "Q1", "top face", "west edge, segment 1"."""
    if ref.kind == "face":
        return f"{ref.id} face"
    if ref.kind == "edge":
        side, _, index = ref.id.partition(":")
        return f"{side} edge, segment {int(index) + 1}"
    return ref.id


def selection_after(before: Layout, after: Layout, selection: tuple[Ref, ...]) -> tuple[Ref, ...]:
    """What is selected once `before` has become `after`: things that have just appeared, else what is left.

    Only named things count as new; segments are counted, so a new index is no new thing.
    """
    old, new = set(refs_of(before)), refs_of(after)
    appeared = tuple(ref for ref in new if ref.kind in COLLECTIONS and ref not in old)
    return appeared or tuple(ref for ref in selection if ref in set(new))
