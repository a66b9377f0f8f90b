"""Isotherms lie at round temperatures and where the field has them; regions have the area they must."""

import numpy as np
import pytest

from solver import isotherms
from solver.planes import PlaneField


def ramp():
    """25 °C in the west to 75 °C in the east over 100 mm, 40 mm high."""
    x, y = np.linspace(0.0, 0.1, 21), np.linspace(0.0, 0.04, 9)
    return PlaneField(x, y, np.broadcast_to(25.0 + 500.0 * x, (9, 21)))


@pytest.mark.parametrize(
    ("low", "high", "expected"),
    [(25.0, 75.0, [30, 35, 40, 45, 50, 55, 60, 65, 70]), (0.0, 1.0, [0.1 * n for n in range(1, 10)]), (-7.0, 95.0, list(range(0, 95, 20)))],
)
def test_levels_are_round_and_strictly_inside(low, high, expected):
    assert np.allclose(isotherms.levels(low, high), expected)


def test_a_uniform_field_has_no_levels():
    assert len(isotherms.levels(40.0, 40.0)) == 0


def test_isotherms_of_a_ramp_are_straight_and_in_place():
    found = isotherms.lines(ramp(), np.array([40.0, 50.0]))
    assert list(found.level_index) == [0, 1]
    first = found.xy[found.offsets[0] : found.offsets[1]]
    assert np.allclose(first[:, 0], 30.0, atol=1e-4)
    assert first[:, 1].min() == 0.0 and first[:, 1].max() == 40.0


def test_regions_over_and_between_have_their_area():
    def area(rings):
        total = 0.0
        for a, b in zip(rings.offsets[:-1], rings.offsets[1:], strict=True):
            x, y = rings.xy[a:b].T.astype(float)
            total += 0.5 * abs(np.sum(x * np.roll(y, -1) - y * np.roll(x, -1)))
        return total

    assert area(isotherms.region(ramp(), 65.0)) == pytest.approx(20.0 * 40.0, rel=1e-5)
    assert area(isotherms.region(ramp(), 55.0, 65.0)) == pytest.approx(20.0 * 40.0, rel=1e-5)
    assert len(isotherms.region(ramp(), 80.0).xy) == 0


def test_voids_are_left_out_of_lines_and_regions():
    field = ramp()
    t = field.t_c.copy()
    t[:, 12:15] = np.nan
    holed = PlaneField(field.x_m, field.y_m, t)
    assert len(isotherms.lines(holed, np.array([58.0])).xy) == 0
    assert np.isfinite(isotherms.region(holed, 40.0).xy).all()
