"""How long the app takes to start, beside the stock flet assembly showing one text, in the same run.

    python -m tests.bench.start [--rounds 5]

prints the medians and their ratios, and fails where a goal is missed. A start ends when the app's text (not that of a
boot screen) stands in the page's semantics tree. Cold: an empty profile. Warm: a browser started anew on a profile
that has seen two starts. One round only shows that the bench runs: it judges nothing.
"""

from __future__ import annotations

import argparse
import statistics
import sys
import tempfile
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass, field
from pathlib import Path

from playwright.sync_api import Page, Playwright, sync_playwright

from pwa.bundle.build import build
from pwa.bundle.identity import NAME
from tests.bench.stock import TEXT, stock_site
from tests.browser.harness import phone, serving

GOALS = {"cold": 0.75, "warm": 0.65}  # ours as a share of stock
JUDGED_FROM = 3  # rounds
WARMING = 2  # starts before a warm one counts
PATIENCE = 120_000  # ms

# Notes when the app's text appears; switches the semantics tree on for a page that does not do so itself.
CLOCK = """
(() => {
  const look = () => {
    const placeholder = document.querySelector("flt-semantics-placeholder");
    if (placeholder) {
      const box = placeholder.getBoundingClientRect();
      placeholder.dispatchEvent(new MouseEvent("click", {
        bubbles: true, clientX: box.left + box.width / 2, clientY: box.top + box.height / 2 }));
    }
    const texts = document.querySelectorAll("flt-semantics-host *");
    if ([...texts].some((node) => node.childElementCount === 0 && node.textContent.includes("TEXT"))) {
      window.shownAt = performance.now();
    } else setTimeout(look, 20);
  };
  look();
})();
"""


@dataclass
class Contender:
    """One of the two sites: its folder, a text it shows, and its times so far. [s]"""

    name: str
    site: Path
    text: str
    times: dict[str, list[float]] = field(default_factory=lambda: {"cold": [], "warm": []})

    def median(self, kind: str) -> float:
        """The median of its cold or warm times. [s]"""
        return statistics.median(self.times[kind])


def _start(page: Page, url: str, text: str) -> float:
    """Open the address and return the time until it shows a text. [s]"""
    page.add_init_script(CLOCK.replace("TEXT", text))
    page.goto(url, wait_until="commit")
    page.wait_for_function("() => window.shownAt", timeout=PATIENCE, polling=100)
    return page.evaluate("window.shownAt") / 1000


def _settle(page: Page) -> None:
    """Let a service worker finish storing, so that the next start is a warm one."""
    page.evaluate(
        "() => document.querySelector('link[rel=manifest]') && navigator.serviceWorker.getRegistration()"
        ".then((found) => found && navigator.serviceWorker.ready.then(() => true))"
    )
    page.wait_for_timeout(1000)


@contextmanager
def _profile() -> Iterator[Path]:
    with tempfile.TemporaryDirectory(ignore_cleanup_errors=True) as folder:
        yield Path(folder)


def _once(playwright: Playwright, profile: Path, url: str, text: str) -> float:
    with phone(playwright, profile) as context:
        page = context.pages[0]
        time = _start(page, url, text)
        _settle(page)
        return time


def measure(playwright: Playwright, contenders: list[Contender], rounds: int) -> None:
    """Time the contenders in turn, so that a busy machine is busy for both."""
    with serving(contenders[0].site) as first, serving(contenders[1].site) as second:
        urls = [first.url, second.url]
        for _ in range(rounds):
            for contender, url in zip(contenders, urls, strict=True):
                with _profile() as profile:
                    contender.times["cold"].append(_once(playwright, profile, url, contender.text))
        with _profile() as one, _profile() as two:
            for number in range(WARMING + rounds):
                for contender, url, profile in zip(contenders, urls, (one, two), strict=True):
                    time = _once(playwright, profile, url, contender.text)
                    if number >= WARMING:
                        contender.times["warm"].append(time)


def main() -> int:
    """Measure, print, judge; returns the exit status."""
    parser = argparse.ArgumentParser(prog="python -m tests.bench.start")
    parser.add_argument("--rounds", type=int, default=5)
    rounds = parser.parse_args().rounds
    with tempfile.TemporaryDirectory() as work:
        stock = Contender("stock, one text", stock_site(Path(work) / "site", Path(work)), TEXT)
        ours = Contender("this app", build().site, NAME)
        with sync_playwright() as playwright:
            measure(playwright, [stock, ours], rounds)
    missed = []
    for kind, goal in GOALS.items():
        for contender in (stock, ours):
            each = ", ".join(f"{time:.1f}" for time in contender.times[kind])
            print(f"{kind}  {contender.name:16} {contender.median(kind):5.1f} s   ({each})")
        ratio = ours.median(kind) / stock.median(kind)
        print(f"{kind}  ratio {ratio:.2f}, goal {goal:.2f} or less")
        missed += [kind] if ratio > goal else []
    if missed and rounds >= JUDGED_FROM:
        print(f"Missed: {', '.join(missed)}.")
        return 1
    return 0


if __name__ == "__main__":
    sys.exit(main())
