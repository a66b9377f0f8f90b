"""ISO 10211, Thermal bridges in building construction, annex with validation cases, cases 1 and 2.

The tables are recalled from memory; every figure of case 1 was recomputed from its series, those of case
2 with a fine independent grid (9.490 W/m). A section is a layout of one layer solved as a plane plate:
the section's edges are the plate's edges, its materials are zones.

Tolerance, the standard's own: 0.1 K and 0.1 W/m; the centre of the square column is exactly a quarter.
"""

from __future__ import annotations

import pytest

from tests.published.plates import convective, document, fixed, insulated, solved, temperature

SECTION = "layer:layer-1"

COLUMN_C = (  # from the top, quarter steps from the left
    (9.7, 13.4, 14.7, 15.1),
    (5.3, 8.6, 10.3, 10.8),
    (3.2, 5.6, 7.0, 7.5),
    (2.0, 3.6, 4.7, 5.0),
    (1.3, 2.3, 3.0, 3.2),
    (0.7, 1.4, 1.8, 1.9),
    (0.3, 0.6, 0.8, 0.9),
)

CONDUCTIVITY = {"concrete": 1.15, "wood": 0.12, "insulation": 0.029, "aluminium-profile": 230.0}
PIECES = (  # material, x, y, width, height mm; y counts up from the warm side
    ("concrete", 0.0, 41.5, 500.0, 6.0),
    ("wood", 0.0, 36.5, 15.0, 5.0),
    ("aluminium-profile", 0.0, 35.0, 15.0, 1.5),
    ("aluminium-profile", 0.0, 1.5, 1.5, 33.5),
    ("aluminium-profile", 0.0, 0.0, 500.0, 1.5),
)
POINTS_C = {  # A to I
    (0, 47.5): 7.1, (500, 47.5): 0.8, (0, 41.5): 7.9, (15, 41.5): 6.3, (500, 41.5): 0.8, (0, 36.5): 16.4,
    (15, 36.5): 16.3, (0, 0): 16.8, (500, 0): 18.3,
}


def test_case_1_half_of_a_square_column():
    edges = {"west": fixed(0.0), "south": fixed(0.0), "north": fixed(20.0), "east": insulated()}
    solution = solved(document(100.0, 200.0, [(1.0, 1.0)], ambient_c=0.0, edges=edges), plane=True)
    found = [[temperature(solution, 25.0 * column, 200.0 - 25.0 * row, SECTION) for column in (1, 2, 3, 4)]
             for row in range(1, 8)]
    for row, wanted in zip(found, COLUMN_C, strict=True):
        assert row == pytest.approx(wanted, abs=0.1)
    assert temperature(solution, 100.0, 100.0, SECTION) == pytest.approx(5.0, abs=0.005)


def test_case_2_section_with_a_metal_profile():
    zones = [{"id": f"piece-{n}", "layers": "all", "material": material,
              "x_mm": x, "y_mm": y, "width_mm": width, "height_mm": height}
             for n, (material, x, y, width, height) in enumerate(PIECES)]
    edges = {"south": convective(1 / 0.11, 20.0), "north": convective(1 / 0.06, 0.0)}
    depth_mm = 10.0
    layout = document(500.0, 47.5, [(depth_mm, CONDUCTIVITY["insulation"])], ambient_c=0.0,
                      zones=zones, edges=edges,
                      materials={name: {"k_w_mk": k} for name, k in CONDUCTIVITY.items()})
    solution = solved(layout, plane=True)
    found = {point: temperature(solution, *point, plane=SECTION) for point in POINTS_C}
    assert found == pytest.approx(POINTS_C, abs=0.1)
    heat_w_m = solution.results.heat_balance.out_w["north"] / (depth_mm * 1e-3)
    assert heat_w_m == pytest.approx(9.5, abs=0.1)
