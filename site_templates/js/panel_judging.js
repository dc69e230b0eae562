(function (bf) {
  "use strict";
  bf.panel_judging = { open: () => null };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
