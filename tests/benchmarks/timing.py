"""Times and peak memory; the least of several runs, since a shared machine only ever adds to a time."""

from __future__ import annotations

import json
import subprocess
import sys
import time
from collections.abc import Callable
from typing import Any


def least(run: Callable[[], Any], times: int) -> tuple[float, Any]:
    """Seconds of the quickest run, and what the last one returned."""
    quickest, result = float("inf"), None
    for _ in range(times):
        begun = time.perf_counter()
        result = run()
        quickest = min(quickest, time.perf_counter() - begun)
    return quickest, result


def apart(module: str, *arguments: object) -> dict[str, float]:
    """What `python -m module arguments` prints as JSON, from a process of its own, with its peak memory in MB."""
    code = (
        "import json, resource, runpy, sys; sys.argv = sys.argv[1:]; "
        f"out = runpy.run_module({module!r}, run_name='worker')['work'](*map(int, sys.argv[1:])); "
        "out['peak_mb'] = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024; print(json.dumps(out))"
    )
    command = [sys.executable, "-c", code, module, *map(str, arguments)]
    done = subprocess.run(command, capture_output=True, text=True, check=True)
    return json.loads(done.stdout.strip().splitlines()[-1])
