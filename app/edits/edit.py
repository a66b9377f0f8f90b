"""What an edit is: a name and a pure function from one sound layout to the next.

An edit changes the document as written (plain dicts and lists) and reads it again, so every rule of the
document is checked once, in its one home, and a fault carries the path a person finds in the file.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Iterable
from dataclasses import dataclass
from typing import Any

from solver.document import Fault, Layout, LayoutError, parse_layout

from ..refs import COLLECTIONS, Ref

Document = dict[str, Any]


@dataclass(frozen=True)
class Edit:
    """`name` is what the history shows. `apply(layout)` returns the changed layout or raises LayoutError."""

    name: str
    apply: Callable[[Layout], Layout]


def changing(name: str, change: Callable[[Document, Layout], None]) -> Edit:
    """An edit from a function that changes the written document in place; it also gets the layout before."""

    def apply(layout: Layout) -> Layout:
        document = written(layout)
        change(document, layout)
        changed = sharing(layout, parse_layout(document))
        return layout if changed == layout else changed

    return Edit(name, apply)


def sharing(before: Layout, after: Layout) -> Layout:
    """`after`, with everything that is as it was `before` being the same object.

    A long history of a large layout then costs little more than what changed, and is compared quickly.
    """
    same = {}
    for field in COLLECTIONS.values():
        known = {thing.id: thing for thing in getattr(before, field)}
        things = tuple(known[thing.id] if known.get(thing.id) == thing else thing
                       for thing in getattr(after, field))
        same[field] = getattr(before, field) if things == getattr(before, field) else things
    return after.model_copy(update=same)


def written(layout: Layout) -> Document:
    """The layout document as plain dicts and lists, without what was not given."""
    return layout.model_dump(mode="json", exclude_none=True)


def entry(document: Document, ref: Ref) -> Document:
    """The dict of a named thing, edge segment or face. Raises LayoutError when it is not there."""
    if ref.kind == "face" and ref.id in document["faces"]:
        return document["faces"][ref.id]
    if ref.kind == "edge":
        side, _, index = ref.id.partition(":")
        segments = document["edges"].get(side, [])
        if index.isdigit() and int(index) < len(segments):
            return segments[int(index)]
    elif ref.kind in COLLECTIONS:
        return entries(document, [ref])[ref]
    raise missing(ref)


def entries(document: Document, refs: Iterable[Ref]) -> dict[Ref, Document]:
    """The dicts of several named things by ref. Raises LayoutError when one is not there."""
    refs = list(refs)
    known = {kind: {thing["id"]: thing for thing in document[field]} for kind, field in COLLECTIONS.items()}
    for ref in refs:
        if ref.id not in known.get(ref.kind, ()):
            raise missing(ref)
    return {ref: known[ref.kind][ref.id] for ref in refs}


def missing(ref: Ref) -> LayoutError:
    return LayoutError((Fault(COLLECTIONS.get(ref.kind, ref.kind), f"there is no {ref.kind} {ref.id!r}"),))


def mm(value: float) -> float:
    """A length in its canonical form: a float rounded to 1e-6 mm, never -0.0."""
    return round(float(value), 6) + 0.0


def canonical(field: str, value: Any) -> Any:
    """A field's value as it is written: numbers are floats, lengths rounded; anything else unchanged."""
    if isinstance(value, bool) or not isinstance(value, int | float):
        return value
    return mm(value) if field.endswith("_mm") else float(value) + 0.0


def list_of(ids: list[str] | tuple[str, ...]) -> str:
    """A few ids in words: "Q1", "Q1 and Q2", "5 things"."""
    if not ids:
        return "nothing"
    if len(ids) > 3:
        return f"{len(ids)} things"
    return " and ".join((", ".join(ids[:-1]), ids[-1])) if len(ids) > 1 else ids[0]


def fresh_id(taken: Iterable[str], like: str) -> str:
    """An id that is free, counted up from `like`: "Q1" -> "Q2", "gap" -> "gap2"; `like` itself when free."""
    taken = set(taken)
    stem, digits = re.fullmatch(r"(.*?)(\d{0,6})", like, re.DOTALL).groups()
    number = int(digits or 1)
    candidate = like
    while candidate in taken:
        number += 1
        candidate = f"{stem}{number}"
    return candidate
