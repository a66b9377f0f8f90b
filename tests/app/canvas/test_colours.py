"""The colour maps can be read in grey and by colour-blind eyes.

Simulation of colour-vision deficiency: Machado, Oliveira and Fernandes, "A physiologically-based model for simulation of
color vision deficiency", IEEE TVCG 15 (2009), matrices for severity 1.0 (from memory). Oklab: B. Ottosson 2020.
"""

import numpy as np
import pytest

from app.canvas.colours import DIFFERENCE, FIELD

DEFICIENCY = {
    "protanopia": [[0.152286, 1.052583, -0.204868], [0.114503, 0.786281, 0.099216], [-0.003882, -0.048116, 1.051998]],
    "deuteranopia": [[0.367322, 0.860646, -0.227968], [0.280085, 0.672501, 0.047413], [-0.011820, 0.042940, 0.968881]],
    "tritanopia": [[1.255528, -0.076749, -0.178779], [-0.078411, 0.930809, 0.147602], [0.004733, 0.691367, 0.303900]],
}


def linear(rgb):
    value = np.asarray(rgb, float) / 255.0
    return np.where(value <= 0.04045, value / 12.92, ((value + 0.055) / 1.055) ** 2.4)


def oklab(light):
    lms = np.cbrt(light @ np.array([[0.4122214708, 0.5363325363, 0.0514459929], [0.2119034982, 0.6806995451, 0.1073969566],
                                    [0.0883024619, 0.2817188376, 0.6299787005]]).T)
    return lms @ np.array([[0.2104542553, 0.7936177850, -0.0040720468], [1.9779984951, -2.4285922050, 0.4505937099],
                           [0.0259040371, 0.7827717662, -0.8086757660]]).T


def seen(rgb, deficiency=None):
    light = linear(rgb)
    if deficiency:
        light = np.clip(light @ np.array(DEFICIENCY[deficiency]).T, 0.0, 1.0)
    return oklab(light)


def test_lightness_of_the_field_climbs_all_the_way():
    lightness = seen(FIELD)[:, 0]
    assert np.all(np.diff(lightness[::4]) > 0)
    assert lightness[-1] - lightness[0] > 0.55


def test_equal_steps_of_temperature_look_about_equal():
    steps = np.linalg.norm(np.diff(seen(FIELD)[::8], axis=0), axis=1)
    assert steps.max() < 2.2 * steps.min()


@pytest.mark.parametrize("deficiency", DEFICIENCY)
def test_ten_steps_stay_apart_for_colour_blind_eyes(deficiency):
    colours = seen(FIELD[np.linspace(0, 255, 10).astype(int)], deficiency)
    apart = np.linalg.norm(colours[:, None] - colours[None, :], axis=2)
    assert apart[~np.eye(10, dtype=bool)].min() > 0.04


@pytest.mark.parametrize("deficiency", [None, *DEFICIENCY])
def test_colder_and_warmer_differ_for_every_eye(deficiency):
    ends = seen(DIFFERENCE[[0, 40, 215, 255]], deficiency)
    assert np.linalg.norm(ends[0] - ends[3]) > 0.1
    assert np.linalg.norm(ends[1] - ends[2]) > 0.06


def test_no_difference_is_the_lightest():
    lightness = seen(DIFFERENCE)[:, 0]
    assert 120 <= lightness.argmax() <= 136
