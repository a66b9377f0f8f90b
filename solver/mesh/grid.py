"""The tensor-product grid of a layout: snapped to every rectangle's edges, graded towards them.

The grid built here is the coarse one of a pair; `Grid.halved` gives the fine one, in which every cell is cut in
two along each axis. The pair is nested, so the difference of the two answers measures the discretisation error.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from ..document import Layer, Layout, is_void
from .lines import Grading, graded, halved, merged

MM = 1e-3

CELLS_PER_SOURCE = 16
"""Cells wanted across the shorter side of a source, at the size its edges ask for."""
CELLS_PER_ZONE = 3
CELLS_PER_SEGMENT_END = 6
CELLS_PER_PLATE = 32
"""The widest cell is the plate's longer side divided by this."""
GROWTH = 0.5
THROUGH_GROWTH = 0.3
FINEST_MERGE = 1 / 20_000
"""Lines closer than this share of the plate's longer side are one line."""


@dataclass(frozen=True)
class Grid:
    """Line positions in m: x (nx+1,), y (ny+1,), z (nz+1,) downwards from the top face; layer (nz,) of each cell.

    merge_m: lines closer than this were made one; capped: the wish for cells was cut to fit the memory.
    """

    x: np.ndarray
    y: np.ndarray
    z: np.ndarray
    layer: np.ndarray
    merge_m: float
    capped: bool = False

    @property
    def shape(self) -> tuple[int, int, int]:
        """(nz, ny, nx)."""
        return len(self.z) - 1, len(self.y) - 1, len(self.x) - 1

    @property
    def cells(self) -> int:
        return int(np.prod(self.shape))

    @cached_property
    def dx(self) -> np.ndarray:
        return np.diff(self.x)

    @cached_property
    def dy(self) -> np.ndarray:
        return np.diff(self.y)

    @cached_property
    def dz(self) -> np.ndarray:
        return np.diff(self.z)

    @cached_property
    def centres(self) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
        """Cell centres (z, y, x), m."""
        return tuple(0.5 * (lines[1:] + lines[:-1]) for lines in (self.z, self.y, self.x))

    def halved(self, through: bool = True) -> Grid:
        """Every cell cut in two along each axis; through=False leaves z as it is."""
        z = halved(self.z) if through else self.z
        layer = np.repeat(self.layer, 2) if through else self.layer
        return Grid(halved(self.x), halved(self.y), z, layer, self.merge_m, self.capped)


def grid_for(layout: Layout, most_cells: int, plane: bool = False) -> Grid:
    """The coarse grid of a layout with at most (about) most_cells cells.

    Where the snapped, graded grid would be larger, sizes are relaxed and lines merged step by step until it fits
    and the grid says it is capped. plane=True: one cell through the thickness of the only layer.
    """
    relax = 1.0
    while True:
        grid = _grid(layout, relax, plane)
        if grid.cells <= most_cells or min(grid.shape[1:]) <= 8:
            return grid
        relax *= max(1.1, (grid.cells / most_cells) ** 0.5)


def _grid(layout: Layout, relax: float, plane: bool) -> Grid:
    span = max(layout.plate.width_mm, layout.plate.height_mm) * MM
    largest = relax * span / CELLS_PER_PLATE
    # the first relaxations thin out the cells between lines; later ones give up lines that nearly coincide
    merge = span * FINEST_MERGE * relax if relax <= 1.0 else max(span * FINEST_MERGE, 0.1 * (relax - 1.0) * span / 400)
    x = _axis(layout, "x", largest, relax, merge)
    y = _axis(layout, "y", largest, relax, merge)
    z, layer = _through(layout, relax, plane)
    return Grid(x, y, z, layer, merge, capped=relax > 1.0)


def _axis(layout: Layout, axis: str, largest: float, relax: float, merge: float) -> np.ndarray:
    """Line positions along x or y: wishes are (position, size wanted there), both in m."""
    side = "width_mm" if axis == "x" else "height_mm"
    length = getattr(layout.plate, side) * MM
    wishes = [(0.0, largest), (length, largest)]
    for rectangles, count in ((layout.sources, CELLS_PER_SOURCE), (layout.zones, CELLS_PER_ZONE),
                              (layout.contacts, CELLS_PER_ZONE)):
        for r in rectangles:
            low, size = getattr(r, f"{axis}_mm") * MM, getattr(r, side) * MM
            wish = relax * min(r.width_mm, r.height_mm) * MM / count
            wishes += [(low, min(largest, wish)), (low + size, min(largest, wish))]
    for name in ("south", "north") if axis == "x" else ("west", "east"):
        for segment in getattr(layout.edges, name):
            if segment.from_mm is not None:
                ends = (segment.from_mm * MM, segment.to_mm * MM)
                # the flux has a singularity where two conditions meet, none where a segment ends at a corner
                wishes += [(p, largest / CELLS_PER_SEGMENT_END) for p in ends if merge < p < length - merge]
    positions, sizes = np.array([(p, s) for p, s in wishes if -merge < p < length + merge]).T
    positions = np.clip(positions, 0.0, length)
    snapped = merged(positions, length, merge)
    wanted = np.full(len(snapped), largest)
    nearest = np.abs(snapped[None, :] - positions[:, None]).argmin(axis=1)
    np.minimum.at(wanted, nearest, sizes)
    return graded(snapped, wanted, Grading(GROWTH, largest))


def _through(layout: Layout, relax: float, plane: bool) -> tuple[np.ndarray, np.ndarray]:
    """z lines (m) and the layer index of each cell.

    Thicknesses are measured in units in which the layer conducts alike in all directions (z times sqrt(k/kz)),
    so that a layer that conducts poorly through its thickness is resolved as the thick body that it then is.
    """
    thickness = np.array([layer.thickness_mm for layer in layout.layers]) * MM
    if plane or not layout.sources:
        z = np.concatenate([[0.0], np.cumsum(thickness)])
        return z, np.arange(len(thickness))
    stretch = np.array([max(_stretch(layout, name) for name in _materials_in(layout, layer)) for layer in layout.layers])
    shortest = min(min(s.width_mm, s.height_mm) for s in layout.sources) * MM
    wish = relax * shortest / CELLS_PER_SOURCE
    fed = {s.face for s in layout.sources}
    snapped = np.concatenate([[0.0], np.cumsum(thickness * stretch)])
    wanted = np.full(len(snapped), snapped[-1])
    wanted[0] = wish if "top" in fed else snapped[-1]
    wanted[-1] = wish if "bottom" in fed else snapped[-1]
    lines = graded(snapped, wanted, Grading(THROUGH_GROWTH, snapped[-1]))
    layer = np.searchsorted(snapped, 0.5 * (lines[1:] + lines[:-1])) - 1
    z = np.concatenate([[0.0], np.cumsum(np.diff(lines) / stretch[layer])])
    return z, layer


def _materials_in(layout: Layout, layer: Layer) -> list[str]:
    """The materials of a layer and of the zones in it."""
    zones = [z.material for z in layout.zones if z.layers == "all" or layer.id in z.layers]
    return [layer.material, *(name for name in zones if not is_void(name))]


def _stretch(layout: Layout, name: str) -> float:
    material = layout.material(name)
    return float(np.sqrt(np.sqrt(material.kx * material.ky) / material.kz))
