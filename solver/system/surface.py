"""The balance of heat at a boundary surface, and the surface's own temperature.

Each boundary cell has a surface node between its centre and what lies outside. Into the node flows the heat q
of the sources; out of it flow H (Ts - Tf) to fluids and contacts, J (Ts - Tb) to the bodies of parts, and
(Ts - Tc) / R to the cell centre, R being the resistance of the half cell. With r = 1 / (1 + (H + J) R) the node is

    Ts = r (Tc + R (q + H Tf + sum J Tb))

and can be eliminated exactly: what remains are conductances between cell, fluid and bodies, and shares of q. A
held surface (fixed temperature) is the limit of an unbounded H. All temperatures here are rises over a common
reference, in K.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from functools import cached_property

import numpy as np

from ..linear import Field

Where = tuple[slice, slice]


@dataclass(frozen=True)
class Sink:
    """A film or contact over the nodes [where]: g in W/K of each, rise of its far side in K."""

    name: str
    where: Where
    g: np.ndarray
    rise: float


@dataclass(frozen=True)
class Joint:
    """The joint between body number `body` and the nodes [where]: g in W/K of each."""

    body: int
    where: Where
    g: np.ndarray


@dataclass(frozen=True)
class Surface:
    """One side of the plate: a two-dimensional sheet of nodes on the cells `cells[at]`.

    half: resistance from node to cell centre, K/W (0: none, the plate is not resolved through its thickness);
    solid: where there is a cell at all; held: rise of the held nodes, NaN where a node is free; flux: W into each.
    """

    name: str
    at: tuple
    half: np.ndarray
    solid: np.ndarray
    held: np.ndarray
    flux: np.ndarray
    sinks: tuple[Sink, ...] = ()
    joints: tuple[Joint, ...] = field(default=())

    @cached_property
    def is_held(self) -> np.ndarray:
        return ~np.isnan(self.held) & self.solid

    @cached_property
    def _sink_g(self) -> np.ndarray:
        return _summed(self.half.shape, ((s.where, s.g) for s in self.sinks))

    @cached_property
    def _outer_heat(self) -> np.ndarray:
        """q + H Tf: what reaches the node at zero rise, W."""
        return self.flux + _summed(self.half.shape, ((s.where, s.g * s.rise) for s in self.sinks))

    @cached_property
    def _ratio(self) -> np.ndarray:
        joints = _summed(self.half.shape, ((j.where, j.g) for j in self.joints))
        return np.where(self.is_held, 0.0, 1.0 / (1.0 + (self._sink_g + joints) * self.half))

    def cell_terms(self) -> tuple[np.ndarray, np.ndarray]:
        """For the cells: conductance to known temperatures (W/K), and heat at zero rise (W)."""
        to_sink = self._ratio * self._sink_g
        heat = self._ratio * self._outer_heat
        if self.is_held.any():
            direct = 1.0 / self.half[self.is_held]
            to_sink[self.is_held] = direct
            heat[self.is_held] = direct * self.held[self.is_held]
        return to_sink, heat

    def joint_terms(self, joint: Joint) -> tuple[np.ndarray, float, float]:
        """For one body: conductance to each cell (W/K), to known temperatures (W/K), and heat at zero rise (W)."""
        w = joint.where
        to_cell = joint.g * self._ratio[w]
        through = to_cell * self.half[w]
        to_sink = float(np.sum(through * self._sink_g[w]))
        heat = float(np.sum(through * self._outer_heat[w]))
        held = self.is_held[w]
        if held.any():
            to_sink += float(np.sum(joint.g[held]))
            heat += float(np.sum(joint.g[held] * self.held[w][held]))
        return to_cell, to_sink, heat

    def bodies_term(self, one: Joint, other: Joint) -> float:
        """Conductance between two bodies whose joints share nodes, W/K."""
        shared = tuple(slice(max(a.start, b.start), min(a.stop, b.stop))
                       for a, b in zip(one.where, other.where, strict=True))
        if any(s.start >= s.stop for s in shared):
            return 0.0
        a = one.g[_within(shared, one.where)]
        b = other.g[_within(shared, other.where)]
        return float(np.sum(a * b * self._ratio[shared] * self.half[shared]))

    def rise(self, solved: Field) -> np.ndarray:
        """Surface temperatures as rises, K; NaN where there is no cell."""
        arriving = self._outer_heat.copy()
        for joint in self.joints:
            arriving[joint.where] += joint.g * solved.bodies[joint.body]
        surface = self._ratio * (solved.cells[self.at] + self.half * arriving)
        surface[self.is_held] = self.held[self.is_held]
        surface[~self.solid] = np.nan
        return surface

    def heat_out(self, solved: Field) -> dict[str, float]:
        """W that leave through each sink, and through the held nodes under the surface's own name."""
        surface = np.nan_to_num(self.rise(solved))
        out: dict[str, float] = {self.name: 0.0}
        for sink in self.sinks:
            heat = float(np.sum(sink.g * (surface[sink.where] - sink.rise)))
            out[sink.name] = out.get(sink.name, 0.0) + heat
        held = self.is_held
        if held.any():
            arriving = (solved.cells[self.at][held] - self.held[held]) / self.half[held] + self.flux[held]
            out[self.name] += float(np.sum(arriving))
            for joint in self.joints:
                mine = held[joint.where]
                drop = solved.bodies[joint.body] - self.held[joint.where][mine]
                out[self.name] += float(np.sum(joint.g[mine] * drop))
        return out


def _summed(shape: tuple[int, int], parts) -> np.ndarray:
    total = np.zeros(shape)
    for where, values in parts:
        total[where] += values
    return total


def _within(inner: Where, outer: Where) -> Where:
    return tuple(slice(i.start - o.start, i.stop - o.start) for i, o in zip(inner, outer, strict=True))
