"""Turns the Python sources into a static site that installs as an app and runs without a network.

How the site is made
--------------------
`python -m pwa build` writes build/site, and does nothing while the sources, the choices and the tools stay the
same (`sources.build_digest`). The steps stand in `build.build`:

- `client` takes the prebuilt Flutter client and Pyodide from the package flet-web, leaves out what this app never
  asks for, and replaces the one address of another host; `icon_font` cuts the icon font to the icons that the
  sources name (`ft.Icons.X`).
- `sources` chooses the files of four archives. library: flet and what it imports. app: core, pwa (without
  pwa/bundle and pwa/__main__.py) and sample_tests. pdf: fpdf2 and what it imports. numpy: see `numpy_wheel`. They
  are apart, so that a new version of the app is a small download.
- `archives` zips them, as bytecode of the browser's Python where Node is there to make it.
- `snapshot` has Node make a memory image of the browser's Python with flet imported; web/controls.txt names what
  is in it. The page restores the image; if it cannot, it starts plainly from the archives. A name of flet that the
  app uses at start belongs into that list.
- `page` fills in index.html, the scripts and the worker in web/, which are ours.
- `revisions` lists every file with its hash for the service worker, and writes .gz and .br copies.

Without Node the build still makes a complete app, of sources instead of bytecode and without the image, and says
so. Slow steps are kept in .cache/ (TAPWRIGHT_CACHE moves it), which is safe to delete.

What runs in the browser
------------------------
index.html loads splash.js, bridge.js (starts the worker at once, carries messages), semantics.js and updates.js,
then Flutter through start.js, which waits until Python is up. worker.js runs Python; boot.py starts `pwa.main` in
it as `__main__`. sw.js keeps one complete version. Every address is relative to the page: the folder can stand
under any path of any host.

Files are read in the browser as on a desk: `importlib.resources.files("core") / "data" / "x.tsv"`,
`importlib.resources.files("sample_tests")`, and for the PDF `importlib.resources.files("pwa") /
"assets/fonts/tapwright-sans.ttf"`.

Conventions the app keeps
-------------------------
Number fields: `keyboard_type=ft.KeyboardType.PHONE`
    The page takes that as the mark of a number field and makes it a text field with the decimal keypad, where both
    comma and point can be typed. (With semantics on, Flutter drops NUMBER and leaves the letter keyboard.) No
    other field may use PHONE; a telephone number is typed with TEXT.
numpy comes after the first screen
    Neither `pwa.main` nor what it imports may import numpy, and so core's formulas, before `load_numpy()` has
    ended.
Signs
    Text may hold the signs of pwa/assets/fonts/tapwright-sans.ttf; a test reads the sources for others. To add
    one, add it to `make_font.LACKING` and run that module. No emoji.

What Python may ask of the page: `import tapwright_host`
--------------------------------------------------------
The module exists in the browser only; on a desk the import fails, and numpy is there from the start.

await load_numpy() -> str
    Fetch and unpack numpy; its version. Waits for the first frame by itself. Raises JsException where the file
    cannot be had; may be called again.
await load_pdf()
    Fetch what draws the PDF (fpdf2, fontTools), which is not there before. Importing fpdf takes a second or more
    on a phone.
offline_state() -> str
    "ready": starts without a network. "preparing": the files are being stored. "unavailable": this browser or
    address (plain http) cannot store them.
update_waiting() -> bool
    A newer version is stored and waits.
await accept_update() -> bool
    Change to it: the page reloads. False if none waits. Save first.
await persist_storage() -> bool
    Ask the browser not to clear this site's storage; whether it agreed.
on_change(callback)
    Have callback() called whenever offline_state or update_waiting may have changed.
version : str
    Names the sources this app was built from.
"""
