"""The inspector's forms for rectangles on the plate: sources, zones, contacts, one or several."""

from __future__ import annotations

from typing import Any

from solver.document import Layout, Zone

from ..refs import Ref, find
from .controls import button, choice_field
from .figures import conductivity_of
from .forms import ambient_words, figure_field, heading, material_field, materials_list, named_heading, shared
from .html import Html, tag

FACE_OPTIONS = (("top", "top face"), ("bottom", "bottom face"))
LIMIT_PLACES = (("plate", "footprint, hottest point"), ("case", "case"), ("junction", "junction"))
KIND_WORDS = {"source": "Heat source", "zone": "Zone of another material", "contact": "Contact to a sink"}


def shapes_form(layout: Layout, refs: tuple[Ref, ...]) -> list[Html]:
    things = [find(layout, ref) for ref in refs]
    if any(thing is None for thing in things):
        return []
    kinds = {ref.kind for ref in refs}
    kind = kinds.pop() if len(kinds) == 1 else None
    one = len(refs) == 1
    fields = [_sides(things)]
    if kind == "source":
        fields += _source_fields(layout, things)
    elif kind == "zone":
        fields += _zone_fields(layout, things)
    elif kind == "contact":
        fields += _contact_fields(layout, things)
    buttons = (button("Duplicate", "duplicate", title="A copy beside it (Ctrl+D)", data_keys="Ctrl+d",
                      data_name="duplicate"),
               button("Delete", "delete", title="Take it away (Delete)", class_="danger", data_keys="Delete",
                      data_name="delete"))
    if one:
        return [named_heading(KIND_WORDS[kind], refs[0].id, *buttons), tag("div", *fields, class_="fields")]
    names = ", ".join(ref.id for ref in refs[:12]) + (" …" if len(refs) > 12 else "")
    return [heading(f"{len(refs)} things", names, *buttons), tag("div", *fields, class_="fields")]


def _sides(things: list[Any]) -> Html:
    sides = (("x, mm", "x_mm", "Left side, from the plate's west edge"),
             ("y, mm", "y_mm", "Lower side, from the plate's south edge"),
             ("Width, mm", "width_mm", "Along x"), ("Height, mm", "height_mm", "Along y"))
    return tag("div", [_figure(label, field, things, title=title) for label, field, title in sides],
               class_="whole four")


def _figure(label: str, field: str, things: list[Any], placeholder: str | None = None, optional: bool = False,
            title: str | None = None) -> Html:
    value, mixed = shared(things, field)
    return figure_field(label, field, value, placeholder, optional=optional, mixed=mixed, title=title)


def _choice(label: str, field: str, things: list[Any], options: tuple[tuple[str, str], ...],
            whole: bool = False) -> Html:
    value, mixed = shared(things, field)
    first = (("", "differs"),) if mixed else ()
    return choice_field(label, value or "", first + options, "text", {"field": field}, whole=whole,
                        data_name=field)


def _source_fields(layout: Layout, things: list[Any]) -> list[Html]:
    return [
        _figure("Power, W", "power_w", things, title="Heat that goes into the plate; negative for a cooler"),
        _choice("Stands on", "face", things, FACE_OPTIONS),
        _figure("Joint, K·mm²/W", "interface_k_mm2_w", things, "none", True,
                "Area-specific resistance between case and plate; empty: an even flux into the plate"),
        _figure("Junction to case, K/W", "r_junction_case_k_w", things, "none", True,
                "Resistance between junction and case; empty: no junction temperature"),
        _figure("Limit, °C", "limit_c", things, "none", True, "Empty: this part has no limit"),
        _choice("Limit holds for", "limit_at", things, LIMIT_PLACES),
    ]


def _zone_fields(layout: Layout, things: list[Any]) -> list[Html]:
    material, mixed = shared(things, "material")
    fields = [material_field(layout, material or "", mixed), materials_list(layout, with_void=True)]
    if not mixed:
        fields.append(tag("p", conductivity_of(layout, material), class_="small soft whole"))
    if len(things) == 1:
        fields += [_layer_choices(layout, things[0]),
                   tag("div", button("Bring forward", "forward", 1, "Lies over more of the other zones"),
                       button("Send back", "forward", -1, "Lies under more of the other zones"),
                       class_="row whole wrap")]
    return fields


def _layer_choices(layout: Layout, zone: Zone) -> Html:
    in_all = zone.layers == "all"
    boxes = [_box("all layers", "all", in_all)]
    boxes += [_box(layer.id, layer.id, in_all or layer.id in zone.layers) for layer in layout.layers]
    return tag("fieldset", tag("legend", "In the layers", class_="small soft"), boxes, class_="whole layers")


def _box(label: str, arg: str, on: bool) -> Html:
    return tag("label", tag("input", type="checkbox", checked=on, data_act="zone_layer", data_arg=arg), label,
               class_="choice")


def _contact_fields(layout: Layout, things: list[Any]) -> list[Html]:
    return [_figure("Conductance, W/m²K", "conductance_w_m2k", things,
                    title="Heat per area and kelvin to the sink"),
            _figure("Sink, °C", "sink_c", things, ambient_words(layout), True,
                    "Empty: the ambient temperature"),
            _choice("Lies on", "face", things, FACE_OPTIONS, whole=True)]
