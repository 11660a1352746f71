// What is on the screen until the app draws: a word on what is being done, or why it cannot be done.
(() => {
  "use strict";
  const FIRST_LOAD_MB = __FIRST_LOAD_MB__;
  const STAGES = { fetching: "Fetching the app.", starting: "Starting.", opening: "Opening." };
  const element = (id) => document.getElementById(id);

  // Only what is known to be so: without a service worker nothing is promised about later starts.
  const note = () => {
    if (navigator.serviceWorker?.controller) return "";
    const size = `This start fetches about ${FIRST_LOAD_MB} MB.`;
    return navigator.serviceWorker ? `${size} Once that is stored, it opens without a network.` : size;
  };

  let failed = false;
  globalThis.splash = {
    stage(name) {
      const line = element("splash-stage");
      if (line && !failed) line.textContent = STAGES[name];
    },
    fail(text) {
      if (failed || !element("splash")) return; // the app is on the screen: it reports its own errors
      failed = true;
      element("splash-stage").setAttribute("role", "alert");
      element("splash-stage").textContent = "The app could not start.";
      element("splash-note").textContent = navigator.onLine
        ? "Reload the page. If it fails again, the text below says where it stopped."
        : "This device is offline. Connect it, then reload the page.";
      element("splash-error").textContent = text;
      element("splash-error").hidden = element("splash-reload").hidden = false;
    },
  };

  addEventListener("DOMContentLoaded", () => {
    if (!failed) element("splash-note").textContent = note();
    element("splash-reload").addEventListener("click", () => location.reload());
  });
  addEventListener("flutter-first-frame", () => element("splash")?.remove(), { once: true });
  // A script or module that does not arrive fires an error on its element, which does not bubble: hence the capture.
  addEventListener("error", (event) => {
    const source = event.target?.src;
    if (source) splash.fail(`${new URL(source).pathname} could not be fetched.`);
    else if (event.message) splash.fail(event.message);
  }, true);
})();
