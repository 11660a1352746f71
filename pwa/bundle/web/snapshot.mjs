// node snapshot.mjs PYODIDE_DIR LIBRARY_ZIP LIBRARY_FILE PRELOAD_PY OUT: writes a memory image with Flet imported.
import fs from "node:fs";
import { pathToFileURL } from "node:url";

const [, , pyodideDir, libraryZip, libraryFile, preload, out] = process.argv;
const { loadPyodide } = await import(pathToFileURL(`${pyodideDir}/pyodide.mjs`));
const python = await loadPyodide({
  indexURL: `${pyodideDir}/`,
  _makeSnapshot: true,
  env: { PYTHONHASHSEED: "0", HOME: "/home/pyodide" },
});
python.FS.writeFile(libraryFile, new Uint8Array(fs.readFileSync(libraryZip)));
python.runPython(fs.readFileSync(preload, "utf8"));

// On most engines the image would hold the number of a function that speeds up calls, and that iPhones and older
// engines do not have: restored there, the first call would end Python. Without it the image runs everywhere, as fast.
const { HEAP32, __PyRuntime, __PyEM_EMSCRIPTEN_TRAMPOLINE_OFFSET } = python._module;
const trampoline = (__PyRuntime + HEAP32[__PyEM_EMSCRIPTEN_TRAMPOLINE_OFFSET >> 2]) >> 2;
if (!Number.isInteger(trampoline)) throw new Error("This Pyodide keeps its trampoline elsewhere.");
HEAP32[trampoline] = 0;

fs.writeFileSync(out, python.makeMemorySnapshot());
process.exit(0);
