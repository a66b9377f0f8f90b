"""The drawing surface: one component that draws a sheet, and the messages it exchanges with its page."""

from .canvas import SheetCanvas
from .scene import Scale, difference_of, field_of, scene_of

__all__ = ["Scale", "SheetCanvas", "difference_of", "field_of", "scene_of"]
