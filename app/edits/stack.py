"""Edits of the layer stack."""

from __future__ import annotations

from solver.document import Layout

from ..refs import Ref
from .edit import Document, Edit, changing, entry, fresh_id, mm


def add_layer(index: int = 0, material: str = "copper", thickness_mm: float = 1.0) -> Edit:
    """A new layer above the one of that index; an index past the end puts it at the bottom."""

    def change(document: Document, layout: Layout) -> None:
        layers = document["layers"]
        id_ = fresh_id((layer["id"] for layer in layers), "layer1")
        layers.insert(max(index, 0), {"id": id_, "thickness_mm": mm(thickness_mm), "material": material})

    return changing(f"Add layer of {material}", change)


def remove_layer(id_: str) -> Edit:
    """Take a layer away; zones lose it, and a zone of that layer alone goes with it."""

    def change(document: Document, layout: Layout) -> None:
        document["layers"].remove(entry(document, Ref("layer", id_)))
        for zone in document["zones"]:
            if zone["layers"] != "all":
                zone["layers"] = [name for name in zone["layers"] if name != id_]
        document["zones"] = [zone for zone in document["zones"] if zone["layers"]]

    return changing(f"Remove layer {id_}", change)


def reorder_layer(id_: str, steps: int) -> Edit:
    """Move a layer up (steps < 0) or down (steps > 0) in the stack."""

    def change(document: Document, layout: Layout) -> None:
        layers = document["layers"]
        at = layers.index(entry(document, Ref("layer", id_)))
        layers.insert(min(max(at + steps, 0), len(layers) - 1), layers.pop(at))

    return changing(f"Move layer {id_} {'down' if steps > 0 else 'up'}", change)
