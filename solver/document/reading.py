"""From text to a sound layout, or to every fault that it has."""

from __future__ import annotations

import json
from collections.abc import Iterator
from typing import Any

from pydantic import ValidationError

from .check import faults_of
from .faults import Fault, LayoutError, shown
from .layout import Layout

MAX_BYTES = 5_000_000
LATER = "is part of the format but is not supported by this version yet"
LISTS = ("layers", "zones", "sources", "contacts")
UNION_TAGS = {"insulated", "fixed", "convective", "literal['all']", "tuple[constrained-str, ...]"}


def parse_layout(data: bytes | str | dict[str, Any]) -> Layout:
    """A checked layout from JSON text or from its parsed form. Raises LayoutError with all faults."""
    document = data if isinstance(data, dict) else _parsed(data)
    faults = list(_not_yet(document))
    try:
        layout = Layout.model_validate(_without_later(document) if faults else document)
    except ValidationError as error:
        wrong = [_fault(detail) for detail in error.errors() if not _is_echo(detail)]
        raise LayoutError(_ordered(faults + wrong + list(_faults_of_the_rest(document, error)))) from None
    faults += faults_of(layout)
    if faults:
        raise LayoutError(_ordered(faults))
    return layout


def _parsed(text: bytes | str) -> dict[str, Any]:
    size = len(text if isinstance(text, bytes) else text.encode("utf-8", "surrogatepass"))
    if size > MAX_BYTES:
        raise LayoutError((Fault("", f"the document has {size:,} bytes; at most {MAX_BYTES:,} are allowed"),))
    try:
        plain = text.decode("utf-8") if isinstance(text, bytes) else text
        document = json.loads(plain.removeprefix("\ufeff"), object_pairs_hook=_unique, parse_constant=float)
    except UnicodeDecodeError as error:
        raise LayoutError((Fault("", f"byte {error.start} is not UTF-8; a layout is JSON text in UTF-8"),)) from None
    except json.JSONDecodeError as error:
        where = f"line {error.lineno}, column {error.colno}"
        raise LayoutError((Fault("", f"not JSON at {where}: {error.msg}; a layout is one JSON object"),)) from None
    except RecursionError:
        raise LayoutError((Fault("", "the document is nested too deeply; a layout has at most five levels"),)) from None
    if not isinstance(document, dict):
        raise LayoutError((Fault("", f"{shown(document)} was given; a layout is one JSON object"),))
    return document


def _unique(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    found: dict[str, Any] = {}
    for name, value in pairs:
        if name in found:
            raise LayoutError((Fault(name, "this field is given twice in one object; allowed: once"),))
        found[name] = value
    return found


def _not_yet(document: dict[str, Any]) -> Iterator[Fault]:
    """What the format has and this version does not do, said in words."""
    if "transient" in document:
        yield Fault("transient", f"a transient {LATER}; leave it out")
    faces = document.get("faces")
    for name, face in faces.items() if isinstance(faces, dict) else ():
        if not isinstance(face, dict):
            continue
        if face.get("kind") in ("natural", "forced"):
            yield Fault(f"faces.{name}.kind", f"{shown(face['kind'])} {LATER}; allowed: insulated, fixed, convective")
            continue
        for field in ("emissivity", "surroundings_c"):
            if field in face:
                yield Fault(f"faces.{name}.{field}", f"radiation {LATER}; leave {field} out")


def _without_later(document: dict[str, Any]) -> dict[str, Any]:
    """The document with those parts left out, so that the rest can be judged."""
    rest = {name: value for name, value in document.items() if name != "transient"}
    if isinstance(rest.get("faces"), dict):
        rest["faces"] = {name: _face_without_later(face) for name, face in rest["faces"].items()}
    return rest


def _face_without_later(face: Any) -> Any:
    if not isinstance(face, dict):
        return face
    if face.get("kind") in ("natural", "forced"):
        return {"kind": "insulated"}
    return {name: value for name, value in face.items() if name not in ("emissivity", "surroundings_c")}


def _fault(detail: dict[str, Any]) -> Fault:
    path = path_of(detail["loc"])
    kind, context = detail["type"], detail.get("ctx", {})
    if kind == "missing":
        return Fault(path, "this field is missing; it is required")
    given = shown(detail["input"])
    if kind == "extra_forbidden":
        return Fault(path, f"unknown field, {given} was given; only the fields of the format are allowed")
    if kind == "value_error":
        return Fault(path, str(context["error"]))
    return Fault(path, f"{given} was given; allowed: {_allowed(kind, context, detail['msg'])}")


def _allowed(kind: str, context: dict[str, Any], message: str) -> str:
    rules = {
        "greater_than": "a number above {gt:g}", "greater_than_equal": "a number of at least {ge:g}",
        "finite_number": "a finite number", "float_type": "a number", "string_type": "text",
        "literal_error": "{expected}", "union_tag_invalid": "a kind of {expected_tags}",
        "union_tag_not_found": "an object with a kind", "string_too_short": "at least one character",
        "string_too_long": "at most {max_length} characters", "tuple_type": "a list", "model_type": "an object",
        "mapping_type": "an object", "dict_type": "an object", "too_short": "at least {min_length} entry",
    }
    return rules[kind].format(**context) if kind in rules else message


def path_of(loc: tuple[str | int, ...]) -> str:
    """sources[2].power_w from ("sources", 2, "power_w"); the models' own union tags are left out."""
    path = ""
    for n, part in enumerate(loc):
        if isinstance(part, int):
            path += f"[{part}]"
        elif n == 0 or not _is_tag(loc, n):
            path += f".{part}" if path else part
    return path


def _is_tag(loc: tuple[str | int, ...], n: int) -> bool:
    """Whether a part of a location names the branch of a union and not a field."""
    part = loc[n]
    if loc[0] == "edges":
        return n == 3 and part in UNION_TAGS
    if loc[0] == "faces":
        return n == 2 and part in UNION_TAGS
    return loc[0] == "zones" and n == 3 and ("[" in str(part) or part == "constrained-str")


def _is_echo(detail: dict[str, Any]) -> bool:
    """Whether a fault only repeats another: that a list of layers is not the word "all", that a faulty entry is missing."""
    if detail["type"] == "too_short":
        return len(detail["input"]) > 0
    return detail["loc"][-1] == "literal['all']" and isinstance(detail["input"], list)


def _faults_of_the_rest(document: dict[str, Any], error: ValidationError) -> Iterator[Fault]:
    """The cross checks' faults of what is sound: entries of lists that have faults themselves are left out."""
    bad = {tuple(detail["loc"][:2]) for detail in error.errors() if detail["loc"] and detail["loc"][0] in LISTS}
    rest, kept = dict(_without_later(document)), {}
    for name in LISTS:
        entries = rest.get(name)
        if isinstance(entries, list):
            kept[name] = [n for n in range(len(entries)) if (name, n) not in bad]
            rest[name] = [entries[n] for n in kept[name]]
    faulty = {detail["loc"][0] for detail in error.errors() if detail["loc"]}
    if "materials" in faulty or any(entry[0] == "layers" for entry in bad):
        return  # what refers to them cannot be judged
    rest = {name: value for name, value in rest.items()
            if name in Layout.model_fields and (name in LISTS or name not in faulty)}
    try:
        layout = Layout.model_validate(rest)
    except ValidationError:
        return
    for fault in faults_of(layout):
        yield Fault(_original(fault.path, kept), fault.message)


def _original(path: str, kept: dict[str, list[int]]) -> str:
    """A path in the thinned-out document as a path in the given one."""
    name, bracket, rest = path.partition("[")
    if name not in kept or not bracket:
        return path
    number, _, tail = rest.partition("]")
    return f"{name}[{kept[name][int(number)]}]{tail}"


def _ordered(faults: list[Fault]) -> tuple[Fault, ...]:
    """Each fault once, in the order of finding."""
    return tuple(dict.fromkeys(faults))
