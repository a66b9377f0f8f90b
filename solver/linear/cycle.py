"""The compiled multigrid cycle: line smoothing, restriction, prolongation, bodies.

Storage of one level: seven flat float32 arrays x, b, east, north, below, ground, pivot. Cells are in four quarters by the parity of
their row and column, each framed by zeros: cell (k, j, i) is at [k, j & 1, i & 1, j//2 + 1, i//2 + 1] of (nz, 2, 2, height, width).
A sweep over one colour of the red-black order then reads and writes without gaps, along a row or, where the level
is small, over a whole quarter at once. `east`, `north` and `below` join a cell to the next column, row and z cell; `ground` is
what it loses to all that is no cell; `pivot` holds the inverse pivots of the z lines. Red is where i + j is even.

A sweep solves every z line of one colour exactly, so that after a black sweep only red cells have a residual, and
of a coarse correction only the red values matter before the next black sweep. Restriction and prolongation
therefore touch red cells only.
"""

from __future__ import annotations

import numpy as np

from .compiled import F, U, compiled

WHOLE_QUARTERS = 4096
"""Levels with at most this many cells in a quarter, all z cells together, are swept a quarter at a time; they stay in the cache."""


@compiled
def place_of(shape, k, j, i):
    """Where a cell is in the storage of its level; shape: (nz, height, width)."""
    _, height, width = shape
    return (4 * k + 2 * (j & 1) + (i & 1)) * height * width + ((j >> 1) + 1) * width + (i >> 1) + 1


@compiled
def from_sides(x, b, east, north, here, west, east_of, south, north_of):
    """What the sources and the four neighbours in the plane feed into a cell."""
    return b[here] + east[west] * x[west] + east[here] * x[east_of] + north[south] * x[south] + north[here] * x[north_of]


@compiled
def relax(level, shape, row_parity, column_parity, first, count, from_zero, lines):
    """Solve `count` z lines of one quarter from place `first` on; lines: room for nz · count.

    from_zero: the other colour is known to be all zero.
    """
    x, b, east, north, below, _, pivot = level
    nz, height, width = shape
    quarter = height * width
    own = (2 * row_parity + column_parity) * quarter + first
    beside = (2 * row_parity + 1 - column_parity) * quarter + first + column_parity
    across = (2 * (1 - row_parity) + column_parity) * quarter + first + row_parity * width
    for k in range(nz):
        start = 4 * k * quarter
        here, west, east_of = U(start + own), U(start + beside - 1), U(start + beside)
        south, north_of, above = U(start + across - width), U(start + across), U(start + own - 4 * quarter)
        line, upper = U(k * count), U((k - 1) * count)
        out, at = (lines, line) if k < nz - 1 else (x, here)
        if from_zero and k == 0:
            for q in range(U(count)):
                out[at + q] = b[here + q] * pivot[here + q]
        elif from_zero:
            for q in range(U(count)):
                out[at + q] = (b[here + q] + below[above + q] * lines[upper + q]) * pivot[here + q]
        elif k == 0:
            for q in range(U(count)):
                out[at + q] = pivot[here + q] * from_sides(x, b, east, north, here + q, west + q, east_of + q, south + q, north_of + q)
        else:
            for q in range(U(count)):
                sides = from_sides(x, b, east, north, here + q, west + q, east_of + q, south + q, north_of + q)
                out[at + q] = (sides + below[above + q] * lines[upper + q]) * pivot[here + q]
    for k in range(nz - 2, -1, -1):
        here, lower, line = U(4 * k * quarter + own), U(4 * (k + 1) * quarter + own), U(k * count)
        for q in range(U(count)):
            x[here + q] = lines[line + q] + pivot[here + q] * below[here + q] * x[lower + q]


@compiled
def restrict(level, shape, parity, first_row, rows, way, coarse_b, coarse_plane, residual):
    """Add the residual of `rows` rows of red cells of one parity to the coarse right-hand side; residual: room for them."""
    x, b, east, north, below, ground, _ = level
    nz, height, width = shape
    quarter = height * width
    first, count = first_row * width + 1, (rows - 1) * width + width - 2
    own = 3 * parity * quarter + first
    beside = (parity + 1) * quarter + first + parity
    across = (2 - parity) * quarter + first + parity * width
    row_of, column_of = way
    for k in range(nz):
        start = 4 * k * quarter
        here, west, east_of = U(start + own), U(start + beside - 1), U(start + beside)
        south, north_of = U(start + across - width), U(start + across)
        for q in range(U(count)):
            t = x[here + q]
            residual[q] = (b[here + q] - ground[here + q] * t
                           + east[west + q] * (x[west + q] - t) + east[here + q] * (x[east_of + q] - t)
                           + north[south + q] * (x[south + q] - t) + north[here + q] * (x[north_of + q] - t))
        if k > 0:
            upper = U(start - 4 * quarter + own)
            for q in range(U(count)):
                residual[q] += below[upper + q] * (x[upper + q] - x[here + q])
        if k < nz - 1:
            lower = U(start + 4 * quarter + own)
            for q in range(U(count)):
                residual[q] += below[here + q] * (x[lower + q] - x[here + q])
        for r in range(rows):
            target, column = k * coarse_plane + row_of[parity * height + first_row + r], U(parity * width + 1)
            from_ = U(r * width)
            for q in range(U(width - 2)):
                coarse_b[U(target + column_of[column + q])] += residual[from_ + q]


@compiled
def sweeps(level, shape, first_colour, count, from_zero, way, coarse_b, coarse_plane):
    """`count` half sweeps of alternating colour; where coarse_b is not empty the red residual is restricted after them.

    A small level is swept a quarter at a time. A large one is passed once, each half sweep a row behind the one before:
    what one has just written is then still in the cache when the next one needs it.
    """
    nz, height, width = shape
    restricts = coarse_b.size > 0
    coarse_b[:] = F(0)
    if nz * height * width <= WHOLE_QUARTERS:
        length = (height - 3) * width + width - 2
        lines, residual = np.empty(nz * length, F), np.empty(length, F)
        for stage in range(count):
            for parity in range(2):
                relax(level, shape, parity, (parity + first_colour + stage) & 1, width + 1, length, from_zero and stage == 0, lines)
        if restricts:
            for parity in range(2):
                restrict(level, shape, parity, 1, height - 2, way, coarse_b, coarse_plane, residual)
        return
    rows = 2 * (height - 2)
    lines, residual = np.empty(nz * width, F), np.empty(width, F)
    for front in range(rows + count):
        for stage in range(count):
            j = front - stage
            if 0 <= j < rows:
                relax(level, shape, j & 1, (j + first_colour + stage) & 1, ((j >> 1) + 1) * width + 1, width - 2,
                      from_zero and stage == 0, lines)
        j = front - count
        if restricts and j >= 0:
            restrict(level, shape, j & 1, (j >> 1) + 1, 1, way, coarse_b, coarse_plane, residual)


@compiled
def prolong(x, shape, coarse_x, coarse_plane, way):
    """Add the coarse correction to the red cells."""
    nz, height, width = shape
    row_of, column_of = way
    for k in range(nz):
        for parity in range(2):
            column = U(parity * width + 1)
            for r in range(1, height - 1):
                here = U((4 * k + 3 * parity) * height * width + r * width + 1)
                target = k * coarse_plane + row_of[parity * height + r]
                for q in range(U(width - 2)):
                    x[here + q] += coarse_x[U(target + column_of[column + q])]


@compiled
def balance_bodies(x, b, shape, t, heat, places, first, g, inverse, between, backward, from_zero):
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
            total += under_body(x, shape, n, places, first, g)
        shift_body(b, shape, n, total * inverse[n] - t[n], t, places, first, g)


@compiled
def under_body(x, shape, n, places, first, g):
    """Sum of conductance times temperature over the cells under one body."""
    k, j0, j1, i0, i1 = places[n]
    total, at = 0.0, first[n]
    for j in range(j0, j1):
        for i in range(i0, i1):
            total += g[at] * x[place_of(shape, k, j, i)]
            at += 1
    return total


@compiled
def shift_body(b, shape, n, by, t, places, first, g):
    """Change one body's temperature and what it feeds into its cells."""
    t[n] += by
    k, j0, j1, i0, i1 = places[n]
    at = first[n]
    for j in range(j0, j1):
        for i in range(i0, i1):
            b[place_of(shape, k, j, i)] += g[at] * by
            at += 1


@compiled
def residual_bodies(x, shape, t, heat, places, first, g, inverse, between, out):
    """Residual of the bodies' balances."""
    nb = len(t)
    for n in range(nb):
        total = heat[n]
        for m in range(nb):
            total += between[n, m] * t[m]
        total += under_body(x, shape, n, places, first, g)
        out[n] = total - t[n] / inverse[n] if inverse[n] > 0.0 else 0.0


@compiled
def cycle(buffers, dims, wanted, ways, joints, bodies, dense, inner):
    """One symmetric cycle from zero for the finest b and heat.

    buffers (7, places): the seven arrays, in each all levels one after the other; dims (levels, 6): nz, height, width, and where the
    level starts in the buffers, in the rows of `ways` and in its columns; wanted: how often each level visits the
    next; ways: (row_of, column_of) of all levels; joints: (places (levels, nb, 5), first (levels, nb + 1), g);
    bodies: (inverse, between, t (levels, nb), heat (levels, nb));
    dense: inverse of the coarsest matrix; inner: place in the coarsest level's storage of each of its cells.
    """
    inverse, between, t, heat = bodies
    last = len(dims) - 1
    visits = np.zeros(last + 1, np.int64)
    n = 0
    arriving = True
    while True:
        level, shape = level_at(buffers, dims, n), shape_at(dims, n)
        if n == last:
            solve_coarsest(level, t[n], heat[n], dense, inner)
        else:
            coarser, way = level_at(buffers, dims, n + 1), way_at(ways, dims, n)
            coarse_plane = 4 * dims[n + 1, 1] * dims[n + 1, 2]
            joint = (joints[0][n], joints[1][n], joints[2])
            if arriving:
                descend(level, shape, coarser, coarse_plane, way, joint, inverse, between, t[n], heat[n], heat[n + 1], False)
                visits[n] = 1
                n += 1
                continue
            ascend(level, shape, coarser, coarse_plane, way, joint, t[n], t[n + 1])
            if visits[n] < wanted[n]:
                descend(level, shape, coarser, coarse_plane, way, joint, inverse, between, t[n], heat[n], heat[n + 1], True)
                visits[n] += 1
                n, arriving = n + 1, True
                continue
            leave(level, shape, way, joint, inverse, between, t[n], heat[n])
        if n == 0:
            return
        n, arriving = n - 1, False


@compiled
def shape_at(dims, n):
    return dims[n, 0], dims[n, 1], dims[n, 2]


@compiled
def level_at(buffers, dims, n):
    """x, b, east, north, below, ground, pivot of one level."""
    start = dims[n, 3]
    end = start + 4 * dims[n, 0] * dims[n, 1] * dims[n, 2]
    return (buffers[0, start:end], buffers[1, start:end], buffers[2, start:end], buffers[3, start:end], buffers[4, start:end],
            buffers[5, start:end], buffers[6, start:end])


@compiled
def way_at(ways, dims, n):
    """row_of (2 · height,) and column_of (2 · width,) of one level: what each row and each column of it adds to
    the place in the coarser level's plane."""
    row, column = dims[n, 4], dims[n, 5]
    return ways[0][row : row + 2 * dims[n, 1]], ways[1][column : column + 2 * dims[n, 2]]


@compiled
def descend(level, shape, coarser, coarse_plane, way, joint, inverse, between, t, heat, coarse_heat, again):
    """Smooth, then hand the residual to the coarser level; again: between two visits there, from what is there."""
    x, b = level[0], level[1]
    places, first, g = joint
    if again:
        sweeps(level, shape, 1, 3, False, way, coarser[1], coarse_plane)
    else:
        t[:] = F(0)
        balance_bodies(x, b, shape, t, heat, places, first, g, inverse, between, False, True)
        sweeps(level, shape, 0, 4, True, way, coarser[1], coarse_plane)
    residual_bodies(x, shape, t, heat, places, first, g, inverse, between, coarse_heat)


@compiled
def ascend(level, shape, coarser, coarse_plane, way, joint, t, coarse_t):
    """Take the coarser level's correction."""
    places, first, g = joint
    prolong(level[0], shape, coarser[0], coarse_plane, way)
    for n in range(len(t)):
        shift_body(level[1], shape, n, coarse_t[n], t, places, first, g)


@compiled
def leave(level, shape, way, joint, inverse, between, t, heat):
    """Smooth after the last visit to the coarser level: the mirror image of the first smoothing."""
    x, b = level[0], level[1]
    places, first, g = joint
    sweeps(level, shape, 1, 4, False, way, x[:0], 0)
    balance_bodies(x, b, shape, t, heat, places, first, g, inverse, between, True, False)


@compiled
def solve_coarsest(level, t, heat, dense, inner):
    x, b = level[0], level[1]
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
