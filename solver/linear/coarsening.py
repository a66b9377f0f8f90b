"""The compiled loops that build the levels of the multigrid: grouping, summing, packing, the coarsest matrix."""

from __future__ import annotations

import numpy as np

from .compiled import F, U, compiled


@compiled
def grouped(widths, limit, most):
    """The group of each of a row of widths: neighbours merge while together within the limit and no more than `most`."""
    groups = np.empty(len(widths), np.int64)
    number, together, members = -1, np.inf, 0
    for n in range(len(widths)):
        if together + widths[n] <= limit and members < most:
            together, members = together + widths[n], members + 1
        else:
            number, together, members = number + 1, widths[n], 1
        groups[n] = number
    return groups


@compiled
def coarsen(gx, gy, gz, ground, group_x, group_y, share_x, share_y, to_gx, to_gy, to_gz, to_ground):
    """Sum conductances over groups of columns and rows; share: by how much a face conducts less once its two groups'
    centres stand further apart than the fine cells' did."""
    nz, ny, nx = ground.shape
    for k in range(nz):
        for j in range(ny):
            row = group_y[j]
            for i in range(nx):
                to_ground[k, row, group_x[i]] += ground[k, j, i]
            for i in range(nx - 1):
                column = group_x[i]
                if group_x[i + 1] != column:
                    to_gx[k, row, column] += gx[k, j, i] * share_x[column]
            if j < ny - 1 and group_y[j + 1] != row:
                for i in range(nx):
                    to_gy[k, row, group_x[i]] += gy[k, j, i] * share_y[row]
            if k < nz - 1:
                for i in range(nx):
                    to_gz[k, row, group_x[i]] += gz[k, j, i]


@compiled
def pack_level(gx, gy, gz, ground, level, height, width):
    """Fill a level's storage (see `cycle.py`) from conductances in plain order and factor its z lines.

    The pivots come from sums of positive terms only: float32 then keeps even a weak film under a stiff stack.
    """
    east, north, below, at_ground, pivot = level
    nz, ny, nx = ground.shape
    excess, total, inverse = np.zeros(nx, F), np.zeros(nx, F), np.zeros(nx, F)
    for j in range(ny):
        for k in range(nz):
            for i in range(nx):
                total[i] = F(ground[k, j, i])
            for i in range(nx - 1):
                total[i] += F(gx[k, j, i])
            for i in range(nx - 1):
                total[i + 1] += F(gx[k, j, i])
            if j > 0:
                for i in range(nx):
                    total[i] += F(gy[k, j - 1, i])
            if j < ny - 1:
                for i in range(nx):
                    total[i] += F(gy[k, j, i])
            if k > 0:
                for i in range(nx):
                    above = F(gz[k - 1, j, i])
                    total[i] += above * excess[i] / (above + excess[i]) if above > F(0) else F(0)
            for i in range(nx):
                excess[i] = total[i]
            if k < nz - 1:
                for i in range(nx):
                    total[i] += F(gz[k, j, i])
            for i in range(nx):
                inverse[i] = F(1) / total[i] if total[i] > F(0) else F(0)
            even = U((4 * k + 2 * (j & 1)) * height * width + ((j >> 1) + 1) * width + 1)
            odd = even + U(height * width)
            split(ground[k, j], at_ground, even, odd)
            split(inverse, pivot, even, odd)
            split(gx[k, j], east, even, odd)
            if j < ny - 1:
                split(gy[k, j], north, even, odd)
            if k < nz - 1:
                split(gz[k, j], below, even, odd)


@compiled
def split(row, into, even, odd):
    """Write the even and the odd places of a row to where each of them begins."""
    for i in range(U((len(row) + 1) // 2)):
        into[even + i] = row[U(2) * i]
    for i in range(U(len(row) // 2)):
        into[odd + i] = row[U(2) * i + U(1)]


@compiled
def dense_cells(gx, gy, gz, ground, into):
    """Write the matrix of the cells of a small level into the head of a square array of zeros."""
    nz, ny, nx = ground.shape
    for k in range(nz):
        for j in range(ny):
            for i in range(nx):
                at = (k * ny + j) * nx + i
                into[at, at] += ground[k, j, i]
                if i < nx - 1:
                    link(into, at, at + 1, gx[k, j, i])
                if j < ny - 1:
                    link(into, at, at + nx, gy[k, j, i])
                if k < nz - 1:
                    link(into, at, at + ny * nx, gz[k, j, i])
    for at in range(ground.size):
        if into[at, at] == 0.0:
            into[at, at] = 1.0


@compiled
def link(into, one, other, g):
    into[one, one] += g
    into[other, other] += g
    into[one, other] -= g
    into[other, one] -= g
