"""The inspector's forms for layers, faces and edge segments."""

from __future__ import annotations

from typing import Any

from solver.document import Layer, Layout

from ..edits.surroundings import LENGTH
from ..refs import Ref
from .controls import button, choice_field, number_field
from .figures import conductivity_of, plain
from .forms import STEPS, ambient_words, figure_field, heading, material_field, materials_list, named_heading
from .html import Html, tag

CONDITIONS = (("insulated", "insulated"), ("fixed", "held at a temperature"),
              ("convective", "film to a fluid"))
SPANS = {"west": ("south", "north"), "east": ("south", "north"), "south": ("west", "east"),
         "north": ("west", "east")}


def layer_form(layout: Layout, layer: Layer) -> list[Html]:
    at, last = layout.layers.index(layer), len(layout.layers) - 1
    return [
        named_heading(f"Layer {at + 1} of {last + 1}, from the top", layer.id,
                      button("Remove", "remove_layer", title="Take the layer and its own zones away",
                             class_="danger",
                             disabled=last == 0, data_keys="Delete", data_name="remove-layer")),
        tag("div", figure_field("Thickness, mm", "thickness_mm", layer.thickness_mm),
            material_field(layout, layer.material), materials_list(layout, with_void=False),
            tag("p", conductivity_of(layout, layer.material), class_="small soft whole"),
            tag("div", button("Move up", "move_layer", -1, disabled=at == 0),
                button("Move down", "move_layer", 1, disabled=at == last),
                button("Add above", "add_layer", 0, "A copper layer of 1 mm above this one"),
                button("Add below", "add_layer", 1, "A copper layer of 1 mm below this one"),
                class_="row whole wrap"),
            class_="fields"),
    ]


def face_form(layout: Layout, ref: Ref, face: Any) -> list[Html]:
    contacts = sum(contact.face == ref.id for contact in layout.contacts)
    words = "What the whole face touches" + (f", but for {contacts} contact(s)" if contacts else "")
    return [heading(f"{ref.id.capitalize()} face", words),
            tag("div", *_condition_fields(layout, face), class_="fields")]


def edge_form(layout: Layout, ref: Ref, segment: Any) -> list[Html]:
    side, _, index = ref.id.partition(":")
    segments = getattr(layout.edges, side)
    length = getattr(layout.plate, LENGTH[side])
    start, end = _span(segment, length)
    first, last = SPANS[side]
    parts = [tag("div", tag("span", "Segments", class_="small soft"),
                 [button(f"{n + 1}: {_span_words(each, length)}", "segment", f"{side}:{n}",
                         aria_pressed="true" if n == int(index) else "false") for n,
                  each in enumerate(segments)],
                 class_="row wrap whole")] if len(segments) > 1 else []
    follows = any(_span(each, length)[0] >= end for each in segments if each is not segment)
    return [
        heading(f"{side.capitalize()} edge",
                f"Segment {int(index) + 1} of {len(segments)}, {_span_words(segment, length)}, "
                f"measured from the {first} end"),
        tag("div", *parts, *_condition_fields(layout, segment),
            figure_field(f"From the {first} end, mm", "from_mm", segment.from_mm, "0", optional=True),
            figure_field(f"To, towards {last}, mm", "to_mm", segment.to_mm, plain(length), optional=True),
            tag("form", number_field("Cut at, mm", plain((start + end) / 2), None, None, name="at"),
                tag("button", "Split here", title="Cut this segment in two alike", data_name="split"),
                class_="row end whole",
                data_act="split"),
            tag("div", button("Join with the next", "merge", title="One segment that is what this one is",
                              disabled=not follows, data_name="merge"),
                button("Whole edge like this", "whole", title="One segment along the whole edge",
                       disabled=len(segments) == 1 and (start, end) == (0.0, length), data_name="whole"),
                class_="row whole wrap"), class_="fields"),
    ]


def _span(segment: Any, length: float) -> tuple[float, float]:
    return (0.0 if segment.from_mm is None else segment.from_mm,
            length if segment.to_mm is None else segment.to_mm)


def _span_words(segment: Any, length: float) -> str:
    start, end = _span(segment, length)
    return f"{start:g} to {end:g} mm"


def _condition_fields(layout: Layout, condition: Any) -> list[Html]:
    fields = [choice_field("It is", condition.kind, CONDITIONS, "condition", None, whole=True,
                           data_name="kind")]
    if condition.kind == "fixed":
        fields.append(_figure("Temperature, °C", "temperature_c", condition.temperature_c,
                              ambient_words(layout)))
    if condition.kind == "convective":
        fields += [_figure("Film, W/m²K", "film_w_m2k", condition.film_w_m2k),
                   _figure("Fluid, °C", "fluid_c", condition.fluid_c, ambient_words(layout))]
    return fields


def _figure(label: str, field: str, value: float | None, placeholder: str | None = None) -> Html:
    return number_field(label, "" if value is None else plain(value), "condition_figure",
                        {"field": field, "optional": placeholder is not None}, STEPS.get(field, 1.0),
                        placeholder,
                        "Empty: the ambient temperature" if placeholder else None, data_name=field)
