// The client loads an animation runtime at start, which this app does not use: it never becomes ready.
globalThis.RiveNative = () => new Promise(() => {});
