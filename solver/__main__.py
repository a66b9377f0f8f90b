"""The headless run: `python -m solver LAYOUT.json [...]` prints one table a layout and may write the results.

Exit status: 0 solved; 3 solved, some limit is exceeded and --fail-on-limit was given; 2 bad input or usage, one line a
fault on standard error, nothing written; 130 stopped with Ctrl+C.
"""

from __future__ import annotations

import argparse
import os
import sys
from pathlib import Path

from . import LayoutError, Results, TooLargeError, read_layout, solve, write_results
from .document import Layout, schema_text
from .table import table

SOLVED, STOPPED, BAD, OVER_LIMIT = 0, 130, 2, 3


class Refused(Exception):
    """Bad input or usage; the message holds one line a fault."""


def main(arguments: list[str] | None = None) -> int:
    options = _parser().parse_args(arguments)
    try:
        return _run(options)
    except Refused as refusal:
        print(refusal, file=sys.stderr)
        return BAD
    except BrokenPipeError:
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return BAD
    except KeyboardInterrupt:
        print("Stopped.", file=sys.stderr)
        return STOPPED


def _run(options: argparse.Namespace) -> int:
    if options.schema:
        print(schema_text(options.schema), end="")
        return SOLVED
    if not options.layouts:
        raise Refused("LAYOUT: no file was given; allowed: one or more layout files, or --schema layout|results")
    targets = _targets(options.layouts, options.results)
    layouts = _read(options.layouts)
    solved = [(path, _solved(path, layout)) for path, layout in layouts]
    for path, results in solved:
        print(f"== {path}\n{table(results)}\n")
    for (_, results), target in zip(solved, targets, strict=False):
        _write(target, results)
    exceeded = any(results.verdict == "fail" for _, results in solved)
    return OVER_LIMIT if exceeded and options.fail_on_limit else SOLVED


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(prog="python -m solver", description="Solve layouts and print their temperatures.")
    parser.add_argument("layouts", nargs="*", metavar="LAYOUT.json", help="layout documents")
    parser.add_argument("--results", metavar="OUT", help="write the results document here; a folder for several layouts")
    parser.add_argument("--fail-on-limit", action="store_true", help="exit with status 3 when some limit is exceeded")
    parser.add_argument("--schema", choices=["layout", "results"], help="print a document's JSON Schema and do nothing else")
    return parser


def _targets(paths: list[str], out: str | None) -> list[Path]:
    """Where each layout's results go; nothing without --results."""
    if out is None:
        return []
    if len(paths) == 1:
        return [Path(out)]
    stems = [Path(path).stem for path in paths]
    for stem in stems:
        if stems.count(stem) > 1:
            raise Refused(f"--results: {stems.count(stem)} layouts are called {stem}; in one folder every name must differ")
    if Path(out).exists() and not Path(out).is_dir():
        raise Refused(f"--results: {out} is a file; for several layouts a folder is needed")
    return [Path(out) / f"{stem}.results.json" for stem in stems]


def _read(paths: list[str]) -> list[tuple[str, Layout]]:
    """All layouts; every fault of every file is told before anything is solved."""
    layouts, faults = [], []
    for path in paths:
        try:
            layouts.append((path, read_layout(path)))
        except LayoutError as error:
            faults += [f"{path}: {fault}" for fault in error.faults]
        except OSError as error:
            faults.append(f"{path}: cannot be read: {error.strerror or error}; a layout file is needed")
    if faults:
        raise Refused("\n".join(faults))
    return layouts


def _solved(path: str, layout: Layout) -> Results:
    try:
        return solve(layout).results
    except LayoutError as error:
        raise Refused("\n".join(f"{path}: {fault}" for fault in error.faults)) from None
    except TooLargeError as error:
        raise Refused(f"{path}: {error}") from None
    except MemoryError:
        raise Refused(f"{path}: there is not enough free memory to solve this layout") from None


def _write(target: Path, results: Results) -> None:
    try:
        target.parent.mkdir(parents=True, exist_ok=True)
        write_results(target, results)
    except OSError as error:
        raise Refused(f"--results: {target} was not written: {error.strerror or error}") from None


if __name__ == "__main__":
    sys.exit(main())
