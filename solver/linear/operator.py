"""The network of conductances that every solve is about, its right-hand sides and its fields.

Cells form a box (nz, ny, nx), neighbours joined by conductances in W/K; bodies are lumped nodes, each joined to a
rectangle of cells of one z plane. A row of the system says that heat in equals heat out of one node:

    (sum of conductances) T - sum(conductance · T of the neighbour) = q
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
import scipy.sparse as sparse


@dataclass(frozen=True)
class Field:
    """One value a node: cells (nz, ny, nx) and bodies (nb,); temperatures or rises in K, or heats in W."""

    cells: np.ndarray
    bodies: np.ndarray


@dataclass(frozen=True)
class Body:
    """One lumped node joined to the cells [k, j0:j1, i0:i1] by g (j1-j0, i1-i0), W/K, 0 where there is no joint."""

    k: int
    j0: int
    j1: int
    i0: int
    i1: int
    g: np.ndarray

    @property
    def where(self) -> tuple[int, slice, slice]:
        return self.k, slice(self.j0, self.j1), slice(self.i0, self.i1)


@dataclass(frozen=True)
class Operator:
    """A symmetric network, all conductances in W/K and not negative.

    gx (nz, ny, nx-1), gy (nz, ny-1, nx), gz (nz-1, ny, nx): between neighbouring cells; gs (nz, ny, nx): of a cell to
    known temperatures; body_sink (nb,): of a body to known temperatures; body_body (nb, nb): between bodies,
    symmetric, with a zero diagonal; dx (nx,), dy (ny,): widths of the cells in any one unit, by which the
    multigrid coarsens (None: all alike). A node without any conductance is
    isolated: it keeps the value that the solve starts with, 0 without a start.

    Raises ValueError naming the array whose shape or values do not fit.
    """

    gx: np.ndarray
    gy: np.ndarray
    gz: np.ndarray
    gs: np.ndarray
    bodies: tuple[Body, ...] = ()
    body_sink: np.ndarray | None = None
    body_body: np.ndarray | None = None
    dx: np.ndarray | None = None
    dy: np.ndarray | None = None

    def __post_init__(self) -> None:
        nb = len(self.bodies)
        if self.gs.ndim != 3:
            raise ValueError(f"gs: three axes (nz, ny, nx) are needed, shape {self.gs.shape} was given")
        nz, ny, nx = self.gs.shape
        defaults = {"body_sink": np.zeros(nb), "body_body": np.zeros((nb, nb)), "dx": np.ones(nx), "dy": np.ones(ny)}
        for name, value in defaults.items():
            if getattr(self, name) is None:
                object.__setattr__(self, name, value)
        shapes = {"gx": (nz, ny, nx - 1), "gy": (nz, ny - 1, nx), "gz": (nz - 1, ny, nx), "gs": (nz, ny, nx),
                  "body_sink": (nb,), "body_body": (nb, nb), "dx": (nx,), "dy": (ny,)}
        for name, shape in shapes.items():
            array = plain(name, getattr(self, name), shape)
            _refuse_negative(name, array)
            object.__setattr__(self, name, array)
        for name in ("dx", "dy"):
            if not getattr(self, name).all():
                raise ValueError(f"{name}: widths above 0 are needed, 0 was given")
        for n, body in enumerate(self.bodies):
            inside = 0 <= body.k < nz and 0 <= body.j0 < body.j1 <= ny and 0 <= body.i0 < body.i1 <= nx
            if not inside or body.g.shape != (body.j1 - body.j0, body.i1 - body.i0):
                raise ValueError(f"bodies[{n}]: its rectangle must lie in the box and g must have its shape")
            _refuse_negative(f"bodies[{n}].g", body.g)

    @property
    def shape(self) -> tuple[int, int, int]:
        return self.gs.shape

    @property
    def nodes(self) -> int:
        return self.gs.size + len(self.bodies)

    @cached_property
    def ground(self) -> np.ndarray:
        """(nz, ny, nx): conductance of each cell to everything that is not a cell, W/K."""
        total = self.gs.copy()
        for body in self.bodies:
            total[body.where] += body.g
        return total

    @cached_property
    def body_diagonal(self) -> np.ndarray:
        """(nb,): sum of all conductances of each body, W/K."""
        joints = np.array([body.g.sum() for body in self.bodies])
        return joints + self.body_sink + self.body_body.sum(axis=1)


def plain(name: str, array: np.ndarray, shape: tuple[int, ...]) -> np.ndarray:
    """The array as the compiled kernels take it: contiguous, float64. Raises ValueError naming one of wrong shape,
    which the kernels would read beyond its end."""
    if array.shape != shape:
        raise ValueError(f"{name}: shape {shape} is needed, {array.shape} was given")
    return np.ascontiguousarray(array, dtype=np.float64)


def _refuse_negative(name: str, array: np.ndarray) -> None:
    least, most = array.min(initial=0.0), array.max(initial=0.0)
    if not (least >= 0.0 and most < np.inf):
        raise ValueError(f"{name}: finite figures of at least 0 are needed, {least} to {most} was given")


def matrix(op: Operator) -> sparse.csc_matrix:
    """The whole system as a sparse matrix, cells first; isolated nodes get the row of the identity."""
    n = op.gs.size
    index = np.arange(n).reshape(op.shape)
    links = [(index[:, :, :-1], index[:, :, 1:], op.gx), (index[:, :-1], index[:, 1:], op.gy), (index[:-1], index[1:], op.gz)]
    for b, body in enumerate(op.bodies):
        links.append((index[body.where], np.full(body.g.shape, n + b), body.g))
    one, other = np.nonzero(np.triu(op.body_body))
    links.append((n + one, n + other, op.body_body[one, other]))
    rows = np.concatenate([a.ravel() for a, _, _ in links])
    columns = np.concatenate([b.ravel() for _, b, _ in links])
    g = np.concatenate([c.ravel() for _, _, c in links])
    between = sparse.coo_matrix((g, (rows, columns)), shape=(op.nodes, op.nodes)).tocsc()
    between = between + between.T
    diagonal = np.asarray(between.sum(axis=1)).ravel() + np.concatenate([op.gs.ravel(), op.body_sink])
    diagonal[diagonal == 0.0] = 1.0
    return (sparse.diags(diagonal) - between).tocsc()
