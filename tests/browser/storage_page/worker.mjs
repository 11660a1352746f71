// Python with the services of the app and nothing else: no Flet, no numpy, no screens.
import { loadPyodide } from "./pyodide/pyodide.mjs";

const services = fetch("services.zip").then((response) => response.arrayBuffer());
self.pyodide = await loadPyodide();
self.pyodide.FS.writeFile("/services.zip", new Uint8Array(await services));
self.pyodide.runPython("import sys; sys.path.insert(0, '/services.zip')");
self.postMessage("ready");
