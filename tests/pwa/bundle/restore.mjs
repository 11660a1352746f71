// node restore.mjs PYODIDE_DIR IMAGE LIBRARY_ZIP LIBRARY_FILE MEMORY: restores a memory image as an iPhone would.
import fs from "node:fs";
import { pathToFileURL } from "node:url";

const [, , pyodideDir, image, libraryZip, libraryFile, memory] = process.argv;
Object.defineProperty(globalThis, "navigator", { value: { userAgent: "iPhone", platform: "iPhone" } });
const instantiate = WebAssembly.instantiate;
WebAssembly.instantiate = async (...parts) => {
  const result = await instantiate(...parts);
  const missing = result.instance ? memory - result.instance.exports.memory.buffer.byteLength : 0;
  if (missing > 0) result.instance.exports.memory.grow(Math.ceil(missing / 65536));
  return result;
};
const { loadPyodide } = await import(pathToFileURL(`${pyodideDir}/pyodide.mjs`));
const python = await loadPyodide({ indexURL: `${pyodideDir}/`, _loadSnapshot: new Uint8Array(fs.readFileSync(image)) });
python.FS.writeFile(libraryFile, new Uint8Array(fs.readFileSync(libraryZip)));
console.log(python.runPython(`
import sys
sorted(str(number) for number in range(9))  # calls from C into C functions of every shape
before = len(sys.modules)
import flet
field = flet.TextField(label="Hardness")
f"{field.label} {len(sys.modules) - before}"
`));
process.exit(0);
