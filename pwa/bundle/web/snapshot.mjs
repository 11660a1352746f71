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
fs.writeFileSync(out, python.makeMemorySnapshot());
process.exit(0);
