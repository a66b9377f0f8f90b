"""Serving the studio: the port, who may connect, a clean stop."""

from __future__ import annotations

import ipaddress
import signal
import socket
import threading
from collections.abc import Callable, Sequence
from pathlib import Path

import panel as pn

import solver

from .files import FileAccess
from .page import close_desks, page

DEFAULT_PORT = 5190
PORTS_TRIED = 20
MOST_MESSAGE_BYTES = 20_000_000


class PortTakenError(Exception):
    """No port to serve on; the message says which."""


def is_loopback(host: str) -> bool:
    """Whether a host name or address can be reached from this computer alone."""
    if host == "localhost":
        return True
    try:
        return ipaddress.ip_address(host).is_loopback
    except ValueError:
        return False


def free_port(host: str, wanted: int | None) -> int:
    """The wanted port; without one the first free port from the default on.

    Raises PortTakenError; OSError for a host that is none of this computer's.
    """
    for port in [wanted] if wanted is not None else range(DEFAULT_PORT, DEFAULT_PORT + PORTS_TRIED):
        if _is_free(host, port):
            return port
    tried = f"Port {wanted}" if wanted is not None else f"Every port from {DEFAULT_PORT} to {port}"
    raise PortTakenError(f"{tried} on {host} is taken by another program; choose one with --port.")


def _is_free(host: str, port: int) -> bool:
    family = socket.AF_INET6 if ":" in host else socket.AF_INET
    with socket.socket(family, socket.SOCK_STREAM) as probe:
        probe.setsockopt(socket.SOL_SOCKET, socket.SO_REUSEADDR, 1)
        try:
            probe.bind((host, port))
        except PermissionError:
            return False
        except OSError as error:
            if error.errno in (98, 48, 10048):  # address in use: Linux, macOS, Windows
                return False
            raise
    return True


def serve(files: Sequence[Path], host: str, port: int, open_browser: bool,
          ready: Callable[[str], None]) -> None:
    """Serve until Ctrl+C or a stop signal. `ready` gets the address once pages can be asked for."""
    access = FileAccess(allow_paths=is_loopback(host))

    def build() -> pn.Template:
        return page(files, access)

    warm_up()
    server = pn.serve({"/": build}, address=host, port=port, show=False, start=False, verbose=False,
                      title="Heat-Spreader Layout Studio", websocket_origin=_origins(host, port),
                      websocket_max_message_size=MOST_MESSAGE_BYTES)
    loop = server.io_loop
    for name in (signal.SIGINT, signal.SIGTERM):
        signal.signal(name, lambda *_: loop.add_callback_from_signal(loop.stop))
    server.start()
    ready(f"http://{f'[{host}]' if ':' in host else host}:{port}/")
    if open_browser:
        loop.add_callback(server.show, "/")
    loop.start()
    close_desks()
    server.stop()


def warm_up() -> None:
    """Load the solver's kernels behind the first page."""
    threading.Thread(target=solver.warm_up, name="warm-up", daemon=True).start()


def _origins(host: str, port: int) -> list[str]:
    """Addresses whose pages may connect: this computer's own names, never any page of the web."""
    names = {host, "localhost", "127.0.0.1"}
    if host in ("0.0.0.0", "::"):
        names |= {socket.gethostname(), socket.getfqdn(), *_own_addresses()}
    return [f"[{name}]:{port}" if ":" in name else f"{name}:{port}" for name in sorted(names)]


def _own_addresses() -> set[str]:
    try:
        return {str(info[4][0]) for info in socket.getaddrinfo(socket.gethostname(), None)}
    except OSError:
        return set()
