"""A new version is offered and never forced."""

from __future__ import annotations

import pytest

from tests.browser.conftest import PROBE
from tests.browser.harness import STEP, changed_site

REGISTRATION = "navigator.serviceWorker.getRegistration()"


@pytest.fixture(scope="module")
def newer_site(probe_site, tmp_path_factory):
    """The probe as its next version, with another text and name."""
    main = PROBE.replace("probe one", "probe two")
    return changed_site(probe_site, tmp_path_factory.mktemp("newer") / "site", main=main, version="second")


def _offer(server, visit, site, newer_site):
    """Visit the first version, put the second on the server, and wait until it is offered."""
    page = visit().open(server.url, "probe one").wait_until_offline_ready()
    page.python(
        "import tapwright_host, builtins\nbuiltins.heard = []\n"
        "tapwright_host.on_change(lambda: builtins.heard.append(tapwright_host.update_waiting()))"
    )
    server.site = newer_site
    server.requests.clear()
    page.page.evaluate(f"{REGISTRATION}.then(found => found.update())")
    return page.wait_until(f"{REGISTRATION}.then(found => Boolean(found.waiting))")


def test_update_is_small_and_waits(probe_site, newer_site, serve, visit):
    """The new version is fetched beside the old one, only what changed of it; the app in use learns of it."""
    server = serve(probe_site)
    page = _offer(server, visit, probe_site, newer_site)

    changed = {path.split(".")[0] for path in server.requests}
    assert changed == {"/sw", "/worker", "/python/app"}
    assert page.host("update_waiting()") is True
    assert page.python("builtins.heard[-1]") is True

    page.reload("probe one")
    assert page.host("update_waiting()") is True
    assert page.errors == []


def test_update_comes_when_accepted(probe_site, newer_site, serve, visit):
    """Accepting reloads into the new version, and the old one is cleared away."""
    server = serve(probe_site)
    page = _offer(server, visit, probe_site, newer_site)
    former = page.caches()
    assert len(former) == 2

    page.host("accept_update()")
    page.wait_for("probe two", 3 * STEP)
    page.wait_until("caches.keys().then(names => names.length === 1)")

    assert page.host("version") == "second"
    assert page.host("update_waiting()") is False
    assert page.host("accept_update()") is False
    server.down = True
    page.context.set_offline(True)
    page.reload("probe two")
    assert page.errors == []


def test_a_broken_update_changes_nothing(probe_site, newer_site, serve, visit):
    """A version that cannot be fetched whole is not offered, and the stored one goes on working."""
    server = serve(probe_site)
    page = visit().open(server.url, "probe one").wait_until_offline_ready()
    server.site = newer_site
    server.refused = {"/worker.js"}
    page.page.evaluate("navigator.serviceWorker.getRegistration().then(found => found.update()).catch(() => 0)")
    page.page.wait_for_function(
        "navigator.serviceWorker.getRegistration().then(found => !found.installing)", timeout=STEP
    )

    assert page.host("update_waiting()") is False
    page.reload("probe one")
