"""Every edit of a layout: small functions, each giving an `Edit` with a name the history can show."""

from .edit import Edit, mm
from .fields import (
    remove_material,
    rename,
    set_field,
    set_field_of,
    set_layout_field,
    set_limits,
    set_material,
    set_plate,
)
from .rectangles import (
    add_contact,
    add_source,
    add_zone,
    delete,
    duplicate,
    move,
    place,
    reorder_zone,
    resize,
)
from .stack import add_layer, remove_layer, reorder_layer
from .surroundings import (
    merge_segments,
    move_cut,
    set_edge_segments,
    set_face,
    set_segment,
    split_segment,
)

__all__ = [
    "Edit", "add_contact", "add_layer", "add_source", "add_zone", "delete", "duplicate", "merge_segments",
    "mm", "move", "move_cut", "place", "remove_layer", "remove_material", "rename", "reorder_layer",
    "reorder_zone", "resize", "set_edge_segments", "set_face", "set_field", "set_field_of",
    "set_layout_field", "set_limits", "set_material", "set_plate", "set_segment", "split_segment",
]
