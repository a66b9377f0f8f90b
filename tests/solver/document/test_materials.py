"""The built-in materials are complete, sourced and near the handbooks' figures.

Handbook values recalled from memory: Bergman et al., Fundamentals of Heat and Mass Transfer, appendix A (copper, brass,
stainless steel 304, silver, gold, tungsten, silicon, nickel, air); CRC Handbook (borosilicate glass); EN ISO 10456 (foams).
"""

import pytest

from solver.document import MATERIALS, nearest_names

HANDBOOK_W_MK = {"copper": 401.0, "brass": 110.0, "steel-stainless-304": 14.9, "silver": 429.0, "gold": 317.0,
                 "tungsten": 174.0, "silicon": 148.0, "nickel": 90.7, "still-air": 0.0263, "glass-borosilicate": 1.1,
                 "foam-polystyrene": 0.035, "aluminium": 237.0, "molybdenum": 138.0}


def test_there_are_forty_and_the_groups_an_engineer_looks_for():
    assert len(MATERIALS) >= 40
    wanted = ("copper", "aluminium", "aluminium-cast-a356", "steel-carbon", "brass", "alumina-96", "aluminium-nitride", "fr4",
              "dielectric-2", "solder-sac305", "pad-3", "grease-standard", "graphite-sheet-pyrolytic", "copper-molybdenum-30-70",
              "copper-tungsten-20-80", "silicon", "silicon-carbide", "gallium-nitride", "still-air", "foam-polyurethane", "abs")
    assert [name for name in wanted if name not in MATERIALS] == []


@pytest.mark.parametrize("name", MATERIALS)
def test_every_entry_is_whole_and_says_where_it_is_from(name):
    entry = MATERIALS[name]
    assert entry.name == name and entry.title and entry.group
    assert "memory" in entry.source or "typical class value" in entry.source
    assert entry.material.density_kg_m3 and entry.material.specific_heat_j_kgk
    assert entry.emissivity is None or 0.0 < entry.emissivity <= 1.0
    heat_per_volume = entry.material.density_kg_m3 * entry.material.specific_heat_j_kgk
    assert heat_per_volume < 5e6, "no solid stores more per volume"


@pytest.mark.parametrize(("name", "k_w_mk"), HANDBOOK_W_MK.items())
def test_conductivities_are_near_the_handbook(name, k_w_mk):
    assert MATERIALS[name].material.kx == pytest.approx(k_w_mk, rel=0.08)


def test_sheets_and_laminates_conduct_less_through_than_along():
    for name in ("fr4", "graphite-sheet-pyrolytic", "prepreg"):
        material = MATERIALS[name].material
        assert material.kx == material.ky > material.kz


def test_near_names_are_offered():
    assert "copper" in nearest_names("coper")
    assert nearest_names("qqqq") == ["copper", "aluminium", "fr4"]
