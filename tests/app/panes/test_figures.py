"""Figures on the screen: true minus signs, no negative nought, units, digits; and reading typed ones."""

from __future__ import annotations

import pytest

from app.panes import figures
from app.panes.forms import conductivities, figure
from solver.document import Material


@pytest.mark.parametrize(("value", "words"),
                         [(0.0, "0.00 W"), (-0.0, "0.00 W"), (12.0, "12.00 W"), (0.05, "0.0500 W"),
                          (123.4, "123.4 W"), (-3.0, "\u22123.00 W"), (4321.0, "4321 W")])
def test_watts(value, words) -> None:
    assert figures.watts(value) == words


def test_temperatures_and_margins() -> None:
    assert figures.celsius(-0.04) == "0.0 °C"
    assert figures.kelvin(-17.52, signed=True) == "\u221217.5 K"
    assert figures.kelvin(0.25, signed=True) == "+0.25 K"
    assert figures.uncertainty(0.0) == "± less than 0.01 K"
    assert figures.uncertainty(0.071) == "± 0.07 K"


def test_conductivity_is_said_in_as_few_words_as_it_takes() -> None:
    assert figures.conductivity(Material(k_w_mk=390.0)) == "390 W/mK"
    assert figures.conductivity(Material(k_in_plane_w_mk=0.9, k_through_w_mk=0.3)) == (
        "0.9 W/mK in the plane, 0.3 W/mK through it")


@pytest.mark.parametrize(("typed", "value"),
                         [("12", 12.0), (" 1e3 ", 1000.0), ("2,5", 2.5), ("\u22124", -4.0), ("", None)])
def test_typed_figures(typed, value) -> None:
    assert figure("power_w", typed, may_be_empty=True) == value


@pytest.mark.parametrize("typed", ["ten", "1,000.5", "nan", "inf", "1 2", ""])
def test_what_is_no_figure_is_named_with_what_is_allowed(typed) -> None:
    with pytest.raises(ValueError, match="^Power: .* a number in W is needed.$"):
        figure("power_w", typed)


def test_a_material_takes_its_shortest_form() -> None:
    assert conductivities(5.0, None, None) == {"k_w_mk": 5.0}
    assert conductivities(5.0, None, 1.0) == {"k_in_plane_w_mk": 5.0, "k_through_w_mk": 1.0}
    assert conductivities(5.0, 4.0, None) == {"k_x_w_mk": 5.0, "k_y_w_mk": 4.0, "k_z_w_mk": 5.0}
