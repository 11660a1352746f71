// node compile.mjs PYODIDE_DIR SOURCE_DIR: turns every .py under SOURCE_DIR into a .pyc of the browser's Python.
import { pathToFileURL } from "node:url";

const [, , pyodideDir, sourceDir] = process.argv;
const { loadPyodide } = await import(pathToFileURL(`${pyodideDir}/pyodide.mjs`));
const python = await loadPyodide({ indexURL: `${pyodideDir}/`, env: { PYTHONHASHSEED: "0", HOME: "/home/pyodide" } });
python.mountNodeFS("/source", sourceDir);
const failed = python.runPython(`
import compileall, pathlib, py_compile
unchecked = py_compile.PycInvalidationMode.UNCHECKED_HASH  # the archive is the only copy: nothing to compare with
done = compileall.compile_dir("/source", quiet=1, legacy=True, force=True, invalidation_mode=unchecked, stripdir="/source")
for source in pathlib.Path("/source").rglob("*.py"):
    source.unlink()
0 if done else 1
`);
process.exit(failed);
