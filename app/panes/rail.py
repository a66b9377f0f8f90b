"""The rail at the left: drawing tools, the stack as a cross-section, and what lies on and round the plate."""

from __future__ import annotations

from math import sqrt
from typing import Any

from solver.document import Contact, Layer, Layout, Zone

from .. import edits
from ..desk import Desk
from ..refs import SIDES, Ref
from ..sheet import Sheet
from .controls import button
from .figures import conductivity_of, thickness
from .html import Html, join, tag
from .pane import Pane

TOOLS = (("select", "Select", "v", "Select, move and resize what is on the plate"),
         ("source", "Source", "s", "Drag on the plate to place a heat source"),
         ("zone", "Zone", "z", "Drag on the plate to place a zone of another material in the layer shown"),
         ("contact", "Contact", "c", "Drag on the plate to place a contact to a sink"))

THINNEST_PX, THICKEST_PX = 34, 72
"""Heights of the bands; between them a band grows with the root of its thickness."""

CONDUCTS_W_MK = 5.0
"""Layers that conduct better than this are drawn as metal, the others as resin."""


class Rail(Pane):
    desk_watched = ("active", "plane", "tool", "snap")
    sheet_watched = ("layout", "selection")

    def draw(self, desk: Desk) -> Html:
        sheet = desk.sheets[desk.active]
        return tag("div", _tools(desk), _stack(desk, sheet), _contents(sheet), class_="rail-body")

    def do_tool(self, arg: Any, _: Any) -> None:
        self.desk.tool = arg

    def do_snap(self, _: Any, on: Any) -> None:
        self.desk.snap = bool(on)

    def do_add(self, arg: Any, _: Any) -> None:
        """A thing of the default size in the middle of the plate: drawing without a mouse."""
        sheet = self.desk.sheets[self.desk.active]
        layout, plate = sheet.layout, sheet.layout.plate
        size = min(10.0, plate.width_mm / 4, plate.height_mm / 4)
        at = ((plate.width_mm - size) / 2, (plate.height_mm - size) / 2, size, size)
        self.desk.edit(self.desk.active, added(self.desk, layout, arg, at))

    def do_plane(self, arg: Any, _: Any) -> None:
        """Show a plane and select the layer or face it belongs to."""
        self.desk.plane = arg
        ref = Ref("layer", arg.removeprefix("layer:")) if arg.startswith("layer:") else Ref("face", arg)
        self.desk.select(self.desk.active, [ref])

    def do_select(self, arg: Any, _: Any) -> None:
        self.desk.select(self.desk.active, [Ref(*arg)])

    def do_cover(self, arg: Any, _: Any) -> None:
        """Give an edge that has no segment its first one, and select that."""
        self.desk.edit(self.desk.active, edits.set_edge_segments(arg, [{"kind": "insulated"}]))
        self.desk.select(self.desk.active, [Ref("edge", f"{arg}:0")])

    def do_add_layer(self, *_: Any) -> None:
        layout = self.desk.sheets[self.desk.active].layout
        self.desk.edit(self.desk.active, edits.add_layer(len(layout.layers)))


def added(desk: Desk, layout: Layout, kind: str, rectangle: tuple[float, float, float, float]) -> edits.Edit:
    """The edit that adds a source, zone or contact on the layer or face shown.

    rectangle: x, y, width and height in mm.
    """
    plane = desk.plane_of(layout)
    if kind == "zone":
        layer = plane.removeprefix("layer:") if plane.startswith("layer:") else layout.layers[
            -1 if plane == "bottom" else 0].id
        return edits.add_zone(layout, *rectangle, layers=[layer])
    if kind == "contact":
        return edits.add_contact(layout, *rectangle,
                                 face="top" if plane == "top" and _cooled(layout, "top") else "bottom")
    return edits.add_source(layout, *rectangle, face="bottom" if plane == "bottom" else "top")


def _cooled(layout: Layout, face: str) -> bool:
    """Whether contacts already lie on that face: the next one then goes there, too."""
    return any(contact.face == face for contact in layout.contacts)


def _tools(desk: Desk) -> Html:
    rows = [tag("div",
                button(words, "tool", name, f"{what} (key {key.upper()})", data_keys=key, class_="grow",
                       aria_pressed="true" if desk.tool == name else "false",
                       data_name=f"tool-{name}"),
                None if name == "select"
                else button("+", "add", name, f"Add a {name} in the middle of the plate",
                            aria_label=f"Add a {name}", data_name=f"add-{name}"),
                class_="row")
            for name, words, key, what in TOOLS]
    snap = tag("label", tag("input", type="checkbox", checked=desk.snap, data_act="snap", data_name="snap"),
               "Snap", class_="choice",
               title="To half millimetres and to other edges; the Alt key suspends it while dragging")
    return tag("section", tag("div", tag("h2", "Tools", class_="grow"), snap, class_="row head"),
               tag("div", rows, class_="menu"))


def _stack(desk: Desk, sheet: Sheet) -> Html:
    layout, plane = sheet.layout, desk.plane_of(sheet.layout)
    selected = {(ref.kind, ref.id) for ref in sheet.selection}
    heights = _heights(layout)
    bands = [_face_band(layout, "top", plane, selected),
             *(_layer_band(layout, layer, height, plane, selected)
               for layer, height in zip(layout.layers, heights, strict=True)),
             _face_band(layout, "bottom", plane, selected)]
    return tag("section", tag("div", tag("h2", "Stack", class_="grow"),
                              button("+ layer", "add_layer", title="Add a layer at the bottom",
                                     class_="plain small",
                                     data_name="add-layer"), class_="row head"),
               tag("div", bands, class_="stack", role="group", aria_label="Planes of the stack, top first"))


def _heights(layout: Layout) -> list[int]:
    roots = [sqrt(layer.thickness_mm) for layer in layout.layers]
    return [round(THINNEST_PX + (THICKEST_PX - THINNEST_PX) * root / max(roots)) if len(roots) > 1 else 44
            for root in roots]


def _layer_band(layout: Layout, layer: Layer, height: int, plane: str,
                selected: set[tuple[str, str]]) -> Html:
    name = f"layer:{layer.id}"
    title = (f"Show layer {layer.id}: {layer.material}, {thickness(layer.thickness_mm)}, "
             f"{conductivity_of(layout, layer.material)}")
    words = join(tag("b", layer.id),
                 tag("span", f"{thickness(layer.thickness_mm)} · {layer.material}", class_="small"))
    return button(words, "plane", name, title, class_=f"band {_look(layout, layer)}",
                  style=f"min-height:{height}px",
                  aria_pressed="true" if plane == name else "false", data_name=f"plane-{name}", data_key=name,
                  data_selected="true" if ("layer", layer.id) in selected else None)


def _look(layout: Layout, layer: Layer) -> str:
    if layer.material == "void":
        return "void"
    return "metal" if layout.material(layer.material).kz > CONDUCTS_W_MK else "resin"


def _face_band(layout: Layout, face: str, plane: str, selected: set[tuple[str, str]]) -> Html:
    words = condition_words(getattr(layout.faces, face), layout.ambient_c)
    contacts = sum(contact.face == face for contact in layout.contacts)
    more = f" · {contacts} {'contact' if contacts == 1 else 'contacts'}" if contacts else ""
    label = join(tag("b", f"{face.capitalize()} face"), tag("span", words + more, class_="small"))
    return button(label, "plane", face, f"Show the {face} face: {words}{more}", class_="face-band",
                  aria_pressed="true" if plane == face else "false", data_name=f"plane-{face}", data_key=face,
                  data_selected="true" if ("face", face) in selected else None)


def condition_words(condition: Any, ambient_c: float) -> str:
    """A face or edge segment in words: "film 50 W/m²K to 40 °C"."""
    if condition.kind == "fixed":
        at = ambient_c if condition.temperature_c is None else condition.temperature_c
        return f"held at {at:g} °C"
    if condition.kind == "convective":
        to = ambient_c if condition.fluid_c is None else condition.fluid_c
        return f"film {condition.film_w_m2k:g} W/m²K to {to:g} °C"
    return "insulated"


def _contents(sheet: Sheet) -> Html:
    layout = sheet.layout
    selected = {(ref.kind, ref.id) for ref in sheet.selection}
    sources = [_entry("source", source.id, source.id, f"{source.power_w:g} W", selected)
               for source in layout.sources]
    zones = [_entry("zone", zone.id, zone.id, _zone_words(zone), selected) for zone in layout.zones]
    contacts = [_entry("contact", contact.id, contact.id, _contact_words(contact), selected)
                for contact in layout.contacts]
    edges = [_entry("edge", f"{side}:{n}",
                    side.capitalize() + (f" {n + 1}" if len(getattr(layout.edges, side)) > 1 else ""),
                    condition_words(segment, layout.ambient_c), selected)
             for side in SIDES for n, segment in enumerate(getattr(layout.edges, side))]
    edges += [tag("li", button(f"{side.capitalize()}: insulated", "cover", side, "Set what this edge touches",
                               class_="plain entry")) for side in SIDES if not getattr(layout.edges, side)]
    return join(_list("Sources", sources, "None yet: choose Source and drag on the plate."),
                _list("Zones", zones),
                _list("Contacts", contacts), _list("Edges", edges))


def _list(title: str, entries: list[Html], empty: str | None = None) -> Html | None:
    if not entries and empty is None:
        return None
    return tag("section", tag("h2", title), tag("ul", entries, class_="entries") if entries else
               tag("p", empty, class_="soft small"), data_key=title)


def _entry(kind: str, id_: str, label: str, words: str, selected: set[tuple[str, str]]) -> Html:
    return tag("li", button(join(tag("span", label), tag("span", words, class_="small soft")),
                            "select", [kind, id_], f"Select {label}: {words}", class_="plain entry",
                            aria_current="true" if (kind, id_) in selected else None,
                            data_name=f"{kind}-{id_}"),
               data_key=f"{kind} {id_}")


def _zone_words(zone: Zone) -> str:
    where = "all layers" if zone.layers == "all" else ", ".join(zone.layers)
    return f"{zone.material} in {where}"


def _contact_words(contact: Contact) -> str:
    return f"{contact.conductance_w_m2k:g} W/m²K, {contact.face}"
