"""Temperatures over the plan of the plate: of both faces and of each layer, for drawing and for reading points."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from .document import Layout
from .mesh.grid import MM
from .mesh.raster import materials
from .steady import Solution

_FRAME = {"west": np.s_[1:-1, 0], "east": np.s_[1:-1, -1], "south": np.s_[0, 1:-1], "north": np.s_[-1, 1:-1]}
"""Where each edge of the plate stands in a framed plane."""


@dataclass(frozen=True)
class PlaneField:
    """Temperatures t_c (ny, nx) in °C at places x_m (nx,), y_m (ny,) in m, NaN in voids.

    The places are the cell centres, the plate's edges (first and last), and the lines where materials meet.
    """

    x_m: np.ndarray
    y_m: np.ndarray
    t_c: np.ndarray


def names(layout: Layout) -> tuple[str, ...]:
    """The planes from the top: "top", one "layer:ID" a layer, "bottom"."""
    return ("top", *(f"layer:{layer.id}" for layer in layout.layers), "bottom")


def temperature(solution: Solution, plane: str) -> PlaneField:
    """The field of a plane: a face's surface temperature, or a layer's temperature averaged over its thickness.

    Raises KeyError for a plane the layout does not have.
    """
    layout, grid = solution.layout, solution.grid
    if plane not in names(layout):
        raise KeyError(f"no plane '{plane}'; allowed: {', '.join(names(layout))}")
    if plane in ("top", "bottom"):
        inner = _surface(solution, plane)
        cells = np.flatnonzero(grid.layer == (0 if plane == "top" else grid.layer[-1]))
        cells = cells[:1] if plane == "top" else cells[-1:]
    else:
        index = [layer.id for layer in layout.layers].index(plane.removeprefix("layer:"))
        cells = np.flatnonzero(grid.layer == index)
        inner = np.average(solution.cells[cells], axis=0, weights=grid.dz[cells])
    return _framed(solution, inner, cells)


def _surface(solution: Solution, name: str) -> np.ndarray:
    surface = solution.equations.surfaces[name]
    rise = surface.rise(solution.solved.field)
    return np.where(solution.equations.solid[surface.at], rise + solution.layout.ambient_c, np.nan)


def _framed(solution: Solution, inner: np.ndarray, cells: np.ndarray) -> PlaneField:
    """The plane with the temperatures of the plate's edges around it and those at lines where materials meet in it."""
    grid, layout = solution.grid, solution.layout
    _, y, x = grid.centres
    framed = np.pad(inner, 1, mode="edge")
    for name, row in _FRAME.items():
        surface = solution.equations.surfaces[name]
        if surface.sinks or surface.is_held.any():
            rise = surface.rise(solution.solved.field)
            edge = np.average(rise[cells], axis=0, weights=grid.dz[cells]) + layout.ambient_c
            framed[row] = np.where(np.isnan(framed[row]), np.nan, edge)
    numbers, table = materials(layout, grid)
    number = np.pad(numbers[grid.layer[cells[0]]], 1, mode="edge")
    x = np.concatenate([[grid.x[0]], x, [grid.x[-1]]])
    y = np.concatenate([[grid.y[0]], y, [grid.y[-1]]])
    y, framed, number = _with_meetings(y, grid.y, framed, number, table[:, 1])
    x, turned, _ = _with_meetings(x, grid.x, framed.T, number.T, table[:, 0])
    return PlaneField(x, y, np.ascontiguousarray(turned.T))


def _with_meetings(places: np.ndarray, lines: np.ndarray, t: np.ndarray, number: np.ndarray,
                   k: np.ndarray) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Rows added at the grid lines where the material changes anywhere along them.

    places (n,), m, of the rows of t (n, m) and number (n, m), the materials; k: conductivity across by material. At such
    a line both sides carry the same flux: T = (g1 T1 + g2 T2) / (g1 + g2) with g = k over the distance to the line.
    """
    at = 1 + np.flatnonzero((number[1:-2] != number[2:-1]).any(axis=1))
    if not len(at):
        return places, t, number
    low, high = at, at + 1
    g_low = k[number[low]] / (lines[at] - places[low])[:, None]
    g_high = k[number[high]] / (places[high] - lines[at])[:, None]
    known_low, known_high = np.where(np.isnan(t[low]), 0.0, g_low), np.where(np.isnan(t[high]), 0.0, g_high)
    total = known_low + known_high
    met = known_low * np.nan_to_num(t[low]) + known_high * np.nan_to_num(t[high])
    between = np.divide(met, total, out=np.full_like(met, np.nan), where=total > 0)
    # along such a line heat takes the better conductor beside it
    better = np.where(k[number[low]] >= k[number[high]], number[low], number[high])
    return np.insert(places, high, lines[at]), np.insert(t, high, between, axis=0), np.insert(number, high, better, axis=0)


def at(field: PlaneField, x_mm: float, y_mm: float) -> float:
    """Temperature at a point, °C, bilinear between places; NaN in voids and off the plate."""
    x, y = x_mm * MM, y_mm * MM
    if not (field.x_m[0] <= x <= field.x_m[-1] and field.y_m[0] <= y <= field.y_m[-1]):
        return float("nan")
    return float(_bilinear(field, np.array([x]), np.array([y]))[0, 0])


def raster(field: PlaneField, width: int, height: int) -> np.ndarray:
    """The plane on a uniform raster, float32 (height, width), row 0 in the south, NaN in voids."""
    x = (np.arange(width) + 0.5) / width * field.x_m[-1]
    y = (np.arange(height) + 0.5) / height * field.y_m[-1]
    return _bilinear(field, x, y).astype(np.float32)


def _bilinear(field: PlaneField, x: np.ndarray, y: np.ndarray) -> np.ndarray:
    """Values (len(y), len(x)); beside a void the known corners share the weight, in a void there is no value."""
    j, v = _bracket(field.y_m, y)
    i, u = _bracket(field.x_m, x)
    if not np.isnan(field.t_c).any():
        rows = field.t_c[j] * (1 - v)[:, None] + field.t_c[j + 1] * v[:, None]
        return rows[:, i] * (1 - u) + rows[:, i + 1] * u
    known = ~np.isnan(field.t_c)
    values = np.where(known, field.t_c, 0.0)
    total = np.zeros((len(y), len(x)))
    weight = np.zeros_like(total)
    for rows, wy in ((j, 1 - v), (j + 1, v)):
        for columns, wx in ((i, 1 - u), (i + 1, u)):
            w = wy[:, None] * wx[None, :] * known[np.ix_(rows, columns)]
            total += w * values[np.ix_(rows, columns)]
            weight += w
    here = known[np.ix_(np.where(v < 0.5, j, j + 1), np.where(u < 0.5, i, i + 1))]
    return np.where(here, total / np.where(weight > 0, weight, 1.0), np.nan)


def _bracket(places: np.ndarray, wanted: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    left = np.clip(np.searchsorted(places, wanted, side="right") - 1, 0, len(places) - 2)
    return left, (wanted - places[left]) / (places[left + 1] - places[left])
