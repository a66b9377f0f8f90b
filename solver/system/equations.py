"""The finite-volume equations of a layout on a grid: conductances in W/K, heats in W, rises over ambient in K."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..document import Layout
from ..linear import Body, Field, Operator, conductances
from ..mesh.grid import Grid
from ..mesh.raster import conductivities
from .boundary import surfaces
from .parts import bodies_of
from .surface import Surface


@dataclass(frozen=True)
class Equations:
    """operator · field = rhs, with the surfaces from which it was made; solid (nz, ny, nx): cells that conduct."""

    operator: Operator
    rhs: Field
    surfaces: dict[str, Surface]
    solid: np.ndarray


def equations(layout: Layout, grid: Grid, plane: bool = False) -> Equations:
    """Assemble the network of cells and bodies; plane=True: no resistance through the thickness of the one layer."""
    k = conductivities(layout, grid)
    sides = surfaces(layout, grid, k, plane)
    gx, gy, gz = conductances(*k, grid.dx, grid.dy, grid.dz)
    gs = np.zeros(grid.shape)
    heat = np.zeros(grid.shape)
    for side in sides.values():
        to_sink, into = side.cell_terms()
        gs[side.at] += to_sink
        heat[side.at] += into
    bodies, body_heat, body_sink, body_body = _bodies(layout, grid, sides)
    operator = Operator(gx, gy, gz, gs, bodies, body_sink, body_body, dx=grid.dx, dy=grid.dy)
    return Equations(operator, Field(heat, body_heat), sides, k[2] > 0)


def _bodies(layout: Layout, grid: Grid, sides: dict[str, Surface]):
    """The bodies of the parts on joints, their heat (W), conductance to known temperatures and to each other (W/K)."""
    number = bodies_of(layout)
    count = len(number)
    bodies: list[Body | None] = [None] * count
    heat, sink, between = np.zeros(count), np.zeros(count), np.zeros((count, count))
    for source in layout.sources:
        if source.id in number:
            heat[number[source.id]] = source.power_w
    for name in ("top", "bottom"):
        surface = sides[name]
        level = 0 if name == "top" else grid.shape[0] - 1
        for joint in surface.joints:
            g, sink[joint.body], reaching = surface.joint_terms(joint)
            heat[joint.body] += reaching
            rows, columns = joint.where
            bodies[joint.body] = Body(level, rows.start, rows.stop, columns.start, columns.stop, g)
        _couple(surface, between)
    return tuple(bodies), heat, sink, between


def _couple(surface: Surface, between: np.ndarray) -> None:
    for n, one in enumerate(surface.joints):
        for other in surface.joints[:n]:
            g = surface.bodies_term(one, other)
            between[one.body, other.body] += g
            between[other.body, one.body] += g
