"""Reading what was typed into a form, and the fields that several forms have."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any

from solver.document import MATERIALS, VOID, Layout

from ..edits.fields import WORDS
from .controls import number_field, text_field
from .figures import plain
from .html import Html, tag

MORE_WORDS = {"at_mm": ("place of the cut", "mm"), "k_x_w_mk": ("conductivity along x", "W/mK"),
              "k_y_w_mk": ("conductivity along y", "W/mK"), "k_z_w_mk": ("conductivity through", "W/mK")}

STEPS = {"power_w": 0.5, "interface_k_mm2_w": 5.0, "r_junction_case_k_w": 0.1, "conductance_w_m2k": 100.0,
         "film_w_m2k": 10.0, "limit_c": 5.0, "plate_c": 5.0, "thickness_mm": 0.1}
"""How much an arrow key changes a figure; lengths and temperatures that are not named: 1."""


def figure(field: str, text: Any, may_be_empty: bool = False) -> float | None:
    """A typed figure; a decimal comma is read as a point.

    Raises ValueError with the sentence for the screen.
    """
    written = str("" if text is None else text).strip().replace("\u2212", "-")
    if not written and may_be_empty:
        return None
    try:
        value = float(written.replace(",", ".") if written.count(",") == 1 and "." not in written
                      else written)
    except ValueError:
        value = math.nan
    if not math.isfinite(value):
        word, unit = (WORDS | MORE_WORDS).get(field, (field.replace("_", " "), ""))
        given = f"“{written[:40]}” was given" if written else "nothing was given"
        allowed = f"a number in {unit}" if unit else "a number"
        raise ValueError(f"{word[:1].upper()}{word[1:]}: {given}; {allowed} is needed"
                         f"{', or nothing' if may_be_empty else ''}.")
    return value


def conductivities(k_x_w_mk: float, k_y_w_mk: float | None, k_z_w_mk: float | None) -> dict[str, float]:
    """The shortest form of a material: alike in all directions, alike in the plane, or three figures."""
    ky = k_x_w_mk if k_y_w_mk is None else k_y_w_mk
    kz = k_x_w_mk if k_z_w_mk is None else k_z_w_mk
    if k_x_w_mk == ky == kz:
        return {"k_w_mk": k_x_w_mk}
    if k_x_w_mk == ky:
        return {"k_in_plane_w_mk": k_x_w_mk, "k_through_w_mk": kz}
    return {"k_x_w_mk": k_x_w_mk, "k_y_w_mk": ky, "k_z_w_mk": kz}


def figure_field(label: str, field: str, value: float | None, placeholder: str | None = None,
                 act: str = "figure",
                 optional: bool = False, mixed: bool = False, title: str | None = None) -> Html:
    """The field of one figure of what is selected."""
    return number_field(label, "" if value is None or mixed else plain(value), act,
                        {"field": field, "optional": optional}, STEPS.get(field, 1.0),
                        "differs" if mixed else placeholder, title, data_name=field)


def material_field(layout: Layout, value: str, mixed: bool = False) -> Html:
    """A material by name, from the layout's own and the table."""
    return text_field("Material", "" if mixed else value, "text", {"field": "material"}, list="materials",
                      whole=True,
                      placeholder="differs" if mixed else None, data_name="material",
                      title="Type to search; more materials are defined when nothing is selected")


def materials_list(layout: Layout, with_void: bool) -> Html:
    """What a material field offers."""
    void = [tag("option", "No conduction: a slot or hole", value=VOID)] if with_void else []
    own = [tag("option", "this layout's own", value=name) for name in layout.materials]
    table = [tag("option", entry.title, value=name) for name,
             entry in MATERIALS.items() if name not in layout.materials]
    return tag("datalist", void, own, table, id="materials")


def shared(things: Sequence[Any], field: str) -> tuple[Any, bool]:
    """The value that all things have for a field and False, or None and True when they differ."""
    values = {getattr(thing, field) for thing in things}
    return (values.pop(), False) if len(values) == 1 else (None, True)


def ambient_words(layout: Layout) -> str:
    return f"ambient, {layout.ambient_c:g}"


def named_heading(words: str, id_: str, *buttons: Html) -> Html:
    """The heading of a thing whose name can be changed."""
    return tag("div",
               tag("div", text_field(words, id_, "rename", None, "Its name", data_name="id"), class_="grow"),
               *buttons,
               class_="row end")


def heading(title: str, words: str, *buttons: Html) -> Html:
    return tag("div",
               tag("div", tag("h3", title, class_="break"), tag("p", words, class_="small soft"),
                   class_="grow"),
               *buttons, class_="row top")
