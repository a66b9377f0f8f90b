"""The inspector: exact figures of what is selected, or of the plate when nothing is."""

from __future__ import annotations

from typing import Any

from .. import edits
from ..desk import Desk
from ..edits.fields import WORDS
from ..refs import RECTANGLES, Ref, find
from ..sheet import Sheet
from .forms import conductivities, figure
from .html import Html, tag
from .inspector_plate import plate_form
from .inspector_shapes import shapes_form
from .inspector_surroundings import edge_form, face_form, layer_form
from .pane import Pane


class Inspector(Pane):
    desk_watched = ("active", "plane")
    sheet_watched = ("layout", "selection")

    def draw(self, desk: Desk) -> Html:
        sheet = desk.sheets[desk.active]
        return tag("section", *_form(sheet), class_="inspector-body", data_keys="f",
                   aria_label="Figures of what is selected",
                   data_selected=" ".join(f"{ref.kind}:{ref.id}" for ref in sheet.selection))

    # --- actions: every one is one edit of what is selected ---

    @property
    def sheet(self) -> Sheet:
        return self.desk.sheets[self.desk.active]

    @property
    def refs(self) -> tuple[Ref, ...]:
        return self.sheet.selection

    def edit(self, edit: edits.Edit) -> bool:
        return self.desk.edit(self.desk.active, edit)

    def with_figure(self, field: str, text: Any, may_be_empty: bool, use: Any) -> None:
        """Read a figure and use it, or say what is wrong with it."""
        try:
            value = figure(field, text, may_be_empty)
        except ValueError as fault:
            self.desk.tell(str(fault), "error")
        else:
            use(value)

    def do_figure(self, arg: Any, text: Any) -> None:
        """A figure of everything selected; sides of rectangles go through the edit that keeps the plate."""
        field = arg["field"]

        def use(value: float | None) -> None:
            if field in ("x_mm", "y_mm", "width_mm", "height_mm") and self.refs[0].kind in RECTANGLES:
                items = [{"kind": ref.kind, "id": ref.id, field: value} for ref in self.refs]
                whose = self.refs[0].id if len(self.refs) == 1 else f"{len(self.refs)} things"
                word, unit = WORDS[field]
                self.edit(edits.place(items, f"Set {word} of {whose} to {value:g} {unit}"))
            else:
                self.edit(edits.set_field_of(self.refs, field, value))

        self.with_figure(field, text, arg.get("optional", False), use)

    def do_text(self, arg: Any, text: Any) -> None:
        self.edit(edits.set_field_of(self.refs, arg["field"], str(text)))

    def do_rename(self, _: Any, text: Any) -> None:
        ref, id_ = self.refs[0], str(text).strip()
        if self.edit(edits.rename(ref, id_)):
            self.desk.select(self.desk.active, [Ref(ref.kind, id_)])
            if self.desk.plane == f"layer:{ref.id}":
                self.desk.plane = f"layer:{id_}"

    def do_zone_layer(self, arg: Any, on: Any) -> None:
        layout = self.sheet.layout
        zone = find(layout, self.refs[0])
        if arg == "all":
            layers: Any = "all" if on else [layout.layers[0].id]
        else:
            now = [layer.id for layer in layout.layers] if zone.layers == "all" else zone.layers
            layers = [layer.id for layer in layout.layers if (layer.id in now) != (layer.id == arg)]
        self.edit(edits.set_field(self.refs[0], "layers", layers))

    def do_forward(self, arg: Any, _: Any) -> None:
        self.edit(edits.reorder_zone(self.refs[0].id, int(arg)))

    def do_delete(self, *_: Any) -> None:
        self.edit(edits.delete(self.refs))

    def do_duplicate(self, *_: Any) -> None:
        self.edit(edits.duplicate(self.refs))

    def do_unselect(self, *_: Any) -> None:
        self.desk.select(self.desk.active, [])

    # layers

    def do_add_layer(self, arg: Any, _: Any) -> None:
        ids = [layer.id for layer in self.sheet.layout.layers]
        self.edit(edits.add_layer(ids.index(self.refs[0].id) + int(arg)))

    def do_move_layer(self, arg: Any, _: Any) -> None:
        self.edit(edits.reorder_layer(self.refs[0].id, int(arg)))

    def do_remove_layer(self, *_: Any) -> None:
        self.edit(edits.remove_layer(self.refs[0].id))

    # edges and faces

    def do_condition(self, _: Any, kind: Any) -> None:
        self._set_condition(str(kind))

    def do_condition_figure(self, arg: Any, text: Any) -> None:
        def use(value: float | None) -> None:
            self._set_condition(find(self.sheet.layout, self.refs[0]).kind, **{arg["field"]: value})

        self.with_figure(arg["field"], text, arg.get("optional", False), use)

    def _set_condition(self, kind: str, **figures: float | None) -> None:
        ref = self.refs[0]
        if ref.kind == "face":
            self.edit(edits.set_face(ref.id, kind, **figures))
        else:
            side, index = _segment(ref)
            self.edit(edits.set_segment(side, index, kind, **figures))

    def do_segment(self, arg: Any, _: Any) -> None:
        self.desk.select(self.desk.active, [Ref("edge", arg)])

    def do_split(self, _: Any, values: Any) -> None:
        side, index = _segment(self.refs[0])
        self.with_figure("at_mm", values.get("at"), True,
                         lambda at: self.edit(edits.split_segment(side, index, at)))

    def do_merge(self, *_: Any) -> None:
        side, index = _segment(self.refs[0])
        self.edit(edits.merge_segments(side, index))

    def do_whole(self, *_: Any) -> None:
        side, index = _segment(self.refs[0])
        segment = find(self.sheet.layout, self.refs[0]).model_dump(exclude={"from_mm", "to_mm"})
        if self.edit(edits.set_edge_segments(side, [segment])):
            self.desk.select(self.desk.active, [Ref("edge", f"{side}:0")])

    # the plate and the layout as a whole

    def do_plate(self, arg: Any, text: Any) -> None:
        self.with_figure(arg, text, False, lambda value: self.edit(edits.set_plate(**{arg: value})))

    def do_ambient(self, _: Any, text: Any) -> None:
        self.with_figure("ambient_c", text, False,
                         lambda value: self.edit(edits.set_layout_field("ambient_c", value)))

    def do_limits(self, arg: Any, text: Any) -> None:
        self.with_figure(arg["field"], text, arg["optional"],
                         lambda v: self.edit(edits.set_limits(arg["field"], v)))

    def do_words(self, arg: Any, text: Any) -> None:
        self.edit(edits.set_layout_field(arg, str(text)))

    def do_define_material(self, _: Any, values: Any) -> None:
        name, figures = str(values.get("name", "")).strip(), {}
        try:
            if not name:
                raise ValueError("A material needs a name.")
            for field in ("k_x_w_mk", "k_y_w_mk", "k_z_w_mk"):
                figures[field] = figure(field, values.get(field), may_be_empty=field != "k_x_w_mk")
        except ValueError as fault:
            self.desk.tell(str(fault), "error")
            return
        self.edit(edits.set_material(name, **conductivities(**figures)))

    def do_remove_material(self, arg: Any, _: Any) -> None:
        self.edit(edits.remove_material(arg))


def _segment(ref: Ref) -> tuple[str, int]:
    side, _, index = ref.id.partition(":")
    return side, int(index)


def _form(sheet: Sheet) -> list[Html]:
    layout, refs = sheet.layout, sheet.selection
    if not refs:
        return plate_form(layout)
    if all(ref.kind in RECTANGLES for ref in refs):
        return shapes_form(layout, refs)
    ref = refs[0]
    thing = find(layout, ref)
    if thing is None:
        return plate_form(layout)
    if ref.kind == "layer":
        return layer_form(layout, thing)
    return face_form(layout, ref, thing) if ref.kind == "face" else edge_form(layout, ref, thing)
