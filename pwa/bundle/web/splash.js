// What is on the screen until the app draws: a word on what is being done, or why it cannot be done.
(() => {
  "use strict";
  const [STORED_MB, STARTED_MB] = [__STORED_MB__, __STARTED_MB__]; // fetched to be kept; fetched to start alone
  const STAGES = { fetching: "Fetching the app.", starting: "Starting.", opening: "Opening." };
  const [splash, stage, note, reason, reload] = ["splash", "splash-stage", "splash-note", "splash-error", "splash-reload"]
    .map((id) => document.getElementById(id));
  let failed = false;

  globalThis.splash = {
    stage(name) {
      if (!failed) stage.textContent = STAGES[name];
    },
    fail(text) {
      if (failed) return; // the first cause is the one that explains
      failed = true;
      stage.setAttribute("role", "alert");
      stage.textContent = "The app could not start.";
      note.textContent = navigator.onLine
        ? "Reload the page. If it fails again, the text below says where it stopped."
        : "This device is offline. Connect it, then reload the page.";
      reason.textContent = text;
      reason.hidden = reload.hidden = false;
    },
  };

  // Only what is known to be so: where nothing can be stored, nothing is promised about later starts.
  if (!navigator.serviceWorker?.controller) {
    note.textContent = navigator.serviceWorker
      ? `The first start fetches about ${STORED_MB} MB. Once that is stored, the app opens without a network.`
      : `This start fetches about ${STARTED_MB} MB.`;
  }
  reload.addEventListener("click", () => location.reload());
  addEventListener("flutter-first-frame", () => splash.remove(), { once: true });
  // A script that does not arrive fires an error on its element, which does not bubble: hence the capture.
  addEventListener("error", (event) => {
    const source = event.target?.src;
    if (source) globalThis.splash.fail(`${new URL(source).pathname} could not be fetched.`);
    else if (event.message) globalThis.splash.fail(event.message);
  }, true);
})();
