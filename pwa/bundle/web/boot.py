"""Starts the app in the browser's Python; run by worker.js, with the archives in place."""

import gc
import random
import runpy
import sys

gc.disable()  # nothing that is made while starting is thrown away again
for archive in ("__LIBRARY_FILE__", "__APP_FILE__"):
    if archive not in sys.path:
        sys.path.insert(0, archive)

# A memory image carries the random state of the machine that made it. (Its time.timezone and time.tzname too, which
# cannot be set again; datetime and time.localtime ask the browser each time.)
random.seed()

import flet.messaging.pyodide_connection as connection  # noqa: E402
import flet_js  # noqa: E402

connection.flet_js = flet_js  # in a memory image this is still the stand-in of the build

runpy.run_module("pwa.main", run_name="__main__", alter_sys=False)
gc.enable()
