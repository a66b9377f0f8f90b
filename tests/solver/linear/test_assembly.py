"""Face conductances: two half cells in series, as in any text on heat conduction."""

import numpy as np
import pytest

from solver.linear import conductances


def test_two_slabs_in_series():
    """Slabs of 2 mm at 10 W/(m K) and 6 mm at 30 W/(m K), 1 m by 1 m: half of each, L/(2 k A) = 1e-4 K/W twice."""
    k = np.array([[[10.0, 30.0]]])
    gx, gy, gz = conductances(k, k, k, np.array([2e-3, 6e-3]), np.ones(1), np.ones(1))
    assert gx == pytest.approx(np.full((1, 1, 1), 1.0 / 2e-4))
    assert gy.shape == (1, 0, 2) and gz.shape == (0, 1, 2)


def test_each_axis_has_its_own_conductivity_and_face():
    kx, ky, kz = (np.full((2, 2, 2), k) for k in (400.0, 20.0, 1.0))
    gx, gy, gz = conductances(kx, ky, kz, np.full(2, 1e-3), np.full(2, 2e-3), np.full(2, 4e-3))
    assert gx == pytest.approx(np.full((2, 2, 1), 400.0 * 2e-3 * 4e-3 / 1e-3))
    assert gy == pytest.approx(np.full((2, 1, 2), 20.0 * 1e-3 * 4e-3 / 2e-3))
    assert gz == pytest.approx(np.full((1, 2, 2), 1.0 * 1e-3 * 2e-3 / 4e-3))


def test_nothing_passes_the_faces_of_a_void():
    k = np.full((1, 3, 3), 150.0)
    k[0, 1, 1] = 0.0
    gx, gy, _ = conductances(k, k, k, np.ones(3), np.ones(3), np.ones(1))
    assert not gx[0, 1].any() and not gy[0, :, 1].any()
    assert gx[0, 0].all() and gy[0, :, 0].all()


@pytest.mark.parametrize("name", ["ky", "dz"])
def test_an_array_of_wrong_shape_is_named(name):
    k, d = np.ones((2, 2, 2)), np.ones(2)
    right = {"kx": k, "ky": k, "kz": k, "dx": d, "dy": d, "dz": d}
    with pytest.raises(ValueError, match=name):
        conductances(**(right | {name: np.ones(3)}))
