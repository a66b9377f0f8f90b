"""The headless run keeps its contract: tables, results, exit statuses, one line a fault, nothing half done."""

import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

from solver.__main__ import main

ROOT = Path(__file__).resolve().parents[2]


def document(**changes):
    base = {
        "format": "heat-spreader-layout", "version": 1, "title": "Bench plate", "ambient_c": 20.0,
        "plate": {"width_mm": 40.0, "height_mm": 20.0},
        "layers": [{"id": "base", "thickness_mm": 2.0, "material": "aluminium"}],
        "sources": [{"id": "S", "x_mm": 10.0, "y_mm": 5.0, "width_mm": 10.0, "height_mm": 8.0, "power_w": 8.0, "limit_c": 90.0,
                     "limit_at": "junction", "r_junction_case_k_w": 0.5, "interface_k_mm2_w": 30.0}],
        "faces": {"bottom": {"kind": "convective", "film_w_m2k": 500.0}},
    }
    return base | changes


@pytest.fixture
def layout_file(tmp_path):
    def write(name="plate.json", **changes):
        path = tmp_path / name
        path.write_text(json.dumps(document(**changes)))
        return str(path)

    return write


def test_a_table_says_what_an_engineer_asks(layout_file, capsys):
    assert main([layout_file()]) == 0
    out, err = capsys.readouterr()
    assert err == ""
    for words in ("Bench plate", "within its limits", "peak", "°C ±", "junction °C", "margin K", "bottom", "100.0",
                  "do not replace measurement", "Local codes"):
        assert words in out
    assert max(map(len, out.splitlines())) <= 120


def test_results_are_written_and_hold_the_layout(layout_file, tmp_path):
    out = tmp_path / "out.json"
    assert main([layout_file(), "--results", str(out)]) == 0
    results = json.loads(out.read_text())
    assert results["format"] == "heat-spreader-results"
    assert results["layout"]["title"] == "Bench plate"
    assert results["sources"][0]["junction_c"] > results["sources"][0]["case_c"] > results["sources"][0]["mean_c"]


def test_several_layouts_go_to_a_folder(layout_file, tmp_path):
    out = tmp_path / "results"
    assert main([layout_file("a.json"), layout_file("b.json"), "--results", str(out)]) == 0
    assert sorted(path.name for path in out.iterdir()) == ["a.results.json", "b.results.json"]


def test_over_a_limit_is_three_only_when_asked_for(layout_file):
    hot = layout_file(limits={"plate_c": 25.0})
    assert main([hot]) == 0
    assert main([hot, "--fail-on-limit"]) == 3
    assert main([layout_file("cool.json"), "--fail-on-limit"]) == 0


def test_bad_input_is_one_line_a_fault_for_all_files_and_nothing_is_written(layout_file, tmp_path, capsys):
    out = tmp_path / "results"
    bad = layout_file("bad.json", ambient_c="hot", plate={"width_mm": -1.0, "height_mm": 20.0})
    missing = str(tmp_path / "missing.json")
    assert main([layout_file(), bad, missing, "--results", str(out)]) == 2
    printed, err = capsys.readouterr()
    assert printed == ""
    lines = err.splitlines()
    assert len(lines) == 3
    assert lines[0] == f"{bad}: plate.width_mm: -1.0 was given; allowed: a number above 0" or lines[1].startswith(f"{bad}: plate")
    assert any(line.startswith(f"{bad}: ambient_c: 'hot' was given") for line in lines)
    assert lines[2].startswith(f"{missing}: ")
    assert not out.exists()


def test_a_temperature_that_is_not_determined_is_bad_input(layout_file, capsys, tmp_path):
    out = tmp_path / "out.json"
    assert main([layout_file(faces={}), "--results", str(out)]) == 2
    assert "sources[0]: 'S'" in capsys.readouterr().err
    assert not out.exists()


def test_equal_names_cannot_share_a_folder(layout_file, tmp_path, capsys):
    assert main([layout_file(), layout_file(), "--results", str(tmp_path / "r")]) == 2
    assert "every name must differ" in capsys.readouterr().err


def test_no_file_is_bad_usage(capsys):
    assert main([]) == 2
    assert "no file was given" in capsys.readouterr().err


@pytest.mark.parametrize("name", ["layout", "results"])
def test_the_schemas_are_printed(name, capsys):
    assert main(["--schema", name]) == 0
    assert json.loads(capsys.readouterr().out)["$schema"].endswith("2020-12/schema")


def test_the_command_itself(layout_file):
    """One run of the real command: wrong option, then a table, without a traceback."""
    command = [sys.executable, "-m", "solver"]
    wrong = subprocess.run([*command, "--colour"], cwd=ROOT, capture_output=True, text=True)
    assert wrong.returncode == 2 and "Traceback" not in wrong.stderr
    right = subprocess.run([*command, layout_file()], cwd=ROOT, capture_output=True, text=True,
                           env=os.environ | {"PYTHONIOENCODING": "utf-8"})
    assert right.returncode == 0 and "Bench plate" in right.stdout
