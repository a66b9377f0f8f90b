"""What the models alone cannot see: names that must exist, ids that must differ, things that must lie on the plate."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from typing import Protocol

import numpy as np

from .faults import Fault, LayoutError, shown
from .layout import SIDES, VOID, EdgeSegment, Layout, is_void
from .materials import MATERIALS, nearest_names

MAX_RECTANGLES = 2_000
SLACK = 1e-9
"""Lengths may overshoot by this share of the plate: what rounding in a file can do."""


class Rectangle(Protocol):
    x_mm: float
    y_mm: float
    width_mm: float
    height_mm: float


def check(layout: Layout) -> None:
    """Raise LayoutError with every fault of a layout whose fields are sound one by one."""
    faults = tuple(faults_of(layout))
    if faults:
        raise LayoutError(faults)


def faults_of(layout: Layout) -> Iterator[Fault]:
    yield from _too_many(layout)
    for name in ("layers", "zones", "sources", "contacts"):
        yield from _repeated(name, getattr(layout, name))
    yield from _materials(layout)
    yield from _zone_layers(layout)
    for side in SIDES:
        length = layout.plate.height_mm if side in ("west", "east") else layout.plate.width_mm
        yield from _segments(side, getattr(layout.edges, side), length)
    for name in ("sources", "contacts"):
        for n, rectangle in enumerate(getattr(layout, name)):
            yield from _on_plate(f"{name}[{n}]", rectangle, layout)
    yield from _over_void(layout)


def _too_many(layout: Layout) -> Iterator[Fault]:
    count = len(layout.zones) + len(layout.sources) + len(layout.contacts)
    if count > MAX_RECTANGLES:
        yield Fault("", f"the layout has {count:,} rectangles; at most {MAX_RECTANGLES:,} zones, sources and contacts "
                        "together are allowed")


def _repeated(name: str, things: Iterable) -> Iterator[Fault]:
    first: dict[str, int] = {}
    for n, thing in enumerate(things):
        if thing.id in first:
            yield Fault(f"{name}[{n}].id", f"the id {shown(thing.id)} is already used by {name}[{first[thing.id]}]; every id "
                                           f"of {name} must differ")
        first.setdefault(thing.id, n)


def _materials(layout: Layout) -> Iterator[Fault]:
    if VOID in layout.materials:
        yield Fault(f"materials.{VOID}", f"{VOID!r} is reserved for places without material; choose another name")
    for n, layer in enumerate(layout.layers):
        if is_void(layer.material):
            yield Fault(f"layers[{n}].material", f"a layer cannot be {VOID!r}; cut it out of a layer with a zone instead")
        else:
            yield from _known(layout, f"layers[{n}].material", layer.material)
    for n, zone in enumerate(layout.zones):
        if not is_void(zone.material):
            yield from _known(layout, f"zones[{n}].material", zone.material)


def _known(layout: Layout, path: str, name: str) -> Iterator[Fault]:
    if name in layout.materials or name in MATERIALS:
        return
    near = nearest_names(name, (*layout.materials, *MATERIALS))
    yield Fault(path, f"unknown material {shown(name)}; allowed: a name under materials or of the built-in table, nearest: "
                      + ", ".join(near))


def _zone_layers(layout: Layout) -> Iterator[Fault]:
    known = [layer.id for layer in layout.layers]
    for n, zone in enumerate(layout.zones):
        if zone.layers == "all":
            continue
        if not zone.layers:
            yield Fault(f"zones[{n}].layers", 'the list is empty; allowed: "all" or at least one layer id')
        for m, name in enumerate(zone.layers):
            if name not in known:
                yield Fault(f"zones[{n}].layers[{m}]", f"no layer {shown(name)}; allowed: {', '.join(known)}")


def _segments(side: str, segments: tuple[EdgeSegment, ...], length: float) -> Iterator[Fault]:
    placed: list[tuple[float, float, int]] = []
    for n, segment in enumerate(segments):
        path = f"edges.{side}[{n}]"
        if (segment.from_mm is None) != (segment.to_mm is None):
            yield Fault(path, f"from_mm {segment.from_mm} and to_mm {segment.to_mm} were given; allowed: both or neither")
            continue
        low, high = (0.0, length) if segment.from_mm is None else (segment.from_mm, segment.to_mm)
        if low < -SLACK * length or high > length * (1 + SLACK):
            yield Fault(path, f"reaches from {low:g} to {high:g} mm; allowed: within the side, 0 to {length:g} mm")
        if low >= high:
            yield Fault(path, f"from_mm {low:g} is not below to_mm {high:g}; allowed: from_mm less than to_mm")
            continue
        for other_low, other_high, m in placed:
            if low < other_high - SLACK * length and other_low < high - SLACK * length:
                yield Fault(path, f"{low:g} to {high:g} mm overlaps edges.{side}[{m}], {other_low:g} to {other_high:g} mm; "
                                  "segments of a side must not overlap")
        placed.append((low, high, n))


def _on_plate(path: str, r: Rectangle, layout: Layout) -> Iterator[Fault]:
    for axis, low, size, length in (("x", r.x_mm, r.width_mm, layout.plate.width_mm),
                                    ("y", r.y_mm, r.height_mm, layout.plate.height_mm)):
        if low < -SLACK * length or low + size > length * (1 + SLACK):
            yield Fault(path, f"reaches from {axis} = {low:g} to {low + size:g} mm; allowed: wholly on the plate, 0 to "
                              f"{length:g} mm")


def _over_void(layout: Layout) -> Iterator[Fault]:
    """Sources whose whole footprint is a void in the layer they stand on; heat would have nowhere to enter."""
    if not any(is_void(zone.material) for zone in layout.zones):
        return
    for n, source in enumerate(layout.sources):
        layer = layout.layers[0 if source.face == "top" else -1].id
        zones = [zone for zone in layout.zones if zone.layers == "all" or layer in zone.layers]
        if _all_void(source, zones):
            yield Fault(f"sources[{n}]", f"{shown(source.id)} stands wholly over a void of layer {shown(layer)}; allowed: at "
                                         "least a part of its footprint on material")


def _all_void(source: Rectangle, zones: list) -> bool:
    touching = [zone for zone in zones if _overlap(zone, source)]
    if not any(is_void(zone.material) for zone in touching):
        return False
    x = _cuts(source.x_mm, source.width_mm, [(z.x_mm, z.width_mm) for z in touching])
    y = _cuts(source.y_mm, source.height_mm, [(z.y_mm, z.height_mm) for z in touching])
    void = np.zeros((len(y), len(x)), dtype=bool)
    for zone in touching:
        inside_x = (x > zone.x_mm) & (x < zone.x_mm + zone.width_mm)
        inside_y = (y > zone.y_mm) & (y < zone.y_mm + zone.height_mm)
        void[np.ix_(inside_y, inside_x)] = is_void(zone.material)
    return bool(void.all())


def _overlap(a: Rectangle, b: Rectangle) -> bool:
    return (a.x_mm < b.x_mm + b.width_mm and b.x_mm < a.x_mm + a.width_mm
            and a.y_mm < b.y_mm + b.height_mm and b.y_mm < a.y_mm + a.height_mm)


def _cuts(low: float, size: float, others: list[tuple[float, float]]) -> np.ndarray:
    """Middles of the pieces that the others' ends cut a stretch into."""
    ends = np.array([low, low + size, *(end for a, s in others for end in (a, a + s))])
    lines = np.unique(np.clip(ends, low, low + size))
    return 0.5 * (lines[1:] + lines[:-1])
