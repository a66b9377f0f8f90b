"""How far the peak on this grid may be from the peak on an infinitely fine one.

Richardson extrapolation from a nested pair of grids (Roache, "Perspective: a method for uniform reporting of
grid refinement studies", J. Fluids Eng. 116, 1994): with the error falling as h^p and cells halved, the fine
grid's error is the difference of the two answers over 2^p - 1, times a safety factor.
"""

from __future__ import annotations

from .readout import Readings

ORDER = 1.5
"""Observed between 1.4 and 2 on snapped grids; the formal order 2 is not reached at the edges of sources and zones."""
SAFETY = 1.25
FLOOR = 5e-4
"""Share of the rise below which two grids may agree by chance."""


def uncertainty(fine: Readings, coarse: Readings) -> float:
    """Estimated discretisation error of the fine grid's peak, K, never negative."""
    factor = SAFETY / (2.0**ORDER - 1.0)
    return max(factor * abs(fine.peak.rise_k - coarse.peak.rise_k), FLOOR * abs(fine.peak.rise_k))
