"""The server sends files as a web server should."""

from __future__ import annotations

import gzip
import http.client
import threading

import pytest

from pwa.bundle.server import SiteServer

BODY = b"export default 1;\n" * 50


@pytest.fixture
def site(tmp_path):
    """A small site with one precompressed file, and a secret beside it."""
    (tmp_path / "secret.txt").write_text("no", encoding="utf-8")
    folder = tmp_path / "site"
    (folder / "sub").mkdir(parents=True)
    (folder / "index.html").write_text("<p>here</p>", encoding="utf-8")
    (folder / "code.mjs").write_bytes(BODY)
    (folder / "code.mjs.gz").write_bytes(gzip.compress(BODY))
    for name in ("a.wasm", "a.woff2", "a.pack"):
        (folder / name).write_bytes(b"\0")
    return folder


@pytest.fixture
def ask(site):
    """ask(path, method, headers, base) -> status, headers, body."""
    servers = []

    def send(path, method="GET", headers=None, base="/"):
        server = SiteServer(site, base=base)
        servers.append(server)
        threading.Thread(target=server.serve_forever, daemon=True).start()
        connection = http.client.HTTPConnection("127.0.0.1", server.port, timeout=10)
        connection.request(method, path, headers=headers or {})
        answer = connection.getresponse()
        result = answer.status, dict(answer.headers), answer.read()
        connection.close()
        return result

    yield send
    for server in servers:
        server.shutdown()
        server.server_close()


@pytest.mark.parametrize(
    ("path", "kind"),
    [
        ("/", "text/html; charset=utf-8"),
        ("/code.mjs", "text/javascript; charset=utf-8"),
        ("/a.wasm", "application/wasm"),
        ("/a.woff2", "font/woff2"),
        ("/a.pack", "application/octet-stream"),
        ("/?from=home", "text/html; charset=utf-8"),
    ],
)
def test_types(ask, path, kind):
    """Each file comes with the type the browser insists on."""
    status, headers, _ = ask(path)

    assert status == 200
    assert headers["Content-Type"] == kind


def test_precompressed_copy(ask):
    """A browser that takes gzip gets the copy made at build time; another gets the file."""
    _, packed, body = ask("/code.mjs", headers={"Accept-Encoding": "gzip, br"})
    _, plain, whole = ask("/code.mjs")

    assert packed["Content-Encoding"] == "gzip"
    assert gzip.decompress(body) == whole == BODY
    assert "Content-Encoding" not in plain
    assert packed["Vary"] == plain["Vary"] == "Accept-Encoding"


def test_unchanged_file_is_not_sent_again(ask, site):
    """A browser that asks whether its copy is still good gets a short yes, until the file changes."""
    _, headers, _ = ask("/code.mjs")
    question = {"If-None-Match": headers["ETag"]}
    assert headers["Cache-Control"] == "no-cache"
    status, _, body = ask("/code.mjs", headers=question)
    assert (status, body) == (304, b"")

    (site / "code.mjs").write_bytes(b"export default 22;\n")
    assert ask("/code.mjs", headers=question)[0] == 200


@pytest.mark.parametrize("path", ["/missing", "/sub/", "/../secret.txt", "/%2e%2e/secret.txt", "/sub/../../secret.txt"])
def test_nothing_but_the_site(ask, path):
    """What is not a file of the site is not found, however it is written."""
    assert ask(path)[0] == 404


def test_head_sends_no_body(ask):
    """HEAD gives the headers of GET alone."""
    status, headers, body = ask("/code.mjs", "HEAD")

    assert (status, headers["Content-Length"], body) == (200, str(len(BODY)), b"")


def test_under_a_path(ask):
    """A site can stand under a path, and is found nowhere else."""
    assert ask("/app/code.mjs", base="/app/")[0] == 200
    assert ask("/code.mjs", base="/app/")[0] == 404
