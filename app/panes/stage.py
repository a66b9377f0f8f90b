"""The stage: what a sheet's drawing surface shows of the desk, and what its messages do there."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from solver import planes
from solver.planes import PlaneField

from .. import edits
from ..canvas.canvas import SheetCanvas
from ..canvas.scene import Scale, difference_of, field_of, scene_of
from ..compare import difference_map, shared_range, why_no_difference
from ..desk import Desk
from ..editing import Key
from ..refs import COLLECTIONS, RECTANGLES, Ref
from .pane import Later, watch_desk
from .rail import added
from .topbar import open_chosen

SAME_SCALE = 0.004
"""The shared scale's ends may move by this share of its span before the other sheet is painted again."""

MAP_PAUSE_MS = 150
"""The map of differences is made at most this often."""


class Stage:
    """Both sheets' surfaces and the one of the difference map.

    press: presses a control of the page by its name.
    """

    def __init__(self, desk: Desk, later: Later, press: Callable[[str], None]) -> None:
        self.desk, self._later, self.press = desk, later, press
        self.surfaces = {key: Surface(self, key) for key in ("A", "B")}
        self.difference = SheetCanvas(self._on_difference_message, caption="Map of the difference, B minus A",
                                      margin=0)
        self._map_due = False
        desk.param.watch(self._desk_changed, ["sheets", "plane", "scale", "tool", "snap"])
        watch_desk(desk, self._map_later, ("difference", "plane"), ("solution",))
        self._watched: dict[str, int] = {}
        self._watch_sheets()

    def scale(self) -> Scale | None:
        """The colour scale that both sheets have; None: one sheet alone, its own range."""
        if self.desk.scale is not None:
            return Scale(*self.desk.scale)
        shown = [surface.shown.t_c for surface in self.surfaces.values() if surface.shown is not None]
        span = shared_range(*shown) if len(shown) == 2 else None
        return None if span is None else Scale(*span)

    def rescaled(self, by: Key) -> None:
        """A sheet has a new field: the other one is painted again if the shared scale has moved."""
        for key, surface in self.surfaces.items():
            if key != by:
                surface.follow(self.scale())

    def see(self, view: dict[str, Any], by: Key | None) -> None:
        """Zoom and pan of one surface, for the others."""
        if not self.desk.linked_view:
            return
        for key, surface in self.surfaces.items():
            if key != by and key in self.desk.sheets:
                surface.canvas.send_view(view)
        if by is not None and self.desk.difference:
            self.difference.send_view(view)

    def _desk_changed(self, *events: Any) -> None:
        names = {event.name for event in events}
        if "sheets" in names:
            self._watch_sheets()
        for surface in self.surfaces.values():
            if names & {"sheets", "plane"}:
                surface.send_all()
            if "scale" in names:
                surface.follow(self.scale())
            if names & {"tool", "snap"}:
                surface.send_tool()

    def _watch_sheets(self) -> None:
        for key, sheet in self.desk.sheets.items():
            if self._watched.get(key) != id(sheet):
                self._watched[key] = id(sheet)
                self.surfaces[key].watch(sheet)
        for key in set(self._watched) - set(self.desk.sheets):
            del self._watched[key]
            self.surfaces[key].leave()

    def _map_later(self) -> None:
        if not self._map_due and self.desk.difference:
            self._map_due = True
            self._later(self._send_map, MAP_PAUSE_MS)

    def _send_map(self) -> None:
        self._map_due = False
        desk = self.desk
        if not desk.difference or "B" not in desk.sheets:
            return
        a, b = desk.sheets["A"].solution, desk.sheets["B"].solution
        if why_no_difference(a, b):
            return
        plane_a, plane_b = desk.plane_of(a.layout), desk.plane_of(b.layout)
        scene = scene_of(a.layout, (), plane_a)
        self.difference.send_scene(scene)
        self.difference.send_field(difference_of(difference_map(a, b, plane_a, plane_b)))
        self.difference.send_status("current", "")
        self.difference.send_tool("look")

    def _on_difference_message(self, message: dict) -> None:
        if message.get("type") == "ready":
            self._map_later()
        elif message.get("type") == "view":
            self.see(_view(message), None)
        elif message.get("type") == "drop":
            self.surfaces[self.desk.active].drop(message)
        else:  # nothing is changed on a map: it shows again what is
            self._map_later()


class Surface:
    """One sheet's drawing surface. `shown` is the field on it, for the shared scale."""

    def __init__(self, stage: Stage, key: Key) -> None:
        self._stage, self.key = stage, key
        self.canvas = SheetCanvas(self._on_message, caption=f"Plate of sheet {key}", margin=0)
        self.shown: PlaneField | None = None
        self._ready = False
        self._scale: Scale | None = None

    @property
    def _sheet(self) -> Any:
        return self._stage.desk.sheets.get(self.key)

    def watch(self, sheet: Any) -> None:
        sheet.param.watch(self._sheet_changed,
                          ["revision", "selection", "solution", "state", "trouble", "answered"])
        self.shown = None
        self.send_all()

    def leave(self) -> None:
        """The sheet has been closed."""
        self.shown = None

    def send_all(self) -> None:
        if self._ready and self._sheet is not None:
            self._send_scene()
            self._send_field()
            self._send_status()
            self.send_tool()

    def send_tool(self) -> None:
        self.canvas.send_tool(self._stage.desk.tool, self._stage.desk.snap)

    def follow(self, scale: Scale | None) -> None:
        """Paint again where the scale has moved enough to be seen."""
        was = self._scale
        if self._sheet is None or self._sheet.solution is None or was == scale:
            return
        if was is not None and scale is not None:
            near = SAME_SCALE * max(was.high - was.low, 1e-9)
            if abs(was.low - scale.low) < near and abs(was.high - scale.high) < near:
                return
        self._send_field(tell=False)

    def _sheet_changed(self, *events: Any) -> None:
        if not self._ready or self._sheet is None:
            return
        names = {event.name for event in events}
        # The hand's own shapes are never written back while it moves them.
        if names & {"revision", "selection"} and not self._sheet.in_gesture:
            self._send_scene()
        if "solution" in names:
            self._send_field()
        if names & {"state", "trouble", "answered"}:
            self._send_status()

    def _send_scene(self) -> None:
        sheet = self._sheet
        self.canvas.send_scene(scene_of(sheet.layout, sheet.selection,
                                        self._stage.desk.plane_of(sheet.layout)))

    def _send_field(self, tell: bool = True) -> None:
        sheet = self._sheet
        if sheet.solution is None or not self._ready:
            return
        plane = self._stage.desk.plane_of(sheet.solution.layout)
        self.shown = planes.temperature(sheet.solution, plane)
        self._scale = self._stage.scale()
        self.canvas.send_field(field_of(sheet.solution, plane, self._scale, sheet.answered, self.shown))
        if tell:
            self._stage.rescaled(self.key)

    def _send_status(self) -> None:
        sheet = self._sheet
        self.canvas.send_status(sheet.state, sheet.trouble, sheet.answered)

    # --- messages ---

    def _on_message(self, message: dict) -> None:
        handle = getattr(self, f"_on_{message.get('type')}", None)
        if handle is not None and (self._sheet is not None or message.get("type") == "ready"):
            handle(message)

    def _on_ready(self, _: dict) -> None:
        self._ready = True
        self.send_all()

    def _on_shapes(self, message: dict) -> None:
        edit = edits.place(message["items"], message.get("label", ""))
        self._stage.desk.gesture(self.key, edit, final=bool(message["final"]), seq=message["seq"])

    def _on_cut(self, message: dict) -> None:
        edit = edits.move_cut(message["side"], int(message["index"]), float(message["at_mm"]))
        self._stage.desk.gesture(self.key, edit, final=bool(message["final"]), seq=message["seq"])

    def _on_cancel(self, _: dict) -> None:
        self._stage.desk.cancel_gesture(self.key)

    def _on_draw(self, message: dict) -> None:
        desk = self._stage.desk
        rectangle = tuple(float(message[side]) for side in ("x_mm", "y_mm", "width_mm", "height_mm"))
        desk.active = self.key
        desk.edit(self.key, added(desk, self._sheet.layout, message["kind"], rectangle))

    def _on_tool(self, message: dict) -> None:
        if message["name"] in self._stage.desk.param.tool.objects:
            self._stage.desk.tool = message["name"]

    def _on_select(self, message: dict) -> None:
        self._stage.desk.select(self.key, [Ref(ref["kind"], ref["id"]) for ref in message["refs"]])

    def _on_command(self, message: dict) -> None:
        desk, selection = self._stage.desk, self._sheet.selection
        desk.active = self.key
        match message["name"]:
            case "delete":
                desk.edit(self.key, edits.delete(selection))
            case "duplicate":
                desk.edit(self.key, edits.duplicate(selection))
            case "undo":
                desk.undo(self.key)
            case "redo":
                desk.redo(self.key)
            case "select-all":
                layout = self._sheet.layout
                desk.select(self.key, [Ref(kind, thing.id) for kind in RECTANGLES
                                       for thing in getattr(layout, COLLECTIONS[kind])])
            case "save":
                self._stage.press("save")

    def _on_drop(self, message: dict) -> None:
        self.drop(message)

    def drop(self, message: dict) -> None:
        """A layout file was dropped: open it."""
        open_chosen(self._stage.desk, self.key, message)

    def _on_view(self, message: dict) -> None:
        self._stage.see(_view(message), self.key)


def _view(message: dict) -> dict[str, Any]:
    return {name: message[name] for name in ("x_mm", "y_mm", "mm_per_px")}
