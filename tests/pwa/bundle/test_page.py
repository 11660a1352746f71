"""The page, its scripts and its manifest are filled in completely and stay with this site."""

from __future__ import annotations

import json
import re

import pytest

from pwa.bundle.identity import NAME
from pwa.bundle.page import CONTENT_SECURITY_POLICY, normal_base, write_page, write_service_worker, write_worker
from pwa.bundle.places import WEB

PLACEHOLDER = re.compile(r"__[A-Z][A-Z_]*__")
CONFIG = {"libraryFile": "/library.zip", "appFile": "/app.zip", "version": 'quote " and \\ backslash'}


@pytest.fixture
def site(tmp_path):
    """Our own part of a site."""
    write_page(tmp_path, "./", stored_mb=26, started_mb=23)
    write_worker(tmp_path, CONFIG)
    write_service_worker(tmp_path, {"index.html": "1"}, "abc")
    return tmp_path


@pytest.mark.parametrize(
    ("given", "base"),
    [("./", "./"), ("", "./"), (".", "./"), ("/", "/"), ("app", "/app/"), ("/a/b", "/a/b/"), ("/app/", "/app/")],
)
def test_base_is_written_as_browsers_want_it(given, base):
    """A base path ends with a slash, and begins with one unless it means "wherever the page stands"."""
    assert normal_base(given) == base


def test_no_placeholder_is_left(site):
    """Every __NAME__ in our files is filled in."""
    for path in site.rglob("*"):
        if path.suffix in {".js", ".html", ".json"}:
            assert not PLACEHOLDER.findall(path.read_text(encoding="utf-8")), path.name


def test_worker_holds_its_config_as_given(site):
    """What the build found out reaches the worker unchanged, quotes and all."""
    line = re.search(r"^const CONFIG = (.*);$", (site / "worker.js").read_text(encoding="utf-8"), re.MULTILINE)
    config = json.loads(line[1])

    assert config["version"] == CONFIG["version"]
    compile(config["boot"], "boot.py", "exec")


def test_page_has_no_inline_script_and_no_foreign_address(site):
    """The policy forbids scripts within the page; nothing of ours names another host."""
    page = (site / "index.html").read_text(encoding="utf-8")

    assert not re.search(r"<script(?![^>]*\bsrc=)", page)
    assert not re.search(r"\son\w+=", page)
    for path in site.rglob("*"):
        if path.suffix in {".js", ".html", ".json"}:
            addresses = re.findall(r"https?://[^\s\"'`)]+", path.read_text(encoding="utf-8"))
            assert set(addresses) <= {"http://www.w3.org/2000/svg"}, path.name


def test_policy_allows_this_site_alone():
    """The content security policy names no host and no inline or evaluated script."""
    script = next(part for part in CONTENT_SECURITY_POLICY.split("; ") if part.startswith("script-src"))

    assert "http" not in CONTENT_SECURITY_POLICY
    assert "unsafe-inline" not in script
    assert "'unsafe-eval'" not in script


def test_manifest(site):
    """The manifest names the app and icons that are there, for any path the site may stand under."""
    manifest = json.loads((site / "manifest.json").read_text(encoding="utf-8"))

    assert manifest["name"] == NAME
    assert manifest["start_url"] == manifest["scope"] == "./"
    assert {icon["purpose"] for icon in manifest["icons"]} == {"any", "maskable"}
    for icon in manifest["icons"]:
        assert (site / icon["src"]).read_bytes().startswith(b"\x89PNG")


def test_every_script_of_the_page_is_ours_or_the_clients(site):
    """The page loads no script that nobody writes."""
    page = (site / "index.html").read_text(encoding="utf-8")
    scripts = set(re.findall(r'<script src="([^"]+)"', page))

    assert scripts - {"flutter.js"} <= {path.name for path in site.iterdir()}
    assert scripts - {"flutter.js"} <= {path.name for path in WEB.iterdir()}
