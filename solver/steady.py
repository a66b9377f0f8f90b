"""The steady temperature of a layout: grid, equations, linear solve, on one grid or on a nested pair."""

from __future__ import annotations

import os
from collections.abc import Callable
from dataclasses import dataclass, replace
from functools import cached_property
from typing import Literal

import numpy as np

from .document import Layout, Results
from .gridcheck import uncertainty
from .linear import Field, Solved, solve_pcg
from .mesh import Grid, grid_for
from .readout import Readings, readings_of, results_of
from .system import Equations, equations, grounded
from .system.parts import bodies_of

Effort = Literal["draft", "final"]
Stop = Callable[[], bool]

DRAFT_RTOL = 1e-4
COARSE_RTOL = 1e-7
FINAL_RTOL = 1e-9
TIGHTEST_RTOL = 1e-14
BYTES_PER_CELL = 400
"""Measured peak of assembly, hierarchy, conjugate gradients and readout together, rounded up."""
MOST_DRAFT_CELLS = 50_000
REFINEMENT = 8
"""The fine grid of a pair has at most this many times the cells of the coarse one."""


class TooLargeError(Exception):
    """Even the coarsest grid of the layout does not fit in memory."""


@dataclass(frozen=True)
class Solution:
    """A solved layout. Temperatures in `cells` are °C at cell centres (nz, ny, nx), NaN in voids."""

    layout: Layout
    grid: Grid
    equations: Equations
    solved: Solved
    effort: Effort
    islands: int
    coarse: Readings | None

    @cached_property
    def cells(self) -> np.ndarray:
        return np.where(self.equations.solid, self.solved.field.cells + self.layout.ambient_c, np.nan)

    @cached_property
    def readings(self) -> Readings:
        return readings_of(self.layout, self.grid, self.equations, self.solved.field)

    @cached_property
    def grid_uncertainty_k(self) -> float | None:
        """Estimated error of the peak, K; None for a draft, which has no second grid to compare with."""
        return None if self.coarse is None else uncertainty(self.readings, self.coarse)

    @cached_property
    def results(self) -> Results:
        """The results document."""
        return results_of(self)


def solve(
    layout: Layout,
    *,
    effort: Effort = "final",
    start: Solution | None = None,
    stop: Stop | None = None,
    plane: bool = False,
    most_cells: int | None = None,
) -> Solution:
    """Solve a layout for its steady temperatures.

    effort: "draft" solves one coarse grid loosely, for a layout under the hand; "final" solves a coarse and a
    fine grid tightly and carries the uncertainty of the peak. start: a solution to start from (any layout, any
    grid). stop: asked now and then; when it says True the solve ends with `Stopped`. plane: one layer without
    resolution through its thickness, the plain two-dimensional plate. most_cells: limit on the cells of the
    finest grid; by default what fits in the memory.

    Raises UndeterminedError, TooLargeError, Stopped (solver.linear), ValueError for plane with several layers.
    """
    if plane and len(layout.layers) != 1:
        raise ValueError(f"plane needs a layout with one layer, this one has {len(layout.layers)}")
    most = min(most_cells or cells_that_fit(), cells_that_fit())
    if effort == "draft":
        grid = grid_for(layout, min(most, MOST_DRAFT_CELLS), plane)
        return _on(layout, grid, "draft", start, DRAFT_RTOL, stop, plane)
    grid = grid_for(layout, most // REFINEMENT, plane)
    coarse = _on(layout, grid, "draft", start, COARSE_RTOL, stop, plane)
    fine = grid.halved(through=not plane)
    return _on(layout, fine, "final", coarse, FINAL_RTOL, stop, plane, coarse.readings)


def cells_that_fit() -> int:
    """How many cells a solve may have in half of the memory that is free now."""
    free = os.sysconf("SC_AVPHYS_PAGES") * os.sysconf("SC_PAGE_SIZE")
    return max(int(free // 2 // BYTES_PER_CELL), 50_000)


def _on(layout: Layout, grid: Grid, effort: Effort, start: Solution | None, rtol: float, stop: Stop | None,
        plane: bool, coarse: Readings | None = None) -> Solution:
    eq, islands = grounded(layout, grid, equations(layout, grid, plane))
    first = None if start is None else carried(start, layout, grid)
    if first is not None:
        first.cells[~eq.solid] = 0.0
    solution = Solution(layout, grid, eq, solve_pcg(eq.operator, eq.rhs, first, rtol=rtol, stop=stop), effort, islands, coarse)
    # Held temperatures can make the right-hand side far larger than the heat that flows: then its share says too little.
    while effort == "final" and solution.solved.converged and rtol > TIGHTEST_RTOL and not solution.readings.balanced:
        rtol *= 0.03
        solved = solve_pcg(eq.operator, eq.rhs, solution.solved.field, rtol=rtol, stop=stop)
        if not solved.converged:
            break
        solution = replace(solution, solved=solved)
    return solution


def carried(start: Solution, layout: Layout, grid: Grid) -> Field:
    """The field (rises, K) of a solution on another grid: linear in the plane, nearest through the thickness."""
    shift = start.layout.ambient_c - layout.ambient_c
    cells = start.solved.field.cells
    (from_z, from_y, from_x), (to_z, to_y, to_x) = start.grid.centres, grid.centres
    if not np.array_equal(from_z, to_z):
        cells = cells[_nearest(from_z, to_z)]
    if not np.array_equal(from_y, to_y):
        cells = _linear(cells, from_y, to_y, axis=1)
    if not np.array_equal(from_x, to_x):
        cells = _linear(cells, from_x, to_x, axis=2)
    known = bodies_of(start.layout)
    mean = float(cells.mean())
    bodies = [start.solved.field.bodies[known[id_]] if id_ in known else mean for id_ in bodies_of(layout)]
    return Field(cells + shift, np.array(bodies) + shift)


def _nearest(old: np.ndarray, new: np.ndarray) -> np.ndarray:
    return np.abs(old[:, None] - new[None, :]).argmin(axis=0)


def _linear(values: np.ndarray, old: np.ndarray, new: np.ndarray, axis: int) -> np.ndarray:
    if len(old) == 1:
        return np.repeat(values, len(new), axis=axis)
    left = np.clip(np.searchsorted(old, new) - 1, 0, len(old) - 2)
    share = np.clip((new - old[left]) / (old[left + 1] - old[left]), 0.0, 1.0)
    shape = [1, 1, 1]
    shape[axis] = len(new)
    low = np.take(values, left, axis=axis)
    return low + share.reshape(shape) * (np.take(values, left + 1, axis=axis) - low)
