"""How the kernels are compiled: without the interpreter's lock, and cached on disk where some place can be written.

A cached function is renewed when its own file changes, not when a file does from which it calls a compiled function.
Kernels that call one another therefore share a file.
"""

from __future__ import annotations

from collections.abc import Callable

import numba
import numpy as np

F = np.float32
"""What the levels of the multigrid are kept in."""
U = np.uint64
"""Unsigned places: a compiled loop over them needs no test for negative ones and uses vector instructions."""


def compiled(function: Callable) -> Callable:
    options = {"nogil": True, "fastmath": True, "error_model": "numpy"}
    try:
        return numba.njit(cache=True, **options)(function)
    except RuntimeError:  # neither the package's folder nor the user's can be written: compile in every process
        return numba.njit(**options)(function)
