"""`python -m tests.browser.canvas_bench`: how the real studio follows the hand. Not a test: figures for DEVELOPERS.md.

A part is dragged for three seconds with pointer input at 60 Hz, in a headless Chromium that renders in software. Latency runs
from the pointer event to the painted field that answers it; frames are counted by the browser's own animation frames.
"""

from __future__ import annotations

import asyncio
import json
import math
import random
import socket
import statistics
import subprocess
import sys
import tempfile
import time
from pathlib import Path

from playwright.async_api import async_playwright

ROOT = Path(__file__).resolve().parents[2]
ARGUMENTS = ["--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run", "--disable-background-networking",
             "--disable-component-update", "--disable-sync"]
WATCH = """(stage) => {
  window.seen = {moves: [], paints: [], frames: 0, begun: performance.now()}
  stage.querySelector("svg").addEventListener("pointermove", () => seen.moves.push(performance.now()), true)
  new MutationObserver((changes) => {
    if (changes.some((change) => change.attributeName === "data-drawn")) seen.paints.push([performance.now(), stage.dataset.answered])
  }).observe(stage, {attributes: true})
  const count = () => { seen.frames++; requestAnimationFrame(count) }
  requestAnimationFrame(count)
}"""


def layout(shapes: int) -> dict:
    """Three quarters parts, one quarter gaps in the foil of an insulated metal board."""
    rng = random.Random(1)

    def rectangle(most: float) -> dict:
        w, h = rng.uniform(2, most), rng.uniform(2, most)
        return {"x_mm": rng.uniform(0, 80 - w), "y_mm": rng.uniform(0, 60 - h), "width_mm": w, "height_mm": h}

    parts = shapes - shapes // 4
    return {
        "format": "heat-spreader-layout", "version": 1, "plate": {"width_mm": 80, "height_mm": 60},
        "layers": [{"id": "foil", "thickness_mm": 0.07, "material": "copper"},
                   {"id": "resin", "thickness_mm": 0.1, "material": "dielectric-2"},
                   {"id": "base", "thickness_mm": 1.5, "material": "aluminium"}],
        "sources": [{"id": f"Q{n}", "power_w": 1.0, **rectangle(5)} for n in range(parts)],
        "zones": [{"id": f"Z{n}", "layers": ["foil"], "material": "fr4", **rectangle(9)} for n in range(shapes // 4)],
        "faces": {"bottom": {"kind": "convective", "film_w_m2k": 200.0}}, "limits": {"plate_c": 70.0},
    }


async def drag(address: str) -> dict:
    async with async_playwright() as playwright:
        browser = await playwright.chromium.launch(executable_path="/usr/bin/chromium", args=ARGUMENTS)
        page = await browser.new_page(viewport={"width": 1440, "height": 900})
        await page.goto(address)
        stage = page.locator("[data-testid=stage][data-state=current]").first
        await stage.wait_for(timeout=120_000)
        box = await page.get_by_test_id("shape-source-Q5").first.locator(".body").bounding_box()
        await page.locator("[data-testid=stage]").first.evaluate(WATCH)
        devtools = await page.context.new_cdp_session(page)
        x, y = box["x"] + box["width"] / 2, box["y"] + box["height"] / 2
        await page.mouse.move(x, y)
        await page.mouse.down()
        await page.evaluate("Object.assign(seen, {moves: [], paints: [], frames: 0, begun: performance.now()})")
        begun, sent = time.perf_counter(), []
        for n in range(180):
            turn = 2 * n / 60
            event = {"type": "mouseMoved", "x": x + 60 * math.sin(turn), "y": y + 40 * math.sin(1.3 * turn), "button": "left", "buttons": 1}
            sent.append(asyncio.ensure_future(devtools.send("Input.dispatchMouseEvent", event)))
            await asyncio.sleep(max(0.0, begun + (n + 1) / 60 - time.perf_counter()))
        seen = await page.evaluate("({...seen, ended: performance.now()})")
        await asyncio.gather(*sent)
        await page.mouse.up()
        await browser.close()
        return seen


def figures(seen: dict) -> str:
    answers = [(at, seq) for n, (at, seq) in enumerate(seen["paints"]) if n and seq != seen["paints"][n - 1][1]]
    latencies = []
    for (asked, _), (painted, _) in zip(answers, answers[1:], strict=False):
        # a request leaves when the answer before it has come; it carries the newest pointer event until then
        carried = [move for move in seen["moves"] if move <= asked]
        if carried:
            latencies.append(painted - carried[-1])
    spent = (seen["ended"] - seen["begun"]) / 1000
    latencies.sort()
    middle = statistics.median(latencies) if latencies else math.nan
    late = latencies[int(0.95 * (len(latencies) - 1))] if latencies else math.nan
    return f"{seen['frames'] / spent:.0f} frames/s, pointer to field median {middle:.0f} ms, p95 {late:.0f} ms ({len(latencies)} answers)"


def main() -> None:
    for shapes in (40, 200):
        with tempfile.TemporaryDirectory() as folder, socket.socket() as probe:
            probe.bind(("127.0.0.1", 0))
            port = probe.getsockname()[1]
            probe.close()
            path = Path(folder) / "board.json"
            path.write_text(json.dumps(layout(shapes)))
            command = [sys.executable, "-m", "app", str(path), "--no-browser", "--port", str(port)]
            server = subprocess.Popen(command, cwd=ROOT, stdout=subprocess.PIPE, text=True)
            try:
                server.stdout.readline()
                print(f"{shapes} shapes: {figures(asyncio.run(drag(f'http://127.0.0.1:{port}/')))}", flush=True)
            finally:
                server.terminate()
                server.wait(20)


if __name__ == "__main__":
    main()
