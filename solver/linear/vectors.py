"""The compiled loops of conjugate gradients: the operator's pass and the vector updates, in float64.

Cells are in plain order (nz, ny, nx); where a loop meets the multigrid's finest level it reads or writes that level's
storage (see `cycle.py`), whose height and width it is given.
"""

from __future__ import annotations

import numpy as np

from .compiled import U, compiled


@compiled
def apply_cells(p, gx, gy, gz, ground, q):
    """q = A p for cells without bodies, all (nz, ny, nx) float64; returns p · q."""
    nz, ny, nx = p.shape
    flat_p, flat_q, lost = p.reshape(-1), q.reshape(-1), ground.reshape(-1)
    none = np.zeros(nx)
    dot = 0.0
    for k in range(nz):
        for j in range(ny):
            row = (k * ny + j) * nx
            g_south, south = (gy[k, j - 1], row - nx) if j > 0 else (none, row)
            g_north, north = (gy[k, j], row + nx) if j < ny - 1 else (none, row)
            g_above, above = (gz[k - 1, j], row - ny * nx) if k > 0 else (none, row)
            g_below, below = (gz[k, j], row + ny * nx) if k < nz - 1 else (none, row)
            here, s, n, a, b = U(row), U(south), U(north), U(above), U(below)
            if nz == 1:
                for i in range(U(nx)):
                    own = flat_p[here + i]
                    flat_q[here + i] = (lost[here + i] * own
                                        + g_south[i] * (own - flat_p[s + i]) + g_north[i] * (own - flat_p[n + i]))
            else:
                for i in range(U(nx)):
                    own = flat_p[here + i]
                    flat_q[here + i] = (lost[here + i] * own
                                        + g_south[i] * (own - flat_p[s + i]) + g_north[i] * (own - flat_p[n + i])
                                        + g_above[i] * (own - flat_p[a + i]) + g_below[i] * (own - flat_p[b + i]))
            g, line, out = gx[k, j], flat_p[row : row + nx], flat_q[row : row + nx]
            if nx > 1:
                out[0] += g[0] * (line[0] - line[1])
                out[nx - 1] += g[nx - 2] * (line[nx - 1] - line[nx - 2])
                for i in range(nx - 2):
                    out[i + 1] += g[i] * (line[i + 1] - line[i]) + g[i + 1] * (line[i + 1] - line[i + 2])
            for i in range(nx):
                dot += line[i] * out[i]
    return dot


@compiled
def squared(x):
    """Sum of squares; a library's would start threads that get in the way of the ones that solve."""
    total = 0.0
    for value in x.reshape(-1):
        total += value * value
    return total


@compiled
def row_places(k, j, height, width):
    """Where the even and the odd columns of one row begin in a level's storage."""
    even = U((4 * k + 2 * (j & 1)) * height * width + ((j >> 1) + 1) * width + 1)
    return even, even + U(height * width)


@compiled
def step_and_pack(x, p, r, q, alpha, b, height, width):
    """x += alpha p, r -= alpha q (cells), r also to a level's b; returns r · r."""
    nz, ny, nx = x.shape
    flat_x, flat_p, flat_r, flat_q = x.reshape(-1), p.reshape(-1), r.reshape(-1), q.reshape(-1)
    dot = 0.0
    for i in range(U(x.size)):
        flat_x[i] += alpha * flat_p[i]
    for k in range(nz):
        for j in range(ny):
            row = U((k * ny + j) * nx)
            for i in range(U(nx)):
                left = flat_r[row + i] - alpha * flat_q[row + i]
                flat_r[row + i] = left
                dot += left * left
            even, odd = row_places(k, j, height, width)
            for i in range(U((nx + 1) // 2)):
                b[even + i] = flat_r[row + U(2) * i]
            for i in range(U(nx // 2)):
                b[odd + i] = flat_r[row + U(2) * i + U(1)]
    return dot


@compiled
def dot_unpacked(r, z, height, width):
    """r · z with z in a level's storage."""
    nz, ny, nx = r.shape
    flat_r = r.reshape(-1)
    dot = 0.0
    for k in range(nz):
        for j in range(ny):
            row = U((k * ny + j) * nx)
            even, odd = row_places(k, j, height, width)
            for i in range(U(nx // 2)):
                dot += flat_r[row + U(2) * i] * z[even + i] + flat_r[row + U(2) * i + U(1)] * z[odd + i]
            if nx & 1:
                dot += flat_r[row + U(nx - 1)] * z[even + U(nx // 2)]
    return dot


@compiled
def direction(p, z, beta, height, width):
    """p = z + beta p with z in a level's storage."""
    nz, ny, nx = p.shape
    flat_p = p.reshape(-1)
    for k in range(nz):
        for j in range(ny):
            row = U((k * ny + j) * nx)
            even, odd = row_places(k, j, height, width)
            for i in range(U(nx // 2)):
                flat_p[row + U(2) * i] = z[even + i] + beta * flat_p[row + U(2) * i]
                flat_p[row + U(2) * i + U(1)] = z[odd + i] + beta * flat_p[row + U(2) * i + U(1)]
            if nx & 1:
                flat_p[row + U(nx - 1)] = z[even + U(nx // 2)] + beta * flat_p[row + U(nx - 1)]
