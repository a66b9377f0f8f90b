"""Building HTML so that a user's text can never become markup."""

from __future__ import annotations

import json
from html import escape
from typing import Any


class Html(str):
    """Text that is HTML already. Anything else is escaped when it becomes part of a tag."""

    __slots__ = ()


def tag(name: str, /, *children: Any, **attributes: Any) -> Html:
    """An element. Children that are no Html are escaped; lists are flattened; None and False are left out.

    Attributes: `class_` is class; underscores become hyphens; True is a bare attribute; None and False leave
    it out; `data_arg`, what an action gets, is written as JSON.
    """
    written = "".join(_attribute(key.rstrip("_").replace("_", "-"), value) for key,
                      value in attributes.items())
    if name in ("input", "br", "hr"):
        return Html(f"<{name}{written}>")
    return Html(f"<{name}{written}>{join(*children)}</{name}>")


def join(*children: Any) -> Html:
    """Children one after the other, as `tag` takes them."""
    return Html("".join(_child(child) for child in children))


def _child(child: Any) -> str:
    if child is None or child is False:
        return ""
    if isinstance(child, Html):
        return child
    if isinstance(child, list | tuple):
        return join(*child)
    return escape(str(child))


def _attribute(key: str, value: Any) -> str:
    if value is None or value is False:
        return ""
    if value is True:
        return f" {key}"
    text = json.dumps(value) if key == "data-arg" else str(value)
    return f' {key}="{escape(text)}"'
