"""The inspector's form when nothing is selected: the plate, its limits, the layout's own materials."""

from __future__ import annotations

from solver.document import Layout

from .controls import button, labelled, number_field, text_field
from .figures import conductivity, plain
from .forms import heading
from .html import Html, tag


def plate_form(layout: Layout) -> list[Html]:
    plate, limits = layout.plate, layout.limits
    return [
        heading("Plate", "Nothing is selected: figures of the layout as a whole"),
        tag("div",
            number_field("Width, mm", plain(plate.width_mm), "plate", "width_mm", data_name="width_mm"),
            number_field("Height, mm", plain(plate.height_mm), "plate", "height_mm", data_name="height_mm"),
            number_field("Ambient, °C", plain(layout.ambient_c), "ambient", None,
                         title="Where no temperature is given",
                         data_name="ambient_c"),
            number_field("Limit of the plate, °C", "" if limits.plate_c is None else plain(limits.plate_c),
                         "limits",
                         {"field": "plate_c", "optional": True}, 5.0, "none",
                         "Empty: the plate itself has no limit",
                         data_name="plate_c"),
            number_field("Warning margin, K", plain(limits.warn_margin_k), "limits",
                         {"field": "warn_margin_k", "optional": False}, 1.0,
                         title="Closer to a limit than this is a warning", data_name="warn_margin_k"),
            text_field("Title", layout.title, "words", "title", whole=True, data_name="title"),
            labelled("Notes",
                     tag("textarea", layout.notes, data_act="words", data_arg="notes", rows=3,
                         data_name="notes"),
                     whole=True), class_="fields"),
        _materials(layout),
    ]


def _materials(layout: Layout) -> Html:
    own = [tag("li",
               tag("div", tag("b", name, class_="break"),
                   tag("div", conductivity(material), class_="small soft"),
                   class_="grow"),
               button("Remove", "remove_material", name, f"Remove the material {name}"), class_="row",
               data_key=name)
           for name, material in layout.materials.items()]
    new = tag("form", text_field("Name", "", None, None, whole=True, name="name"),
              number_field("Along x, W/mK", "", None, None, name="k_x_w_mk"),
              number_field("Along y, W/mK", "", None, None, placeholder="as x", name="k_y_w_mk"),
              number_field("Through, W/mK", "", None, None, placeholder="as x", name="k_z_w_mk"),
              tag("div", tag("button", "Define material"), class_="row end"), class_="fields",
              data_act="define_material")
    return tag("details", tag("summary", f"Materials of this layout's own ({len(own)})"), tag("ul", own), new,
               class_="materials", data_key="materials")
