"""The grid of a layout and what lies where on it."""

from .grid import Grid, grid_for

__all__ = ["Grid", "grid_for"]
