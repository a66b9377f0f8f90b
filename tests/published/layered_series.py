"""Exact temperature of a layered plate with rectangular sources: the double cosine series.

The plate is a rectangle with insulated edges, made of homogeneous orthotropic layers, with a film to a fluid
or a held temperature on each face, heated by any number of rectangles of uniform flux on either face.

Method: separation of variables (Carslaw & Jaeger, Conduction of Heat in Solids, 1959), as applied to plates
by Yovanovich, Muzychka & Culham 1999 and Muzychka, Culham & Yovanovich 2003. Each pair of modes
cos(l x) cos(m y) is a one-dimensional problem through the stack, passed from layer to layer as the pair
(rise, flux) divided by cosh, so that nothing overflows. Point values are summed with an exponential spectral
filter (Gottlieb & Shu, SIAM Review 1997), which makes the sum converge fast everywhere but within a few
wavelengths of a source's edge.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np

MM = 1e-3
FILTER_ORDER = 6
MODES_PER_SHORTEST_SIDE = 24
FEWEST_MODES, MOST_MODES = 300, 4000


@dataclass(frozen=True)
class Slab:
    """One homogeneous layer; joint_below is an area-specific resistance (K m2/W) to the next one down."""

    thickness_mm: float
    k_x: float
    k_y: float
    k_z: float
    joint_below_m2k_w: float = 0.0


@dataclass(frozen=True)
class Film:
    """A face in a fluid; 0 W/m2K is an insulated face."""

    film_w_m2k: float
    fluid_c: float


@dataclass(frozen=True)
class Held:
    """A face held at a temperature."""

    fixed_c: float


@dataclass(frozen=True)
class Heat:
    """A rectangle of uniform flux on a face, "top" or "bottom"."""

    x_mm: float
    y_mm: float
    width_mm: float
    height_mm: float
    power_w: float
    face: str = "top"


Face = Film | Held


@dataclass(frozen=True)
class Hottest:
    temperature_c: float
    x_mm: float
    y_mm: float


def solve_series(plate_mm: tuple[float, float], layers: Sequence[Slab], top: Face, bottom: Face,
                 sources: Sequence[Heat], modes: tuple[int, int] | None = None) -> Series:
    """The series of a plate; modes: how many along x and y, by default enough for the shortest source.

    Raises ValueError when both faces are held or both are insulated.
    """
    if isinstance(top, Held) and isinstance(bottom, Held):
        raise ValueError("one face at most can be held")
    if all(isinstance(face, Film) and face.film_w_m2k == 0 for face in (top, bottom)):
        raise ValueError("one face at least must lead heat away")
    return Series(tuple(plate_mm), tuple(layers), top, bottom, tuple(sources),
                  modes or modes_for(plate_mm, sources))


def modes_for(plate_mm: tuple[float, float], sources: Sequence[Heat]) -> tuple[int, int]:
    shortest = min((min(s.width_mm, s.height_mm) for s in sources), default=min(plate_mm))
    wanted = [MODES_PER_SHORTEST_SIDE * side / shortest for side in plate_mm]
    return tuple(int(np.clip(n, FEWEST_MODES, MOST_MODES)) for n in wanted)


@dataclass(frozen=True)
class Series:
    """A summed plate. Places are in mm from the lower left corner, temperatures in °C."""

    plate_mm: tuple[float, float]
    layers: tuple[Slab, ...]
    top: Face
    bottom: Face
    sources: tuple[Heat, ...]
    modes: tuple[int, int]

    def at(self, x_mm, y_mm, face: str = "top") -> np.ndarray:
        """Temperature at points (broadcast together) of a face."""
        x, y = np.broadcast_arrays(np.asarray(x_mm, float), np.asarray(y_mm, float))
        along_x = self._cosines(0, x.ravel()) @ self._rises(face)
        rise = np.einsum("pm,pm->p", along_x, self._cosines(1, y.ravel()))
        return rise.reshape(x.shape) + self._datum_c

    def grid(self, x_mm: np.ndarray, y_mm: np.ndarray, face: str = "top") -> np.ndarray:
        """Temperatures (len(y), len(x)) on the grid of given x and y."""
        rise = self._cosines(1, y_mm) @ (self._cosines(0, x_mm) @ self._rises(face)).T
        return rise + self._datum_c

    def mean(self, source: Heat, face: str | None = None) -> float:
        """Mean temperature over a source's rectangle, by default on its own face."""
        x, y = (_mean_cosine(self._wavenumbers(axis), *_span(source, axis)) for axis in (0, 1))
        return float(x @ self._rises(face or source.face) @ y) + self._datum_c

    def peak(self, face: str = "top") -> Hottest:
        """The hottest point of a face: the best of grids over the plate and its sources, then zoomed in."""
        plate = Heat(0.0, 0.0, *self.plate_mm, power_w=0.0)
        seeds = [self._best(_points(r, 0, n), _points(r, 1, n), face)
                 for r, n in [(plate, 25), *((s, 9) for s in self.sources if s.face == face)]]
        hottest = max(seeds, key=lambda seed: seed.temperature_c)
        shortest = min([side / 24 for side in self.plate_mm]
                       + [min(s.width_mm, s.height_mm) for s in self.sources])
        for reach in 0.25 * shortest * 0.45 ** np.arange(7):
            x, y = (np.clip(place + reach * np.linspace(-1.0, 1.0, 7), 0.0, side)
                    for place, side in zip((hottest.x_mm, hottest.y_mm), self.plate_mm, strict=True))
            hottest = max(hottest, self._best(x, y, face), key=lambda seed: seed.temperature_c)
        return hottest

    def heat_out_w(self) -> dict[str, float]:
        """Heat leaving through each face, from the uniform mode."""
        area = float(np.prod(self.plate_mm)) * MM * MM
        total = sum(s.power_w for s in self.sources)
        if isinstance(self.top, Held):
            bottom = area * self._film("bottom") * (self._rises("bottom")[0, 0] - self._offset("bottom"))
            return {"top": total - float(bottom), "bottom": float(bottom)}
        top = area * self._film("top") * (self._rises("top")[0, 0] - self._offset("top"))
        return {"top": float(top), "bottom": total - float(top)}

    def _best(self, x: np.ndarray, y: np.ndarray, face: str) -> Hottest:
        t = self.grid(x, y, face)
        j, i = np.unravel_index(t.argmax(), t.shape)
        return Hottest(float(t[j, i]), float(x[i]), float(y[j]))

    @cached_property
    def _datum_c(self) -> float:
        """Rises count from the held face, or from the bottom's fluid."""
        held = [face.fixed_c for face in (self.top, self.bottom) if isinstance(face, Held)]
        return held[0] if held else self.bottom.fluid_c

    def _film(self, face: str) -> float:
        return getattr(self, face).film_w_m2k

    def _offset(self, face: str) -> float:
        """Rise of a face's fluid over the datum."""
        return getattr(self, face).fluid_c - self._datum_c

    def _wavenumbers(self, axis: int) -> np.ndarray:
        return np.arange(self.modes[axis]) * np.pi / (self.plate_mm[axis] * MM)

    def _cosines(self, axis: int, places_mm: np.ndarray) -> np.ndarray:
        share = np.arange(self.modes[axis]) / self.modes[axis]
        damped = np.exp(-36.0 * share**FILTER_ORDER)
        return np.cos(np.outer(np.asarray(places_mm, float) * MM, self._wavenumbers(axis))) * damped

    def _rises(self, face: str) -> np.ndarray:
        return self._top_rises if face == "top" else self._bottom_rises

    @cached_property
    def _top_rises(self) -> np.ndarray:
        """Mode amplitudes of the top face's rise, (modes x, modes y), K."""
        own, across = self._from_top
        return own * self._fluxes("top") + across * self._fluxes("bottom")

    @cached_property
    def _bottom_rises(self) -> np.ndarray:
        return self._from_bottom * self._fluxes("bottom") + self._from_top[1] * self._fluxes("top")

    def _fluxes(self, face: str) -> np.ndarray:
        """Mode amplitudes of the heat put into a face, W/m2: sources, and the fluid where off the datum."""
        chosen = [s for s in self.sources if s.face == face]
        flux = np.zeros(self.modes)
        if chosen:
            density = np.array([s.power_w / (s.width_mm * s.height_mm * MM * MM) for s in chosen])
            x, y = (np.array([_projection(self._wavenumbers(axis), *_span(s, axis), self.plate_mm[axis] * MM)
                              for s in chosen]) for axis in (0, 1))
            flux = (x * density[:, None]).T @ y
        if isinstance(getattr(self, face), Film):
            flux[0, 0] += self._film(face) * self._offset(face)
        return flux

    @cached_property
    def _from_top(self) -> tuple[np.ndarray, np.ndarray]:
        """Rise of the top and of the bottom to heat put into the top, per mode, K m2/W.

        By reciprocity the second is also the rise of the top to heat put into the bottom.
        """
        return _looking_through(self.layers, self.top, self.bottom, self._squared)

    @cached_property
    def _from_bottom(self) -> np.ndarray:
        """Rise of the bottom to heat put into the bottom, per mode, K m2/W."""
        joints = [0.0, *(slab.joint_below_m2k_w for slab in self.layers[:-1])]
        upside_down = [replace(slab, joint_below_m2k_w=joint)
                       for slab, joint in zip(self.layers[::-1], joints[::-1], strict=True)]
        return _looking_through(upside_down, self.bottom, self.top, self._squared)[0]

    @property
    def _squared(self) -> tuple[np.ndarray, np.ndarray]:
        return self._wavenumbers(0) ** 2, self._wavenumbers(1) ** 2


def _looking_through(layers, near: Face, far: Face, squared) -> tuple[np.ndarray, np.ndarray]:
    """Rise of the near face, and of the far one, to heat put into the near one, per mode, K m2/W."""
    x2, y2 = squared[0][:, None], squared[1][None, :]
    rise = np.full((x2.size, y2.size), 0.0 if isinstance(far, Held) else 1.0)
    flux = np.full_like(rise, 1.0 if isinstance(far, Held) else far.film_w_m2k)
    passed = rise.copy()
    for slab in reversed(layers):
        depth = slab.thickness_mm * MM
        decay = np.sqrt((slab.k_x * x2 + slab.k_y * y2) / slab.k_z)
        rise = rise + slab.joint_below_m2k_w * flux
        tanh = np.tanh(decay * depth)
        across = np.divide(tanh, slab.k_z * decay, out=np.full_like(rise, depth / slab.k_z), where=decay > 0)
        rise, flux = rise + across * flux, flux + slab.k_z * decay * tanh * rise
        passed = passed * np.sqrt(np.maximum(1.0 - tanh * tanh, 0.0))
    if isinstance(near, Held):
        return np.zeros_like(rise), np.zeros_like(rise)
    total = near.film_w_m2k * rise + flux
    return rise / total, passed / total


def _span(rectangle: Heat, axis: int) -> tuple[float, float]:
    low, size = ((rectangle.x_mm, rectangle.width_mm), (rectangle.y_mm, rectangle.height_mm))[axis]
    return low * MM, (low + size) * MM


def _points(rectangle: Heat, axis: int, count: int) -> np.ndarray:
    low, high = _span(rectangle, axis)
    return np.linspace(low, high, count) / MM


def _mean_cosine(wavenumbers: np.ndarray, low: float, high: float) -> np.ndarray:
    """Mean of cos(l x) over a span: cos at its middle times sinc of half its width."""
    return np.cos(wavenumbers * 0.5 * (low + high)) * np.sinc(wavenumbers * 0.5 * (high - low) / np.pi)


def _projection(wavenumbers: np.ndarray, low: float, high: float, length: float) -> np.ndarray:
    """Cosine coefficients on (0, length) of a function that is 1 on a span and 0 beside it."""
    scale = np.where(wavenumbers > 0, 2.0, 1.0)
    return scale * (high - low) / length * _mean_cosine(wavenumbers, low, high)
