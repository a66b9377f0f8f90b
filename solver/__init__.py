"""What a layout is, and what heat does in it. The names here are the solver's public face."""

from .document import (
    Fault,
    Layout,
    LayoutError,
    Results,
    dump_layout,
    parse_layout,
    read_layout,
    write_layout,
    write_results,
)
from .linear import Stopped, warm_up
from .steady import Solution, TooLargeError, solve
from .system import UndeterminedError

__all__ = [
    "Fault",
    "Layout",
    "LayoutError",
    "Results",
    "Solution",
    "Stopped",
    "TooLargeError",
    "UndeterminedError",
    "dump_layout",
    "parse_layout",
    "read_layout",
    "solve",
    "warm_up",
    "write_layout",
    "write_results",
]
