"""What the benchmarks solve: random rectangles of conductors 4000 times apart and air slots on a uniform box."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from solver.linear import Field, Operator, conductances

WIDTH_M = 0.1
CONDUCTORS = (0.1, 0.3, 2.0, 20.0, 150.0, 390.0)
LAYER_THICKNESS_M = (70e-6, 100e-6, 0.5e-3, 0.5e-3, 0.5e-3, 0.5e-3)


@dataclass(frozen=True)
class Case:
    """Conductivity (nz, ny, nx) in W/(m K), 0 in slots; cell sizes in m; film below in W/(m² K); heat (nz, ny, nx) in W."""

    k: np.ndarray
    d: float
    dz: np.ndarray
    film: float
    heat: np.ndarray


def case(n: int, nz: int, shift: int = 0, seed: int = 5) -> Case:
    """n x n x nz cells; shift: how many cells the last zone stands further to the right."""
    rng = np.random.default_rng(seed)
    base = np.array([390.0, 2.0, 150.0, 150.0, 150.0, 150.0])[:nz] if nz > 1 else np.array([150.0])
    k = np.broadcast_to(base[:, None, None], (nz, n, n)).copy()
    for _ in range(40):
        rows, columns = _rectangle(rng, n, 0.04, 0.3)
        k[rng.integers(nz), rows, columns] = rng.choice(CONDUCTORS)
    for _ in range(4):
        rows, columns = _slot(rng, n)
        k[:, rows, columns] = 0.0
    first = int(0.4 * n) + shift
    k[0, int(0.45 * n) : int(0.55 * n), first : first + n // 8] = 0.1
    heat = np.zeros((nz, n, n))
    for _ in range(12):
        rows, columns = _rectangle(rng, n, 0.03, 0.1)
        solid = k[0, rows, columns] > 0
        heat[0, rows, columns] += 5.0 * solid / max(solid.sum(), 1)
    dz = np.array(LAYER_THICKNESS_M[:nz]) if nz > 1 else np.array([1.5e-3])
    return Case(k, WIDTH_M / n, dz, 300.0, heat)


def _rectangle(rng: np.random.Generator, n: int, low: float, high: float) -> tuple[slice, slice]:
    height, width = (max(int(n * share), 1) for share in rng.uniform(low, high, 2))
    j, i = rng.integers(0, n - height), rng.integers(0, n - width)
    return slice(j, j + height), slice(i, i + width)


def _slot(rng: np.random.Generator, n: int) -> tuple[slice, slice]:
    long, thin = int(n * rng.uniform(0.2, 0.4)), max(n // 100, 1)
    j, i = rng.integers(0, n - long, 2)
    along = rng.random() < 0.5
    return (slice(j, j + thin), slice(i, i + long)) if along else (slice(j, j + long), slice(i, i + thin))


def operator(c: Case) -> Operator:
    """Our assembly, from conductivities to the network."""
    nz, ny, nx = c.k.shape
    d = np.full(nx, c.d)
    gx, gy, gz = conductances(c.k, c.k, c.k, d, d, c.dz)
    gs = np.zeros_like(c.k)
    solid = c.k[-1] > 0
    half = 0.5 * c.dz[-1] / np.where(solid, c.k[-1], 1.0) if nz > 1 else 0.0  # one layer is the plain thin plate
    gs[-1] = solid * c.d**2 / (1.0 / c.film + half)
    return Operator(gx, gy, gz, gs, dx=d, dy=d)


def rhs(c: Case) -> Field:
    return Field(c.heat, np.zeros(0))
