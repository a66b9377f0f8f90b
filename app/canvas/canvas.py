"""The drawing surface of one sheet: draws what it is sent, tells what the hand does, knows no layout logic.

Lengths are mm with y up and the origin in the plate's south-west corner; temperatures °C.

| message | way | content |
|---|---|---|
| scene | to the browser | what stands where: `plate`, `shapes`, `edges`, `snap_mm`, `seq` (see scene.py) |
| field | to the browser | temperatures of one plane: raster, isotherms, bands, peak, parts' verdicts, `seq` (see scene.py) |
| status | to the browser | `state` (draft, current, solving, failed), `text`, `seq` of the newest message that is answered |
| tool | to the browser | `name`: select, source, zone, contact, look (nothing is changed); `snap`: whether snapping is on |
| view | both | what is seen: `x_mm`, `y_mm` in the middle, `mm_per_px`; the browser tells it when the hand changed it |
| fit | to the browser | show the whole plate |
| ready | to the server | the surface exists and shows nothing yet: send scene, field, status, tool |
| shapes | to the server | `items`: kind, id, x_mm, y_mm, width_mm, height_mm of what the gesture changes; `label`; `final` |
| cut | to the server | the cut between segments `index` and `index`+1 of `side` is at `at_mm`; `final` |
| cancel | to the server | the gesture was given up |
| draw | to the server | a new `kind` with x_mm, y_mm, width_mm, height_mm |
| select | to the server | `refs`: kind and id of all that is selected now |
| command | to the server | `name`: delete, duplicate, undo, redo, save, select-all |
| drop | to the server | a file was dropped: `name`, `text`, or `size` and no text where it is too large |

Pacing: of `shapes` and `cut` at most one is under way; the newest waits in the browser until a field or status with its `seq`
has come back, or 4 s have passed (then the surface says that there is no answer and sends again). A scene older than
the browser's last final message is ignored, so that nothing springs back after a release.
"""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from typing import Any

import numpy as np
import param

from ..component import Component
from .colours import DIFFERENCE, FIELD

_FOLDER = Path(__file__).parent


class SheetCanvas(Component):
    """One drawing surface. on_message gets every message of the browser as a dict."""

    palettes = param.Dict(default={"field": FIELD.ravel().tolist(), "difference": DIFFERENCE.ravel().tolist()},
                          constant=True, doc="Colour maps, r, g, b bytes one after the other.")
    caption = param.String(default="", doc="What the surface is called by a screen reader.")

    _esm = _FOLDER / "canvas.js"
    _stylesheets = [(_FOLDER / "canvas.css").read_text("utf-8")]

    def __init__(self, on_message: Callable[[dict], None], **params: Any) -> None:
        self._on_message = on_message
        self._seq = 0
        super().__init__(**{"sizing_mode": "stretch_both", **params})

    def send_scene(self, scene: dict) -> None:
        self._send_msg({"type": "scene", "seq": self._seq} | scene)

    def send_field(self, field: dict) -> None:
        """Arrays in the field arrive as typed arrays."""
        self._send_msg({"type": "field"} | {k: _packed(v) for k, v in field.items()})

    def send_status(self, state: str, text: str, seq: int | None = None) -> None:
        self._send_msg({"type": "status", "state": state, "text": text, "seq": seq or 0})

    def send_tool(self, name: str, snap: bool = True) -> None:
        self._send_msg({"type": "tool", "name": name, "snap": snap})

    def send_view(self, view: dict) -> None:
        self._send_msg({"type": "view"} | view)

    def fit(self) -> None:
        self._send_msg({"type": "fit"})

    def _handle_msg(self, data: Any) -> None:
        self._seq = max(self._seq, data.get("seq", 0))
        self._on_message(data)


def _packed(value: Any) -> Any:
    if isinstance(value, np.ndarray):
        return np.ascontiguousarray(value)
    return {k: _packed(v) for k, v in value.items()} if isinstance(value, dict) else value
