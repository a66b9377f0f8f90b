"""Edits of single figures and texts: of any thing, and of the layout itself."""

from __future__ import annotations

from typing import Any

from solver.document import Layout

from ..refs import Ref, words
from .edit import Document, Edit, canonical, changing, entry, mm

WORDS: dict[str, tuple[str, str]] = {
    "x_mm": ("x", "mm"), "y_mm": ("y", "mm"), "width_mm": ("width", "mm"), "height_mm": ("height", "mm"),
    "thickness_mm": ("thickness", "mm"), "from_mm": ("start", "mm"), "to_mm": ("end", "mm"),
    "power_w": ("power", "W"), "r_junction_case_k_w": ("junction-case resistance", "K/W"),
    "interface_k_mm2_w": ("joint resistance", "K·mm²/W"), "limit_c": ("limit", "°C"),
    "limit_at": ("limit place", ""), "conductance_w_m2k": ("conductance", "W/m²K"), "sink_c": ("sink", "°C"),
    "temperature_c": ("temperature", "°C"), "film_w_m2k": ("film", "W/m²K"), "fluid_c": ("fluid", "°C"),
    "ambient_c": ("ambient", "°C"), "plate_c": ("plate limit", "°C"),
    "warn_margin_k": ("warning margin", "K"),
}
"""What a step name calls a field, and its unit. A field not listed goes by its own name."""


def set_field(ref: Ref, field: str, value: Any) -> Edit:
    """Give one field of one thing another value; None takes it back to not given."""

    def change(document: Document, layout: Layout) -> None:
        _set(entry(document, ref), field, value)

    return changing(_set_name(field, value, words(ref)), change)


def set_field_of(refs: tuple[Ref, ...] | list[Ref], field: str, value: Any) -> Edit:
    """The same value for the same field of several things."""

    def change(document: Document, layout: Layout) -> None:
        for ref in refs:
            _set(entry(document, ref), field, value)

    whose = words(refs[0]) if len(refs) == 1 else f"{len(refs)} things"
    return changing(_set_name(field, value, whose), change)


def rename(ref: Ref, id_: str) -> Edit:
    """Another id for a source, zone, contact or layer; zones that name a renamed layer follow."""

    def change(document: Document, layout: Layout) -> None:
        entry(document, ref)["id"] = id_
        if ref.kind == "layer":
            for zone in document["zones"]:
                if zone["layers"] != "all":
                    zone["layers"] = [id_ if name == ref.id else name for name in zone["layers"]]

    return changing(f"Rename {ref.id} to {id_}", change)


def set_layout_field(field: str, value: Any) -> Edit:
    """`title`, `notes` or `ambient_c` of the layout."""

    def change(document: Document, layout: Layout) -> None:
        _set(document, field, value)

    return changing(f"Change {field}" if field in ("title", "notes") else _set_name(field, value, ""), change)


def set_limits(field: str, value: float | None) -> Edit:
    """`plate_c` or `warn_margin_k` of the limits."""

    def change(document: Document, layout: Layout) -> None:
        _set(document.setdefault("limits", {}), field, value)

    return changing(_set_name(field, value, ""), change)


def set_plate(width_mm: float | None = None, height_mm: float | None = None) -> Edit:
    """Another plate size; the last segment of an edge ends where the edge now ends.

    Raises LayoutError, naming them, when sources or contacts no longer lie on the plate.
    """

    def change(document: Document, layout: Layout) -> None:
        plate = document["plate"]
        for field, value, sides in (("width_mm", width_mm, ("south", "north")),
                                    ("height_mm", height_mm, ("west", "east"))):
            if value is None:
                continue
            old, plate[field] = plate[field], mm(value)
            for side in sides:
                document["edges"][side] = _fitted(document["edges"][side], old, plate[field])

    size = " and ".join(f"{words_} to {value:g} mm" for words_, value in
                        (("width", width_mm), ("height", height_mm)) if value is not None)
    return changing(f"Set plate {size}", change)


def set_material(name: str, **figures: float | None) -> Edit:
    """Define a material of the layout's own, or replace it, from the contract's figures (`k_w_mk`, ...)."""

    def change(document: Document, layout: Layout) -> None:
        document.setdefault("materials", {})[name] = {
            field: canonical(field, value) for field, value in figures.items() if value is not None}

    return changing(f"Define material {name}", change)


def remove_material(name: str) -> Edit:
    """Take away a material of the layout's own. Raises LayoutError when it is used and not in the table."""

    def change(document: Document, layout: Layout) -> None:
        document.get("materials", {}).pop(name, None)

    return changing(f"Remove material {name}", change)


def _set(thing: Document, field: str, value: Any) -> None:
    if value is None:
        thing.pop(field, None)
    else:
        thing[field] = canonical(field, value)


def _set_name(field: str, value: Any, whose: str) -> str:
    word, unit = WORDS.get(field, (field.replace("_", " "), ""))
    of = f" of {whose}" if whose else ""
    if value is None:
        return f"Clear {word}{of}"
    figure = f"{value:g}" if isinstance(value, int | float) and not isinstance(value, bool) else _short(value)
    return f"Set {word}{of} to {figure} {unit}".rstrip()


def _short(value: Any) -> str:
    text = value if isinstance(value, str) else ", ".join(map(str, value))
    return text if len(text) <= 40 else text[:39] + "…"


def _fitted(segments: list[Document], old: float, new: float) -> list[Document]:
    """Segments of an edge that was `old` and is now `new` mm long."""
    kept = [segment for segment in segments if segment.get("from_mm", 0.0) < new]
    for segment in kept:
        end = segment.get("to_mm")
        if end is not None and (end >= old or end > new):
            segment["to_mm"] = new
    return kept
