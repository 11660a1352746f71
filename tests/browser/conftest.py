"""What the browser tests share: the built sites, one Playwright, a server and a phone for each test."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from contextlib import ExitStack
from pathlib import Path

import pytest
from playwright.sync_api import Playwright, sync_playwright

from pwa.bundle.build import build
from pwa.bundle.places import ROOT, Choices
from tests.browser.harness import OUTPUT, CountingServer, Visit, changed_site, phone, serving

PROBE = """
import flet as ft

def main(page: ft.Page):
    page.title = "Probe"
    page.add(
        ft.Text("probe one"),
        ft.TextField(label="Hardness", keyboard_type=ft.KeyboardType.PHONE),
        ft.TextField(label="Remark"),
    )

if __name__ == "__main__":
    ft.run(main)
"""


def pytest_collection_modifyitems(items: list[pytest.Item]) -> None:
    """Every test in this folder drives the browser."""
    here = Path(__file__).parent
    for item in items:
        if here in item.path.parents:
            item.add_marker(pytest.mark.browser)


@pytest.fixture(scope="session")
def site() -> Path:
    """The app as it is shipped, built once."""
    OUTPUT.mkdir(exist_ok=True)
    return build().site


@pytest.fixture(scope="session")
def plain_site() -> Path:
    """The app built on a machine without Node."""
    return build(ROOT / "build" / "site-without-node", Choices(node="")).site


@pytest.fixture(scope="session")
def probe_site(site: Path, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The site with a small app in place of ours: a text, a number field, a text field."""
    return changed_site(site, tmp_path_factory.mktemp("sites") / "probe", main=PROBE)


@pytest.fixture(scope="session")
def playwright() -> Iterator[Playwright]:
    """One Playwright for all tests."""
    with sync_playwright() as started:
        yield started


@pytest.fixture
def serve() -> Iterator[Callable[..., CountingServer]]:
    """serve(site, base="/") starts a server that ends with the test."""
    with ExitStack() as stack:
        yield lambda folder, base="/": stack.enter_context(serving(folder, base))


@pytest.fixture
def visit(playwright: Playwright, tmp_path: Path) -> Iterator[Callable[..., Visit]]:
    """visit(*arguments, **options) starts Chromium at phone size with an empty profile."""
    with ExitStack() as stack:
        yield lambda *arguments, **options: Visit(
            stack.enter_context(phone(playwright, tmp_path / "profile", *arguments, **options))
        )
