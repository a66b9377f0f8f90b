"""From a solved field to what an engineer reads: peak, parts, margins, verdict, heat balance, cautions."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from .cautions import cautions_of
from .document import GridSize, HeatBalance, Layout, Peak, Results, Source, SourceResult
from .linear import Field
from .mesh import Grid
from .mesh.grid import MM
from .mesh.raster import patch
from .system import Equations
from .system.parts import bodies_of, junction

if TYPE_CHECKING:
    from .steady import Solution


BALANCE_SHARE = 1e-6


@dataclass(frozen=True)
class Spot:
    """A hottest point: rise over ambient in K, place in m, layer index."""

    rise_k: float
    x: float
    y: float
    layer: int


@dataclass(frozen=True)
class Footprint:
    """Rises over ambient in K under one source, and of its case (None without a joint)."""

    mean_k: float
    max_k: float
    case_k: float | None


@dataclass(frozen=True)
class Readings:
    """power_w: of all sources; out_w: where it leaves."""

    peak: Spot
    footprints: tuple[Footprint, ...]
    power_w: float
    out_w: dict[str, float]

    @property
    def open_w(self) -> float:
        """What does not add up in the heat balance."""
        return self.power_w - sum(self.out_w.values())

    @property
    def balanced(self) -> bool:
        """Whether the heat balance closes to the share of the heat turned over that may be open."""
        turned_over = max(abs(self.power_w), sum(map(abs, self.out_w.values())))
        return abs(self.open_w) <= BALANCE_SHARE * turned_over


def readings_of(layout: Layout, grid: Grid, eq: Equations, field: Field) -> Readings:
    """All figures of one solved field, as rises over ambient (K) and W."""
    rises = {name: np.where(surface.solid, surface.rise(field), np.nan) for name, surface in eq.surfaces.items()}
    for name, surface in eq.surfaces.items():
        rises[name][~eq.solid[surface.at]] = np.nan
    out: dict[str, float] = {}
    for surface in eq.surfaces.values():
        for name, heat in surface.heat_out(field).items():
            out[name] = out.get(name, 0.0) + heat
    power = float(sum(source.power_w for source in layout.sources))
    return Readings(_peak(grid, rises), _footprints(layout, grid, eq, field, rises), power, out)


def _peak(grid: Grid, rises: dict[str, np.ndarray]) -> Spot:
    _, y, x = grid.centres
    spots = [_face_spot(rises["top"], x, y, 0), _face_spot(rises["bottom"], x, y, int(grid.layer[-1]))]
    for name, place in (("west", grid.x[0]), ("east", grid.x[-1])):
        spots.append(_edge_spot(rises[name], grid, lambda i, place=place: (place, y[i])))
    for name, place in (("south", grid.y[0]), ("north", grid.y[-1])):
        spots.append(_edge_spot(rises[name], grid, lambda i, place=place: (x[i], place)))
    return max((spot for spot in spots if spot is not None), key=lambda spot: spot.rise_k)


def _face_spot(rise: np.ndarray, x: np.ndarray, y: np.ndarray, layer: int) -> Spot | None:
    if np.isnan(rise).all():
        return None
    j, i = np.unravel_index(np.nanargmax(rise), rise.shape)
    top = float(rise[j, i])
    lift_x, at_x = _crest(x, rise[j, :], i)
    lift_y, at_y = _crest(y, rise[:, i], j)
    return Spot(top + lift_x + lift_y, at_x, at_y, layer)


def _crest(places: np.ndarray, values: np.ndarray, n: int) -> tuple[float, float]:
    """How far the parabola through a largest value and its neighbours rises above it, and where.

    The largest value at a cell centre is below the crest between centres by up to a second-order amount.
    """
    if n == 0 or n == len(values) - 1 or np.isnan(values[n - 1 : n + 2]).any():
        return 0.0, float(places[n])
    before, after = places[n] - places[n - 1], places[n + 1] - places[n]
    slope_before, slope_after = (values[n] - values[n - 1]) / before, (values[n + 1] - values[n]) / after
    bend = (slope_after - slope_before) / (before + after)
    if bend >= 0.0:
        return 0.0, float(places[n])
    slope = (slope_before * after + slope_after * before) / (before + after)
    step = float(np.clip(-slope / (2.0 * bend), -0.5 * before, 0.5 * after))
    return float(slope * step + bend * step * step), float(places[n] + step)


def _edge_spot(rise: np.ndarray, grid: Grid, place) -> Spot | None:
    if np.isnan(rise).all():
        return None
    k, i = np.unravel_index(np.nanargmax(rise), rise.shape)
    return Spot(float(rise[k, i]), *map(float, place(i)), int(grid.layer[k]))


def _footprints(layout: Layout, grid: Grid, eq: Equations, field: Field, rises: dict[str, np.ndarray]):
    number = bodies_of(layout)
    area = {face: grid.dy[:, None] * grid.dx * eq.surfaces[face].solid for face in ("top", "bottom")}
    return tuple(_footprint(source, grid, area[source.face], rises[source.face],
                            float(field.bodies[number[source.id]]) if source.id in number else None)
                 for source in layout.sources)


def _footprint(source: Source, grid: Grid, area: np.ndarray, rise: np.ndarray, case_k: float | None) -> Footprint:
    p = patch(grid, source)
    under, covered = rise[p.where], area[p.where] * p.share
    _, y, x = grid.centres
    mean = float(np.sum(covered * np.nan_to_num(under)) / np.sum(covered))
    spot = _face_spot(under, x[p.where[1]], y[p.where[0]], 0)
    return Footprint(mean, spot.rise_k, case_k)


def results_of(solution: Solution) -> Results:
    """The results document of a solution."""
    layout, grid, read = solution.layout, solution.grid, solution.readings
    spot = read.peak
    peak = Peak(temperature_c=spot.rise_k + layout.ambient_c, x_mm=spot.x / MM, y_mm=spot.y / MM,
                layer=layout.layers[spot.layer].id, grid_uncertainty_k=solution.grid_uncertainty_k)
    parts = tuple(_part(layout, source, footprint)
                  for source, footprint in zip(layout.sources, read.footprints, strict=True))
    balance = HeatBalance(sources_w=read.power_w, out_w=_outlets(layout, read), residual_w=read.open_w)
    nz, ny, nx = grid.shape
    return Results(layout=layout, verdict=_verdict(layout, peak, parts), peak=peak, sources=parts, heat_balance=balance,
                   grid=GridSize(nx=nx, ny=ny, nz=nz, cells=grid.cells), warnings=cautions_of(solution, peak, parts))


def _outlets(layout: Layout, read: Readings) -> dict[str, float]:
    names = ["west", "east", "south", "north", "top", "bottom", *(f"contact:{c.id}" for c in layout.contacts)]
    return {name: read.out_w.get(name, 0.0) for name in names}


def verdict_of(temperature_c: float, limit_c: float | None, warn_margin_k: float) -> str:
    """pass, warn (within the margin of the limit) or fail (over it); no-limits without one."""
    if limit_c is None:
        return "no-limits"
    if temperature_c > limit_c:
        return "fail"
    return "warn" if temperature_c > limit_c - warn_margin_k else "pass"


def _part(layout: Layout, source: Source, footprint: Footprint) -> SourceResult:
    ambient = layout.ambient_c
    mean, hottest = footprint.mean_k + ambient, footprint.max_k + ambient
    case = None if footprint.case_k is None else footprint.case_k + ambient
    body = mean if case is None else case
    inside = junction(source, body)
    judged = {"junction": body if inside is None else inside, "case": body, "plate": hottest}[source.limit_at]
    margin = None if source.limit_c is None else source.limit_c - judged
    return SourceResult(id=source.id, power_w=source.power_w, mean_c=mean, max_c=hottest, case_c=case,
                        junction_c=inside, limit_c=source.limit_c, margin_k=margin,
                        verdict=verdict_of(judged, source.limit_c, layout.limits.warn_margin_k))


def _verdict(layout: Layout, peak: Peak, parts: tuple[SourceResult, ...]) -> str:
    plate = verdict_of(peak.temperature_c, layout.limits.plate_c, layout.limits.warn_margin_k)
    found = {plate, *(part.verdict for part in parts)}
    return next(v for v in ("fail", "warn", "pass", "no-limits") if v in found)
