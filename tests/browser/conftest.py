"""A real Chromium on the real studio: the server in its own process, a page that may reach no other host.

Nothing here sleeps: what is waited for is an attribute the page sets when it is so.
"""

from __future__ import annotations

import os
import re
import shutil
import signal
import socket
import subprocess
import sys
from collections.abc import Callable, Iterator
from dataclasses import dataclass, field
from pathlib import Path

import pytest
from playwright.sync_api import Browser, Locator, Page, expect, sync_playwright

import solver

ROOT = Path(__file__).resolve().parents[2]
ARGUMENTS = ["--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run",
             "--disable-background-networking",
             "--disable-component-update", "--disable-sync",
             "--host-resolver-rules=MAP * ~NOTFOUND, EXCLUDE 127.0.0.1"]
PATIENCE_MS = 20_000

expect.set_options(timeout=PATIENCE_MS)


@dataclass
class Server:
    """The studio as a process. `state` is the folder of its autosaves."""

    port: int
    state: Path
    arguments: tuple[str, ...] = ()
    process: subprocess.Popen = field(init=False)

    @property
    def address(self) -> str:
        return f"http://127.0.0.1:{self.port}/"

    def start(self) -> Server:
        command = [sys.executable, "-m", "app", *self.arguments, "--no-browser", "--port", str(self.port)]
        self.process = subprocess.Popen(command, cwd=ROOT,
                                        env=os.environ | {"HEAT_STUDIO_STATE": str(self.state)},
                                        stdout=subprocess.PIPE, stderr=subprocess.STDOUT, text=True)
        said = self.process.stdout.readline()
        assert self.address in said, said + self.process.stdout.read()
        return self

    def stop(self, how: signal.Signals = signal.SIGINT) -> int:
        self.process.send_signal(how)
        return self.process.wait(20)


def free_port() -> int:
    with socket.socket() as probe:
        probe.bind(("127.0.0.1", 0))
        return probe.getsockname()[1]


@pytest.fixture(scope="session")
def chromium() -> Iterator[Browser]:
    """Debian's Chromium; a machine without it fails these tests."""
    path = shutil.which("chromium") or shutil.which("chromium-browser")
    if path is None:
        pytest.fail("These tests need Chromium: apt-get install chromium (or run `bash .ci/setup test`).")
    with sync_playwright() as playwright:
        browser = playwright.chromium.launch(executable_path=path, args=ARGUMENTS)
        yield browser
        browser.close()


@pytest.fixture(scope="session")
def server(tmp_path_factory: pytest.TempPathFactory) -> Iterator[Server]:
    """One studio for all tests that do not stop it; every page has its own desk."""
    solver.warm_up()  # compiles the kernels the first time on a machine: no page should wait for that
    running = Server(free_port(), tmp_path_factory.mktemp("state")).start()
    yield running
    assert running.stop() == 0


@pytest.fixture
def open_page(chromium: Browser) -> Iterator[Callable[..., Page]]:
    """Opens pages; whatever one asks of another host, and any error in it, fails the test."""
    contexts, outside, errors = [], [], []

    def opened(address: str, theme: str = "light", width: int = 1440, height: int = 900) -> Page:
        context = chromium.new_context(viewport={"width": width, "height": height}, color_scheme=theme)
        context.set_default_timeout(PATIENCE_MS)
        contexts.append(context)
        page = context.new_page()
        local = re.compile(r"(https?|ws)://127\.0\.0\.1:\d+/|data:|blob:")
        page.on("request", lambda request: None if local.match(request.url) else outside.append(request.url))
        page.on("pageerror", lambda error: errors.append(str(error)))
        page.on("dialog", lambda dialog: dialog.accept())  # the browser's own question on leaving
        page.goto(address)
        expect(page.locator("[data-name=status]")).to_be_visible()
        return page

    yield opened
    for context in contexts:
        context.close()
    assert not outside, f"requests to other hosts: {outside}"
    assert not errors, f"errors in the page: {errors}"


class Studio:
    """What a person sees and does on a page."""

    def __init__(self, page: Page) -> None:
        self.page = page

    def named(self, name: str) -> Locator:
        return self.page.locator(f'[data-name="{name}"]')

    def shape(self, kind: str, id_: str, sheet: str = "a") -> Locator:
        return self.page.locator(f".cell-{sheet}").get_by_test_id(f"shape-{kind}-{id_}")

    def open_file(self, path: Path, sheet: str = "A") -> None:
        """Choose a file in the menu's own field."""
        field = self.page.locator(f'[popover] [data-name="file-{sheet}"]').first
        self.after(lambda: field.set_input_files(path))

    def settled(self) -> None:
        """The active sheet shows the final solution of what is on it."""
        expect(self.named("status")).to_have_attribute("data-state", "current")
        of = self.named("status").get_attribute("data-of")
        results = f'[data-name="results"][data-state="current"][data-of="{of}"]'
        expect(self.page.locator(results)).to_be_attached()

    def after(self, act: Callable[[], object]) -> None:
        """Do something that changes the layout and wait for its final solution."""
        before = self.named("status").get_attribute("data-of")
        act()
        expect(self.named("status")).not_to_have_attribute("data-of", before)
        self.settled()

    @property
    def peak(self) -> float:
        return float(self.named("peak").get_attribute("data-value"))

    def set(self, name: str, value: str) -> None:
        """Type a figure into the inspector and take it over."""
        self.named(name).fill(value)
        self.named(name).press("Enter")

    def value(self, name: str) -> float:
        return float(self.named(name).input_value())

    def at(self, x_mm: float, y_mm: float, known: Locator, corner: tuple[float, float],
           size: tuple[float, float]
           ) -> tuple[float, float]:
        """Where a place of the plate is on the screen, told from a shape whose sides are known in mm."""
        box = known.locator("rect").first.bounding_box()
        scale = box["width"] / size[0]
        return (box["x"] + (x_mm - corner[0]) * scale, box["y"] + box["height"] - (y_mm - corner[1]) * scale)

    def drag(self, start: tuple[float, float], end: tuple[float, float]) -> None:
        mouse = self.page.mouse
        mouse.move(*start)
        mouse.down()
        for n in range(1, 9):
            mouse.move(start[0] + (end[0] - start[0]) * n / 8, start[1] + (end[1] - start[1]) * n / 8)
        mouse.up()


@pytest.fixture
def studio(server: Server, open_page: Callable[..., Page]) -> Studio:
    return Studio(open_page(server.address))
