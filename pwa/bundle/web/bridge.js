// Carries messages between Flet's client on this page and Python in a module worker.
// The worker starts at once: Python comes up while the browser still fetches and compiles Flutter.
(() => {
  "use strict";
  const worker = new Worker(new URL("worker.js", document.baseURI), { type: "module" });
  const answers = {}; // what Python may ask of the page: name -> async function
  let toFlutter = null;
  let resolveReady, rejectReady;
  const ready = new Promise((resolve, reject) => { resolveReady = resolve; rejectReady = reject; });
  ready.catch(() => {}); // the splash has said it

  const fail = (text) => {
    console.error("Python did not start:", text);
    splash.fail(text);
    rejectReady(new Error(text));
  };

  const received = {
    stage: ({ name }) => splash.stage(name),
    ready: () => resolveReady(),
    failed: ({ text }) => fail(text),
    ask: async ({ id, name, value }) => {
      try {
        worker.postMessage({ kind: "answer", id, value: await answers[name](value) });
      } catch (error) {
        worker.postMessage({ kind: "answer", id, error: String(error) });
      }
    },
  };
  worker.onmessage = ({ data }) => {
    if (data instanceof Uint8Array) toFlutter(data);
    else received[data.kind](data);
  };
  worker.onerror = (event) => fail(event.message || "The Python worker could not be fetched.");

  globalThis.tapwright = {
    ready,
    answers,
    tell: (state) => worker.postMessage({ kind: "state", state }),
  };
  worker.postMessage({ kind: "page", url: document.URL });
  addEventListener("flutter-first-frame", () => worker.postMessage({ kind: "first-frame" }), { once: true });

  // The three functions Flet's client looks for.
  globalThis.jsConnect = async (_app, _args, receive) => { toFlutter = receive; await ready; };
  globalThis.jsSend = async (_app, bytes) => worker.postMessage(bytes, [bytes.buffer]);
  globalThis.jsDisconnect = async () => {}; // the worker holds the app's state; it goes with the page
})();
