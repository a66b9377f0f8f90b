"""Islands of the plate that no heat can leave: their temperature is not determined."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from scipy import ndimage

from ..document import Fault, Layout, LayoutError, Source
from ..mesh.grid import Grid
from ..mesh.raster import patch
from .equations import Equations


class UndeterminedError(LayoutError):
    """A part stands where no path leads to a fixed temperature, a film or a contact."""


def grounded(layout: Layout, grid: Grid, eq: Equations) -> tuple[Equations, int]:
    """The equations without the islands that have no path out, and the number of such islands.

    Raises UndeterminedError naming every source that stands on one of them.
    """
    labels = _islands(eq)
    ground = np.bincount(labels.ravel(), eq.operator.gs.ravel())
    for body, sink in zip(eq.operator.bodies, eq.operator.body_sink, strict=True):
        ground[_under(labels, body)[0]] += sink
    floating = [n for n in np.unique(labels) if n > 0 and ground[n] <= 0.0]
    if not floating:
        return eq, 0
    stranded = tuple(
        _fault(number, source)
        for number, source in enumerate(layout.sources)
        if np.isin(labels[eq.surfaces[source.face].at][patch(grid, source).where], floating).any()
    )
    if stranded:
        raise UndeterminedError(stranded)
    return _tied(eq, np.isin(labels, floating)), len(floating)


def _islands(eq: Equations) -> np.ndarray:
    """The number (nz, ny, nx) of each cell's island; 0 in voids. Islands under one body are one."""
    if eq.solid.all():
        return np.ones(eq.solid.shape, dtype=np.int32)
    labels, _ = ndimage.label(eq.solid)
    for body in eq.operator.bodies:
        bridged = np.unique(_under(labels, body))
        if len(bridged) > 1:
            labels[np.isin(labels, bridged[1:])] = bridged[0]
    return labels


def _under(labels: np.ndarray, body) -> np.ndarray:
    return labels[body.k, body.j0 : body.j1, body.i0 : body.i1][body.g > 0]


def _fault(number: int, source: Source) -> Fault:
    return Fault(
        f"sources[{number}]",
        f"'{source.id}' ({source.power_w:g} W) has no path to any fixed temperature, film or contact, so its "
        "temperature is not determined; allowed: at least one such path from under every part",
    )


def _tied(eq: Equations, cells: np.ndarray) -> Equations:
    """Floating cells carry no heat: they are held at zero rise for the solve and are no part of the field."""
    operator = replace(eq.operator, gs=np.where(cells, 1.0, eq.operator.gs))
    return replace(eq, operator=operator, solid=eq.solid & ~cells)
