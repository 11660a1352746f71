// Starts Flet's Flutter client from this site alone, once Python is up.
(() => {
  "use strict";
  const base = new URL("./", document.baseURI).href;
  const NO_FONTS = `${base}assets/fonts/none/`;

  // Flet's client reads these.
  globalThis.flet = { pyodide: true, multiView: false, noCdn: true, routeUrlStrategy: "hash" };

  // WebKit brings a page back from its back/forward cache with Flutter's frames stopped; only a new start helps.
  addEventListener("pageshow", (event) => {
    if (event.persisted && navigator.vendor?.startsWith("Apple")) location.reload();
  });

  // For a character that no font here has (an emoji in a name, say) the engine asks for further font files, again at
  // every layout. It is given the app's own font instead: the character stays blank, and no request leaves the page.
  const fetchFromSite = globalThis.fetch;
  globalThis.fetch = (request, options) => {
    const url = String(request?.url ?? request);
    return url.startsWith(NO_FONTS) ? fetchFromSite(`${base}assets/fonts/__FONT__`) : fetchFromSite(request, options);
  };

  _flutter.buildConfig = {
    engineRevision: "__ENGINE_REVISION__",
    builds: [{ compileTarget: "dart2js", renderer: "canvaskit", mainJsPath: "main.dart.js" }],
  };
  const config = {
    renderer: "canvaskit",
    entrypointBaseUrl: base,
    assetBase: base,
    canvasKitBaseUrl: `${base}canvaskit/`,
    fontFallbackBaseUrl: NO_FONTS,
  };
  _flutter.loader.load({
    config,
    // No serviceWorkerSettings: Flutter's loader would register its own self-removing worker over ours.
    onEntrypointLoaded: async (initializer) => {
      // Flutter and Python starting together take longer than one after the other on two cores.
      await tapwright.ready;
      document.querySelector("meta[name=viewport]").remove(); // Flutter sets its own, and complains of another
      const engine = await initializer.initializeEngine(config);
      await engine.runApp();
    },
  }).catch((error) => splash.fail(String(error)));
})();
