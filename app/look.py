"""The look: colours, type and spacing, light and dark, all in `look.css`; nothing comes from another host."""

from __future__ import annotations

from pathlib import Path

_FOLDER = Path(__file__).parent

STYLE = (_FOLDER / "look.css").read_text("utf-8")
"""Goes into the page and into the shadow tree of every pane; the tokens of `:root` reach all of them."""

FRAME = (_FOLDER / "page.html").read_text("utf-8")
"""The page's frame: where each pane stands."""
