"""Isotherms at round temperatures, and the regions of a plane above or between temperatures."""

from __future__ import annotations

from dataclasses import dataclass

import contourpy
import numpy as np

from .planes import PlaneField

ROUND_STEPS = (1.0, 2.0, 5.0)


@dataclass(frozen=True)
class Polylines:
    """Lines packed in one array: xy (m, 2) float32 in mm; line n is xy[offsets[n]:offsets[n + 1]] at
    levels[level_index[n]] °C."""

    levels: np.ndarray
    xy: np.ndarray
    offsets: np.ndarray
    level_index: np.ndarray


@dataclass(frozen=True)
class Rings:
    """Closed rings packed alike, to be filled by the even-odd rule."""

    xy: np.ndarray
    offsets: np.ndarray


def levels(t_min: float, t_max: float, target: int = 10) -> np.ndarray:
    """Round temperatures (1, 2 or 5 times a power of ten apart) strictly between two, about `target` of them."""
    span = t_max - t_min
    if not np.isfinite(span) or span <= 1e-9 * max(abs(t_max), 1.0):
        return np.array([])
    raw = span / target
    power = 10.0 ** np.floor(np.log10(raw))
    step = power * next((s for s in ROUND_STEPS if s * power >= raw), 10.0)
    first, last = np.floor(t_min / step) + 1, np.ceil(t_max / step) - 1
    return np.round(np.arange(first, last + 0.5) * step, 12)


def lines(field: PlaneField, at_c: np.ndarray) -> Polylines:
    """The isotherms of a plane at the temperatures at_c."""
    generator = _generator(field)
    pieces, index = [], []
    for n, level in enumerate(at_c):
        found = generator.lines(float(level))
        pieces += found
        index += [n] * len(found)
    xy, offsets = _packed(pieces)
    return Polylines(np.asarray(at_c, dtype=float), xy, offsets, np.array(index, dtype=np.int32))


def region(field: PlaneField, above_c: float, below_c: float = np.inf) -> Rings:
    """Where a plane is above one temperature and not above another."""
    if not np.nanmax(field.t_c) > above_c:
        return Rings(*_packed([]))
    generator = _generator(field)
    below = min(below_c, float(np.nanmax(field.t_c)) + 1.0)
    polygons, starts = generator.filled(above_c, below)
    pieces = [points[a:b] for points, offsets in zip(polygons, starts, strict=True)
              for a, b in zip(offsets[:-1], offsets[1:], strict=True)]
    return Rings(*_packed(pieces))


def _generator(field: PlaneField):
    return contourpy.contour_generator(field.x_m * 1e3, field.y_m * 1e3, np.ma.masked_invalid(field.t_c),
                                       fill_type=contourpy.FillType.OuterOffset)


def _packed(pieces: list[np.ndarray]) -> tuple[np.ndarray, np.ndarray]:
    offsets = np.concatenate([[0], np.cumsum([len(piece) for piece in pieces])]).astype(np.int32)
    xy = np.concatenate(pieces).astype(np.float32) if pieces else np.empty((0, 2), dtype=np.float32)
    return xy, offsets
