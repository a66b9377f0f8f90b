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
U = np.uint64
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
def relax_row(x, b, east, north, below, pivot, shape, j, colour, from_zero, lines):
    """Solve the z lines of one colour in row j; from_zero: the other colour is known to be all zero.

    All arrays flat; shape: (nz, rows, width); lines: room for nz + 1 rows, the first of them zero. Places
    are unsigned: compiled loops over them need no test for negative places and use vector instructions.
    """
    nz, rows, width = shape
    c = (j - 1 + colour) & 1
    row, plane = 2 * width, 2 * width * rows
    count = U(width - 2)
    for k in range(nz):
        start = k * plane + j * row
        # the line above the first is all zero, whatever it is multiplied with
        here, line, upper = U(start + c * width + 1), U((k + 1) * width), U(k * width)
        above = U(start + c * width + 1 - plane) if k > 0 else here
        if from_zero:
            for q in range(count):
                lines[line + q] = (b[here + q] + below[above + q] * lines[upper + q]) * pivot[here + q]
        else:
            west, east_of = U(start + (1 - c) * width + c), U(start + (1 - c) * width + c + 1)
            south, north_of = U(start + c * width + 1 - row), U(start + c * width + 1 + row)
            for q in range(count):
                lines[line + q] = (b[here + q] + east[west + q] * x[west + q] + east[here + q] * x[east_of + q]
                                   + north[south + q] * x[south + q] + north[here + q] * x[north_of + q]
                                   + below[above + q] * lines[upper + q]) * pivot[here + q]
    here, line = U((nz - 1) * plane + j * row + c * width + 1), U(nz * width)
    for q in range(count):
        x[here + q] = lines[line + q]
    for k in range(nz - 2, -1, -1):
        here, line = U(k * plane + j * row + c * width + 1), U((k + 1) * width)
        lower = U((k + 1) * plane + j * row + c * width + 1)
        for q in range(count):
            x[here + q] = lines[line + q] + pivot[here + q] * below[here + q] * x[lower + q]


@compiled
def restrict_row(x, b, east, north, below, ground, shape, j, coarse_row, place, coarse_b, coarse_shape, residual):
    """Add the residual of the red cells of row j to the coarse right-hand side; all arrays flat.

    place (2 * width,): of each column in a coarse row; shape, coarse_shape: (nz, rows, width).
    """
    nz, rows, width = shape
    c = (j - 1) & 1
    row, plane = 2 * width, 2 * width * rows
    count = U(width - 2)
    for k in range(nz):
        start = k * plane + j * row
        here = U(start + c * width + 1)
        west, east_of = U(start + (1 - c) * width + c), U(start + (1 - c) * width + c + 1)
        south, north_of = U(start + c * width + 1 - row), U(start + c * width + 1 + row)
        for q in range(count):
            own = x[here + q]
            residual[q] = (b[here + q] - ground[here + q] * own
                           + east[west + q] * (x[west + q] - own) + east[here + q] * (x[east_of + q] - own)
                           + north[south + q] * (x[south + q] - own) + north[here + q] * (x[north_of + q] - own))
        if k > 0:
            upper = U(start + c * width + 1 - plane)
            for q in range(count):
                residual[q] += below[upper + q] * (x[upper + q] - x[here + q])
        if k < nz - 1:
            lower = U(start + c * width + 1 + plane)
            for q in range(count):
                residual[q] += below[here + q] * (x[lower + q] - x[here + q])
        target, column = (k * coarse_shape[1] + coarse_row) * 2 * coarse_shape[2], U(c * width + 1)
        for q in range(count):
            coarse_b[U(target + place[column + q])] += residual[q]


@compiled
def sweeps(level, first_colour, count, from_zero, way, coarse_b):
    """`count` half sweeps of alternating colour in one pass over the rows, each a row behind the one before.

    What one half sweep has just written is then still in the cache when the next one needs it. Where coarse_b is not
    empty the restriction of the red residual follows as the last of them.
    """
    nz, rows, _, width = level[0].shape
    shape = (nz, rows, width)
    x, b, east, north = level[0].reshape(-1), level[1].reshape(-1), level[2].reshape(-1), level[3].reshape(-1)
    below, ground, pivot = level[4].reshape(-1), level[5].reshape(-1), level[6].reshape(-1)
    row_of, column_of = way
    place = column_of.reshape(-1)
    lines, residual = np.zeros((nz + 1) * width, F), np.empty(width, F)
    restricts = coarse_b.size > 0
    coarse_shape, flat_coarse = (coarse_b.shape[0], coarse_b.shape[1], coarse_b.shape[3]), coarse_b.reshape(-1)
    flat_coarse[:] = F(0)
    for front in range(1, rows - 1 + count):
        for stage in range(count):
            j = front - stage
            if 1 <= j < rows - 1:
                relax_row(x, b, east, north, below, pivot, shape, j, (first_colour + stage) & 1,
                          from_zero and stage == 0, lines)
        j = front - count
        if restricts and j >= 1:
            restrict_row(x, b, east, north, below, ground, shape, j, row_of[j], place, flat_coarse, coarse_shape, residual)


@compiled
def prolong_red(x, coarse_x, row_of, column_of):
    """Add the coarse correction, (nz, rows, 2 * width), to the red cells."""
    nz, rows, _, width = x.shape
    for k in range(nz):
        for j in range(1, rows - 1):
            c = (j - 1) & 1
            out, place, values = x[k, j, c], column_of[c], coarse_x[k, row_of[j]]
            for q in range(1, width - 1):
                out[q] += values[place[q]]


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


@compiled
def balance_bodies(x, b, t, heat, places, first, g, inverse, between, backward, from_zero):
    """Balance the bodies one after the other; b of the cells under them takes up what each change feeds into them.

    from_zero: the cells are known to be all zero.

    places (nb, 5): k, j0, j1, i0, i1; g: all joints one after the other, body n's from first[n].
    """
    nb = len(t)
    for step in range(nb):
        n = nb - 1 - step if backward else step
        total = heat[n]
        for m in range(nb):
            total += between[n, m] * t[m]
        if not from_zero:
            total += under_body(x, n, places, first, g)
        shift_body(b, n, total * inverse[n] - t[n], t, places, first, g)


@compiled
def under_body(x, n, places, first, g):
    """Sum of conductance times temperature over the cells under one body."""
    k, j0, j1, i0, i1 = places[n]
    total, at = 0.0, first[n]
    for j in range(j0, j1):
        for i in range(i0, i1):
            total += g[at] * x[k, j + 1, i & 1, (i >> 1) + 1]
            at += 1
    return total


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
        total += under_body(x, n, places, first, g)
        out[n] = total - t[n] / inverse[n] if inverse[n] > 0.0 else 0.0


@compiled
def cycle(buffers, dims, wanted, ways, joints, bodies, dense, inner):
    """One symmetric cycle from zero for the finest b and heat.

    buffers: x, b, east, north, below, ground, pivot of all levels, one after the other; dims (levels, 6): nz, rows, width, and
    where the level starts in the buffers, in the rows of `ways` and in its columns; wanted: how often each level visits the
    next; ways: (row_of, column_of) of all levels; joints: (places (levels, nb, 5), first (levels, nb + 1), g);
    bodies: (inverse, between, t (levels, nb), heat (levels, nb));
    dense: inverse of the coarsest matrix; inner: place in the coarsest level's flat storage of each of its cells.
    """
    inverse, between, t, heat = bodies
    last = len(dims) - 1
    visits = np.zeros(last + 1, np.int64)
    n = 0
    arriving = True
    while True:
        level = level_at(buffers, dims, n)
        if n == last:
            solve_coarsest(level, t[n], heat[n], dense, inner)
        else:
            coarser, way = level_at(buffers, dims, n + 1), way_at(ways, dims, n)
            joint = (joints[0][n], joints[1][n], joints[2])
            if arriving:
                descend(level, coarser, way, joint, inverse, between, t[n], heat[n], heat[n + 1], False)
                visits[n] = 1
                n += 1
                continue
            ascend(level, coarser, way, joint, t[n], t[n + 1])
            if visits[n] < wanted[n]:
                descend(level, coarser, way, joint, inverse, between, t[n], heat[n], heat[n + 1], True)
                visits[n] += 1
                n, arriving = n + 1, True
                continue
            leave(level, way, joint, inverse, between, t[n], heat[n])
        if n == 0:
            return
        n, arriving = n - 1, False


@compiled
def level_at(buffers, dims, n):
    """x, b, east, north, below, ground, pivot of one level."""
    nz, rows, width, start = dims[n, 0], dims[n, 1], dims[n, 2], dims[n, 3]
    end, shape = start + nz * rows * 2 * width, (nz, rows, 2, width)
    return (buffers[0][start:end].reshape(shape), buffers[1][start:end].reshape(shape), buffers[2][start:end].reshape(shape),
            buffers[3][start:end].reshape(shape), buffers[4][start:end].reshape(shape),
            buffers[5][start:end].reshape(shape), buffers[6][start:end].reshape(shape))


@compiled
def way_at(ways, dims, n):
    """row_of (rows,) and column_of (2, width) of one level."""
    rows, width, row, column = dims[n, 1], dims[n, 2], dims[n, 4], dims[n, 5]
    return ways[0][row : row + rows], ways[1][column : column + 2 * width].reshape((2, width))


@compiled
def descend(level, coarser, way, joint, inverse, between, t, heat, coarse_heat, again):
    """Smooth, then hand the residual to the coarser level; again: between two visits there, from what is there."""
    x, b = level[0], level[1]
    places, first, g = joint
    if again:
        sweeps(level, 1, 3, False, way, coarser[1])
    else:
        t[:] = F(0)
        balance_bodies(x, b, t, heat, places, first, g, inverse, between, False, True)
        sweeps(level, 0, 4, True, way, coarser[1])
    residual_bodies(x, t, heat, places, first, g, inverse, between, coarse_heat)


@compiled
def ascend(level, coarser, way, joint, t, coarse_t):
    """Take the coarser level's correction."""
    x, b = level[0], level[1]
    places, first, g = joint
    row_of, column_of = way
    coarse_x = coarser[0]
    prolong_red(x, coarse_x.reshape(coarse_x.shape[0], coarse_x.shape[1], -1), row_of, column_of)
    for n in range(len(t)):
        shift_body(b, n, coarse_t[n], t, places, first, g)


@compiled
def leave(level, way, joint, inverse, between, t, heat):
    """Smooth after the last visit to the coarser level: the mirror image of the first smoothing."""
    x, b = level[0], level[1]
    places, first, g = joint
    sweeps(level, 1, 4, False, way, x[:0])
    balance_bodies(x, b, t, heat, places, first, g, inverse, between, True, False)


@compiled
def solve_coarsest(level, t, heat, dense, inner):
    x, b = level[0].reshape(-1), level[1].reshape(-1)
    cells, nodes = len(inner), len(dense)
    for n in range(nodes):
        total = 0.0
        row = dense[n]
        for m in range(cells):
            total += row[m] * b[inner[m]]
        for m in range(cells, nodes):
            total += row[m] * heat[m - cells]
        if n < cells:
            x[inner[n]] = total
        else:
            t[n - cells] = total


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
    for value in x.flat:
        total += value * value
    return total


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
