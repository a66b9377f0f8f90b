"""Markup is made in one place, and text never becomes markup there.

Source of the rule, from memory: OWASP, Cross Site Scripting Prevention: encode &, <, >, " and ' in element
content and in quoted attributes. The check is a parser of its own, Python's html.parser.
"""

from __future__ import annotations

from html.parser import HTMLParser

from hypothesis import given
from hypothesis import strategies as st

from app.panes.html import Html, join, tag


class Seen(HTMLParser):
    """What a parser of its own sees of some HTML."""

    def __init__(self, html: str) -> None:
        super().__init__()
        self.tags, self.attributes, self.text = [], [], ""
        self.feed(html)
        self.close()

    def handle_starttag(self, name, attributes) -> None:
        self.tags.append(name)
        self.attributes += attributes

    def handle_data(self, data) -> None:
        self.text += data


printable = st.text(st.characters(exclude_categories=["C"]), max_size=60)


@given(printable, printable)
def test_any_text_comes_back_as_the_text_it_was(text: str, value: str) -> None:
    seen = Seen(tag("p", text, title=value))
    assert seen.tags == ["p"]
    assert seen.text == text
    assert seen.attributes == [("title", value)]


def test_what_is_markup_stays_markup_and_what_is_missing_is_left_out() -> None:
    inner = tag("b", "x & y", class_="key")
    assert inner == '<b class="key">x &amp; y</b>'
    assert tag("p", [inner, None, False], "<", hidden=True, id=None) == f"<p hidden>{inner}&lt;</p>"
    assert join("a", Html("<br>")) == "a<br>"
    assert tag("input", value="5") == '<input value="5">'


def test_arguments_of_actions_are_json() -> None:
    written = dict(Seen(tag("button", data_arg={"id": 'a"b'}, data_act="go")).attributes)
    assert written == {"data-arg": '{"id": "a\\"b"}', "data-act": "go"}
