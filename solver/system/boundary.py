"""From the layout's edges, faces, contacts and sources to the six boundary surfaces of its grid."""

from __future__ import annotations

import numpy as np

from ..document import Layout
from ..mesh.grid import MM, Grid
from ..mesh.raster import covered, patch
from .parts import bodies_of
from .surface import Joint, Sink, Surface

KMM2 = 1e-6
"""1 K·mm²/W in K·m²/W."""


def surfaces(layout: Layout, grid: Grid, k: tuple[np.ndarray, np.ndarray, np.ndarray],
             plane: bool) -> dict[str, Surface]:
    """The surfaces by name; k: conductivities kx, ky, kz (nz, ny, nx), W/(m K); plane: no half cell through z."""
    kx, ky, kz = k
    sides = {
        "west": _edge(layout, grid, "west", (slice(None), slice(None), 0), kx[:, :, 0], grid.dx[0], grid.y),
        "east": _edge(layout, grid, "east", (slice(None), slice(None), -1), kx[:, :, -1], grid.dx[-1], grid.y),
        "south": _edge(layout, grid, "south", (slice(None), 0, slice(None)), ky[:, 0, :], grid.dy[0], grid.x),
        "north": _edge(layout, grid, "north", (slice(None), -1, slice(None)), ky[:, -1, :], grid.dy[-1], grid.x),
    }
    faces = {
        "top": _face(layout, grid, "top", 0, kz[0], plane),
        "bottom": _face(layout, grid, "bottom", -1, kz[-1], plane),
    }
    return sides | faces


def _resistance(depth: float, k: np.ndarray, area: np.ndarray) -> np.ndarray:
    """Half a cell's resistance, K/W; 0 in voids, where nothing is attached."""
    return np.divide(0.5 * depth, k * area, out=np.zeros_like(area), where=k > 0)


def _edge(layout: Layout, grid: Grid, name: str, at: tuple, k: np.ndarray, depth: float,
          lines: np.ndarray) -> Surface:
    area = grid.dz[:, None] * np.diff(lines)[None, :]
    solid = k > 0
    held = np.full(area.shape, np.nan)
    sinks = []
    everywhere = (slice(None), slice(None))
    for segment in getattr(layout.edges, name):
        if segment.kind == "insulated":
            continue
        ends = (0.0, lines[-1]) if segment.from_mm is None else (segment.from_mm * MM, segment.to_mm * MM)
        share = covered(lines, *ends)
        if segment.kind == "fixed":
            held[:, share > 0.5] = _rise(layout, segment.temperature_c)
        else:
            g = segment.film_w_m2k * area * share * solid
            sinks.append(Sink(name, everywhere, g, _rise(layout, segment.fluid_c)))
    return Surface(name, at, _resistance(depth, k, area), solid, held, np.zeros(area.shape), tuple(sinks))


def _face(layout: Layout, grid: Grid, name: str, cell: int, k: np.ndarray, plane: bool) -> Surface:
    area = grid.dy[:, None] * grid.dx[None, :]
    solid = k > 0
    half = np.zeros_like(area) if plane else _resistance(grid.dz[cell], k, area)
    held = np.full(area.shape, np.nan)
    bare = np.ones(area.shape)
    contacts = []
    for contact in layout.contacts:
        if contact.face == name:
            p = patch(grid, contact)
            g = contact.conductance_w_m2k * area[p.where] * p.share * solid[p.where]
            contacts.append(Sink(f"contact:{contact.id}", p.where, g, _rise(layout, contact.sink_c)))
            bare[p.where] = np.minimum(bare[p.where], 1.0 - p.share)
    face = getattr(layout.faces, name)
    films = []
    if face.kind == "fixed":
        if plane:
            raise ValueError("a plate that is not resolved through its thickness cannot have a face held at a temperature")
        held[bare > 0.5] = _rise(layout, face.temperature_c)
    elif face.kind == "convective":
        everywhere = (slice(None), slice(None))
        films = [Sink(name, everywhere, face.film_w_m2k * area * bare * solid, _rise(layout, face.fluid_c))]
    flux, joints = _sources(layout, grid, name, area * solid)
    return Surface(name, (cell,), half, solid, held, flux, (*films, *contacts), joints)


def _sources(layout: Layout, grid: Grid, name: str, area: np.ndarray) -> tuple[np.ndarray, tuple[Joint, ...]]:
    """Heat into each node (W) of the sources that touch the face directly, and the joints of those that do not."""
    flux = np.zeros(area.shape)
    joints = []
    number = bodies_of(layout)
    for source in layout.sources:
        if source.face != name:
            continue
        p = patch(grid, source)
        under = area[p.where] * p.share
        if source.id in number:
            joints.append(Joint(number[source.id], p.where, under / (source.interface_k_mm2_w * KMM2)))
        else:
            flux[p.where] += source.power_w * under / under.sum()
    return flux, tuple(joints)


def _rise(layout: Layout, temperature_c: float | None) -> float:
    return 0.0 if temperature_c is None else temperature_c - layout.ambient_c
