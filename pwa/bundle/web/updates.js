// Installs the service worker, and offers a new version: nothing changes until the user says so.
(() => {
  "use strict";
  const { answers, tell } = tapwright;
  const HOUR = 3600e3;

  answers["persist-storage"] = async () => (await navigator.storage?.persist?.()) ?? false;

  const container = navigator.serviceWorker; // missing where the page came over plain http from another machine
  answers["accept-update"] = async () => {
    const waiting = (await container?.getRegistration())?.waiting;
    if (!waiting) return false;
    container.addEventListener("controllerchange", () => location.reload(), { once: true });
    waiting.postMessage("take over");
    return true;
  };
  if (!container) {
    tell({ offline: "unavailable" });
    return;
  }

  const watch = (registration) => {
    const report = () => {
      if (registration.active) tell({ offline: "ready" });
      // On the very first visit the new worker takes over by itself: there is no older version to leave.
      tell({ update: Boolean(registration.waiting && registration.active) });
    };
    const follow = (worker) => worker?.addEventListener("statechange", () => {
      report();
      // It could not store every file: no room, or a network that broke off. The next start tries again.
      if (worker.state === "redundant" && !registration.active) tell({ offline: "unavailable" });
    });
    follow(registration.installing);
    registration.addEventListener("updatefound", () => follow(registration.installing));
    report();

    let checked = Date.now();
    addEventListener("visibilitychange", () => {
      if (document.hidden || Date.now() - checked < HOUR) return;
      checked = Date.now();
      registration.update().catch(() => {}); // offline: the next look will do
    });
  };

  // After the first frame, so that storing files does not compete with starting.
  addEventListener("flutter-first-frame", async () => {
    try {
      watch(await container.register("sw.js"));
    } catch (error) {
      console.warn("No offline copy:", error);
      tell({ offline: container.controller ? "ready" : "unavailable" });
    }
  }, { once: true });
})();
