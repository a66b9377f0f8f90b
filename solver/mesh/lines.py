"""Where the grid lines of one axis go: on every given position, denser towards it.

The wanted cell size at a place is the smallest, over all snapped lines, of the size wanted at the line plus a
growth proportional to the distance from it. Lines are laid so that the integral of one over that size is the
same in every cell between two snapped lines. The grid is then graded towards every line, a narrow gap gets
cells of its own, and the cells next to it grow from that size instead of jumping.
"""

from __future__ import annotations

from dataclasses import dataclass

import numba
import numpy as np


@dataclass(frozen=True)
class Grading:
    """How cell sizes vary along an axis.

    growth: increase of the wanted size per unit of distance from a line; largest: never wider than this, m.
    """

    growth: float
    largest: float


def merged(positions: np.ndarray, length: float, tolerance: float) -> np.ndarray:
    """Sorted positions (m) within [0, length], both ends kept, those closer than the tolerance made one."""
    lines = [0.0]
    for position in np.unique(positions):
        if position - lines[-1] > tolerance and length - position > tolerance:
            lines.append(float(position))
    return np.array([*lines, length])


def graded(snapped: np.ndarray, wanted: np.ndarray, grading: Grading) -> np.ndarray:
    """All line positions (m): the snapped ones (n,) and those graded between them; wanted (n,), m, at each."""
    size = np.minimum(wanted, grading.largest)
    _spread(size, np.diff(snapped), grading.growth)
    return _laid(snapped, size, grading.growth, grading.largest)


@numba.njit(cache=True, nogil=True)
def _spread(size, gaps, growth):
    """Let every line feel the gaps beside it and its neighbours' sizes."""
    n = len(size)
    for i in range(n - 1):
        size[i] = min(size[i], gaps[i])
        size[i + 1] = min(size[i + 1], gaps[i])
    for i in range(1, n):
        size[i] = min(size[i], size[i - 1] + growth * gaps[i - 1])
    for i in range(n - 2, -1, -1):
        size[i] = min(size[i], size[i + 1] + growth * gaps[i])


@numba.njit(cache=True, nogil=True)
def _laid(snapped, size, growth, largest):
    """The lines gap by gap.

    The size rises from both ends of a gap by the growth per length to the largest, or to where the two rises meet.
    The number of cells is the integral of one over the size: logarithms on the rises, a quotient on the level.
    """
    lines = [snapped[0]]
    for n in range(len(snapped) - 1):
        gap, left, right = snapped[n + 1] - snapped[n], size[n], size[n + 1]
        meet = min(max((right - left + growth * gap) / (2.0 * growth), 0.0), gap)
        rise_end = min(meet, (largest - left) / growth)
        fall_start = max(meet, gap - (largest - right) / growth)
        rising = np.log1p(growth * rise_end / left) / growth
        level = (fall_start - rise_end) / largest
        total = rising + level + np.log1p(growth * (gap - fall_start) / right) / growth
        # a little less than a whole, so that rounding does not tip a total between a layout and its mirror image
        count = max(1, int(np.ceil(total - 0.25 - 1e-6)))
        for m in range(1, count):
            cells = m * total / count
            if cells <= rising:
                at = left * np.expm1(growth * cells) / growth
            elif cells <= rising + level:
                at = rise_end + (cells - rising) * largest
            else:
                at = gap - right * np.expm1(growth * (total - cells)) / growth
            lines.append(snapped[n] + at)
        lines.append(snapped[n + 1])
    return np.array(lines)


def halved(lines: np.ndarray) -> np.ndarray:
    """Every cell cut in two equal cells."""
    doubled = np.empty(2 * len(lines) - 1)
    doubled[::2] = lines
    doubled[1::2] = 0.5 * (lines[1:] + lines[:-1])
    return doubled
