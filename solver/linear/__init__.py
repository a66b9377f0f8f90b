"""Solving a network of conductances. Knows arrays, not layouts."""

from .assembly import conductances
from .direct import solve_direct
from .operator import Body, Field, Operator, matrix
from .pcg import apply, residual, solve_pcg
from .solved import Solved, Stopped
from .warmup import warm_up

__all__ = ["Body", "Field", "Operator", "Solved", "Stopped", "apply", "conductances", "matrix", "residual", "solve_direct",
           "solve_pcg", "warm_up"]
