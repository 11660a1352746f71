"""Imports what goes into the memory image; run once at build time, in Node.

Only pure Python may be imported here: a compiled extension (numpy) in the image breaks at its first call. The
app's own modules stay out, so that a new version of the app leaves the image as it is.
"""

import asyncio  # noqa: F401
import copy  # noqa: F401
import csv  # noqa: F401
import dataclasses  # noqa: F401
import datetime  # noqa: F401
import decimal  # noqa: F401
import encodings.cp437  # noqa: F401  (how a zip names its files)
import functools  # noqa: F401
import importlib.resources._adapters
import importlib.resources.readers  # noqa: F401
import itertools  # noqa: F401
import json  # noqa: F401
import math  # noqa: F401
import random  # noqa: F401
import re  # noqa: F401
import runpy  # noqa: F401
import sqlite3  # noqa: F401
import statistics  # noqa: F401
import sys
import textwrap  # noqa: F401
import types
import uuid  # noqa: F401
import zipfile  # noqa: F401

sys.path.insert(0, "__LIBRARY_FILE__")
sys.modules["flet_js"] = types.ModuleType("flet_js")  # made by the page; boot.py puts the real one in

import flet  # noqa: E402
import flet.canvas  # noqa: E402
import flet.components.component  # noqa: E402
import flet.messaging.pyodide_connection  # noqa: E402

CONTROLS = "__CONTROLS__"  # flet imports each only when it is first named
for name in CONTROLS.split():
    getattr(flet, name)

del sys.modules["flet_js"]

import gc  # noqa: E402

gc.collect()
gc.freeze()  # what is in the image stays: the collector need not look at it again
