"""The compiled loops of the multigrid: packing, line smoothing, restriction, prolongation, bodies.

Storage of one level, float32: columns are split by parity, so that a sweep over one colour of the red-black order
reads and writes without gaps. Cell (k, j, i) is at [k, j+1, i & 1, i//2 + 1]; a frame of zeros stands around. `east`
[k, j+1, 0, q] joins even cell q to odd cell q, `east`[k, j+1, 1, q] odd cell q to even cell q+1; `north` and `below` join a
cell to the next row and the next z cell; `ground` is what a cell loses to all that is no cell; `pivot` holds the
inverse pivots of the z lines. Colour 0 (red) is where i + j is even.

A sweep solves every z line of one colour exactly, so that after a black sweep only red cells have a residual, and
of a coarse correction only the red values matter before the next black sweep. Restriction and prolongation
therefore touch red cells only.
"""

from __future__ import annotations

import numba
import numpy as np

F = np.float32
compiled = numba.njit(cache=True, nogil=True, fastmath=True, error_model="numpy")


@compiled
def pack_level(gx, gy, gz, ground, east, north, below, at_ground, pivot):
    """Fill a level's arrays from conductances in plain order and factor its z lines.

    The pivots come from sums of positive terms only, so that a weak film under a stiff stack is not lost in float32.
    """
    nz, ny, nx = ground.shape
    excess = np.zeros(nx)
    for j in range(ny):
        for k in range(nz):
            for i in range(nx):
                c, q = i & 1, (i >> 1) + 1
                total = np.float64(ground[k, j, i])
                at_ground[k, j + 1, c, q] = total
                if i > 0:
                    total += gx[k, j, i - 1]
                if i < nx - 1:
                    total += gx[k, j, i]
                    east[k, j + 1, c, q] = gx[k, j, i]
                if j > 0:
                    total += gy[k, j - 1, i]
                if j < ny - 1:
                    total += gy[k, j, i]
                    north[k, j + 1, c, q] = gy[k, j, i]
                if k > 0:
                    above = np.float64(gz[k - 1, j, i])
                    if above > 0.0:
                        total += above * excess[i] / (above + excess[i])
                excess[i] = total
                if k < nz - 1:
                    total += gz[k, j, i]
                    below[k, j + 1, c, q] = gz[k, j, i]
                pivot[k, j + 1, c, q] = 1.0 / total if total > 0.0 else 0.0


@compiled
def sweep(x, b, east, north, below, pivot, colour, from_zero):
    """Solve all z lines of one colour; from_zero: the other colour is known to be all zero."""
    nz, rows, _, width = b.shape
    y = np.zeros((nz, width), F)
    for j in range(1, rows - 1):
        c = (j - 1 + colour) & 1
        for k in range(nz):
            rhs, line, inverse = b[k, j, c], y[k], pivot[k, j, c]
            for q in range(1, width - 1):
                line[q] = rhs[q]
            if not from_zero:
                other, toward, beyond = x[k, j, 1 - c], east[k, j, 0], east[k, j, 1]
                south, north_of = x[k, j - 1, c], x[k, j + 1, c]
                g_south, g_north = north[k, j - 1, c], north[k, j, c]
                if c == 0:
                    for q in range(1, width - 1):
                        line[q] += (beyond[q - 1] * other[q - 1] + toward[q] * other[q]
                                    + g_south[q] * south[q] + g_north[q] * north_of[q])
                else:
                    for q in range(1, width - 1):
                        line[q] += (toward[q] * other[q] + beyond[q] * other[q + 1]
                                    + g_south[q] * south[q] + g_north[q] * north_of[q])
            if k > 0:
                upper, g_upper = y[k - 1], below[k - 1, j, c]
                for q in range(1, width - 1):
                    line[q] = (line[q] + g_upper[q] * upper[q]) * inverse[q]
            else:
                for q in range(1, width - 1):
                    line[q] *= inverse[q]
        for q in range(1, width - 1):
            x[nz - 1, j, c, q] = y[nz - 1, q]
        for k in range(nz - 2, -1, -1):
            out, line, g, inverse, lower = x[k, j, c], y[k], below[k, j, c], pivot[k, j, c], x[k + 1, j, c]
            for q in range(1, width - 1):
                out[q] = line[q] + inverse[q] * g[q] * lower[q]


@compiled
def restrict_red(x, b, east, north, below, ground, row_of, column_of, coarse_b):
    """Add the residual of the red cells to the coarse right-hand side.

    row_of (rows,): coarse row of each row; column_of (2, width): place of each column in a coarse row.
    """
    nz, rows, _, width = b.shape
    coarse_b[:] = F(0)
    residual = np.zeros(width, F)
    for k in range(nz):
        target = coarse_b[k].reshape(coarse_b.shape[1], -1)
        for j in range(1, rows - 1):
            c = (j - 1) & 1
            here, other, toward, beyond = x[k, j, c], x[k, j, 1 - c], east[k, j, 0], east[k, j, 1]
            south, north_of = x[k, j - 1, c], x[k, j + 1, c]
            g_south, g_north, lost, rhs = north[k, j - 1, c], north[k, j, c], ground[k, j, c], b[k, j, c]
            if c == 0:
                for q in range(1, width - 1):
                    residual[q] = beyond[q - 1] * (other[q - 1] - here[q]) + toward[q] * (other[q] - here[q])
            else:
                for q in range(1, width - 1):
                    residual[q] = toward[q] * (other[q] - here[q]) + beyond[q] * (other[q + 1] - here[q])
            for q in range(1, width - 1):
                residual[q] += (rhs[q] - lost[q] * here[q] + g_south[q] * (south[q] - here[q])
                                + g_north[q] * (north_of[q] - here[q]))
            if k > 0:
                upper, g = x[k - 1, j, c], below[k - 1, j, c]
                for q in range(1, width - 1):
                    residual[q] += g[q] * (upper[q] - here[q])
            if k < nz - 1:
                lower, g = x[k + 1, j, c], below[k, j, c]
                for q in range(1, width - 1):
                    residual[q] += g[q] * (lower[q] - here[q])
            into, place = target[row_of[j]], column_of[c]
            for q in range(1, width - 1):
                into[place[q]] += residual[q]


@compiled
def prolong_red(x, coarse_x, row_of, column_of):
    """Add the coarse correction to the red cells."""
    nz, rows, _, width = x.shape
    for k in range(nz):
        source = coarse_x[k].reshape(coarse_x.shape[1], -1)
        for j in range(1, rows - 1):
            c = (j - 1) & 1
            out, place, values = x[k, j, c], column_of[c], source[row_of[j]]
            for q in range(1, width - 1):
                out[q] += values[place[q]]


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
def sweep_bodies(x, b, t, heat, places, first, g, inverse, between, backward):
    """Balance the bodies one after the other; b of the cells under them takes up what each change feeds into them.

    places (nb, 5): k, j0, j1, i0, i1; g: all joints one after the other, body n's from first[n].
    """
    nb = len(t)
    for step in range(nb):
        n = nb - 1 - step if backward else step
        total = heat[n]
        for m in range(nb):
            total += between[n, m] * t[m]
        k, j0, j1, i0, i1 = places[n]
        at = first[n]
        for j in range(j0, j1):
            for i in range(i0, i1):
                total += g[at] * x[k, j + 1, i & 1, (i >> 1) + 1]
                at += 1
        shift_body(b, n, total * inverse[n] - t[n], t, places, first, g)


@compiled
def shift_body(b, n, by, t, places, first, g):
    """Change one body's temperature and what it feeds into its cells."""
    t[n] += by
    k, j0, j1, i0, i1 = places[n]
    at = first[n]
    for j in range(j0, j1):
        for i in range(i0, i1):
            b[k, j + 1, i & 1, (i >> 1) + 1] += g[at] * by
            at += 1


@compiled
def residual_bodies(x, t, heat, places, first, g, inverse, between, out):
    """Residual of the bodies' balances."""
    nb = len(t)
    for n in range(nb):
        total = heat[n]
        for m in range(nb):
            total += between[n, m] * t[m]
        k, j0, j1, i0, i1 = places[n]
        at = first[n]
        for j in range(j0, j1):
            for i in range(i0, i1):
                total += g[at] * x[k, j + 1, i & 1, (i >> 1) + 1]
                at += 1
        out[n] = total - t[n] / inverse[n] if inverse[n] > 0.0 else 0.0


@compiled
def apply_cells(p, gx, gy, gz, ground, q):
    """q = A p for cells without bodies, all (nz, ny, nx) float64; returns p · q."""
    nz, ny, nx = p.shape
    dot = 0.0
    for k in range(nz):
        for j in range(ny):
            row, out = p[k, j], q[k, j]
            lost, g = ground[k, j], gx[k, j]
            for i in range(nx):
                out[i] = lost[i] * row[i]
            for i in range(nx - 1):
                flow = g[i] * (row[i] - row[i + 1])
                out[i] += flow
                out[i + 1] -= flow
            if j > 0:
                g, near = gy[k, j - 1], p[k, j - 1]
                for i in range(nx):
                    out[i] += g[i] * (row[i] - near[i])
            if j < ny - 1:
                g, near = gy[k, j], p[k, j + 1]
                for i in range(nx):
                    out[i] += g[i] * (row[i] - near[i])
            if k > 0:
                g, near = gz[k - 1, j], p[k - 1, j]
                for i in range(nx):
                    out[i] += g[i] * (row[i] - near[i])
            if k < nz - 1:
                g, near = gz[k, j], p[k + 1, j]
                for i in range(nx):
                    out[i] += g[i] * (row[i] - near[i])
            for i in range(nx):
                dot += row[i] * out[i]
    return dot


@compiled
def step_and_pack(x, p, r, q, alpha, b):
    """x += alpha p, r -= alpha q (cells), r also to a level's b; returns r · r."""
    nz, ny, nx = x.shape
    dot = 0.0
    for k in range(nz):
        for j in range(ny):
            for i in range(nx):
                x[k, j, i] += alpha * p[k, j, i]
                left = r[k, j, i] - alpha * q[k, j, i]
                r[k, j, i] = left
                dot += left * left
                b[k, j + 1, i & 1, (i >> 1) + 1] = left
    return dot


@compiled
def dot_unpacked(r, z):
    """r · z with z in a level's storage."""
    nz, ny, nx = r.shape
    dot = 0.0
    for k in range(nz):
        for j in range(ny):
            for i in range(nx):
                dot += r[k, j, i] * z[k, j + 1, i & 1, (i >> 1) + 1]
    return dot


@compiled
def direction(p, z, beta):
    """p = z + beta p with z in a level's storage."""
    nz, ny, nx = p.shape
    for k in range(nz):
        for j in range(ny):
            for i in range(nx):
                p[k, j, i] = z[k, j + 1, i & 1, (i >> 1) + 1] + beta * p[k, j, i]
