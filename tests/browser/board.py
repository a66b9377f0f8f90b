"""A small board that solves in a moment, with a part that can be brought over its limit."""

from __future__ import annotations

import json
from copy import deepcopy
from pathlib import Path
from typing import Any

BOARD: dict[str, Any] = {
    "format": "heat-spreader-layout", "version": 1, "title": "Board", "ambient_c": 25.0,
    "plate": {"width_mm": 80.0, "height_mm": 50.0},
    "layers": [{"id": "base", "thickness_mm": 2.0, "material": "aluminium"}],
    "sources": [{"id": "Q1", "x_mm": 10.0, "y_mm": 20.0, "width_mm": 12.0, "height_mm": 10.0, "power_w": 10.0,
                 "limit_c": 120.0},
                {"id": "Q2", "x_mm": 50.0, "y_mm": 20.0, "width_mm": 8.0, "height_mm": 8.0, "power_w": 2.0}],
    "edges": {"east": [{"kind": "convective", "film_w_m2k": 2000.0}]},
    "faces": {"bottom": {"kind": "convective", "film_w_m2k": 20.0}},
    "limits": {"plate_c": 120.0, "warn_margin_k": 10.0},
}
Q1_CORNER, Q1_SIZE = (10.0, 20.0), (12.0, 10.0)


def board(**changes: Any) -> dict[str, Any]:
    return deepcopy(BOARD) | changes


def written(folder: Path, name: str = "board.json", document: dict[str, Any] | None = None) -> Path:
    path = folder / name
    path.write_text(json.dumps(document or BOARD), "utf-8")
    return path
