"""Compiling: done once by the warm-up, and possible where nothing can be written."""

import os
import shutil
import subprocess
import sys
from pathlib import Path

import numpy as np

import solver.linear
from solver.linear import Field, assembly, coarsening, cycle, solve_pcg, vectors, warm_up

from .test_pcg import network


def compiled_variants() -> dict[str, int]:
    rooms = (assembly, coarsening, cycle, vectors)
    return {f"{room.__name__}.{name}": len(item.signatures) for room in rooms for name, item in vars(room).items()
            if hasattr(item, "signatures")}


def test_no_solve_compiles_anything_after_the_warm_up():
    warm_up()
    before = compiled_variants()
    assert before["solver.linear.cycle.cycle"] == 1
    for shape in ((1, 1, 1), (1, 1, 40), (1, 90, 1), (1, 150, 150), (4, 40, 33)):
        for bodies in (0, 2):
            op, rhs = network(3, *shape, bodies=bodies)
            start = solve_pcg(op, rhs, rtol=1e-2).field
            solve_pcg(op, Field(rhs.cells.astype(np.float32), rhs.bodies), start=start)
    assert compiled_variants() == before


def test_it_works_where_no_cache_can_be_written(tmp_path):
    shutil.copytree(Path(solver.linear.__file__).parent, tmp_path / "linear", ignore=shutil.ignore_patterns("__pycache__"))
    (tmp_path / "linear" / "__pycache__").write_text("in the way of a folder")
    (tmp_path / "file").write_text("no folder for a user's cache")
    code = "import numpy as np; from linear import vectors; print(vectors.squared(np.array([3.0, 4.0])))"
    nowhere = {name: str(tmp_path / "file") for name in ("HOME", "XDG_CACHE_HOME", "IPYTHONDIR")}
    environment = {name: value for name, value in os.environ.items() if name != "NUMBA_CACHE_DIR"} | nowhere
    done = subprocess.run([sys.executable, "-c", code], cwd=tmp_path, env=environment, capture_output=True, text=True, timeout=120)
    assert done.stdout.strip() == "25.0", done.stderr
