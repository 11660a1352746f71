// Runs Python, and in it the app. Restores a memory image with Flet already imported; without one, starts plainly.
const CONFIG = __CONFIG__;
const HERE = new URL("./", import.meta.url).href;

// ---- what the page says -------------------------------------------------------------------------------------------
const flet_js = { args: null }; // the name under which Flet's Python side looks for its connection
const questions = new Map(); // number -> { resolve, reject }, open until the page answers
let resolvePage, resolveFirstFrame;
const pageUrl = new Promise((resolve) => { resolvePage = resolve; });
const firstFrame = new Promise((resolve) => { resolveFirstFrame = resolve; });
const state = { offline: "preparing", update: false };
const listeners = [];

const heard = {
  page: ({ url }) => resolvePage(url),
  "first-frame": () => resolveFirstFrame(),
  state: (message) => {
    Object.assign(state, message.state);
    for (const listener of listeners) listener();
  },
  answer: ({ id, value, error }) => {
    const { resolve, reject } = questions.get(id);
    questions.delete(id);
    if (error === undefined) resolve(value);
    else reject(new Error(error));
  },
};
self.onmessage = ({ data }) => {
  if (data instanceof Uint8Array) flet_js.send(data);
  else heard[data.kind](data);
};

let asked = 0;
const ask = (name, value) => new Promise((resolve, reject) => {
  asked += 1;
  questions.set(asked, { resolve, reject });
  self.postMessage({ kind: "ask", id: asked, name, value });
});
const stage = (name) => self.postMessage({ kind: "stage", name });

// ---- files ----------------------------------------------------------------------------------------------------------
const plainFetch = self.fetch.bind(self);

async function fetched(address, options) {
  const name = new URL(address.url ?? address, HERE).href.replace(HERE, "");
  const answer = await plainFetch(address, options).catch((error) => {
    throw new Error(`${name} could not be fetched (${error.message}).`);
  });
  if (!answer.ok) throw new Error(`${name} could not be fetched: the server answered ${answer.status}.`);
  return answer;
}

// When one of its files does not arrive, Pyodide only warns, and never ends. So its fetches are watched while it starts.
function watchingFetches() {
  const failure = new Promise((_, reject) => {
    self.fetch = (...request) => fetched(...request).catch((error) => {
      reject(error);
      throw error;
    });
  });
  failure.catch(() => {}); // it may come when nobody waits any more
  return { failure, end: () => { self.fetch = plainFetch; } };
}

// Packs are gzipped here, not by the server: not every host compresses them.
async function unpacked(path) {
  const answer = await fetched(HERE + path);
  const stream = answer.body.pipeThrough(new DecompressionStream("gzip"));
  return new Uint8Array(await new Response(stream).arrayBuffer());
}

// ---- Python -----------------------------------------------------------------------------------------------------------
// A memory image larger than the runtime's first memory needs that memory grown before it is restored.
function growingTo(bytes) {
  const original = {};
  for (const name of ["instantiate", "instantiateStreaming"]) {
    original[name] = WebAssembly[name];
    WebAssembly[name] = async (...parts) => {
      const result = await original[name](...parts);
      const memory = result.instance?.exports.memory;
      const missing = memory ? bytes - memory.buffer.byteLength : 0;
      if (missing > 0) memory.grow(Math.ceil(missing / 65536));
      return result;
    };
  }
  return () => Object.assign(WebAssembly, original);
}

async function startPython(image) {
  const { loadPyodide } = await import("./pyodide/pyodide.mjs");
  const options = {
    lockFileContents: CONFIG.lock, // saves a request
    stdout: (text) => console.log(text),
    stderr: (text) => console.error(text),
  };
  if (image) {
    const restore = growingTo(CONFIG.snapshot.memory);
    try {
      const restored = await loadPyodide({ ...options, _loadSnapshot: await image });
      restored.runPython("import flet; sorted(flet.__name__)"); // an image that fits this engine badly fails here, not later
      return [restored, true];
    } catch (error) {
      console.warn("The memory image could not be used, starting without it:", String(error));
    } finally {
      restore();
    }
  }
  return [await loadPyodide(options), false];
}

let python;
async function loadNumpy() {
  await firstFrame; // Python has one thread: nothing is unpacked while the first screen is being made
  python.unpackArchive(await unpacked(CONFIG.numpy), "zip", { extractDir: CONFIG.sitePackages });
  await python.runPythonAsync("import importlib; importlib.invalidate_caches(); import numpy");
  return CONFIG.numpyVersion;
}

async function loadPdf() {
  python.FS.writeFile(CONFIG.pdfFile, await unpacked(CONFIG.pdf));
  await python.runPythonAsync(`import sys; sys.path.append(${JSON.stringify(CONFIG.pdfFile)})`);
}

// Done once, however often asked for; asked again after a failure, tried again.
function once(load) {
  let loading = null;
  return () => {
    loading ??= load().catch((error) => {
      loading = null;
      throw error;
    });
    return loading;
  };
}

// ---- what Python may ask: `import tapwright_host` -----------------------------------------------------------------------
const host = {
  version: CONFIG.version,
  load_numpy: once(loadNumpy),
  load_pdf: once(loadPdf),
  offline_state: () => state.offline,
  update_waiting: () => state.update,
  on_change: (listener) => { listeners.push(listener.copy()); }, // the argument itself ends with this call
  accept_update: () => ask("accept-update"),
  persist_storage: () => ask("persist-storage"),
};

async function main() {
  stage("fetching");
  const image = CONFIG.snapshot && unpacked(CONFIG.snapshot.path);
  const packs = [unpacked(CONFIG.library), unpacked(CONFIG.app)];
  for (const promise of [image, ...packs]) promise?.catch(() => {}); // awaited below, in order
  const [pyodide, restored] = await startPython(image);
  python = self.pyodide = pyodide;
  stage("starting");
  const [library, app] = await Promise.all(packs);
  python.FS.writeFile(CONFIG.libraryFile, library);
  python.FS.writeFile(CONFIG.appFile, app);
  python.registerJsModule("flet_js", flet_js);
  python.registerJsModule("tapwright_host", host);
  const send = (frame) => {
    const bytes = frame.toJs();
    self.postMessage(bytes, [bytes.buffer]);
  };
  flet_js.receive_callback = send;
  flet_js.documentUrl = await pageUrl;
  stage("opening");
  self.startedFrom = restored ? "memory image" : "files";
  await python.runPythonAsync(CONFIG.boot);
  await flet_js.start_connection(send);
  self.postMessage({ kind: "ready" });
}

const fetches = watchingFetches();
Promise.race([main(), fetches.failure]).finally(fetches.end).catch((error) => self.postMessage({ kind: "failed", text: String(error?.message ?? error) }));
