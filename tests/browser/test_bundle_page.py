"""What the page adds to Flutter: the decimal keypad, readable semantics, no requests for fonts."""

from __future__ import annotations

import pytest

from pwa.bundle.places import ASSETS, ROOT

ANDROID = (
    "Mozilla/5.0 (Linux; Android 14; Phone) AppleWebKit/537.36 (KHTML, like Gecko) Chrome/156.0 Mobile Safari/537.36"
)
IPHONE = (
    "Mozilla/5.0 (iPhone; CPU iPhone OS 18_0 like Mac OS X) AppleWebKit/605.1.15 (KHTML, like Gecko) "
    "Version/18.0 Mobile/15E148 Safari/604.1"
)

TYPED = """
import flet, gc
fields = [thing for thing in gc.get_objects() if isinstance(thing, flet.TextField)]
next(field.value for field in fields if field.label == "Hardness")
"""


@pytest.mark.parametrize("agent", [ANDROID, IPHONE], ids=["Android", "iPhone"])
def test_number_field_has_the_decimal_keypad(probe_site, serve, visit, agent):
    """A field marked as a number keeps the decimal keypad, focused or not; a comma reaches Python."""
    page = visit(user_agent=agent).open(serve(probe_site).url, "Hardness")
    number = page.page.get_by_label("Hardness")
    remark = page.page.get_by_label("Remark")

    for _ in range(2):
        assert (number.get_attribute("inputmode"), number.get_attribute("type")) == ("decimal", "text")
        number.click()
        page.page.wait_for_timeout(300)  # Flutter takes its attribute away a moment after the focus
        assert (number.get_attribute("inputmode"), number.get_attribute("type")) == ("decimal", "text")
        number.fill("12,5")
        remark.click()
        assert remark.get_attribute("inputmode") != "decimal"
        remark.fill("cold tap")

    assert page.python(TYPED) == "12,5"


def test_a_sign_without_a_glyph_asks_nobody(probe_site, serve, visit, tmp_path):
    """An emoji typed by a user leads to no request beyond the app's own font, not even to our own server."""
    server = serve(probe_site)
    page = visit().open(server.url, "Remark")
    page.page.get_by_label("Remark").fill("well 💧 漢字 ok")
    page.wait_for("Remark")
    page.page.wait_for_timeout(1500)  # the engine asks again at each layout: give it several

    assert not [path for path in server.requests if "none" in path]
    assert page.foreign(server) == []
    assert page.errors == []
    asked = server.requests.count("/assets/fonts/tapwright-sans.woff2")
    assert asked <= 10
    page.screenshot("emoji")


def test_persisting_storage_reaches_the_page(probe_site, serve, visit):
    """Python's wish to keep the storage is put to the browser, which answers yes or no."""
    page = visit().open(serve(probe_site).url, "probe one")

    assert page.host("persist_storage()") in {True, False}


def test_resources_are_read_from_the_archive(site, serve, visit):
    """Package data is found in the browser as on a desk: samples, tables, the PDF's font."""
    page = visit().open(serve(site).url)
    count = """
from importlib.resources import files
font = (files("pwa") / "assets/fonts/tapwright-sans.ttf").read_bytes()
samples = [f for f in files("sample_tests").iterdir() if f.name.endswith(".json")]
for sample in samples:
    sample.read_text(encoding="utf-8")
f"{len(font)} {len(samples)}"
"""
    font = (ASSETS / "fonts" / "tapwright-sans.ttf").stat().st_size
    samples = len(list((ROOT / "sample_tests").glob("*.json")))
    assert page.python(count) == f"{font} {samples}"


def test_core_computes_in_the_browser(site, serve, visit):
    """The core in the bundle imports and converts, with numpy loaded lazily."""
    page = visit().open(serve(site).url)
    page.host("load_numpy()")

    assert page.python("from core.units import convert\nround(convert(14, '°dH', 'mg/L CaCO3'), 1)") == 249.9
    assert page.errors == []


def test_splash_is_gone_once_the_app_draws(probe_site, serve, visit):
    """Nothing of the splash lies over the app."""
    page = visit().open(serve(probe_site).url, "probe one")
    page.wait_until("!document.getElementById('splash')")
