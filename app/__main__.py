"""The command line: `python -m app [FILE ...] [--port N] [--host H] [--no-browser]`."""

from __future__ import annotations

import argparse
import sys
from collections.abc import Sequence
from pathlib import Path

from solver.document import LayoutError, read_layout

MOST_FILES = 2


def main(arguments: Sequence[str] | None = None) -> int:
    """Exit status: 0 stopped by the user, 2 bad input or bad usage."""
    options = _parser().parse_args(arguments)
    faults = _faults(options.files)
    if faults:
        print(*faults, sep="\n", file=sys.stderr)
        return 2

    from .server import PortTakenError, free_port, serve  # slow to import: bad usage is told before

    try:
        port = free_port(options.host, options.port)
    except PortTakenError as error:
        print(error, file=sys.stderr)
        return 2
    except OSError as error:
        print(f"--host {options.host}: {error.strerror or error}; give an address of this computer.",
              file=sys.stderr)
        return 2
    serve([path.absolute() for path in options.files], options.host, port, options.browser,
          lambda address: print(f"The studio is at {address} – Ctrl+C stops it.", flush=True))
    print("Stopped.", flush=True)
    return 0


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="python -m app",
        description="Lay out heat-dissipating parts on a plate and watch the temperatures live.")
    parser.add_argument("files", nargs="*", type=Path, metavar="FILE",
                        help=f"layout to open; a second one is shown beside it (at most {MOST_FILES})")
    parser.add_argument("--port", type=_port, default=None,
                        help="port to serve on; without it the first free one")
    parser.add_argument("--host", default="127.0.0.1",
                        help="address to serve on; others than the loopback let other computers in "
                             "(default: %(default)s)")
    parser.add_argument("--no-browser", dest="browser", action="store_false", help="do not open the browser")
    return parser


def _port(text: str) -> int:
    if not text.isdigit() or not 1 <= int(text) <= 65535:
        raise argparse.ArgumentTypeError(f"{text!r} is no port; allowed: 1 to 65535")
    return int(text)


def _faults(files: Sequence[Path]) -> list[str]:
    """What is wrong with the files, one line a fault."""
    if len(files) > MOST_FILES:
        return [f"{len(files)} files were given; at most {MOST_FILES} are shown side by side."]
    faults = []
    for path in files:
        try:
            read_layout(path)
        except LayoutError as error:
            faults += [f"{path}: {fault}" for fault in error.faults]
        except OSError as error:
            faults.append(f"{path}: {error.strerror or error}")
    return faults


if __name__ == "__main__":
    sys.exit(main())
