(function (bf) {
  "use strict";
  bf.panel_dosing = { open: () => null };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
