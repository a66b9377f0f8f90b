"""Geometric multigrid on tensor-product boxes: one symmetric cycle as a preconditioner.

Columns and rows are grouped, z cells never. Groups are made by width: neighbours merge while together they are
not wider than the level's limit, which doubles from level to level. Fine cells so merge first, in the direction
in which they are fine and strongly coupled, and coarse levels become even. A coarse face conducts what its fine
faces do, less in the ratio in which the distance between centres grew (one half where all cells are alike):
piecewise constant interpolation alone would leave the coarse network too stiff (Braess, "Towards algebraic multigrid
for elliptic problems of second order", Computing 55, 1995). The bodies are nodes of every level.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from . import kernels
from .kernels import F
from .operator import Operator

COARSEST_CELLS = 60
"""The level with at most this many cells, or this few columns, is solved by a dense inverse."""
COARSEST_COLUMNS = 4
MOST_IN_GROUP = 3
WANTED_SHRINK = 0.85
"""A level must have at most this share of the cells of the one before."""
REVISITED = 3
"""So many levels below the finest visit the next one twice, where that one is small enough to cost little."""
SMALL_ENOUGH = 0.4


@dataclass(frozen=True)
class Joints:
    """The bodies of one level: places (nb, 5), first (nb+1,), g of all joints, inverse diagonal, between (nb, nb)."""

    places: np.ndarray
    first: np.ndarray
    g: np.ndarray
    inverse: np.ndarray
    between: np.ndarray


@dataclass(frozen=True)
class Network:
    """A level in plain order: conductances, widths and joints."""

    gx: np.ndarray
    gy: np.ndarray
    gz: np.ndarray
    ground: np.ndarray
    dx: np.ndarray
    dy: np.ndarray
    joints: Joints


class Multigrid:
    """The hierarchy of an operator. Its work arrays make it usable by one thread at a time."""

    def __init__(self, op: Operator) -> None:
        networks, groups = [_network(op)], []
        limit = float(min(op.dx.min(), op.dy.min()))
        while networks[-1].ground.size > COARSEST_CELLS and networks[-1].ground[0].size > COARSEST_COLUMNS:
            group_x, group_y, limit = _groups(networks[-1], limit)
            groups.append((group_x, group_y))
            networks.append(_coarser(networks[-1], group_x, group_y))
        self._dims = _dims(networks)
        self._buffers = tuple(np.zeros(self._dims[-1, 3] + _split_size(networks[-1]), F) for _ in range(7))
        for n, network in enumerate(networks):
            kernels.pack_level(network.gx, network.gy, network.gz, network.ground,
                               *kernels.level_at(self._buffers, self._dims, n)[2:])
        self._wanted = _visits([network.ground.size for network in networks])
        self._ways = _ways(networks, groups)
        self._joints = _stacked([network.joints for network in networks])
        last, shape = networks[-1], (len(networks), len(op.bodies))
        self._bodies = (last.joints.inverse, last.joints.between, np.zeros(shape, F), np.zeros(shape, F))
        self._dense, self._inner = _dense_inverse(last), _inner(last.ground.shape)
        finest = kernels.level_at(self._buffers, self._dims, 0)
        self.rhs = finest[1]
        """The finest right-hand side of the cells, in split storage: fill it, then call `cycle`, which uses it up."""
        self.correction = finest[0]
        """The finest correction of the cells, in split storage, after `cycle`."""

    def cycle(self, body_rhs: np.ndarray) -> np.ndarray:
        """One cycle from zero for `rhs` and body_rhs (nb,); returns the bodies' correction (nb,)."""
        t, heat = self._bodies[2:]
        heat[0] = body_rhs
        kernels.cycle(self._buffers, self._dims, self._wanted, self._ways, self._joints, self._bodies, self._dense, self._inner)
        return t[0].astype(np.float64)


def _visits(sizes: list[int]) -> np.ndarray:
    """How often each level visits the one below it in one cycle: twice near the finest level, where most error is."""
    return np.array([2 if 1 <= n <= REVISITED and n + 1 < len(sizes) and sizes[n + 1] <= SMALL_ENOUGH * size else 1
                     for n, size in enumerate(sizes)])


def _network(op: Operator) -> Network:
    places = np.array([(b.k, b.j0, b.j1, b.i0, b.i1) for b in op.bodies], dtype=np.int64).reshape(-1, 5)
    first = np.concatenate([[0], np.cumsum([b.g.size for b in op.bodies])]).astype(np.int64)
    g = np.concatenate([b.g.ravel() for b in op.bodies]) if op.bodies else np.zeros(0)
    diagonal = op.body_diagonal
    inverse = np.divide(1.0, diagonal, out=np.zeros_like(diagonal), where=diagonal > 0)
    joints = Joints(places, first, g.astype(F), inverse.astype(F), op.body_body.astype(F))
    return Network(op.gx, op.gy, op.gz, op.ground, np.asarray(op.dx, float), np.asarray(op.dy, float), joints)


def _groups(network: Network, limit: float) -> tuple[np.ndarray, np.ndarray, float]:
    """The group of each column and row, and the limit on widths that made them."""
    ny, nx = network.ground.shape[1:]
    while True:
        limit *= 2.0
        group_x, group_y = _grouped(network.dx, limit), _grouped(network.dy, limit)
        if (group_x[-1] + 1) * (group_y[-1] + 1) <= max(WANTED_SHRINK * nx * ny, 1):
            return group_x, group_y, limit


def _grouped(widths: np.ndarray, limit: float) -> np.ndarray:
    return kernels.grouped(widths, limit * (1.0 + 1e-6), MOST_IN_GROUP)


def _coarser(network: Network, group_x: np.ndarray, group_y: np.ndarray) -> Network:
    nz = network.ground.shape[0]
    ny, nx = int(group_y[-1]) + 1, int(group_x[-1]) + 1
    dx, dy = np.bincount(group_x, network.dx), np.bincount(group_y, network.dy)
    gx, gy, gz, ground = (np.zeros(s, F) for s in ((nz, ny, nx - 1), (nz, ny - 1, nx), (nz - 1, ny, nx), (nz, ny, nx)))
    kernels.coarsen(network.gx, network.gy, network.gz, network.ground, group_x, group_y,
                    _share(network.dx, dx, group_x), _share(network.dy, dy, group_y), gx, gy, gz, ground)
    return Network(gx, gy, gz, ground, dx, dy, _coarser_joints(network.joints, group_x, group_y))


def _share(fine: np.ndarray, coarse: np.ndarray, groups: np.ndarray) -> np.ndarray:
    """Distance between centres across each coarse face, on the fine level over on the coarse one."""
    cut = np.flatnonzero(np.diff(groups))
    return ((fine[cut] + fine[cut + 1]) / (coarse[:-1] + coarse[1:])).astype(F)


def _coarser_joints(joints: Joints, group_x: np.ndarray, group_y: np.ndarray) -> Joints:
    places, pieces = joints.places.copy(), []
    for n, (_, j0, j1, i0, i1) in enumerate(joints.places):
        rows, columns = group_y[j0:j1], group_x[i0:i1]
        places[n, 1:] = rows[0], rows[-1] + 1, columns[0], columns[-1] + 1
        g = joints.g[joints.first[n] : joints.first[n + 1]].reshape(j1 - j0, i1 - i0)
        summed = np.zeros((rows[-1] - rows[0] + 1, columns[-1] - columns[0] + 1), F)
        np.add.at(summed, ((rows - rows[0])[:, None], (columns - columns[0])[None, :]), g)
        pieces.append(summed.ravel())
    first = np.concatenate([[0], np.cumsum([len(p) for p in pieces])]).astype(np.int64)
    g = np.concatenate(pieces) if pieces else joints.g
    return Joints(places, first, g, joints.inverse, joints.between)


def _split_size(network: Network) -> int:
    nz, ny, nx = network.ground.shape
    return nz * (ny + 2) * 2 * _split_width(nx)


def _split_width(nx: int) -> int:
    return (nx + 1) // 2 + 2


def _dims(networks: list[Network]) -> np.ndarray:
    """(levels, 6): nz, rows, width, and where each level starts in the buffers, in row_of and in column_of."""
    dims = np.zeros((len(networks), 6), dtype=np.int64)
    for n, network in enumerate(networks):
        nz, ny, nx = network.ground.shape
        dims[n, :3] = nz, ny + 2, _split_width(nx)
    sizes = np.column_stack([2 * dims[:, 0] * dims[:, 1] * dims[:, 2], dims[:, 1], 2 * dims[:, 2]])
    dims[1:, 3:] = np.cumsum(sizes, axis=0)[:-1]
    return dims


def _ways(networks: list[Network], groups: list[tuple[np.ndarray, np.ndarray]]) -> tuple[np.ndarray, np.ndarray]:
    """Coarse row of each row, and place in a coarse row of each column (2, width), level after level."""
    rows, columns = [np.zeros(0, np.int64)], [np.zeros(0, np.int64)]
    for network, (group_x, group_y) in zip(networks, groups, strict=False):
        nx = network.ground.shape[2]
        rows.append(np.concatenate([[0], group_y + 1, [0]]))
        coarse_width = _split_width(int(group_x[-1]) + 1)
        column_of = np.zeros((2, _split_width(nx)), dtype=np.int64)
        i = np.arange(nx)
        column_of[i & 1, (i >> 1) + 1] = (group_x & 1) * coarse_width + (group_x >> 1) + 1
        columns.append(column_of.ravel())
    return np.concatenate(rows), np.concatenate(columns)


def _stacked(joints: list[Joints]) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """places (levels, nb, 5), first (levels, nb + 1) and g of all levels."""
    starts = np.cumsum([0, *(len(j.g) for j in joints[:-1])])
    first = np.array([j.first + start for j, start in zip(joints, starts, strict=True)])
    return np.array([j.places for j in joints]), first, np.concatenate([j.g for j in joints])


def _inner(shape: tuple[int, int, int]) -> np.ndarray:
    """Place in a level's flat storage of each cell in plain order."""
    nz, ny, nx = shape
    k, j, i = np.ogrid[:nz, :ny, :nx]
    width = _split_width(nx)
    return (((k * (ny + 2) + j + 1) * 2 + (i & 1)) * width + (i >> 1) + 1).ravel()


def _dense_inverse(network: Network) -> np.ndarray:
    """Inverse of the coarsest level's matrix, float32, cells first and bodies after them."""
    joints, n = network.joints, network.ground.size
    nb = len(joints.inverse)
    a = np.zeros((n + nb, n + nb))
    kernels.dense_cells(network.gx, network.gy, network.gz, network.ground, a)
    a[n:, n:] = -joints.between
    index = np.arange(n).reshape(network.ground.shape)
    for b, (k, j0, j1, i0, i1) in enumerate(joints.places):
        under = index[k, j0:j1, i0:i1].ravel()
        a[under, n + b] = a[n + b, under] = -joints.g[joints.first[b] : joints.first[b + 1]]
        a[n + b, n + b] = 1.0 / joints.inverse[b] if joints.inverse[b] > 0.0 else 1.0
    try:
        return np.linalg.inv(a).astype(F)
    except np.linalg.LinAlgError:  # closed off from every known temperature: no correction is the honest one
        return np.zeros(a.shape, F)
