"""What lies where on a grid: the material of each cell, and how much of each face area a rectangle covers."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Protocol

import numpy as np

from ..document import Layout, is_void
from .grid import MM, Grid


class Rectangle(Protocol):
    x_mm: float
    y_mm: float
    width_mm: float
    height_mm: float


@dataclass(frozen=True)
class Patch:
    """The part of one face that a rectangle covers: cells [j0:j1, i0:i1] and the share of each, (j1-j0, i1-i0)."""

    j0: int
    j1: int
    i0: int
    i1: int
    share: np.ndarray

    @property
    def where(self) -> tuple[slice, slice]:
        return slice(self.j0, self.j1), slice(self.i0, self.i1)


def patch(grid: Grid, rectangle: Rectangle) -> Patch:
    """The covered cells of a face, with the covered share of each; nothing is lost where lines were merged."""
    i0, i1, along_x = _covered(grid.x, rectangle.x_mm * MM, (rectangle.x_mm + rectangle.width_mm) * MM)
    j0, j1, along_y = _covered(grid.y, rectangle.y_mm * MM, (rectangle.y_mm + rectangle.height_mm) * MM)
    return Patch(j0, j1, i0, i1, along_y[:, None] * along_x[None, :])


def covered(lines: np.ndarray, low: float, high: float) -> np.ndarray:
    """The share (n,) of each cell of one axis that lies between low and high, m."""
    i0, i1, share = _covered(lines, low, high)
    whole = np.zeros(len(lines) - 1)
    whole[i0:i1] = share
    return whole


def _covered(lines: np.ndarray, low: float, high: float) -> tuple[int, int, np.ndarray]:
    """First cell, end cell and shares of those that lie between low and high; slivers from rounding are dropped."""
    i0 = max(int(np.searchsorted(lines, low, "right")) - 1, 0)
    i1 = min(int(np.searchsorted(lines, high, "left")), len(lines) - 1)
    left, right = lines[i0:i1], lines[i0 + 1 : i1 + 1]
    share = (np.minimum(right, high) - np.maximum(left, low)) / (right - left)
    share[share > 1.0 - 1e-9] = 1.0
    kept = np.flatnonzero(share > 1e-9)
    if not len(kept):
        return 0, 0, share[:0]
    first, end = int(kept[0]), int(kept[-1]) + 1
    return i0 + first, i0 + end, share[first:end]


def conductivities(layout: Layout, grid: Grid) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """kx, ky, kz in W/(m K), each (nz, ny, nx); zero in voids. A cell is what lies at its centre."""
    numbers, table = materials(layout, grid)
    through = numbers[grid.layer]
    return tuple(np.take(table[:, axis], through) for axis in range(3))


def materials(layout: Layout, grid: Grid) -> tuple[np.ndarray, np.ndarray]:
    """The number of the material of each cell of each layer (layers, ny, nx), and kx, ky, kz by number (n, 3)."""
    names = ["void", *dict.fromkeys([layer.material for layer in layout.layers] + [z.material for z in layout.zones])]
    number = {name: n for n, name in enumerate(names)}
    table = np.zeros((len(names), 3))
    for name, row in zip(names, table, strict=True):
        if not is_void(name):
            material = layout.material(name)
            row[:] = material.kx, material.ky, material.kz
    _, ny, nx = grid.shape
    plan = np.empty((len(layout.layers), ny, nx), dtype=np.int32)
    plan[:] = np.array([number[layer.material] for layer in layout.layers])[:, None, None]
    index = {layer.id: n for n, layer in enumerate(layout.layers)}
    for zone in layout.zones:
        rows, columns = _centres_inside(grid, zone)
        for n in index.values() if zone.layers == "all" else [index[name] for name in zone.layers]:
            plan[n, rows, columns] = number[zone.material]
    return plan, table


def _centres_inside(grid: Grid, zone: Rectangle) -> tuple[slice, slice]:
    _, y, x = grid.centres
    i0, i1 = np.searchsorted(x, [zone.x_mm * MM, (zone.x_mm + zone.width_mm) * MM])
    j0, j1 = np.searchsorted(y, [zone.y_mm * MM, (zone.y_mm + zone.height_mm) * MM])
    return slice(int(j0), int(j1)), slice(int(i0), int(i1))
