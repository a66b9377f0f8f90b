"""Two layouts side by side: one temperature range, part-by-part differences, the map of differences."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

import numpy as np

from solver import Solution, planes
from solver.document import Results, SourceResult
from solver.planes import PlaneField

FIGURES = ("power_w", "mean_c", "max_c", "case_c", "junction_c", "margin_k")
"""The figures of a part that are compared."""

MAP_CELLS = 40_000
"""About how many points the map of differences has."""


@dataclass(frozen=True)
class PartRow:
    """One part of the table of differences.

    `a` and `b` are its results on either sheet, None where it is not. `difference` holds B - A of every
    figure that both have, in the figure's unit (K for temperatures).
    """

    id: str
    where: Literal["both", "only A", "only B"]
    a: SourceResult | None
    b: SourceResult | None
    difference: dict[str, float]


def part_differences(a: Results, b: Results) -> tuple[PartRow, ...]:
    """A row a part: those of A in its order, then those that only B has."""
    of_a, of_b = ({part.id: part for part in results.sources} for results in (a, b))
    return tuple(_row(id_, of_a.get(id_), of_b.get(id_)) for id_ in {**of_a, **of_b})


def shared_range(*temperatures: np.ndarray) -> tuple[float, float] | None:
    """Lowest and highest of several fields in °C, NaN left out; None when there is nothing to see."""
    found = [(float(np.nanmin(t)), float(np.nanmax(t))) for t in temperatures if np.isfinite(t).any()]
    return (min(low for low, _ in found), max(high for _, high in found)) if found else None


def why_no_difference(a: Solution | None, b: Solution | None) -> str:
    """Why there can be no map of differences, in words; "" when there can."""
    if a is None or b is None:
        return "One of the layouts has no solution yet."
    one, other = a.layout.plate, b.layout.plate
    if (one.width_mm, one.height_mm) != (other.width_mm, other.height_mm):
        return (f"The plates differ in size: {one.width_mm:g} x {one.height_mm:g} mm and "
                f"{other.width_mm:g} x {other.height_mm:g} mm.")
    return ""


def difference_map(a: Solution, b: Solution, plane_a: str, plane_b: str,
                   points: int = MAP_CELLS) -> PlaneField:
    """B - A in K on one uniform grid with the plate's edges around it, NaN where either has a void.

    Raises ValueError for plates of different size; ask `why_no_difference` first.
    """
    if why := why_no_difference(a, b):
        raise ValueError(why)
    plate = a.layout.plate
    width = max(round(np.sqrt(points * plate.width_mm / plate.height_mm)), 2)
    height = max(round(points / width), 2)
    of_a = planes.raster(planes.temperature(a, plane_a), width, height)
    of_b = planes.raster(planes.temperature(b, plane_b), width, height)
    difference = np.pad(of_b.astype(float) - of_a, 1, mode="edge")
    return PlaneField(_places(width, plate.width_mm), _places(height, plate.height_mm), difference)


def _places(cells: int, length_mm: float) -> np.ndarray:
    """The centres of equal cells along a side, and its two ends, m."""
    centres = (np.arange(cells) + 0.5) / cells
    return np.concatenate([[0.0], centres, [1.0]]) * length_mm * 1e-3


def _row(id_: str, a: SourceResult | None, b: SourceResult | None) -> PartRow:
    if a is None or b is None:
        return PartRow(id_, "only B" if a is None else "only A", a, b, {})
    pairs = ((figure, getattr(a, figure), getattr(b, figure)) for figure in FIGURES)
    return PartRow(id_, "both", a, b, {f: two - one for f, one, two in pairs if None not in (one, two)})
