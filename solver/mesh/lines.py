"""Where the grid lines of one axis go: on every given position, denser towards it.

The wanted cell size at a place is the smallest, over all snapped lines, of the size wanted at the line plus a
growth proportional to the distance from it. Lines are laid so that the integral of one over that size is the
same in every cell between two snapped lines. The grid is then graded towards every line, a narrow gap gets
cells of its own, and the cells next to it grow from that size instead of jumping.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

_SAMPLES = 33


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
    gaps = np.diff(snapped)
    size = _spread(np.minimum(wanted, grading.largest), gaps, grading.growth)
    t = np.linspace(0.0, 1.0, _SAMPLES)
    along = gaps[:, None] * t
    local = np.minimum(size[:-1, None] + grading.growth * along, size[1:, None] + grading.growth * along[:, ::-1])
    density = 1.0 / np.minimum(local, grading.largest)
    steps = 0.5 * (density[:, 1:] + density[:, :-1]) * (gaps / (_SAMPLES - 1))[:, None]
    cells = np.concatenate([np.zeros((len(gaps), 1)), np.cumsum(steps, axis=1)], axis=1)
    counts = np.maximum(1, np.ceil(cells[:, -1] - 0.25)).astype(int)
    pieces = [snapped[:1]]
    for gap, count in enumerate(counts):
        shares = np.arange(1, count) / count * cells[gap, -1]
        pieces.append(snapped[gap] + gaps[gap] * np.interp(shares, cells[gap], t))
        pieces.append(snapped[gap + 1 : gap + 2])
    return np.concatenate(pieces)


def _spread(wanted: np.ndarray, gaps: np.ndarray, growth: float) -> np.ndarray:
    """The sizes at the lines once every line has felt its neighbours' sizes and the gaps beside it."""
    size = wanted.copy()
    size[:-1] = np.minimum(size[:-1], gaps)
    size[1:] = np.minimum(size[1:], gaps)
    for i in range(1, len(size)):
        size[i] = min(size[i], size[i - 1] + growth * gaps[i - 1])
    for i in range(len(size) - 2, -1, -1):
        size[i] = min(size[i], size[i + 1] + growth * gaps[i])
    return size


def halved(lines: np.ndarray) -> np.ndarray:
    """Every cell cut in two equal cells."""
    doubled = np.empty(2 * len(lines) - 1)
    doubled[::2] = lines
    doubled[1::2] = 0.5 * (lines[1:] + lines[:-1])
    return doubled
