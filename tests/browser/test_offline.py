"""The app starts, installs, and keeps working without a network."""

from __future__ import annotations

from tests.browser.harness import Visit, phone


def test_first_load_is_clean(site, serve, visit):
    """The first visit shows the app, complains of nothing, and asks no other host for anything."""
    server = serve(site)
    first = visit().open(server.url).wait_until_offline_ready()
    first.screenshot("first-load")

    assert first.errors == []
    assert first.foreign(server) == []
    assert first.page.title() == "Tapwright"
    assert first.host("offline_state()") == "ready"
    assert not [path for path in server.requests if "fonts/none" in path]


def test_nothing_large_is_sent_twice(site, serve, visit):
    """Storing the app for offline use takes from the browser's cache what the first start has just fetched."""
    server = serve(site)
    visit().open(server.url).wait_until_offline_ready()

    twice = {path for path in server.sent if server.sent.count(path) > 1}
    assert sum((server.file_for(path)).stat().st_size for path in twice) < 100_000, twice


def test_storing_that_fails_is_not_called_ready(probe_site, serve, visit):
    """When a file cannot be stored, the app runs on and says that it will not open without a network."""
    server = serve(probe_site)
    server.refused = {"/icons/icon-512.png"}
    first = visit().open(server.url, "probe one")
    first.wait_until("navigator.serviceWorker.getRegistration().then(found => !found?.installing && !found?.active)")
    first.page.wait_for_timeout(500)
    assert first.host("offline_state()") == "unavailable"

    server.refused = set()
    first.reload("probe one").wait_until_offline_ready()
    assert first.host("offline_state()") == "ready"


def test_installs(site, serve, visit):
    """The browser finds nothing that keeps the app from being installed, and no fault in its manifest."""
    first = visit().open(serve(site).url).wait_until_offline_ready()
    devtools = first.context.new_cdp_session(first.page)

    assert devtools.send("Page.getInstallabilityErrors")["installabilityErrors"] == []
    manifest = devtools.send("Page.getAppManifest")
    assert manifest["errors"] == []
    assert manifest["url"].endswith("/manifest.json")


def test_works_without_a_network(site, serve, visit, playwright, tmp_path):
    """After one visit it reloads and restarts offline: at the start, with a query, from an old deep link."""
    server = serve(site, "/some/path/")
    first = visit().open(server.url).wait_until_offline_ready()
    server.down = True
    first.context.set_offline(True)
    asked = len(server.requests)
    first.reload()
    first.context.close()

    with phone(playwright, tmp_path / "profile") as context:
        context.set_offline(True)
        again = Visit(context)
        for address in (server.url, f"{server.url}?from=home", f"{server.url}old/deep/link"):
            again.open(address)
        assert again.page.url.startswith(server.url)
        assert "old/deep" not in again.page.url
        again.screenshot("offline")

    assert len(server.requests) == asked


def test_numpy_computes_without_a_network(probe_site, serve, visit):
    """numpy is stored with the app: it loads and computes with the server gone."""
    server = serve(probe_site)
    first = visit().open(server.url, "probe one").wait_until_offline_ready()
    server.down = True
    first.context.set_offline(True)
    first.reload("probe one")

    assert first.host("load_numpy()") == "2.4.3"
    assert first.python("import numpy; float(numpy.linspace(0.0, 1.0, 5).sum())") == 2.5


def test_start_page_is_not_remade_by_a_failing_network(site, serve, visit):
    """With the server answering errors, the stored app is what is shown."""
    server = serve(site)
    first = visit().open(server.url).wait_until_offline_ready()
    server.refused = {"/", "/worker.js", "/main.dart.js"}
    first.reload()

    assert first.errors == []
