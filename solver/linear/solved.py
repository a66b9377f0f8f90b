"""What a linear solve returns, and how it is told to stop."""

from __future__ import annotations

from dataclasses import dataclass

from .operator import Field


class Stopped(Exception):
    """The solve was told to stop before it was done."""


@dataclass(frozen=True)
class Solved:
    """field: the answer; residual: its relative residual (2-norm); converged: whether the wanted one was reached."""

    field: Field
    iterations: int
    residual: float
    converged: bool
