"""Controls that several panes use: fields, buttons, marks."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any

from .figures import MARKS, WORDS
from .html import Html, tag


def button(label: Any, act: str, arg: Any = None, title: str | None = None, class_: str | None = None,
           **attributes: Any) -> Html:
    """A button that does the action `act`."""
    return tag("button", label, type="button", data_act=act, data_arg=arg, title=title, class_=class_,
               **attributes)


def opener(label: Any, popover: str, title: str | None = None, class_: str | None = None,
           **attributes: Any) -> Html:
    """A button that opens the popover of that id."""
    return tag("button", label, type="button", popovertarget=popover, title=title, class_=class_,
               aria_haspopup="dialog", **attributes)


def labelled(label: str, control: Html, title: str | None = None, whole: bool = False) -> Html:
    return tag("label", tag("span", label), control, class_="field whole" if whole else "field", title=title)


def text_field(label: str, value: str, act: str | None, arg: Any, title: str | None = None,
               whole: bool = False,
               **attributes: Any) -> Html:
    """A line of text; the action gets what was typed."""
    return labelled(label, tag("input", type="text", value=value, data_act=act, data_arg=arg,
                               autocomplete="off", spellcheck="false", **attributes), title, whole)


def number_field(label: str, value: str, act: str | None, arg: Any, step: float = 1.0,
                 placeholder: str | None = None,
                 title: str | None = None, **attributes: Any) -> Html:
    """A figure; the label carries its unit. The arrow keys change it by a step, the page keys by ten."""
    return labelled(label,
                    tag("input", type="text", inputmode="decimal", class_="num", value=value, data_act=act,
                        data_arg=arg, data_step=f"{step:g}", placeholder=placeholder,
                        autocomplete="off",
                        **attributes), title)


def choice_field(label: str, value: str, options: Iterable[tuple[str, str]], act: str | None, arg: Any,
                 title: str | None = None, whole: bool = False, **attributes: Any) -> Html:
    """One of a few (value, words)."""
    chosen = [tag("option", words, value=option, selected=option == value) for option, words in options]
    return labelled(label, tag("select", *chosen, data_act=act, data_arg=arg, **attributes), title, whole)


def verdict(kind: str, words: str | None = None) -> Html:
    """A verdict as a mark, words and a colour."""
    return tag("span", tag("i", MARKS[kind], aria_hidden="true"), WORDS[kind] if words is None else words,
               class_=f"verdict {kind}")
