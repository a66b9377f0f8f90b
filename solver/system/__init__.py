"""The finite-volume equations of a layout: networks of conductances, boundary surfaces, bodies of parts."""

from .equations import Equations, equations
from .islands import UndeterminedError, grounded

__all__ = ["Equations", "UndeterminedError", "equations", "grounded"]
