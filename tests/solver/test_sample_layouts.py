"""The sample layouts do what their stories say."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import pytest

from solver import Layout, Solution, parse_layout, read_layout, solve

FOLDER = Path(__file__).parents[2] / "sample_layouts"
VERDICTS = {
    "charger": "pass",
    "graphite-spreader": "pass",
    "half-bridge": "pass",
    "led-board": "pass",
    "motor-drive": "warn",
    "rf-amplifier": "pass",
    "sensor-slot": "pass",
    "supply-crowded": "fail",
    "supply-rearranged": "pass",
}


def sample(name: str) -> Layout:
    return read_layout(FOLDER / f"{name}.json")


def hottest(solution: Solution, part: str) -> float:
    return next(found.max_c for found in solution.results.sources if found.id == part)


def test_every_sample_is_expected_here():
    assert {path.stem for path in FOLDER.iterdir()} == set(VERDICTS)


@pytest.mark.parametrize("name", VERDICTS)
def test_sample_has_a_story_and_its_verdict(name: str):
    layout = sample(name)
    assert layout.title and len(layout.notes) > 200
    results = solve(layout).results
    assert results.verdict == VERDICTS[name]
    assert abs(results.heat_balance.residual_w) <= 1e-6 * results.heat_balance.sources_w
    assert results.peak.grid_uncertainty_k < 0.02 * (results.peak.temperature_c - layout.ambient_c)
    assert not [caution for caution in results.warnings if caution.code != "limit-within-uncertainty"]


def test_rearranged_supply_is_the_crowded_one_with_its_parts_moved():
    crowded, rearranged = sample("supply-crowded"), sample("supply-rearranged")
    places = {"x_mm": 0.0, "y_mm": 0.0}
    assert [part.model_copy(update=places) for part in crowded.sources] == [
        part.model_copy(update=places) for part in rearranged.sources]
    for field in ("plate", "layers", "zones", "edges", "faces", "contacts", "limits", "ambient_c"):
        assert getattr(crowded, field) == getattr(rearranged, field)


def test_without_its_slots_the_sensor_is_over_its_limit():
    layout = sample("sensor-slot")
    limit = next(part.limit_c for part in layout.sources if part.id == "sensor")
    filled = solve(parse_layout({**layout.model_dump(), "zones": []}))
    assert hottest(solve(layout), "sensor") < limit < hottest(filled, "sensor")


def test_without_the_coin_the_final_transistor_is_lost():
    layout = sample("rf-amplifier")
    zones = [zone for zone in layout.model_dump()["zones"] if zone["id"] != "coin"]
    without = solve(parse_layout({**layout.model_dump(), "zones": zones}))
    assert hottest(without, "final") > 300.0 > hottest(solve(layout), "final")


def test_without_graphite_the_processor_is_a_hot_spot():
    layout = sample("graphite-spreader")
    layers = layout.model_dump()["layers"]
    layers[0]["material"] = "polyimide-film"
    without = solve(parse_layout({**layout.model_dump(), "layers": layers}))
    assert hottest(without, "processor") - hottest(solve(layout), "processor") > 10.0


def test_headless_run_prints_a_table_for_every_sample():
    paths = sorted(map(str, FOLDER.glob("*.json")))
    run = subprocess.run([sys.executable, "-m", "solver", *paths], cwd=FOLDER.parent, capture_output=True,
                         text=True, timeout=300, check=False)
    assert (run.returncode, run.stderr) == (0, "")
    for name in VERDICTS:
        assert sample(name).title in run.stdout
