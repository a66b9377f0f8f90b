"""Layouts and results on disk: read whole, written whole or not at all."""

from __future__ import annotations

import json
import os
import tempfile
from pathlib import Path
from typing import Any

from pydantic import ValidationError
from pydantic.json_schema import GenerateJsonSchema

from .faults import Fault, LayoutError
from .layout import Layout
from .reading import MAX_BYTES, parse_layout, path_of
from .results import Results


def read_layout(path: str | os.PathLike[str]) -> Layout:
    """A checked layout from a file. Raises LayoutError with all faults, OSError when it cannot be read."""
    size = os.stat(path).st_size
    if size > MAX_BYTES:
        raise LayoutError((Fault("", f"the file has {size:,} bytes; at most {MAX_BYTES:,} are allowed"),))
    return parse_layout(Path(path).read_bytes())


def dump_layout(layout: Layout) -> str:
    """The layout document as text; what was not given is left out."""
    return layout.model_dump_json(indent=2, exclude_none=True) + "\n"


def write_layout(path: str | os.PathLike[str], layout: Layout) -> None:
    """Write a layout atomically. Raises OSError; the old file is then untouched."""
    write_atomic(path, dump_layout(layout))


def dump_results(results: Results) -> str:
    """The results document as text."""
    return results.model_dump_json(indent=2, exclude_none=True) + "\n"


def write_results(path: str | os.PathLike[str], results: Results) -> None:
    """Write results atomically. Raises OSError; the old file is then untouched."""
    write_atomic(path, dump_results(results))


def parse_results(text: str | bytes) -> Results:
    """Results from JSON text. Raises LayoutError with all faults."""
    try:
        return Results.model_validate_json(text)
    except ValidationError as error:
        raise LayoutError(tuple(Fault(path_of(d["loc"]), d["msg"]) for d in error.errors())) from None


def write_atomic(path: str | os.PathLike[str], text: str) -> None:
    """Write text to a temporary file beside the target, make it durable, and put it in the target's place.

    Raises OSError; the target is then as it was and no temporary file is left.
    """
    target = Path(os.path.realpath(path))
    mode = target.stat().st_mode & 0o777 if target.exists() else 0o666 & ~_umask()
    handle, temporary = tempfile.mkstemp(prefix=f".{target.name}.", suffix=".part", dir=target.parent)
    try:
        with os.fdopen(handle, "w", encoding="utf-8", newline="\n") as file:
            file.write(text)
            file.flush()
            os.fsync(file.fileno())
        os.chmod(temporary, mode)
        os.replace(temporary, target)
    except BaseException:
        os.unlink(temporary)
        raise
    _sync_folder(target.parent)


def _umask() -> int:
    mask = os.umask(0o022)
    os.umask(mask)
    return mask


def _sync_folder(folder: Path) -> None:
    """Make the renaming durable where the system can open folders."""
    try:
        handle = os.open(folder, os.O_RDONLY)
    except OSError:
        return
    try:
        os.fsync(handle)
    finally:
        os.close(handle)


class _Schema(GenerateJsonSchema):
    schema_dialect = "https://json-schema.org/draft/2020-12/schema"

    def generate(self, schema: Any, mode: str = "validation") -> dict[str, Any]:
        return {"$schema": self.schema_dialect} | super().generate(schema, mode=mode)


def layout_schema() -> dict[str, Any]:
    """JSON Schema 2020-12 of the layout document."""
    return Layout.model_json_schema(schema_generator=_Schema)


def results_schema() -> dict[str, Any]:
    """JSON Schema 2020-12 of the results document."""
    return Results.model_json_schema(schema_generator=_Schema)


def schema_text(name: str) -> str:
    """The schema of "layout" or "results" as text."""
    return json.dumps({"layout": layout_schema, "results": results_schema}[name](), indent=2) + "\n"
