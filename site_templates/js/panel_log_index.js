/* The log of all formulations, on the index: how many readings are kept, and a file of them. */
(function (bf) {
  "use strict";

  function start() {
    const root = document.querySelector("[data-log=index]");
    if (root === null) return;
    const store = bf.panel_log_store.opened();
    const words = root.querySelector('[data-log="count"]');
    const button = root.querySelector('[data-action="log-all"]');
    const show = () => {
      const all = bf.panel_log_store.entries(store);
      const formulations = new Set(all.map(({ key }) => key)).size;
      root.hidden = all.length === 0 && store.storage !== null && store.trouble === "";
      button.disabled = all.length === 0;
      words.textContent = store.trouble !== "" ? store.trouble
        : all.length + (all.length === 1 ? " reading" : " readings") + " of " + formulations +
          (formulations === 1 ? " formulation" : " formulations") + ", kept on this device only.";
    };
    button.addEventListener("click", () => bf.panel_tools.save(
      // The mark in front tells spreadsheets that the text is UTF-8.
      new Blob(["\ufeff", bf.panel_log_entries.csvOf(bf.panel_log_store.entries(store))],
        { type: "text/csv" }), "all-readings.csv"));
    bf.panel_log_store.watch(show);
    show();
  }

  start();
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
