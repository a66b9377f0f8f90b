"""What the user wrote, and what comes back: the layout and results documents, their files and their materials."""

from .check import MAX_RECTANGLES, check
from .faults import Fault, LayoutError
from .files import (
    dump_layout,
    dump_results,
    layout_schema,
    parse_results,
    read_layout,
    results_schema,
    schema_text,
    write_atomic,
    write_layout,
    write_results,
)
from .layout import (
    SIDES,
    VOID,
    Contact,
    ConvectiveFace,
    ConvectiveSegment,
    Edges,
    EdgeSegment,
    Face,
    Faces,
    FixedFace,
    FixedSegment,
    InsulatedFace,
    InsulatedSegment,
    Layer,
    Layout,
    Limits,
    Material,
    Plate,
    Source,
    Zone,
    is_void,
)
from .materials import MATERIALS, Entry, nearest_names
from .reading import MAX_BYTES, parse_layout
from .results import Caution, GridSize, HeatBalance, Peak, Results, SourceResult, Verdict

__all__ = [
    "MATERIALS", "MAX_BYTES", "MAX_RECTANGLES", "SIDES", "VOID", "Caution", "Contact", "ConvectiveFace", "ConvectiveSegment",
    "EdgeSegment", "Edges", "Entry", "Face", "Faces", "Fault", "FixedFace", "FixedSegment", "GridSize", "HeatBalance",
    "InsulatedFace", "InsulatedSegment", "Layer", "Layout", "LayoutError", "Limits", "Material", "Peak", "Plate", "Results",
    "Source", "SourceResult", "Verdict", "Zone", "check", "dump_layout", "dump_results", "is_void", "layout_schema",
    "nearest_names", "parse_layout", "parse_results", "read_layout", "results_schema", "schema_text", "write_atomic",
    "write_layout", "write_results",
]
