"""The colour maps of fields, made in Oklab (Ottosson 2020) so that equal steps of temperature look equal.

`FIELD` climbs in lightness without a turn, from a deep blue over a dull rose to a pale straw: it can be read in grey and
by colour-blind eyes. `DIFFERENCE` is lightest at zero and darkens to blue below it and to brown above it.
"""

from __future__ import annotations

import numpy as np

STEPS = 256

FIELD_STOPS = ((0.30, 0.115, 268.0), (0.46, 0.105, 300.0), (0.60, 0.110, 10.0), (0.74, 0.120, 55.0), (0.93, 0.085, 100.0))
"""Lightness, chroma and hue in degrees (360 added after a turn) at equal distances along the map."""
BELOW_STOPS = ((0.42, 0.12, 250.0), (0.68, 0.09, 240.0), (0.96, 0.005, 230.0))
ABOVE_STOPS = ((0.96, 0.005, 70.0), (0.70, 0.10, 65.0), (0.42, 0.10, 50.0))


def to_srgb(lab: np.ndarray) -> np.ndarray:
    """Oklab (n, 3) to sRGB (n, 3) between 0 and 1, clipped. Matrices: B. Ottosson, "A perceptual color space", 2020."""
    cone = lab @ np.array([[1.0, 0.3963377774, 0.2158037573], [1.0, -0.1055613458, -0.0638541728],
                           [1.0, -0.0894841775, -1.2914855480]]).T
    linear = cone**3 @ np.array([[4.0767416621, -3.3077115913, 0.2309699292], [-1.2684380046, 2.6097574011, -0.3413193965],
                                 [-0.0041960863, -0.7034186147, 1.7076147010]]).T
    linear = np.clip(linear, 0.0, 1.0)
    return np.where(linear <= 0.0031308, 12.92 * linear, 1.055 * linear ** (1 / 2.4) - 0.055)


def ramp(stops: tuple[tuple[float, float, float], ...], steps: int) -> np.ndarray:
    """sRGB bytes (steps, 3) along stops of lightness, chroma and hue; lightness is linear between the stops."""
    lightness, chroma, hue = np.array(stops).T
    hue = np.rad2deg(np.unwrap(np.deg2rad(hue)))
    at = np.linspace(0.0, 1.0, steps)
    knots = np.linspace(0.0, 1.0, len(stops))
    light, c, h = (np.interp(at, knots, values) for values in (lightness, chroma, hue))
    angle = np.deg2rad(h)
    return np.round(255 * to_srgb(np.column_stack([light, c * np.cos(angle), c * np.sin(angle)]))).astype(np.uint8)


FIELD = ramp(FIELD_STOPS, STEPS)
DIFFERENCE = np.concatenate([ramp(BELOW_STOPS, STEPS // 2), ramp(ABOVE_STOPS, STEPS // 2)])
