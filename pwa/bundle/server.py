"""Serves a built site on this machine: right types, precompressed copies, answers checked for age."""

from __future__ import annotations

import functools
import hashlib
import http.server
import socket
from http import HTTPStatus
from pathlib import Path
from urllib.parse import unquote, urlsplit

TYPES = {
    ".html": "text/html; charset=utf-8",
    ".js": "text/javascript; charset=utf-8",
    ".mjs": "text/javascript; charset=utf-8",
    ".json": "application/json",
    ".wasm": "application/wasm",
    ".png": "image/png",
    ".svg": "image/svg+xml",
    ".woff2": "font/woff2",
    ".otf": "font/otf",
    ".ttf": "font/ttf",
    ".txt": "text/plain; charset=utf-8",
    ".zip": "application/zip",
}
OTHER_TYPE = "application/octet-stream"
ENCODINGS = (("br", ".br"), ("gzip", ".gz"))  # by preference


@functools.lru_cache(maxsize=512)
def _tag(path: Path, changed: int, size: int) -> str:
    """A tag that changes with the content of a file."""
    return f'"{hashlib.sha256(path.read_bytes()).hexdigest()[:20]}"'


class SiteHandler(http.server.BaseHTTPRequestHandler):
    """Answers GET and HEAD from the folder of its server."""

    protocol_version = "HTTP/1.1"
    server: SiteServer

    def log_message(self, format: str, *args: object) -> None:
        """Stay quiet: the terminal is for the address."""

    def do_GET(self) -> None:
        """Send a file."""
        self._answer(with_body=True)

    def do_HEAD(self) -> None:
        """Send the headers of a file."""
        self._answer(with_body=False)

    def _answer(self, *, with_body: bool) -> None:
        path = self.server.file_for(self.path)
        if path is None:
            self._send(HTTPStatus.NOT_FOUND, {"Content-Type": TYPES[".txt"]}, b"Not found.\n" if with_body else b"")
            return
        status = path.stat()
        headers = {
            "Content-Type": TYPES.get(path.suffix, OTHER_TYPE),
            "Cache-Control": "no-cache",  # kept by the browser, and asked about before each use
            "ETag": _tag(path, status.st_mtime_ns, status.st_size),
            "Vary": "Accept-Encoding",
            "X-Content-Type-Options": "nosniff",
        }
        if self.headers.get("If-None-Match") == headers["ETag"]:
            self._send(HTTPStatus.NOT_MODIFIED, headers, b"")
            return
        accepted = self.headers.get("Accept-Encoding", "")
        for encoding, suffix in ENCODINGS:
            copy = path.with_name(path.name + suffix)
            if encoding in accepted and copy.exists():
                path, headers["Content-Encoding"] = copy, encoding
                break
        headers["Content-Length"] = str(path.stat().st_size)
        self._send(HTTPStatus.OK, headers, path.read_bytes() if with_body else b"")

    def _send(self, status: HTTPStatus, headers: dict[str, str], body: bytes) -> None:
        self.send_response(status)
        for name, value in headers.items():
            self.send_header(name, value)
        if "Content-Length" not in headers:
            self.send_header("Content-Length", str(len(body)))
        self.end_headers()
        self.wfile.write(body)


class SiteServer(http.server.ThreadingHTTPServer):
    """A web server for one folder, under one address path."""

    daemon_threads = True

    def __init__(
        self, site: Path, host: str = "127.0.0.1", port: int = 0, base: str = "/", handler: type = SiteHandler
    ) -> None:
        self.site = site.resolve()
        self.base = base
        super().__init__((host, port), handler)

    @property
    def port(self) -> int:
        """The port in use, also where any free one was asked for."""
        return self.server_address[1]

    def file_for(self, target: str) -> Path | None:
        """The file that a request target means, or None; never one outside the site."""
        path = unquote(urlsplit(target).path)
        if not path.startswith(self.base):
            return None
        found = (self.site / path[len(self.base) :]).resolve()
        if found.is_dir():
            found /= "index.html"
        inside = found.is_relative_to(self.site)
        return found if inside and found.is_file() else None

    def handle_error(self, request: object, client_address: object) -> None:
        """A browser that closes a connection early is no error worth printing."""


def lan_address() -> str | None:
    """This machine's address in the local network, or None; nothing is sent to find it."""
    with socket.socket(socket.AF_INET, socket.SOCK_DGRAM) as probe:
        try:
            probe.connect(("192.0.2.1", 9))  # an address reserved for documentation: it only picks the network card
        except OSError:
            return None
        address = probe.getsockname()[0]
    return None if address.startswith("127.") else address
