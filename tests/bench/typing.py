"""From a key press to the new answer on the screen, in the built app: `python -m tests.bench.typing [rounds]`.

A key changes the number of persons in an open job; the clock runs in the page, from the input event until the answer
strip reads otherwise. Printed: the median, the worst, and what of it the assessment takes in the browser's Python.
"""

from __future__ import annotations

import statistics
import sys
import tempfile
from pathlib import Path

from playwright.sync_api import sync_playwright

from pwa.bundle.build import build
from tests.browser.harness import Visit, phone, serving

WATCH = """() => new Promise(resolve => {
  const strip = () => [...document.querySelectorAll("flt-semantics-host *")]
    .map(node => (node.getAttribute("aria-label") || "") + (node.childElementCount ? "" : node.textContent))
    .find(text => text.includes("of softened water on an average day")) || "";
  const before = strip();
  addEventListener("input", () => {
    const start = performance.now();
    const look = () => strip() === before ? setTimeout(look, 2) : resolve(performance.now() - start);
    look();
  }, { once: true, capture: true });
  setTimeout(() => resolve(-1), 8000);
})"""
SHARE = """
import time
from core.job import assess
from pwa.samples import load_sample
job = load_sample("flat-with-a-blending-valve.json")
start = time.perf_counter()
for _ in range(20):
    assess(job).softener
(time.perf_counter() - start) / 20 * 1000
"""


def main(rounds: int) -> None:
    """Measure and print."""
    site = build().site
    with (
        sync_playwright() as playwright,
        serving(site) as server,
        tempfile.TemporaryDirectory() as profile,
        phone(playwright, Path(profile)) as context,
    ):
        visit = Visit(context)
        visit.open(server.url, "New job")
        visit.page.get_by_role("button", name="New job").click()
        visit.wait_for("Water: answer")
        visit.page.evaluate("location.hash = location.hash.replace('/water', '/demand')")
        visit.wait_for("Demand: answer")
        box = visit.page.get_by_role("textbox", name="Persons", exact=True)
        box.click()
        box.fill("4")
        visit.page.wait_for_timeout(1500)
        times = []
        for turn in range(rounds):
            visit.page.evaluate(f"void (globalThis.__took = ({WATCH})())")
            visit.page.keyboard.press("Backspace" if turn % 2 else "5")
            times.append(visit.page.evaluate("globalThis.__took"))
            visit.page.wait_for_timeout(900)
        share = visit.python(SHARE)
    good = [took for took in times if took >= 0]
    median, worst = statistics.median(good), max(good)
    print(f"key press to new answer: median {median:.0f} ms, worst {worst:.0f} ms, {len(good)} of {rounds}")
    print(f"assessment of the softener in the browser's Python: {share:.1f} ms")


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 10)
