"""Edits of the rectangles on the plate: sources, zones, contacts; one or many at once."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from typing import Any

from solver.document import Layout

from ..refs import COLLECTIONS, RECTANGLES, Ref
from .edit import Document, Edit, canonical, changing, entries, entry, fresh_id, list_of, mm

AXES = (("x_mm", "width_mm"), ("y_mm", "height_mm"))
ON_PLATE = ("source", "contact")
"""Kinds that have to lie on the plate; a zone may reach past it."""


def move(refs: Sequence[Ref], dx_mm: float, dy_mm: float) -> Edit:
    """Move rectangles together; the whole group stops where a source or contact meets the plate's edge."""
    refs = _rectangles(refs)

    def change(document: Document, layout: Layout) -> None:
        things = entries(document, refs)
        for axis, plate, step in zip(AXES, _plate(document), (dx_mm, dy_mm), strict=True):
            _shift(things, axis, _allowed_step(things, axis, plate, step))

    return changing(f"Move {list_of([ref.id for ref in refs])}", change)


def resize(ref: Ref, *, x_mm: float | None = None, y_mm: float | None = None, width_mm: float | None = None,
           height_mm: float | None = None) -> Edit:
    """Give one rectangle other sides; those not given stay."""
    given = {"x_mm": x_mm, "y_mm": y_mm, "width_mm": width_mm, "height_mm": height_mm}
    item = {"kind": ref.kind, "id": ref.id, **{k: v for k, v in given.items() if v is not None}}
    return place([item], f"Resize {ref.id}")


def place(items: Iterable[Mapping[str, Any]], name: str = "") -> Edit:
    """Put rectangles where a gesture has them.

    items: {kind, id, x_mm, y_mm, width_mm, height_mm}; sides left out stay as they are. Sources and contacts
    are held on the plate: pushed back in when they only moved, cut at its edge when their size changed.
    """
    items = [dict(item) for item in items]

    def change(document: Document, layout: Layout) -> None:
        things = entries(document, (Ref(item["kind"], item["id"]) for item in items))
        for item in items:
            thing = things[Ref(item["kind"], item["id"])]
            for (low, size), plate in zip(AXES, _plate(document), strict=True):
                start, length = mm(item.get(low, thing[low])), mm(item.get(size, thing[size]))
                if item["kind"] in ON_PLATE:
                    start, length = _held(start, length, plate, resized=length != thing[size])
                thing[low], thing[size] = start, length

    return changing(name or f"Place {list_of([item['id'] for item in items])}", change)


def add_source(layout: Layout, x_mm: float, y_mm: float, width_mm: float = 10.0, height_mm: float = 10.0,
               **fields: Any) -> Edit:
    """A new source, 5 W on the top face unless `fields` say otherwise, held on the plate."""
    default = {"face": "top", "power_w": 5.0}
    return _add(layout, "source", "Q", (x_mm, y_mm, width_mm, height_mm), default | fields)


def add_zone(layout: Layout, x_mm: float, y_mm: float, width_mm: float = 10.0, height_mm: float = 10.0,
             **fields: Any) -> Edit:
    """A new zone, copper in the top layer unless `fields` say otherwise."""
    default = {"layers": [layout.layers[0].id], "material": "copper"}
    return _add(layout, "zone", "Z", (x_mm, y_mm, width_mm, height_mm), default | fields)


def add_contact(layout: Layout, x_mm: float, y_mm: float, width_mm: float = 10.0, height_mm: float = 10.0,
                **fields: Any) -> Edit:
    """A new contact, 3000 W/m²K to ambient on the bottom face unless `fields` say otherwise, on the plate."""
    default = {"face": "bottom", "conductance_w_m2k": 3000.0}
    return _add(layout, "contact", "C", (x_mm, y_mm, width_mm, height_mm), default | fields)


def delete(refs: Sequence[Ref]) -> Edit:
    """Take away sources, zones and contacts; other refs are left alone."""
    refs = _rectangles(refs)

    def change(document: Document, layout: Layout) -> None:
        entries(document, refs)
        for kind in RECTANGLES:
            gone = {ref.id for ref in refs if ref.kind == kind}
            collection = COLLECTIONS[kind]
            document[collection] = [thing for thing in document[collection] if thing["id"] not in gone]

    return changing(f"Delete {list_of([ref.id for ref in refs])}", change)


def duplicate(refs: Sequence[Ref], dx_mm: float = 2.0, dy_mm: float = -2.0) -> Edit:
    """Copies with fresh ids, a little aside, towards the other side where the plate ends."""
    refs = _rectangles(refs)

    def change(document: Document, layout: Layout) -> None:
        copies = {}
        for ref, thing in entries(document, refs).items():
            collection = document[COLLECTIONS[ref.kind]]
            copy = dict(thing, id=fresh_id((other["id"] for other in collection), ref.id))
            collection.append(copy)
            copies[Ref(ref.kind, copy["id"])] = copy
        for axis, plate, step in zip(AXES, _plate(document), (dx_mm, dy_mm), strict=True):
            _shift(copies, axis, _allowed_step(copies, axis, plate, step)
                   or _allowed_step(copies, axis, plate, -step))

    return changing(f"Duplicate {list_of([ref.id for ref in refs])}", change)


def reorder_zone(id_: str, steps: int) -> Edit:
    """Bring a zone forward (steps > 0: it lies over more of the others) or send it back (steps < 0)."""

    def change(document: Document, layout: Layout) -> None:
        zones = document["zones"]
        zone = entry(document, Ref("zone", id_))
        at = zones.index(zone)
        zones.insert(min(max(at + steps, 0), len(zones) - 1), zones.pop(at))

    return changing(f"Bring {id_} forward" if steps > 0 else f"Send {id_} back", change)


def _add(layout: Layout, kind: str, stem: str, rectangle: tuple[float, float, float, float],
         fields: dict[str, Any]) -> Edit:
    id_ = fresh_id((thing.id for thing in getattr(layout, COLLECTIONS[kind])), f"{stem}1")

    def change(document: Document, layout: Layout) -> None:
        thing: Document = {"id": id_}
        for (low, size), plate, start, length in zip(AXES, _plate(document), rectangle[:2], rectangle[2:],
                                                     strict=True):
            start, length = mm(start), mm(length)
            if kind in ON_PLATE:
                start, length = _held(start, min(length, plate), plate, resized=False)
            thing[low], thing[size] = start, length
        thing |= {field: canonical(field, value) for field, value in fields.items() if value is not None}
        document[COLLECTIONS[kind]].append(thing)

    return changing(f"Add {kind} {id_}", change)


def _rectangles(refs: Sequence[Ref]) -> tuple[Ref, ...]:
    return tuple(dict.fromkeys(ref for ref in refs if ref.kind in RECTANGLES))


def _plate(document: Document) -> tuple[float, float]:
    return document["plate"]["width_mm"], document["plate"]["height_mm"]


def _held(start: float, length: float, plate: float, resized: bool) -> tuple[float, float]:
    """A side of a rectangle held on the plate: cut where its size changed, else pushed back in, mm."""
    if resized:
        low, high = max(start, 0.0), min(start + length, plate)
        return (mm(low), mm(high - low)) if high > low else (start, length)
    return mm(min(max(start, 0.0), max(plate - length, 0.0))), length


def _allowed_step(things: dict[Ref, Document], axis: tuple[str, str], plate: float, step: float) -> float:
    """The part of a step that leaves every source and contact on the plate, mm."""
    low, size = axis
    for ref, thing in things.items():
        if ref.kind in ON_PLATE:
            step = min(max(step, -thing[low]), plate - thing[size] - thing[low])
    return step


def _shift(things: dict[Ref, Document], axis: tuple[str, str], step: float) -> None:
    for thing in things.values():
        thing[axis[0]] = mm(thing[axis[0]] + step)
