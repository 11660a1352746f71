"""python -m pwa: builds the app if needed, serves it and opens the browser.

python -m pwa             build if needed, serve, print the address and its QR code, open the browser
python -m pwa build       build only: the folder can be copied to any web server
python -m pwa serve       serve what was built
python -m pwa dev         run the app natively behind flet's own server: starts at once, no browser Python
"""

from __future__ import annotations

import argparse
import os
import runpy
import sys
import webbrowser
from pathlib import Path

from pwa.bundle.build import RECORD, build
from pwa.bundle.numpy_wheel import NumpyMissingError
from pwa.bundle.page import normal_base
from pwa.bundle.places import DEFAULT_SITE, Choices
from pwa.bundle.server import SiteServer, lan_address

PORT = 8600


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(prog="python -m pwa", description="Build and serve the app.")
    commands = parser.add_subparsers(dest="command")
    building = argparse.ArgumentParser(add_help=False)
    building.add_argument("--out", type=Path, default=DEFAULT_SITE, help="folder of the finished site")
    building.add_argument(
        "--base", default="./", help='address path it will stand under, such as /app/ (default: "./", any)'
    )
    building.add_argument("--node", help='the Node program to use; "" builds without Node')
    serving = argparse.ArgumentParser(add_help=False)
    serving.add_argument("--port", type=int, default=PORT)
    serving.add_argument(
        "--host", default="0.0.0.0", help="0.0.0.0 lets phones in the local network in; 127.0.0.1 does not"
    )
    serving.add_argument("--no-browser", action="store_true", help="do not open the browser")
    commands.add_parser("build", parents=[building], help="build only").add_argument("--force", action="store_true")
    commands.add_parser("serve", parents=[building, serving], help="serve what was built")
    commands.add_parser("dev", help="run natively behind flet's own server").add_argument(
        "--port", type=int, default=PORT
    )
    commands.add_parser("run", parents=[building, serving], help="build if needed, serve, open (the default)")
    return parser


def _print_addresses(host: str, port: int, path: str) -> str:
    """Say where the app is to be found; returns the address on this machine."""
    here = f"http://localhost:{port}{path}"
    print(f"On this machine:  {here}", flush=True)
    address = lan_address() if host == "0.0.0.0" else None
    if address:
        import segno

        there = f"http://{address}:{port}{path}"
        print(f"From a phone in the same network:  {there}\n", flush=True)
        segno.make(there, error="m").terminal(compact=True, border=2)
        print(
            "\nOver plain http a phone opens and runs the app, but does not keep it for use offline."
            "\nFor that, copy the built folder to any web server with https."
        )
    print("Stop with Ctrl+C.", flush=True)
    return here


def _serve(options: argparse.Namespace) -> int:
    if not (options.out / RECORD).exists():
        print(f"There is no built app in {options.out}. Run: python -m pwa build", file=sys.stderr)
        return 1
    base = normal_base(options.base)
    path = "/" if base == "./" else base
    try:
        server = SiteServer(options.out, options.host, options.port, path)
    except OSError as error:
        print(
            f"Port {options.port} cannot be used ({error.strerror}). Choose another: --port 8601",
            file=sys.stderr,
        )
        return 1
    with server:
        here = _print_addresses(options.host, server.port, path)
        if not options.no_browser:
            webbrowser.open(here)
        try:
            server.serve_forever()
        except KeyboardInterrupt:
            print("\nStopped.")
    return 0


def _build(options: argparse.Namespace) -> int:
    try:
        build(options.out, Choices(options.base, options.node), force=getattr(options, "force", False))
    except NumpyMissingError as error:
        print(error, file=sys.stderr)
        return 1
    return 0


def _dev(port: int) -> int:
    """Run the app's entry in this Python; flet's server shows it to the browser."""
    os.environ.update(
        FLET_FORCE_WEB_SERVER="1",
        FLET_SERVER_PORT=str(port),
        FLET_WEB_NO_CDN="1",
        FLET_WEB_RENDERER="canvaskit",
    )
    print(f"The app runs natively at http://localhost:{port}/. Stop with Ctrl+C.", flush=True)
    runpy.run_module("pwa.main", run_name="__main__", alter_sys=True)
    return 0


def main(arguments: list[str] | None = None) -> int:
    """Run one command; returns the exit status."""
    given = sys.argv[1:] if arguments is None else arguments
    if not given or (given[0].startswith("-") and given[0] not in {"-h", "--help"}):
        given = ["run", *given]
    options = _parser().parse_args(given)
    if options.command == "dev":
        return _dev(options.port)
    if options.command == "serve":
        return _serve(options)
    return _build(options) or (_serve(options) if options.command == "run" else 0)


if __name__ == "__main__":
    sys.exit(main())
