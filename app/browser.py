"""What the page asks of the browser beside showing things: remember, warn, download, mind the connection.

Messages
    server -> browser   {remember}      the desk id that a reload has to ask for (kept in the address)
                        {theme}         "light" or "dark"
                        {unsaved}       whether leaving the page would lose changes
                        {title}         of the window
                        {sheets, difference, active}  what the frame has to make room for
                        {download: {name, text}}
                        {press}         name of a control (data-name) to press, wherever it is on the page
    browser -> server   {hello: {dark}} the page is there; dark: what the system prefers
"""

from __future__ import annotations

from pathlib import Path
from typing import Any

from .compare import why_no_difference
from .component import Component
from .desk import Desk
from .panes.pane import watch_desk


class Browser(Component):
    """Has nothing to see. `there`: whether the page has come to life."""

    _esm = Path(__file__).with_name("browser.js")

    def __init__(self, desk: Desk, **params: Any) -> None:
        self._desk, self.there, self._told = desk, False, {}
        super().__init__(sizing_mode="fixed", width=0, height=0, **params)
        watch_desk(desk, self._tell, ("id", "theme", "active", "difference"), ("dirty", "name", "solution"))

    def download(self, name: str, text: str) -> None:
        """Hand a text to the browser to be kept as a file."""
        self._send_msg({"download": {"name": name, "text": text}})

    def press(self, name: str) -> None:
        """Press a control of the page, as the mouse would."""
        self._send_msg({"press": name})

    def _tell(self) -> None:
        if not self.there:
            return
        desk = self._desk
        sheet = desk.sheets[desk.active]
        news = {"remember": desk.id, "theme": desk.theme,
                "title": f"{'• ' if sheet.dirty else ''}{sheet.name}",
                "unsaved": any(sheet.dirty for sheet in desk.sheets.values()),
                "sheets": len(desk.sheets), "active": desk.active, "difference": self._difference()}
        changed = {key: value for key, value in news.items() if self._told.get(key) != value}
        if changed:
            self._told |= changed
            self._send_msg(changed)

    def _handle_msg(self, data: Any) -> None:
        if "hello" in data:
            self._desk.theme = "dark" if data["hello"].get("dark") else "light"
            self.there, self._told = True, {}
            self._tell()

    def _difference(self) -> str:
        """on, off, or none where a map is wanted and cannot be."""
        desk = self._desk
        if not desk.difference or "B" not in desk.sheets:
            return "off"
        return "none" if why_no_difference(desk.sheets["A"].solution, desk.sheets["B"].solution) else "on"
