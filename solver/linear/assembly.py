"""Face conductances from cell conductivities: two half cells in series."""

from __future__ import annotations

import numba
import numpy as np


def conductances(kx: np.ndarray, ky: np.ndarray, kz: np.ndarray, dx: np.ndarray, dy: np.ndarray,
                 dz: np.ndarray) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """gx (nz, ny, nx-1), gy (nz, ny-1, nx), gz (nz-1, ny, nx) in W/K.

    kx, ky, kz (nz, ny, nx) in W/(m K); dx (nx,), dy (ny,), dz (nz,) in m. A cell with conductivity 0 is a void:
    nothing passes its faces.
    """
    nz, ny, nx = kx.shape
    gx, gy, gz = np.empty((nz, ny, nx - 1)), np.empty((nz, ny - 1, nx)), np.empty((nz - 1, ny, nx))
    _fill(kx, ky, kz, dx, dy, dz, gx, gy, gz)
    return gx, gy, gz


@numba.njit(inline="always")
def _series(k1, k2, d1, d2, area):
    below = d1 * k2 + d2 * k1
    return 2.0 * area * k1 * k2 / below if below > 0.0 else 0.0


@numba.njit(cache=True, nogil=True)
def _fill(kx, ky, kz, dx, dy, dz, gx, gy, gz):
    nz, ny, nx = kx.shape
    for k in range(nz):
        for j in range(ny):
            side = dz[k] * dy[j]
            for i in range(nx - 1):
                gx[k, j, i] = _series(kx[k, j, i], kx[k, j, i + 1], dx[i], dx[i + 1], side)
            if j < ny - 1:
                for i in range(nx):
                    gy[k, j, i] = _series(ky[k, j, i], ky[k, j + 1, i], dy[j], dy[j + 1], dz[k] * dx[i])
            if k < nz - 1:
                for i in range(nx):
                    gz[k, j, i] = _series(kz[k, j, i], kz[k + 1, j, i], dz[k], dz[k + 1], dy[j] * dx[i])
