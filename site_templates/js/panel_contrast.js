/* Black on white for bright sunlight. Read before a page is shown, so that none flashes by in other
 * colours; the button follows when it is there. */
(function () {
  "use strict";

  const KEY = "bufferfolio-contrast";
  const HIGH = "high";
  const root = document.documentElement;

  function wanted() {
    try {
      return window.localStorage.getItem(KEY) === HIGH;
    } catch {
      return false; // without storage each page begins in its own colours
    }
  }

  function remember(high) {
    try {
      if (high) window.localStorage.setItem(KEY, HIGH);
      else window.localStorage.removeItem(KEY);
    } catch {
      // The page at hand has changed; the next begins in its own colours.
    }
  }

  /** Figures that are drawn by a script listen for the event. */
  function use(high) {
    if (high) root.dataset.contrast = HIGH;
    else delete root.dataset.contrast;
    for (const button of document.querySelectorAll('[data-action="contrast"]')) {
      button.setAttribute("aria-pressed", String(high));
    }
    window.dispatchEvent(new Event("bufferfolio-contrast"));
  }

  function open() {
    for (const button of document.querySelectorAll('[data-action="contrast"]')) {
      button.hidden = false;
      button.disabled = false;
      button.addEventListener("click", () => {
        const high = root.dataset.contrast !== HIGH;
        use(high);
        remember(high);
      });
    }
    use(wanted());
  }

  if (wanted()) root.dataset.contrast = HIGH;
  document.addEventListener("DOMContentLoaded", open);
  window.addEventListener("storage", (event) => {
    if (event.key === KEY || event.key === null) use(wanted());
  });
})();
