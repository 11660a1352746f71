"""Draws the app's icons from the mark: `python -m pwa.bundle.draw_icons`.

The SVG files are the source, the PNG files what browsers want. Drawn with Chromium (Playwright, a test
extra); the results are committed, so that a build draws nothing.
"""

from __future__ import annotations

from pathlib import Path

from playwright.sync_api import sync_playwright

from pwa.bundle.identity import ACCENT, CHALK, DROP, SLATE, TAP
from pwa.bundle.places import ASSETS

OUT = ASSETS / "icons"
CHROMIUM = "/usr/bin/chromium"
PLAIN = 0.78  # share of the square that the mark takes
MASKABLE = 0.58  # a launcher may cut a maskable icon to the middle circle, 80 % wide
ICONS = (  # file, size in px, share of the mark, radius of the corners as a share
    ("icon-192", 192, PLAIN, 0.18),
    ("icon-512", 512, PLAIN, 0.18),
    ("maskable-192", 192, MASKABLE, 0.0),
    ("maskable-512", 512, MASKABLE, 0.0),
    ("touch-180", 180, 0.7, 0.0),
    ("favicon", 48, 0.9, 0.18),
)


def icon_svg(share: float, radius: float) -> str:
    """The mark on a square of chalk, as SVG text."""
    shift = 48 * (1 - share)
    return (
        '<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 96 96">'
        f'<rect width="96" height="96" rx="{96 * radius:.2f}" fill="{CHALK}"/>'
        f'<g transform="translate({shift:.2f} {shift:.2f}) scale({share})">'
        f'<path fill="{SLATE}" d="{TAP}"/><path fill="{ACCENT}" d="{DROP}"/></g></svg>\n'
    )


def draw_icons(out: Path = OUT) -> None:
    """Write every icon as SVG and PNG."""
    with sync_playwright() as playwright:
        browser = playwright.chromium.launch(executable_path=CHROMIUM, args=["--no-sandbox", "--disable-gpu"])
        for name, size, share, radius in ICONS:
            svg = icon_svg(share, radius)
            (out / f"{name}.svg").write_text(svg, encoding="utf-8")
            page = browser.new_page(viewport={"width": size, "height": size})
            page.set_content(f"<style>*{{margin:0}}svg{{display:block;width:{size}px}}</style>{svg}")
            page.screenshot(path=out / f"{name}.png", omit_background=True)
            page.close()
        browser.close()


if __name__ == "__main__":
    draw_icons()
