"""Messages for the drawing surface, made from a layout and its solution. Pure functions.

A scene: plate {width_mm, height_mm}; shapes in painting order, each kind, id, x_mm, y_mm, width_mm, height_mm, lines (of
text), about (one sentence), selected, aside (not on the plane that is shown), void; edges {side: segments with kind,
from_mm, to_mm, text, about, selected}; snap_mm.

A field: seq, kind (field or difference), unit, draft, width, height, t (float32, row 0 in the south, NaN where there is
nothing), low, high (ends of the colours), marks (temperatures to mark on the colour bar), isotherms {xy, offsets, level_index,
levels}, over and near {xy, offsets} (rings for the two bands), peak {x_mm, y_mm, text} or None, parts {id: {verdict, text}}.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from solver import Layout, Solution, isotherms, planes
from solver.document import Contact, Source, SourceResult, Zone
from solver.planes import PlaneField

from ..refs import SIDES, Ref, find

RASTER_POINTS = {"draft": 150 * 150, "final": 420 * 420}
SNAP_MM = 0.5


@dataclass(frozen=True)
class Scale:
    """Ends of the colours, °C (or K)."""

    low: float
    high: float


def scene_of(layout: Layout, selection: tuple[Ref, ...], plane: str, snap_mm: float = SNAP_MM) -> dict[str, Any]:
    """What stands where on a sheet; the plane decides which shapes stand aside."""
    chosen = set(selection)
    shapes = [*(_zone(z, plane) for z in layout.zones), *(_contact(c, plane) for c in layout.contacts),
              *(_source(s, plane) for s in layout.sources)]
    for shape in shapes:
        shape["selected"] = Ref(shape["kind"], shape["id"]) in chosen
    return {
        "plate": {"width_mm": layout.plate.width_mm, "height_mm": layout.plate.height_mm},
        "shapes": shapes,
        "edges": {side: [_segment(layout, side, n, chosen) for n in range(len(getattr(layout.edges, side)))]
                  for side in SIDES},
        "snap_mm": snap_mm,
    }


def _shape(kind: str, r: Source | Zone | Contact, lines: list[str], about: str, aside: bool, void: bool = False) -> dict:
    return {"kind": kind, "id": r.id, "x_mm": r.x_mm, "y_mm": r.y_mm, "width_mm": r.width_mm, "height_mm": r.height_mm,
            "lines": lines, "about": about, "aside": aside, "void": void}


def _source(source: Source, plane: str) -> dict:
    side = "" if source.face == "top" else " (bottom)"
    about = f"Source {source.id}, {source.power_w:g} W on the {source.face} face"
    return _shape("source", source, [source.id, f"{source.power_w:g} W{side}"], about,
                  plane in ("top", "bottom") and plane != source.face)


def _zone(zone: Zone, plane: str) -> dict:
    layers = "all layers" if zone.layers == "all" else ", ".join(zone.layers)
    aside = plane.startswith("layer:") and zone.layers != "all" and plane.removeprefix("layer:") not in zone.layers
    return _shape("zone", zone, [zone.id, zone.material], f"Zone {zone.id}, {zone.material} in {layers}", aside,
                  zone.material == "void")


def _contact(contact: Contact, plane: str) -> dict:
    figure = f"{contact.conductance_w_m2k:g} W/m²K"
    return _shape("contact", contact, [contact.id, figure], f"Contact {contact.id}, {figure} on the {contact.face} face",
                  plane in ("top", "bottom") and plane != contact.face)


def _segment(layout: Layout, side: str, index: int, chosen: set[Ref]) -> dict[str, Any]:
    ref = Ref("edge", f"{side}:{index}")
    segment = find(layout, ref)
    length = layout.plate.height_mm if side in ("west", "east") else layout.plate.width_mm
    text = ""
    if segment.kind == "fixed":
        text = f"{_or_ambient(layout, segment.temperature_c):g} °C"
    elif segment.kind == "convective":
        text = f"{segment.film_w_m2k:g} W/m²K, {_or_ambient(layout, segment.fluid_c):g} °C"
    span = (0.0, length) if segment.from_mm is None else (segment.from_mm, segment.to_mm)
    about = f"{side.capitalize()} edge, {span[0]:g} to {span[1]:g} mm, {segment.kind} {text}".strip()
    return {"kind": segment.kind, "from_mm": span[0], "to_mm": span[1], "text": text, "about": about,
            "selected": ref in chosen}


def _or_ambient(layout: Layout, temperature_c: float | None) -> float:
    return layout.ambient_c if temperature_c is None else temperature_c


def field_of(solution: Solution, plane: str, scale: Scale | None = None, seq: int | None = None,
             shown: PlaneField | None = None) -> dict[str, Any]:
    """The field of one plane as a message; shown: the plane's temperatures where they are known already."""
    layout, results = solution.layout, solution.results
    shown = planes.temperature(solution, plane) if shown is None else shown
    low, high = range_of(shown)
    plate_c, margin = layout.limits.plate_c, layout.limits.warn_margin_k
    peak = results.peak
    bar = "" if peak.grid_uncertainty_k is None else f" ± {_figure(peak.grid_uncertainty_k)} K"
    field = _pictured(shown, scale or Scale(low, high), solution.effort)
    return field | {
        "seq": seq or 0, "kind": "field", "unit": "°C", "draft": solution.effort == "draft",
        "marks": [] if plate_c is None else [plate_c],
        "over": _rings(shown, plate_c, np.inf) if plate_c is not None else None,
        "near": _rings(shown, plate_c - margin, plate_c) if plate_c is not None else None,
        "peak": {"x_mm": peak.x_mm, "y_mm": peak.y_mm, "text": f"{peak.temperature_c:.1f} °C{bar}"},
        "parts": {part.id: {"verdict": part.verdict, "text": _part_text(source, part)}
                  for source, part in zip(layout.sources, results.sources, strict=True)},
    }


def difference_of(difference: PlaneField) -> dict[str, Any]:
    """A map of temperature differences as a message: colours from -m to +m, m the largest difference."""
    most = max(map(abs, range_of(difference)))
    field = _pictured(difference, Scale(-most, most) if most > 0 else Scale(-1.0, 1.0), "final")
    return field | {"seq": 0, "kind": "difference", "unit": "K", "draft": False, "marks": [], "over": None, "near": None,
                    "peak": None, "parts": {}}


def range_of(shown: PlaneField) -> tuple[float, float]:
    """Lowest and highest value; (0, 0) where there is none."""
    if np.isnan(shown.t_c).all():
        return 0.0, 0.0
    return float(np.nanmin(shown.t_c)), float(np.nanmax(shown.t_c))


def _pictured(shown: PlaneField, scale: Scale, effort: str) -> dict[str, Any]:
    aspect = shown.x_m[-1] / shown.y_m[-1]
    width = int(np.clip(np.sqrt(RASTER_POINTS[effort] * aspect), 8, 1200))
    height = int(np.clip(width / aspect, 8, 1200))
    lines = isotherms.lines(shown, isotherms.levels(scale.low, scale.high))
    return {
        "width": width, "height": height, "t": planes.raster(shown, width, height).ravel(),
        "low": scale.low, "high": scale.high,
        "isotherms": {"xy": lines.xy.ravel(), "offsets": lines.offsets, "level_index": lines.level_index,
                      "levels": [float(level) for level in lines.levels]},
    }


def _rings(shown: PlaneField, above_c: float, below_c: float) -> dict[str, Any]:
    rings = isotherms.region(shown, above_c, below_c)
    return {"xy": rings.xy.ravel(), "offsets": rings.offsets}


def _part_text(source: Source, part: SourceResult) -> str:
    if part.limit_c is None:
        return f"{part.max_c:.1f} °C"
    where = {"junction": "Tj ", "case": "Tc ", "plate": ""}[source.limit_at]
    return f"{where}{part.limit_c - part.margin_k:.1f} °C"


def _figure(value: float) -> str:
    """Two significant figures at most, never fewer than one decimal place."""
    return f"{value:.2f}" if value < 0.1 else f"{value:.1f}"
