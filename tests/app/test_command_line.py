"""The command line: what it refuses, in how many words, and that it stops when told to."""

from __future__ import annotations

import os
import signal
import socket
import subprocess
import sys
import time
import urllib.request
from pathlib import Path

import pytest

from app.__main__ import main
from app.server import free_port, is_loopback

ROOT = Path(__file__).resolve().parents[2]


@pytest.fixture
def taken_port():
    with socket.socket() as taken:
        taken.bind(("127.0.0.1", 0))
        taken.listen()
        yield taken.getsockname()[1]


def test_a_faulty_file_is_told_of_in_one_line_a_fault_before_anything_starts(tmp_path, capsys) -> None:
    path = tmp_path / "faulty.json"
    path.write_text('{"format": "heat-spreader-layout", "version": 1,'
                    ' "plate": {"width_mm": -1, "height_mm": 5},'
                    ' "layers": [{"id": "a", "thickness_mm": 0, "material": "copper"}]}', "utf-8")
    assert main([str(path)]) == 2
    lines = capsys.readouterr().err.splitlines()
    assert len(lines) == 2
    assert lines[0].startswith(f"{path}: plate.width_mm: ")
    assert lines[1].startswith(f"{path}: layers[0].thickness_mm: ")


def test_a_file_that_is_not_there(tmp_path, capsys) -> None:
    assert main([str(tmp_path / "none.json")]) == 2
    assert capsys.readouterr().err.count("\n") == 1


def test_a_port_given_and_taken_is_refused(taken_port, capsys) -> None:
    assert main(["--no-browser", "--port", str(taken_port)]) == 2
    assert capsys.readouterr().err == (
        f"Port {taken_port} on 127.0.0.1 is taken by another program; choose one with --port.\n")


def test_a_default_port_that_is_taken_gives_way(taken_port, monkeypatch) -> None:
    monkeypatch.setattr("app.server.DEFAULT_PORT", taken_port)
    assert taken_port < free_port("127.0.0.1", None) < taken_port + 20


@pytest.mark.parametrize("port", ["0", "65536", "http", "-1"])
def test_a_port_that_is_none_is_bad_usage(port, capsys) -> None:
    with pytest.raises(SystemExit) as left:
        main([f"--port={port}"])
    assert left.value.code == 2
    assert "1 to 65535" in capsys.readouterr().err


@pytest.mark.parametrize(("host", "alone"),
                         [("127.0.0.1", True), ("localhost", True), ("::1", True), ("0.0.0.0", False),
                          ("192.168.1.5", False), ("example.invalid", False)])
def test_which_hosts_are_this_computer_alone(host, alone) -> None:
    assert is_loopback(host) is alone


@pytest.mark.parametrize("how", [signal.SIGINT, signal.SIGTERM])
def test_it_prints_its_address_and_stops_cleanly(tmp_path, how) -> None:
    process = subprocess.Popen([sys.executable, "-m", "app", "--no-browser"], cwd=ROOT, text=True,
                               stdout=subprocess.PIPE,
                               stderr=subprocess.STDOUT,
                               env=os.environ | {"HEAT_STUDIO_STATE": str(tmp_path)})
    said = process.stdout.readline()
    address = next(word for word in said.split() if word.startswith("http"))
    with urllib.request.urlopen(address, timeout=20) as page:
        assert b"Heat-Spreader Layout Studio" in page.read()
    process.send_signal(how)
    rest, _ = process.communicate(timeout=20)
    assert process.returncode == 0
    assert "Traceback" not in rest


def test_panel_serves_the_folder(tmp_path) -> None:
    port = _free()
    process = subprocess.Popen([sys.executable, "-m", "panel", "serve", "app", "--port", str(port)], cwd=ROOT,
                               text=True,
                               stdout=subprocess.PIPE, stderr=subprocess.STDOUT,
                               env=os.environ | {"HEAT_STUDIO_STATE": str(tmp_path)})
    try:
        page = _page_of(f"http://127.0.0.1:{port}/app", process)
        assert b"Heat-Spreader Layout Studio" in page
        assert page.count(b"data-root-id") >= 12
    finally:
        process.terminate()
        process.communicate(timeout=20)


def _free() -> int:
    with socket.socket() as probe:
        probe.bind(("127.0.0.1", 0))
        return probe.getsockname()[1]


def _page_of(address: str, process: subprocess.Popen) -> bytes:
    end = time.monotonic() + 30
    while True:
        try:
            with urllib.request.urlopen(address, timeout=20) as page:
                return page.read()
        except OSError:
            assert process.poll() is None and time.monotonic() < end, "the server does not answer"
            time.sleep(0.2)
