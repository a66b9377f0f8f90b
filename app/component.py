"""What all parts of the page are: a component whose messages to the browser arrive, each once and in their order."""

from __future__ import annotations

from typing import Any

from panel.custom import JSComponent
from panel.models.esm import ESMEvent


class Component(JSComponent):
    """A component that draws itself with its `_esm` and talks with messages."""

    def _send_msg(self, data: Any) -> None:
        """Send on the document's own way out, which waits for its turn.

        The shortcut that Panel takes around it loses a message that closely follows another. To be called with
        the document locked, as it is in every message handler and in every call of `PageLoop`.
        """
        for model, _ in self._models.values():
            if model.document is not None:
                model.document.callbacks.send_event(ESMEvent(model=model, data=data))
